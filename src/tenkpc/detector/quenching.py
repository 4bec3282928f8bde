"""What slow, heavily ionising particles are worth, in units of an electron of the same energy.

Protons follow Birks' law with their stopping power,

    E_vis(T) = ∫₀ᵀ dT' / [1 + k_B (dE/dx)(T')]

(J. B. Birks, Proc. Phys. Soc. A 64 (1951) 874, from memory), nuclei Lindhard's formula. Either is
worked out once; the result is a table that is read both ways.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Protocol

import numpy as np
from numpy.polynomial.polynomial import polyval
from numpy.typing import NDArray

from tenkpc.constants import PROTON_MASS_MEV
from tenkpc.quadrature import gauss

Floats = NDArray[np.float64]

# knots of the table: linear between them the light is right to 1e-6 of itself
LOWEST_MEV, HIGHEST_MEV, KNOTS = 1e-4, 250.0, 4000
LOWEST_RECOIL_MEV, HIGHEST_RECOIL_MEV = 1e-7, 25.0
# the formulas change here: the branches of the stopping power
BRANCHES_MEV = (0.01, 1.0)


class Light(Protocol):
    """What the light of a particle is worth, against its kinetic energy; both ways."""

    def visible(self, kinetic_mev: Floats) -> Floats:
        """Visible energy in MeV of a kinetic energy in MeV."""

    def kinetic(self, visible_mev: Floats) -> Floats:
        """Kinetic energy in MeV that gives a visible energy in MeV; the inverse."""


@dataclass(frozen=True)
class Plain:
    """A particle that is seen with its kinetic energy, and always the same on top of it.

    Attributes
    ----------
    offset_mev
        what is added to the kinetic energy: the annihilation gammas of a positron.
    share
        share of the kinetic energy that is seen, above zero.
    """

    offset_mev: float = 0.0
    share: float = 1.0

    def visible(self, kinetic_mev: Floats) -> Floats:
        """Visible energy: the share of the kinetic energy plus the offset."""
        return self.share * kinetic_mev + self.offset_mev

    def kinetic(self, visible_mev: Floats) -> Floats:
        """Kinetic energy: the visible energy less the offset over the share, not below zero."""
        return np.maximum(visible_mev - self.offset_mev, 0.0) / self.share


@dataclass(frozen=True)
class Quenched:
    """A particle whose light is a table of its kinetic energy, linear between the knots.

    Attributes
    ----------
    kinetic_mev, visible_mev
        the knots, both ascending from zero; beyond the last the last slope goes on.
    """

    kinetic_mev: tuple[float, ...]
    visible_mev: tuple[float, ...]

    def visible(self, kinetic_mev: Floats) -> Floats:
        """Visible energy in MeV of a kinetic energy in MeV."""
        return _line(kinetic_mev, self.kinetic_mev, self.visible_mev)

    def kinetic(self, visible_mev: Floats) -> Floats:
        """Kinetic energy in MeV that gives a visible energy in MeV."""
        return _line(np.maximum(visible_mev, 0.0), self.visible_mev, self.kinetic_mev)


def birks(stopping_mev_cm2_g: Floats, kinetic_mev: Floats, constant_g_cm2_mev: float) -> Floats:
    """Give the light of one MeV more, 1/(1 + k_B dE/dx), at some kinetic energies.

    Parameters
    ----------
    stopping_mev_cm2_g
        mass stopping power at ``kinetic_mev``, MeV cm²/g.
    kinetic_mev
        kinetic energies, MeV; only their shape matters.
    constant_g_cm2_mev
        k_B in g/(cm² MeV): the constant in cm/MeV times the density.
    """
    light: Floats = np.ones_like(kinetic_mev) / (1 + constant_g_cm2_mev * stopping_mev_cm2_g)
    return light


def quenched_protons(
    atoms_per_gram: Mapping[str, float],
    coefficients: Mapping[str, Sequence[float]],
    constant_g_cm2_mev: float,
) -> Quenched:
    """Make the table of light of protons in a compound.

    Parameters
    ----------
    atoms_per_gram
        atoms of each element in a gram.
    coefficients
        A1 to A12 of each element's stopping power (see `stopping_mev_cm2_g`).
    constant_g_cm2_mev
        Birks' constant in g/(cm² MeV).
    """
    knots = np.geomspace(LOWEST_MEV, HIGHEST_MEV, KNOTS)
    knots = np.unique(np.concatenate([[0.0], knots, BRANCHES_MEV]))
    x, w = gauss(4)
    low, width = knots[:-1, None], np.diff(knots)[:, None]
    kinetic = low + width * x
    stopping = stopping_mev_cm2_g(kinetic, atoms_per_gram, coefficients)
    steps = (width * w * birks(stopping, kinetic, constant_g_cm2_mev)).sum(axis=1)
    visible = np.concatenate([[0.0], np.cumsum(steps)])
    return Quenched(tuple(knots.tolist()), tuple(visible.tolist()))


def stopping_mev_cm2_g(
    kinetic_mev: Floats,
    atoms_per_gram: Mapping[str, float],
    coefficients: Mapping[str, Sequence[float]],
) -> Floats:
    """Mass stopping power of protons in a compound, MeV cm²/g, atoms adding up (Bragg's rule)."""
    total = np.zeros_like(kinetic_mev)
    for element, count in atoms_per_gram.items():
        total = total + count * 1e-21 * _per_atom(kinetic_mev, coefficients[element])
    return total


def _per_atom(kinetic_mev: Floats, a: Sequence[float]) -> Floats:
    """Stopping of one atom in 1e-15 eV cm², in the three branches of H. H. Andersen and Ziegler."""
    kev = np.maximum(1e3 * kinetic_mev, 1e-3)
    slow = a[0] * np.sqrt(kev)
    first, second = a[1] * kev**0.45, a[2] / kev * np.log(1 + a[3] / kev + a[4] * kev)
    gamma = 1 + kinetic_mev / PROTON_MASS_MEV
    beta2 = np.maximum(1 - gamma**-2, 1e-12)
    shells = polyval(np.log(kev), np.array(a[7:12]))
    fast = a[5] / beta2 * (np.log(a[6] * beta2 / (1 - beta2)) - beta2 - shells)
    middle = first * second / (first + second)
    result: Floats = np.where(kev < 10, slow, np.where(kev < 1000, middle, fast))
    return result


def lindhard(protons: int, nucleons: int, k: float | None = None) -> Quenched:
    """Make the table of what a recoil is worth in units of an electron of the same energy.

    E_ee = T Q(T),   Q = k g/(1 + k g),   g = 3ε^0.15 + 0.7ε^0.6 + ε,   ε = 11.5 Z^(−7/3) T/keV

    with k = 0.133 Z^(2/3) A^(−1/2) unless given (J. Lindhard, V. Nielsen, M. Scharff and
    P. V. Thomsen, Mat. Fys. Medd. Dan. Vid. Selsk. 33, 10 (1963), from memory): a nucleus that
    recoils among its like. Below 1 keV measurements differ from it by tens of per cent.

    Parameters
    ----------
    protons, nucleons
        Z and A of the nucleus that recoils.
    k
        k, where it was measured.
    """
    if k is None:
        k = 0.133 * protons ** (2 / 3) / nucleons**0.5
    kinetic = np.geomspace(LOWEST_RECOIL_MEV, HIGHEST_RECOIL_MEV, KNOTS)
    epsilon = 11.5 * protons ** (-7 / 3) * 1e3 * kinetic
    g = 3 * epsilon**0.15 + 0.7 * epsilon**0.6 + epsilon
    visible = kinetic * k * g / (1 + k * g)
    return Quenched((0.0, *kinetic.tolist()), (0.0, *visible.tolist()))


def _line(at: Floats, knots: tuple[float, ...], values: tuple[float, ...]) -> Floats:
    """Piecewise-linear through the knots, the last slope going on beyond them."""
    inside = np.interp(at, knots, values)
    slope = (values[-1] - values[-2]) / (knots[-1] - knots[-2])
    return np.asarray(inside + np.maximum(at - knots[-1], 0.0) * slope)
