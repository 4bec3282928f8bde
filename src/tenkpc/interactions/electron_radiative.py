"""Radiative corrections to neutrino-electron scattering.

J. N. Bahcall, M. Kamionkowski and A. Sirlin, Phys. Rev. D 51 (1995) 6146, astro-ph/9502003:
couplings that run with the recoil energy, and the QED functions f₋, f₊, f₊₋ of the electron's
energy alone. The coefficients are from memory; the tests hold them against the known
asymptotic integrals of the functions and against published totals.
"""

from __future__ import annotations

from functools import lru_cache

import numpy as np
from numpy.typing import NDArray
from scipy.special import spence

from tenkpc.constants import ELECTRON_MASS_MEV as M

Floats = NDArray[np.float64]

RHO = 1.0126
# calls whose corrections are kept: as many as one species makes when it is compiled
REMEMBERED = 24


def kappa_electron(kinetic_mev: Floats) -> Floats:
    """κ of the electron neutrino against the recoil's kinetic energy."""
    return 0.9791 + 0.0097 * _vacuum(kinetic_mev)


def kappa_other(kinetic_mev: Floats) -> Floats:
    """κ of muon neutrinos, also used for tau neutrinos, which differ by parts in a thousand."""
    return 0.9970 - 0.00037 * _vacuum(kinetic_mev)


def _vacuum(kinetic_mev: Floats) -> Floats:
    """I(T) = (1/6) {1/3 + (3 - x²) [(x/2) ln((x+1)/(x-1)) - 1]}, x = √(1 + 2m/T)."""
    ratio = 2 * M / kinetic_mev
    x = np.sqrt(1 + ratio)
    log = np.log((x + 1) ** 2 / ratio)  # (x+1)/(x-1) without the difference of near equals
    result: Floats = (1 / 3 + (3 - x * x) * (0.5 * x * log - 1)) / 6
    return result


def corrections(neutrino_mev: Floats, kinetic_mev: Floats) -> tuple[Floats, Floats, Floats]:
    """f₋, (1-z)² f₊ and f₊₋ for a recoil inside its kinematic range, z = T/E.

    All three have a logarithm at the largest recoil, which is integrable. They know no flavour:
    the last ones are remembered, since four species ask for the same energies in turn.
    """
    neutrino, kinetic = np.asarray(neutrino_mev), np.asarray(kinetic_mev)
    return _remembered(neutrino.tobytes(), neutrino.shape, kinetic.tobytes(), kinetic.shape)


@lru_cache(maxsize=REMEMBERED)
def _remembered(
    neutrino: bytes, neutrino_shape: tuple[int, ...], kinetic: bytes, kinetic_shape: tuple[int, ...]
) -> tuple[Floats, Floats, Floats]:
    return _corrections(
        np.frombuffer(neutrino).reshape(neutrino_shape),
        np.frombuffer(kinetic).reshape(kinetic_shape),
    )


def _corrections(neutrino_mev: Floats, kinetic_mev: Floats) -> tuple[Floats, Floats, Floats]:
    z = kinetic_mev / neutrino_mev
    total = kinetic_mev + M
    momentum = np.sqrt(kinetic_mev * (kinetic_mev + 2 * M))
    beta = momentum / total
    soft = np.log(1 - z - M / (total + momentum))
    radiator = np.log((total + momentum) / M) / beta - 1
    lz, l1 = np.log(z), np.log1p(-z)
    minus = _minus(z, lz, l1, soft, radiator, beta, neutrino_mev)
    plus = _plus(z, lz, l1, soft, radiator, beta)
    return minus, plus, 2 * radiator * soft


def _dilogarithm(x: Floats) -> Floats:
    """L(x) = ∫ ln|1-t|/t dt from 0 to x = -Li₂(x)."""
    value: Floats = -spence(1 - x)
    return value


def _minus(
    z: Floats,
    lz: Floats,
    l1: Floats,
    soft: Floats,
    radiator: Floats,
    beta: Floats,
    neutrino_mev: Floats,
) -> Floats:
    return (
        radiator * (2 * soft - l1 - 0.5 * lz - 5 / 12)
        + 0.5 * (_dilogarithm(z) - _dilogarithm(beta))
        - 0.5 * l1**2
        - (11 / 12 + z / 2) * l1
        + z * (lz + 0.5 * np.log(2 * neutrino_mev / M))
        - (31 / 18 + lz / 12) * beta
        - (11 / 12) * z
        + z * z / 24
    )


def _plus(
    z: Floats, lz: Floats, l1: Floats, soft: Floats, radiator: Floats, beta: Floats
) -> Floats:
    rest = 1 - z
    return (
        radiator * (rest**2 * (2 * soft - l1 - 0.5 * lz - 2 / 3) - 0.5 * (z * z * lz + rest))
        - 0.5 * rest**2 * (l1**2 + beta * (_dilogarithm(rest) - lz * l1))
        + l1 * (0.5 * z * z * lz + rest / 3 * (2 * z - 0.5))
        - 0.5 * z * z * _dilogarithm(rest)
        - z * (1 - 2 * z) / 3 * lz
        - z * rest / 6
        - beta / 12 * (lz + rest * (115 - 109 * z) / 6)
    )
