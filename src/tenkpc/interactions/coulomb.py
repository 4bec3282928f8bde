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

    (E. Fermi, Z. Phys. 88 (1934) 161). Below 1 keV/c it is held at its value there times the
    momentum's ratio, so that p F stays smooth.

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
