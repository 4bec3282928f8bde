"""Reactions through a few levels whose strengths are known: rare isotopes of carbon and oxygen.

Every level is an allowed transition (see `tenkpc.interactions.transition`) with the isovector
moment of free nucleons for its weak magnetism; strengths come from beta decays.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import partial

import numpy as np
from numpy.typing import ArrayLike, NDArray

from tenkpc.constants import (
    ANOMALOUS_MOMENT_DIFFERENCE,
    ELECTRON_MASS_MEV,
    FERMI_CONSTANT_PER_MEV2,
)
from tenkpc.interactions.base import (
    Deposit,
    FinalState,
    Fixed,
    Interaction,
    Reference,
    Shifted,
    piecewise,
)
from tenkpc.interactions.transition import Transition, beta_coupling_per_mev2
from tenkpc.species import SPECIES

Floats = NDArray[np.float64]

END_MEV = 100.0

DECAYS = Reference(
    "F. Ajzenberg-Selove; D. R. Tilley et al.; J. C. Hardy and I. S. Towner",
    "Nucl. Phys. A 523 (1991) 1; Nucl. Phys. A 595 (1995) 1; Phys. Rev. C 102 (2020) 045501",
    "decays that give the strengths, from memory",
)
FUKUGITA = Reference(
    "M. Fukugita, Y. Kohyama, K. Kubodera and T. Kuramoto",
    "Phys. Rev. D 41 (1990) 1359",
    "strength of the 3.5 MeV level of nitrogen-13, from memory",
)


@dataclass(frozen=True)
class Level:
    """One level of the nucleus that is left.

    Attributes
    ----------
    label
        words for it.
    opens_mev
        neutrino energy at which it opens, MeV.
    strength, fermi
        S = g_A² B(GT), and B(F).
    proton_mev, gamma_mev
        kinetic energy of a proton, or energy of a gamma, that it emits; 0 for none.
    error_mev, error
        1σ of ln σ at some neutrino energies.
    """

    label: str
    opens_mev: float
    strength: float
    fermi: float
    proton_mev: float
    gamma_mev: float
    error_mev: tuple[float, ...]
    error: tuple[float, ...]


@dataclass(frozen=True)
class LevelInputs:
    """What the cross sections of one reaction depend on beside masses and G_F.

    Attributes
    ----------
    charge, nucleons
        Z (0 for the neutral current) and A of the nucleus that is left.
    levels
        the levels.
    twice_superallowed_ft_s, axial_coupling, sin2_theta_w, oscillator_fm
        2 Ft of superallowed decays, g_A, sin²θ_W at zero momentum transfer, length of the form
        factor.
    """

    charge: int
    nucleons: int
    levels: tuple[Level, ...]
    twice_superallowed_ft_s: float
    axial_coupling: float
    sin2_theta_w: float
    oscillator_fm: float


def carbon_13_to_nitrogen(inputs: LevelInputs) -> Interaction:
    """νe + ¹³C → e⁻ + ¹³N: the ground state, and the level at 3.5 MeV that emits a proton."""
    return _interaction(
        inputs,
        "carbon-13-to-nitrogen-13",
        "νe + ¹³C → e⁻ + ¹³N",
        target="C-13",
        references=(DECAYS, FUKUGITA),
    )


def carbon_13_excited(inputs: LevelInputs) -> Interaction:
    """ν + ¹³C → ν + ¹³C*(3.68 MeV) of every species."""
    return _interaction(
        inputs,
        "carbon-13-excited",
        "ν + ¹³C → ν + ¹³C*",
        target="C-13",
        references=(DECAYS, FUKUGITA),
    )


def oxygen_18_to_fluorine(inputs: LevelInputs) -> Interaction:
    """νe + ¹⁸O → e⁻ + ¹⁸F: the ground state and the analogue state."""
    return _interaction(
        inputs,
        "oxygen-18-to-fluorine-18",
        "νe + ¹⁸O → e⁻ + ¹⁸F",
        target="O-18",
        references=(DECAYS,),
    )


def _interaction(
    inputs: LevelInputs, key: str, equation: str, target: str, references: Sequence[Reference]
) -> Interaction:
    if inputs.charge:
        states = tuple(_charged(level, inputs) for level in inputs.levels)
        branches = {"nu_e": states}
    else:
        plain, anti = (
            tuple(_neutral(level, inputs, sign) for level in inputs.levels) for sign in (1.0, -1.0)
        )
        branches = {s: anti if s.startswith("anti_") else plain for s in SPECIES}
    return Interaction(
        key=key,
        equation=equation,
        target=target,
        threshold_mev=min(level.opens_mev for level in inputs.levels),
        references=tuple(references),
        branches=branches,
    )


def _charged(level: Level, inputs: LevelInputs) -> FinalState:
    transition = _transition(
        level,
        inputs,
        beta_coupling_per_mev2(inputs.twice_superallowed_ft_s),
        level.opens_mev - ELECTRON_MASS_MEV,
        1.0,
    )
    protons = (("proton", level.proton_mev),) if level.proton_mev else ()
    gammas = (("gamma", level.gamma_mev),) if level.gamma_mev else ()
    return _state(
        level, transition, "electron", Shifted(level.opens_mev), extras=(*protons, *gammas)
    )


def _neutral(level: Level, inputs: LevelInputs, sign: float) -> FinalState:
    factor = sign * (1 - 2 * inputs.sin2_theta_w)
    transition = _transition(level, inputs, FERMI_CONSTANT_PER_MEV2, level.opens_mev, factor)
    return _state(level, transition, "gamma", Fixed(level.gamma_mev), extras=())


def _transition(
    level: Level, inputs: LevelInputs, coupling: float, energy_mev: float, magnetism: float
) -> Transition:
    moment = (1 + ANOMALOUS_MOMENT_DIFFERENCE) / inputs.axial_coupling
    return Transition(
        coupling_per_mev2=coupling,
        strength=level.strength,
        energy_mev=energy_mev,
        moment_over_axial=magnetism * moment,
        oscillator_fm=inputs.oscillator_fm,
        charge=inputs.charge,
        nucleons=inputs.nucleons,
        fermi=level.fermi,
    )


def _state(
    level: Level,
    transition: Transition,
    lead: str,
    deposit: Deposit,
    extras: tuple[tuple[str, float], ...],
) -> FinalState:
    return FinalState(
        label=level.label,
        sigma_cm2=partial(_held, transition=transition),
        lead=lead,
        deposit=deposit,
        window_mev=(level.opens_mev, END_MEV),
        relative_error=partial(piecewise, knots_mev=level.error_mev, values=level.error),
        extras=extras,
        mean_cosine=partial(_held_cosine, transition=transition) if lead == "electron" else None,
    )


def _held(neutrino_mev: ArrayLike, transition: Transition) -> Floats:
    return transition.total_cm2(np.minimum(np.asarray(neutrino_mev, dtype=float), END_MEV))


def _held_cosine(neutrino_mev: ArrayLike, transition: Transition) -> Floats:
    return transition.mean_cosine(np.minimum(np.asarray(neutrino_mev, dtype=float), END_MEV))
