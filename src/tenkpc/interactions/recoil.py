"""Kinematics of elastic scattering on a target at rest, of any mass."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

# below this neutrino energy, MeV, cross sections are taken as zero: their squares still have digits
LOWEST_MEV = 1e-9


def lowest_neutrino_mev(kinetic_mev: Floats, mass_mev: float) -> Floats:
    """E_min = [T + √(T(T + 2M))]/2, the lowest neutrino energy for a recoil T."""
    lowest: Floats = 0.5 * (kinetic_mev + np.sqrt(kinetic_mev * (kinetic_mev + 2 * mass_mev)))
    return lowest


def highest_recoil_mev(neutrino_mev: Floats, mass_mev: float) -> Floats:
    """T_max = 2E²/(M + 2E), the largest recoil of a neutrino of energy E."""
    highest: Floats = 2 * neutrino_mev**2 / (mass_mev + 2 * neutrino_mev)
    return highest


def cosine(neutrino_mev: Floats, kinetic_mev: Floats, mass_mev: float) -> Floats:
    """Cosine between recoil and neutrino: (E + M)/E √(T/(T + 2M))."""
    ratio: Floats = np.sqrt(kinetic_mev / (kinetic_mev + 2 * mass_mev))
    return (neutrino_mev + mass_mev) / neutrino_mev * ratio
