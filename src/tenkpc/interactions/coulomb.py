"""How a nucleus's charge draws in or drives out the electron or positron that it emits."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy.special import gamma, loggamma

from tenkpc.constants import ALPHA, ELECTRON_MASS_MEV, HBAR_C_MEV_CM

Floats = NDArray[np.float64]

RADIUS_CM = 1.2e-13  # of a nucleus, times A^(1/3): common practice


def fermi_function(momentum_mev: Floats, charge: int, nucleons: int) -> Floats:
    """F(Z, E) at the nuclear surface, of the Dirac equation in a point charge.

    F = 2(1 + γ) (2pR)^(−2(1−γ)) e^(πη) |Γ(γ + iη)|² / Γ(2γ + 1)²,  γ = √(1 − (αZ)²),  η = αZE/p

    (E. Fermi, Z. Phys. 88 (1934) 161). Below 1 keV/c it is held at its value there.

    Parameters
    ----------
    momentum_mev
        momentum of the lepton in MeV.
    charge
        Z of the nucleus that is left; negative for positrons; 0 gives 1.
    nucleons
        A of the nucleus, for its radius R = 1.2 fm A^(1/3).
    """
    if charge == 0:
        return np.ones_like(momentum_mev)
    p = np.maximum(momentum_mev, 1e-3)
    root = np.sqrt(1 - (ALPHA * charge) ** 2)
    eta = ALPHA * charge * np.sqrt(p**2 + ELECTRON_MASS_MEV**2) / p
    radius = RADIUS_CM * nucleons ** (1 / 3) / HBAR_C_MEV_CM
    spread = np.exp(np.pi * eta + 2 * np.real(loggamma(root + 1j * eta)))
    result: Floats = (
        2 * (1 + root) * (2 * p * radius) ** (2 * root - 2) * spread / gamma(2 * root + 1) ** 2
    )
    return result


def effective_momentum(momentum_mev: Floats, charge: int, nucleons: int) -> Floats:
    """p′E′/(pE) with E′ = E + V in the potential V = 3Zα/2R at the centre of the nucleus.

    For leptons whose wave is short against the nucleus (J. Engel, Phys. Rev. C 57 (1998) 2004);
    zero where the potential keeps a positron out.
    """
    if charge == 0:
        return np.ones_like(momentum_mev)
    p = np.maximum(momentum_mev, 1e-3)
    energy = np.sqrt(p**2 + ELECTRON_MASS_MEV**2)
    radius = RADIUS_CM * nucleons ** (1 / 3) / HBAR_C_MEV_CM
    inside = energy + 1.5 * charge * ALPHA / radius
    square = np.maximum(inside**2 - ELECTRON_MASS_MEV**2, 0.0) * (inside > 0)
    return np.asarray(np.sqrt(square) * inside / (p * energy))


def coulomb_factor(momentum_mev: Floats, charge: int, nucleons: int) -> Floats:
    """Of `fermi_function` and `effective_momentum` the one nearer to 1: the custom of the field.

    That is the smaller for electrons, the larger for positrons (Z negative).
    """
    both = (
        fermi_function(momentum_mev, charge, nucleons),
        effective_momentum(momentum_mev, charge, nucleons),
    )
    return np.minimum(*both) if charge > 0 else np.maximum(*both)
