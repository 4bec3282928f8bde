"""What an interaction is to the rest of the house: final states with their cross sections.

An interaction knows nothing of detectors. It lists, for each species, the final states that
are open, and each final state says how large its cross section is, which particle carries the
neutrino's energy away and how that particle's kinetic energy depends on the neutrino's.

Three forms of that dependence cover everything below 200 MeV:

`Fixed`
    the lead particle always has the same kinetic energy (a nuclear gamma line);
`Shifted`
    its kinetic energy is the neutrino's less an offset (charged current on a heavy nucleus);
`Spread`
    its kinetic energy T has a distribution dσ/dT, non-zero for neutrino energies between two
    bounds that depend on T. Recoils (no upper bound) and two-body final states with a light
    target, such as inverse beta decay (a narrow interval), are the same thing here.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from tenkpc.errors import InputError
from tenkpc.species import index

Floats = NDArray[np.float64]
OfEnergy = Callable[[Floats], Floats]

HIGHEST_ENERGY_MEV = 200.0
# words for what is left of a lead particle in a detector; a positron's gammas are not singled out
SEEN_AS = {
    "electron": "electron",
    "positron": "positron",
    "gamma": "gamma rays",
    "neutron": "neutron",
    "proton": "proton recoil",
}


def piecewise(energy_mev: Floats, knots_mev: Sequence[float], values: Sequence[float]) -> Floats:
    """Piecewise-linear function of energy that holds its end values: for tables of errors."""
    return np.asarray(np.interp(energy_mev, knots_mev, values))


@dataclass(frozen=True)
class Fixed:
    """The lead particle has one kinetic energy, whatever the neutrino's."""

    kinetic_mev: float


@dataclass(frozen=True)
class Shifted:
    """The lead particle's kinetic energy is the neutrino's less ``offset_mev``."""

    offset_mev: float


@dataclass(frozen=True)
class Spread:
    """The lead particle's kinetic energy T follows a differential cross section.

    Attributes
    ----------
    differential
        ``dσ/dT(E, T)`` in cm²/MeV, both in MeV, arrays that broadcast. It is only called for
        E inside the bounds and must be smooth there.
    lowest_mev, highest_mev
        the lowest and highest neutrino energy in MeV that can give the kinetic energy T.
    steep_mev
        so far above the lowest energy, MeV, the differential cross section is steep and is
        integrated by itself.
    """

    differential: Callable[[Floats, Floats], Floats]
    lowest_mev: OfEnergy
    highest_mev: OfEnergy
    steep_mev: float = 0.0


Deposit = Fixed | Shifted | Spread


@dataclass(frozen=True)
class FinalState:
    """One way an interaction ends, for one species.

    Attributes
    ----------
    label
        words that tell it from the other final states of the interaction.
    sigma_cm2
        cross section of this branch per target, cm² against neutrino energy in MeV; zero below
        its threshold.
    lead
        the particle that carries the neutrino's energy: ``"electron"``, ``"positron"``,
        ``"gamma"``, ``"proton"``, or a nucleus such as ``"Ar-40"``.
    deposit
        how the lead particle's kinetic energy depends on the neutrino's.
    extras
        further prompt particles with fixed kinetic energies in MeV. The annihilation gammas of
        a positron are the response's business and never listed here.
    neutrons
        free neutrons in this final state.
    delayed
        name of the nucleus that decays within a minute or so, if any.
    mean_cosine
        mean cosine between the lead particle and the neutrino, against neutrino energy in MeV.
    breaks_mev
        neutrino energies at which the cross section is not smooth (knots of a table).
    window_mev
        neutrino energies for which the cross section is meant; above it is held at its last
        value, or goes on as its formula says, and the share of counts from there is reported.
    relative_error
        1σ of the cross section, relative, against neutrino energy in MeV: log-normal and fully
        correlated over energies.
    """

    label: str
    sigma_cm2: OfEnergy
    lead: str
    deposit: Deposit
    window_mev: tuple[float, float]
    relative_error: OfEnergy
    extras: tuple[tuple[str, float], ...] = ()
    neutrons: int = 0
    delayed: str | None = None
    mean_cosine: OfEnergy | None = None
    breaks_mev: tuple[float, ...] = ()

    def seen_as(self, *, gammas: bool = True) -> str:
        """Say what a detector that sees the lead particle sees, with or without gamma rays."""
        first = SEEN_AS.get(self.lead, "nuclear recoil")
        if gammas and first != SEEN_AS["gamma"] and "gamma" in dict(self.extras):
            return f"{first}, gamma rays, neutron" if self.neutrons else f"{first}, gamma rays"
        if self.neutrons:
            return f"{first}, then neutron capture"
        if self.delayed:
            return f"{first}, then a decay"
        return f"single {first}" if first == "electron" else first


@dataclass(frozen=True)
class Reference:
    """A source: who, where, and what of it was used."""

    authors: str
    where: str
    used_for: str

    def __str__(self) -> str:
        return f"{self.authors}, {self.where}"


@dataclass(frozen=True)
class Nucleus:
    """A nucleus as a target: its name such as ``"Ar-40"``, Z, A, and its mass without electrons."""

    name: str
    protons: int
    nucleons: int
    mass_mev: float


@dataclass(frozen=True)
class Interaction:
    """One interaction of neutrinos with one kind of target.

    Attributes
    ----------
    key
        its name in files, tables and options, such as ``inverse-beta-decay``.
    equation
        the reaction as people write it, such as ``ν̄e + p → e⁺ + n``.
    target
        ``"electron"``, a nuclide such as ``"H-1"``, or an element such as ``"Pb"`` whose atoms
        are all taken to react alike.
    threshold_mev
        lowest neutrino energy at which the reaction is open.
    references
        sources of the cross section.
    branches
        final states by species; a species that is missing is closed.
    of_nucleus
        for a reaction of every nucleus, what makes it that of one, or None where it has no
        place; such a reaction has no final states of its own.
    """

    key: str
    equation: str
    target: str
    threshold_mev: float
    references: tuple[Reference, ...]
    branches: Mapping[str, tuple[FinalState, ...]]
    of_nucleus: Callable[[Nucleus], Interaction | None] | None = None

    def on(self, nucleus: Nucleus) -> Interaction | None:
        """Give the reaction on one nucleus; None where that is no target of it.

        Raises
        ------
        InputError
            where the reaction has a target of its own already.
        """
        if self.of_nucleus is None:
            message = f"{self.key} is a reaction of {self.target}, not of a nucleus to be chosen"
            raise InputError(message)
        return self.of_nucleus(nucleus)

    def final_states(self, species: str) -> tuple[FinalState, ...]:
        """Final states open to a species; empty where there are none.

        Raises
        ------
        InputError
            where the reaction needs a nucleus first, see `on`.
        """
        if self.of_nucleus is not None:
            message = f"{self.key} is a reaction of every nucleus: choose one with on(nucleus)"
            raise InputError(message)
        index(species)
        return self.branches.get(species, ())

    def sigma(self, species: str, energy_mev: ArrayLike) -> Floats:
        """Total cross section in cm² per target against neutrino energies in MeV."""
        energy = np.asarray(energy_mev, dtype=float)
        total = np.zeros_like(energy)
        for state in self.final_states(species):
            total = total + state.sigma_cm2(energy)
        return total
