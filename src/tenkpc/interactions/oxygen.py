"""Oxygen-16: charged current through four groups of levels, and gammas of the neutral current.

Charged current, for each group with X in MeV,

    log₁₀ σ/cm² = a + b Λ + c Λ²,    Λ = log₁₀(E^¼ − X^¼),    E_e = E − X (total energy)

(K. Nakazato, T. Suzuki and M. Sakuda, PTEP 2018, 123E02, arXiv:1809.08398; coefficients from
memory). Nothing of it was ever measured. Neutral current: a nucleon is knocked out and the
nucleus that is left emits a gamma of 5 to 6 MeV, σ = k (E − 15 MeV)⁴ of each neutrino kind.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import partial

import numpy as np
from numpy.typing import ArrayLike, NDArray

from tenkpc.constants import ELECTRON_MASS_MEV
from tenkpc.interactions.base import (
    FinalState,
    Fixed,
    Interaction,
    OfEnergy,
    Reference,
    Shifted,
    piecewise,
)
from tenkpc.species import SPECIES

Floats = NDArray[np.float64]
Group = tuple[float, float, float, float]

CHARGED_END_MEV = 100.0
GAMMAS_END_MEV = 60.0
ISOTOPE = "O-16"

FIT = Reference(
    "K. Nakazato, T. Suzuki and M. Sakuda",
    "Prog. Theor. Exp. Phys. 2018, 123E02, arXiv:1809.08398",
    "fit to shell-model results of T. Suzuki et al., Phys. Rev. C 98 (2018) 034613; "
    "coefficients from memory",
)
GAMMAS = (
    Reference(
        "J. F. Beacom and P. Vogel",
        "Phys. Rev. D 58 (1998) 053010, arXiv:hep-ph/9802424",
        "form of the cross section, from memory, and the count that halves its constant",
    ),
    Reference(
        "K. Langanke, P. Vogel and E. Kolbe",
        "Phys. Rev. Lett. 76 (1996) 2629, arXiv:nucl-th/9511032",
        "the reaction; the shares of its lines are a choice",
    ),
)


@dataclass(frozen=True)
class Line:
    """A gamma of the neutral current: nucleus, energy in MeV, share, free neutrons beside it."""

    nucleus: str
    energy_mev: float
    share: float
    neutrons: int


@dataclass(frozen=True)
class OxygenInputs:
    """What the cross sections depend on.

    Attributes
    ----------
    groups
        X in MeV, a, b, c of each group, by species.
    gamma_scale_cm2, gamma_threshold_mev
        k in cm²/MeV⁴ and the energy at which the gammas begin, MeV.
    lines
        the gammas; their shares add up to 1.
    error_mev, charged_error, gamma_error
        1σ of ln σ of the charged current at some energies, and of the gammas.
    """

    groups: Mapping[str, Sequence[Group]]
    gamma_scale_cm2: float
    gamma_threshold_mev: float
    lines: tuple[Line, ...]
    error_mev: tuple[float, ...]
    charged_error: tuple[float, ...]
    gamma_error: float


def to_fluorine(inputs: OxygenInputs) -> Interaction:
    """νe + ¹⁶O → e⁻ + ¹⁶F, which always breaks up into a proton and ¹⁵O."""
    return _charged(
        inputs,
        "nu_e",
        lead="electron",
        key="oxygen-16-to-fluorine-16",
        equation="νe + ¹⁶O → e⁻ + ¹⁶F",
    )


def to_nitrogen(inputs: OxygenInputs) -> Interaction:
    """ν̄e + ¹⁶O → e⁺ + ¹⁶N: bound levels that decay within seconds, then a neutron and ¹⁵N."""
    return _charged(
        inputs,
        "anti_nu_e",
        lead="positron",
        key="oxygen-16-to-nitrogen-16",
        equation="ν̄e + ¹⁶O → e⁺ + ¹⁶N",
    )


def excited(inputs: OxygenInputs) -> Interaction:
    """ν + ¹⁶O → ν + nucleon + gamma, of every species."""
    return Interaction(
        key="oxygen-16-excited",
        equation="ν + ¹⁶O → ν + N + γ",
        target=ISOTOPE,
        threshold_mev=inputs.gamma_threshold_mev,
        references=GAMMAS,
        branches=dict.fromkeys(SPECIES, _lines(inputs)),
    )


def group_cm2(neutrino_mev: ArrayLike, group: Group) -> Floats:
    """Cross section of one group in cm²; zero where no electron can leave.

    Held at its value at 100 MeV above it.
    """
    level, a, b, c = group
    energy = np.minimum(np.asarray(neutrino_mev, dtype=float), CHARGED_END_MEV)
    opened = energy > level + ELECTRON_MASS_MEV
    power = np.log10(np.where(opened, energy, level + 1.0) ** 0.25 - level**0.25)
    return np.where(opened, 10 ** (a + b * power + c * power**2), 0.0)


def gamma_cm2(neutrino_mev: ArrayLike, scale_cm2: float, threshold_mev: float) -> Floats:
    """K (E − threshold)⁴ in cm², held at its value at 60 MeV above it."""
    energy = np.minimum(np.asarray(neutrino_mev, dtype=float), GAMMAS_END_MEV)
    result: Floats = scale_cm2 * np.maximum(energy - threshold_mev, 0.0) ** 4
    return result


def _charged(
    inputs: OxygenInputs, species: str, *, lead: str, key: str, equation: str
) -> Interaction:
    groups = inputs.groups[species]
    error = partial(piecewise, knots_mev=inputs.error_mev, values=inputs.charged_error)
    states = tuple(_group(group, place, lead, error) for place, group in enumerate(groups))
    return Interaction(
        key=key,
        equation=equation,
        target=ISOTOPE,
        threshold_mev=states[0].window_mev[0],
        references=(FIT,),
        branches={species: states},
    )


def _group(group: Group, place: int, lead: str, error: OfEnergy) -> FinalState:
    """One group; of ¹⁶N only the first is bound, the others emit a neutron."""
    threshold = group[0] + ELECTRON_MASS_MEV
    bound = lead == "positron" and place == 0
    return FinalState(
        label=f"levels near {group[0]:.1f} MeV",
        sigma_cm2=partial(group_cm2, group=group),
        lead=lead,
        deposit=Shifted(threshold),
        window_mev=(threshold, CHARGED_END_MEV),
        relative_error=error,
        neutrons=1 if lead == "positron" and not bound else 0,
        delayed="N-16" if bound else None,
    )


def _lines(inputs: OxygenInputs) -> tuple[FinalState, ...]:
    return tuple(
        FinalState(
            label=f"{line.energy_mev:.2f} MeV of {line.nucleus}",
            sigma_cm2=partial(
                gamma_cm2,
                scale_cm2=inputs.gamma_scale_cm2 * line.share,
                threshold_mev=inputs.gamma_threshold_mev,
            ),
            lead="gamma",
            deposit=Fixed(line.energy_mev),
            window_mev=(inputs.gamma_threshold_mev, GAMMAS_END_MEV),
            relative_error=partial(np.full_like, fill_value=inputs.gamma_error),
            neutrons=line.neutrons,
        )
        for line in inputs.lines
    )
