"""Thresholds that are no energy: a number of electrons or of photoelectrons.

A recoil of energy T sets free m(T) quanta on average, of which each is registered with a
probability p. It is kept where at least n are registered,

    Poisson    P = γ(n, p m)/Γ(n)
    binomial   P = Σ_k≥n C(M, k) p^k (1 − p)^(M−k),   M one of the two whole numbers beside m

The first is right where the quanta are set free independently, the second where their number is
as good as fixed by the energy; truth lies between.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Protocol

import numpy as np
from numpy.typing import NDArray
from scipy.special import betainc, gammainc

from tenkpc.detector.quenching import Light, Plain

Floats = NDArray[np.float64]

PLAIN = Plain()


class Acceptance(Protocol):
    """The share of recoils that is kept, against their kinetic energy."""

    def kept(self, kinetic_mev: Floats) -> Floats:
        """Share kept at kinetic energies in MeV."""

    @property
    def knots_mev(self) -> tuple[float, ...]:
        """Kinetic energies in MeV at which it is not smooth."""


@dataclass(frozen=True)
class Yield:
    """Mean number of quanta that a recoil sets free.

    Attributes
    ----------
    energies_mev, per_mev
        knots of the yield against kinetic energy: quanta for each MeV, linear between them; one
        knot is a constant.
    zero_outside
        whether there are none outside the knots, instead of the yield at the nearest.
    light
        the yield is per MeV of what this makes of the kinetic energy.
    """

    energies_mev: tuple[float, ...]
    per_mev: tuple[float, ...]
    zero_outside: bool = False
    light: Light = PLAIN

    def mean(self, kinetic_mev: Floats) -> Floats:
        """Mean number at kinetic energies in MeV."""
        ends = 0.0 if self.zero_outside else None
        per = np.interp(kinetic_mev, self.energies_mev, self.per_mev, left=ends, right=ends)
        return np.asarray(per * self.light.visible(kinetic_mev))


@dataclass(frozen=True)
class Registered:
    """At least so many quanta are registered.

    Attributes
    ----------
    at_least
        the number, 1 or more.
    released
        mean number of quanta that are set free.
    probability
        that each of them is registered.
    binomial
        whether the number set free is fixed by the energy, instead of a Poisson variable.
    """

    at_least: int
    released: Yield
    probability: float = 1.0
    binomial: bool = False

    def kept(self, kinetic_mev: Floats) -> Floats:
        """Share kept at kinetic energies in MeV."""
        mean = self.released.mean(kinetic_mev)
        if not self.binomial:
            return np.asarray(gammainc(self.at_least, self.probability * mean))
        below = np.floor(mean)
        low, high = (self._of_fixed(number) for number in (below, below + 1))
        return low + (mean - below) * (high - low)

    def _of_fixed(self, number: Floats) -> Floats:
        enough = number >= self.at_least
        some = np.where(enough, number, self.at_least)
        # Σ_k≥n C(M, k) p^k (1 − p)^(M−k) = I_p(n, M − n + 1)
        share = betainc(self.at_least, some - self.at_least + 1, self.probability)
        return np.where(enough, share, 0.0)

    @property
    def knots_mev(self) -> tuple[float, ...]:
        """Knots of the yield."""
        return self.released.energies_mev


@dataclass(frozen=True)
class Above:
    """A kinetic energy is exceeded: a threshold in a kind of energy that is not the observed."""

    lowest_mev: float

    def kept(self, kinetic_mev: Floats) -> Floats:
        """One above the energy, zero below."""
        return np.where(kinetic_mev > self.lowest_mev, 1.0, 0.0)

    @property
    def knots_mev(self) -> tuple[float, ...]:
        """Give the energy itself."""
        return (self.lowest_mev,)
