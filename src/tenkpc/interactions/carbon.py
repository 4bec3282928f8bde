"""Carbon-12: the triad of levels 1⁺, T = 1 in boron, carbon and nitrogen, and what lies above.

The three ground-state reactions share one strength, known from the decays of ¹²B and ¹²N and
from the gamma width of the 15.11 MeV level of ¹²C (see `tenkpc.interactions.transition`). The
unbound levels above ¹²N and ¹²B are one effective level with a forbidden shape,

    σ ∝ p E_l F ⟨q² e^(−2y) (1 − βc/3)⟩ (1 ± a E_ν/50 MeV),

whose size is that measured with electron neutrinos of stopped muons.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from functools import partial

import numpy as np
from numpy.typing import ArrayLike, NDArray

from tenkpc.constants import (
    ELECTRON_MASS_MEV,
    FERMI_CONSTANT_PER_MEV2,
    MUON_MASS_MEV,
)
from tenkpc.interactions.base import (
    FinalState,
    Fixed,
    Interaction,
    OfEnergy,
    Reference,
    Shifted,
    piecewise,
)
from tenkpc.interactions.transition import Transition, beta_coupling_per_mev2, over_angle
from tenkpc.quadrature import gauss
from tenkpc.species import SPECIES

Floats = NDArray[np.float64]

GROUND_STATE_END_MEV = 100.0
EXCITED_END_MEV = 60.0
# the asymmetry of the excited part is given at this energy
ASYMMETRY_AT_MEV = 50.0
ISOTOPE = "C-12"

STRENGTH = Reference(
    "J. H. Kelley, J. E. Purcell and C. G. Sheu; F. Ajzenberg-Selove; J. C. Hardy and I. S. Towner",
    "Nucl. Phys. A 968 (2017) 71; Nucl. Phys. A 506 (1990) 1; Phys. Rev. C 102 (2020) 045501",
    "decays that give the strength, in part from memory",
)
MAGNETISM = Reference(
    "U. Deutschmann et al.", "Nucl. Phys. A 411 (1983) 337", "gamma width of the 15.11 MeV level"
)
MEASURED = Reference(
    "L. B. Auerbach et al. (LSND Collaboration); R. Maschuw (KARMEN Collaboration)",
    "Phys. Rev. C 64 (2001) 065501, arXiv:hep-ex/0105068; Prog. Part. Nucl. Phys. 40 (1998) 183",
    "size of the part above the ground state, the second from memory",
)


@dataclass(frozen=True)
class CarbonInputs:
    """What the cross sections depend on beside masses and G_F.

    Attributes
    ----------
    twice_superallowed_ft_s
        2 Ft of superallowed Fermi decays, s: the size of G in beta decay.
    strength
        S = g_A² B(GT) to ``"boron-12"`` and ``"nitrogen-12"``.
    ground_threshold_mev
        thresholds to the two ground states, MeV.
    level_mev
        energy of the 1⁺, T = 1 level of ¹²C, MeV.
    effective_moment, axial_coupling, sin2_theta_w
        μ in nuclear magnetons, g_A, and sin²θ_W at zero momentum transfer.
    oscillator_fm
        oscillator length of the form factor, fm.
    gamma_branches
        shares of the level's decays: ``"direct"``, ``"cascade"`` and ``"alphas"``.
    gamma_cascade_mev, alphas_mev
        the two gammas of a cascade, and the kinetic energy of three alphas, MeV.
    excited_mev, excited_average_cm2, excited_asymmetry, excited_proton_mev
        the effective level above the ground state, the average of its cross section over
        electron neutrinos of stopped muons, a, and the kinetic energy of the proton it emits.
    error_mev, charged_error, neutral_error
        1σ of ln σ of the ground states and of the level at some energies.
    excited_error
        1σ of ln σ of the effective level, by species.
    """

    twice_superallowed_ft_s: float
    strength: Mapping[str, float]
    ground_threshold_mev: Mapping[str, float]
    level_mev: float
    effective_moment: float
    axial_coupling: float
    sin2_theta_w: float
    oscillator_fm: float
    gamma_branches: Mapping[str, float]
    gamma_cascade_mev: tuple[float, float]
    alphas_mev: float
    excited_mev: float
    excited_average_cm2: float
    excited_asymmetry: float
    excited_proton_mev: float
    error_mev: tuple[float, ...]
    charged_error: tuple[float, ...]
    neutral_error: tuple[float, ...]
    excited_error: Mapping[str, float]


def to_nitrogen(inputs: CarbonInputs) -> Interaction:
    """νe + ¹²C → e⁻ + ¹²N: ground state, then one effective level that emits a proton."""
    ground = charged_transition(inputs, "nitrogen-12")
    proton = (("proton", inputs.excited_proton_mev),)
    branches = (
        _ground(ground, inputs, "nitrogen ground state", "electron", "N-12"),
        _excited(ground, inputs, 1.0, "unbound nitrogen, proton", extras=proton),
    )
    return Interaction(
        key="carbon-12-to-nitrogen-12",
        equation="νe + ¹²C → e⁻ + ¹²N",
        target=ISOTOPE,
        threshold_mev=inputs.ground_threshold_mev["nitrogen-12"],
        references=(STRENGTH, MAGNETISM, MEASURED),
        branches={"nu_e": branches},
    )


def to_boron(inputs: CarbonInputs) -> Interaction:
    """ν̄e + ¹²C → e⁺ + ¹²B: ground state, then one effective level that emits a neutron."""
    ground = charged_transition(inputs, "boron-12")
    branches = (
        _ground(ground, inputs, "boron ground state", "positron", "B-12"),
        _excited(ground, inputs, -1.0, "unbound boron, neutron", neutrons=1),
    )
    return Interaction(
        key="carbon-12-to-boron-12",
        equation="ν̄e + ¹²C → e⁺ + ¹²B",
        target=ISOTOPE,
        threshold_mev=inputs.ground_threshold_mev["boron-12"],
        references=(STRENGTH, MAGNETISM, MEASURED),
        branches={"anti_nu_e": branches},
    )


def excited(inputs: CarbonInputs) -> Interaction:
    """ν + ¹²C → ν + ¹²C*(15.11 MeV) of every species, and the ways the level decays."""
    plain, anti = (_decays(sign, inputs) for sign in (1.0, -1.0))
    return Interaction(
        key="carbon-12-excited",
        equation="ν + ¹²C → ν + ¹²C*",
        target=ISOTOPE,
        threshold_mev=inputs.level_mev,
        references=(STRENGTH, MAGNETISM),
        branches={s: anti if s.startswith("anti_") else plain for s in SPECIES},
    )


def charged_transition(inputs: CarbonInputs, daughter: str) -> Transition:
    """Transition to the ground state of ``"nitrogen-12"`` or ``"boron-12"``."""
    electron = daughter == "nitrogen-12"
    moment = inputs.effective_moment / inputs.axial_coupling
    return Transition(
        coupling_per_mev2=beta_coupling_per_mev2(inputs.twice_superallowed_ft_s),
        strength=inputs.strength[daughter],
        energy_mev=inputs.ground_threshold_mev[daughter] - ELECTRON_MASS_MEV,
        moment_over_axial=moment if electron else -moment,
        oscillator_fm=inputs.oscillator_fm,
        charge=7 if electron else -5,
        nucleons=12,
    )


def neutral_transition(inputs: CarbonInputs, sign: float) -> Transition:
    """Transition to the 15.11 MeV level of ¹²C: half the mean strength of the charged ones.

    ``sign`` is 1 for neutrinos and −1 for antineutrinos.
    """
    moment = inputs.effective_moment / inputs.axial_coupling * (1 - 2 * inputs.sin2_theta_w)
    return Transition(
        coupling_per_mev2=FERMI_CONSTANT_PER_MEV2,
        strength=0.5 * sum(inputs.strength.values()) / len(inputs.strength),
        energy_mev=inputs.level_mev,
        moment_over_axial=sign * moment,
        oscillator_fm=inputs.oscillator_fm,
        charge=0,
        nucleons=12,
    )


def excited_cm2(neutrino_mev: ArrayLike, level: Transition, asymmetry: float) -> Floats:
    """Cross section of the effective level up to its size, in arbitrary units; 0 when closed."""
    energy = np.asarray(neutrino_mev, dtype=float)
    beta = level.velocity(energy)

    def shape(c: Floats, q: Floats) -> Floats:
        falling = np.exp(-2 * level.oscillator_y(q))
        return q**2 * falling * (1 - beta[..., None] * c / 3)

    favoured = 1 + asymmetry * energy / ASYMMETRY_AT_MEV
    return level.scale_cm2(energy) * over_angle(level, energy, shape) * favoured


def stopped_muon_average(sigma_cm2: OfEnergy) -> float:
    """Average over νe of positive muons that decay at rest: 12 x² (1 − x), x = 2E/m_μ."""
    x, w = gauss(96)
    average: float = np.sum(w * 12 * x**2 * (1 - x) * sigma_cm2(x * MUON_MASS_MEV / 2))
    return float(average)


def _ground(
    transition: Transition, inputs: CarbonInputs, label: str, lepton: str, daughter: str
) -> FinalState:
    return FinalState(
        label=label,
        sigma_cm2=partial(_held, sigma=transition.total_cm2, end_mev=GROUND_STATE_END_MEV),
        lead=lepton,
        deposit=Shifted(transition.energy_mev + ELECTRON_MASS_MEV),
        window_mev=(transition.energy_mev + ELECTRON_MASS_MEV, GROUND_STATE_END_MEV),
        relative_error=partial(piecewise, knots_mev=inputs.error_mev, values=inputs.charged_error),
        delayed=daughter,
        mean_cosine=partial(_held, sigma=transition.mean_cosine, end_mev=GROUND_STATE_END_MEV),
    )


def _excited(
    ground: Transition,
    inputs: CarbonInputs,
    sign: float,
    label: str,
    extras: tuple[tuple[str, float], ...] = (),
    neutrons: int = 0,
    delayed: str | None = None,
) -> FinalState:
    level = _above(ground, inputs)
    threshold = level.energy_mev + ELECTRON_MASS_MEV
    shape = partial(excited_cm2, level=level, asymmetry=sign * inputs.excited_asymmetry)
    sigma = partial(_scaled, shape=shape, factor=_excited_factor(inputs))
    species = "nu_e" if sign > 0 else "anti_nu_e"
    return FinalState(
        label=label,
        sigma_cm2=partial(_held, sigma=sigma, end_mev=EXCITED_END_MEV),
        lead="electron" if sign > 0 else "positron",
        deposit=Shifted(threshold),
        window_mev=(threshold, EXCITED_END_MEV),
        relative_error=partial(np.full_like, fill_value=inputs.excited_error[species]),
        extras=extras,
        neutrons=neutrons,
        delayed=delayed,
    )


def _above(ground: Transition, inputs: CarbonInputs) -> Transition:
    """The effective level above a ground state."""
    return replace(ground, energy_mev=ground.energy_mev + inputs.excited_mev)


def _excited_factor(inputs: CarbonInputs) -> float:
    """Size of the effective level, from the average measured with stopped muons."""
    level = _above(charged_transition(inputs, "nitrogen-12"), inputs)
    shape = partial(excited_cm2, level=level, asymmetry=inputs.excited_asymmetry)
    return inputs.excited_average_cm2 / stopped_muon_average(shape)


def _decays(sign: float, inputs: CarbonInputs) -> tuple[FinalState, ...]:
    """The level's decays: one gamma, two, or three alphas, each its share of the whole."""
    first, second = inputs.gamma_cascade_mev
    ways = (
        ("direct", "one gamma", "gamma", inputs.level_mev, ()),
        ("cascade", "two gammas", "gamma", first, (("gamma", second),)),
        ("alphas", "three alphas", "alpha", inputs.alphas_mev, ()),
    )
    whole = partial(
        _held, sigma=neutral_transition(inputs, sign).total_cm2, end_mev=GROUND_STATE_END_MEV
    )
    return tuple(
        FinalState(
            label=label,
            sigma_cm2=partial(_scaled, shape=whole, factor=inputs.gamma_branches[branch]),
            lead=lead,
            deposit=Fixed(energy),
            window_mev=(inputs.level_mev, GROUND_STATE_END_MEV),
            relative_error=partial(
                piecewise, knots_mev=inputs.error_mev, values=inputs.neutral_error
            ),
            extras=extras,
        )
        for branch, label, lead, energy, extras in ways
    )


def _held(neutrino_mev: ArrayLike, sigma: OfEnergy, end_mev: float) -> Floats:
    return sigma(np.minimum(np.asarray(neutrino_mev, dtype=float), end_mev))


def _scaled(neutrino_mev: Floats, shape: OfEnergy, factor: float) -> Floats:
    return factor * shape(neutrino_mev)
