"""Reactions of a nucleus whose strength is known by excitation energy, and of no other data.

Charged current, for the strength at E_x, with E_l = E − ΔM ± m_e − E_x and p of the lepton that
leaves, β = p/E_l, c the cosine of its angle and q² = E² + p² − 2Epc,

    dσ/dc = (G_F² V_ud²/2π) p E_l F_C { (1 + βc) [B(F) f₀² + q² S_V f₁²]
            + (1 − βc/3) W [B(GT) f₀² + 3 g_A² q² S_A f₁²] }

    f₀² = exp(−q² r²/3),  f₁ = 3 j₁(qR)/(qR),  R = 1.12 A^(1/3) + 0.3 fm
    W = 1 ± 2μ/(3 g_A M) (E + p²/E_l),  μ = 1 + κ_p − κ_n

with B(GT) that holds g_A², dipole strengths S per axis in fm², r² of the excess neutrons, and the
Coulomb factor of `tenkpc.interactions.coulomb.coulomb_factor`. Without dipoles and at small q it is
(G_F² V_ud²/π) p E_l F [B(F) + B(GT)]. Neutral current: the same with V_ud = F_C = 1, a neutrino of
E − E_x that leaves, strengths of τ₃/2, (1 − 2 sin²θ_W)² before S_V and (1 − 2 sin²θ_W) before μ;
magnetic dipole strength B(M1) is B(GT) = g_A²/4 · B(M1)/[(3/4π)(μ/2)²] with
f₀² = exp(−q² A^(2/3) fm²/3).

The dipoles are sum rules with one form factor: meant below 60 MeV.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from functools import partial

import numpy as np
from numpy.polynomial.chebyshev import chebpts1, chebval, chebvander
from numpy.typing import ArrayLike, NDArray
from scipy.special import spherical_jn

from tenkpc.constants import (
    ANOMALOUS_MOMENT_DIFFERENCE,
    ELECTRON_MASS_MEV,
    FERMI_CONSTANT_PER_MEV2,
    HBAR_C_MEV_CM,
    NEUTRON_MASS_MEV,
    PROTON_MASS_MEV,
)
from tenkpc.interactions.base import (
    FinalState,
    Fixed,
    Interaction,
    Reference,
    Shifted,
    piecewise,
)
from tenkpc.interactions.coulomb import coulomb_factor
from tenkpc.interactions.strength import Emission, Excited, Peak, emissions, excited
from tenkpc.quadrature import gauss
from tenkpc.species import SPECIES

Floats = NDArray[np.float64]

FM_PER_MEV = 1e-13 / HBAR_C_MEV_CM
MOMENT = 1 + ANOMALOUS_MOMENT_DIFFERENCE
NUCLEON_MASS_MEV = 0.5 * (PROTON_MASS_MEV + NEUTRON_MASS_MEV)
# nodes over the angle, and degree in the neutrino's energy: 3e-7 of σ at its largest
NODES, DEGREE = 32, 20
# knots of p E F_C against the momentum: linear in the logarithm between them, good to 1e-6
PHASE_KNOTS = np.geomspace(1e-3, 250.0, 3000)
WORDS = ("gamma rays", "gamma rays, neutron", "gamma rays, two neutrons")


@dataclass(frozen=True, eq=False)
class NuclearInputs:
    """What the cross section of one reaction of a nucleus depends on beside G_F and masses.

    Attributes
    ----------
    key, equation, target, references
        of the interaction.
    current
        what leaves: an ``"electron"``, a ``"positron"``, or a neutrino again, ``"neutral"``.
    protons, nucleons
        Z and A of the nucleus that is left.
    mass_difference_mev
        ΔM of the neutral atoms in their ground states, MeV; 0 for the neutral current.
    separation_mev
        energies that it costs to take one and two neutrons from the nucleus that is left, MeV.
    radius_squared_fm2
        r² of the form factor of Fermi and Gamow-Teller strength, fm².
    peaks
        levels and resonances of each kind of strength, see `tenkpc.interactions.strength`.
    scale_bound, scale_unbound
        factors on all strength below and above the neutron's separation energy.
    end_mev
        neutrino energy up to which the cross section is meant, MeV; held beyond.
    error_mev, error
        1σ of ln σ at some neutrino energies.
    v_ud, axial_coupling, sin2_theta_w
        V_ud, g_A, and sin²θ_W at zero momentum transfer.
    """

    key: str
    equation: str
    target: str
    references: tuple[Reference, ...]
    current: str
    protons: int
    nucleons: int
    mass_difference_mev: float
    separation_mev: tuple[float, ...]
    radius_squared_fm2: float
    peaks: Mapping[str, Sequence[Peak]]
    scale_bound: float
    scale_unbound: float
    end_mev: float
    error_mev: tuple[float, ...]
    error: tuple[float, ...]
    v_ud: float
    axial_coupling: float
    sin2_theta_w: float

    @property
    def is_neutral(self) -> bool:
        """Whether a neutrino leaves."""
        return self.current == "neutral"

    @property
    def offset_mev(self) -> float:
        """The neutrino's energy less kinetic and excitation energy: what the reaction costs."""
        return self.mass_difference_mev + 2 * ELECTRON_MASS_MEV * (self.current == "positron")

    @property
    def lepton_mass_mev(self) -> float:
        """Mass of the lepton that leaves, MeV."""
        return 0.0 if self.is_neutral else ELECTRON_MASS_MEV


def nuclear(inputs: NuclearInputs) -> Interaction:
    """Build the reaction with its final states: a lepton or gammas, and 0, 1 or 2 neutrons."""
    levels = excited(inputs.peaks, inputs.separation_mev)
    species = {"electron": ("nu_e",), "positron": ("anti_nu_e",), "neutral": SPECIES}
    states = {sign: _states(inputs, levels, sign) for sign in _signs(inputs)}
    lowest = float(levels.energy_mev[0]) if len(levels.energy_mev) else inputs.end_mev
    return Interaction(
        key=inputs.key,
        equation=inputs.equation,
        target=inputs.target,
        threshold_mev=inputs.offset_mev + lowest,
        references=inputs.references,
        branches={s: states[-1 if s.startswith("anti_") else 1] for s in species[inputs.current]},
    )


def _signs(inputs: NuclearInputs) -> tuple[int, ...]:
    """Neutrinos, antineutrinos, or both."""
    return {"electron": (1,), "positron": (-1,), "neutral": (1, -1)}[inputs.current]


def _states(inputs: NuclearInputs, levels: Excited, sign: int) -> tuple[FinalState, ...]:
    weights = _weights(inputs, levels)
    average = _averages(inputs, levels.energy_mev, weights, sign)
    phase = _phase(inputs)
    made = []
    for place, energy in enumerate(levels.energy_mev):
        scale = inputs.scale_bound if _bound(energy, inputs) else inputs.scale_unbound
        sigma = _Sigma(inputs, float(energy), average[:, place], phase, scale)
        cosine = partial(_mean_cosine, inputs, float(energy), weights[:, place], sign)
        made += [
            _state(inputs, sigma, cosine, emission)
            for emission in emissions(float(energy), inputs.separation_mev, inputs.nucleons)
        ]
    return tuple(made)


def _bound(energy_mev: float, inputs: NuclearInputs) -> bool:
    return not inputs.separation_mev or energy_mev <= inputs.separation_mev[0]


def _state(
    inputs: NuclearInputs,
    sigma: _Sigma,
    cosine: Callable[[Floats], Floats],
    emission: Emission,
) -> FinalState:
    """One level and one way in which it decays."""
    gammas = (("gamma", emission.gamma_mev),) if emission.gamma_mev > 0 else ()
    lead = inputs.current
    deposit: Fixed | Shifted = Shifted(sigma.opens_mev)
    if inputs.is_neutral:
        lead = "gamma" if gammas else "neutron"
        deposit, gammas = Fixed(emission.gamma_mev), ()
    return FinalState(
        label=WORDS[emission.neutrons],
        sigma_cm2=partial(sigma, share=emission.share),
        lead=lead,
        deposit=deposit,
        window_mev=(sigma.opens_mev, inputs.end_mev),
        relative_error=partial(piecewise, knots_mev=inputs.error_mev, values=inputs.error),
        extras=gammas,
        neutrons=emission.neutrons,
        mean_cosine=None if inputs.is_neutral else cosine,
    )


class _Sigma:
    """σ of one level: phase space as it is, times a polynomial in the neutrino's energy."""

    def __init__(
        self,
        inputs: NuclearInputs,
        energy_mev: float,
        average: Floats,
        phase: Callable[[Floats], Floats],
        scale: float,
    ) -> None:
        self.opens_mev = inputs.offset_mev + energy_mev
        self.span_mev = inputs.end_mev - self.opens_mev
        self.end_mev, self.phase = inputs.end_mev, phase
        self.coefficients = average * scale

    def __call__(self, neutrino_mev: ArrayLike, share: float = 1.0) -> Floats:
        """σ in cm²; zero below the threshold, held above the end."""
        energy = np.minimum(np.asarray(neutrino_mev, dtype=float), self.end_mev)
        kinetic = np.maximum(energy - self.opens_mev, 0.0)
        polynomial = chebval(2 * kinetic / max(self.span_mev, 1e-9) - 1, self.coefficients)
        result: Floats = share * self.phase(kinetic) * np.maximum(polynomial, 0.0)
        return result


def _phase(inputs: NuclearInputs) -> Callable[[Floats], Floats]:
    """(G²/2π) p E_l F_C in cm² against the lepton's kinetic energy in MeV."""
    mass = inputs.lepton_mass_mev
    mixing = 1.0 if inputs.is_neutral else inputs.v_ud
    scale = (FERMI_CONSTANT_PER_MEV2 * mixing * HBAR_C_MEV_CM) ** 2 / (2 * np.pi)
    if inputs.is_neutral:
        return lambda kinetic: scale * kinetic**2
    charge = inputs.protons if inputs.current == "electron" else -inputs.protons
    factor = np.log(coulomb_factor(PHASE_KNOTS, charge, inputs.nucleons))
    knots = np.log(PHASE_KNOTS)

    def phase(kinetic: Floats) -> Floats:
        energy = kinetic + mass
        p = np.sqrt(kinetic * (energy + mass))
        enhanced = np.exp(np.interp(np.log(np.maximum(p, 1e-3)), knots, factor))
        return np.asarray(scale * p * energy * enhanced)

    return phase


def _weights(inputs: NuclearInputs, levels: Excited) -> Floats:
    """B(F), S_V, B(GT), 3 g_A² S_A and B(GT) of magnetic strength, shape (5, levels)."""
    zero = np.zeros_like(levels.energy_mev)
    of = {kind: levels.of.get(kind, zero) for kind in levels.of}
    axial = inputs.axial_coupling**2
    vector = (1 - 2 * inputs.sin2_theta_w) ** 2 if inputs.is_neutral else 1.0
    magnetic = axial / 4 / (3 / (4 * np.pi) * (MOMENT / 2) ** 2)
    return np.array(
        [
            of.get("fermi", zero),
            vector * of.get("vector_dipole", zero),
            axial * of.get("gamow_teller", zero) + of.get("gamow_teller_with_axial_coupling", zero),
            3 * axial * of.get("spin_dipole", zero),
            magnetic * of.get("magnetic_dipole", zero),
        ]
    )


def _averages(inputs: NuclearInputs, energy_mev: Floats, weights: Floats, sign: int) -> Floats:
    """Chebyshev coefficients of ∫ dc {…} over each level's energies, (DEGREE + 1, levels)."""
    opens = inputs.offset_mev + energy_mev
    span = np.maximum(inputs.end_mev - opens, 0.0)

    x = chebpts1(DEGREE + 1)
    kinetic = 0.5 * (x[:, None] + 1) * span
    c, w = _angles()
    braces = _braces(inputs, kinetic[..., None], opens[:, None], weights[..., None], c, sign)
    coefficients = chebvander(x, DEGREE).T @ (braces * w).sum(axis=-1) * 2 / (DEGREE + 1)
    coefficients[0] /= 2
    return np.asarray(coefficients)


def _angles() -> tuple[Floats, Floats]:
    x, w = gauss(NODES)
    return 2 * x - 1, 2 * w


def _braces(
    inputs: NuclearInputs,
    kinetic_mev: Floats,
    opens_mev: Floats,
    weights: Floats,
    cosine: Floats,
    sign: int,
) -> Floats:
    """{…} of the module's docstring; all arrays broadcast."""
    neutrino = kinetic_mev + opens_mev
    lepton = kinetic_mev + inputs.lepton_mass_mev
    p = np.sqrt(kinetic_mev * (lepton + inputs.lepton_mass_mev))
    beta = p / np.maximum(lepton, 1e-300)
    q2 = np.maximum(neutrino**2 + p**2 - 2 * neutrino * p * cosine, 0.0) * FM_PER_MEV**2
    allowed = np.exp(-q2 * inputs.radius_squared_fm2 / 3)
    magnetic = np.exp(-q2 * inputs.nucleons ** (2 / 3) / 3)
    x = np.maximum(np.sqrt(q2) * (1.12 * inputs.nucleons ** (1 / 3) + 0.3), 1e-4)
    dipole = q2 * (3 * spherical_jn(1, x) / x) ** 2
    moment = MOMENT * ((1 - 2 * inputs.sin2_theta_w) if inputs.is_neutral else 1.0)
    weak = moment * 2 / (3 * inputs.axial_coupling * NUCLEON_MASS_MEV)
    magnetism = 1 + sign * weak * (neutrino + p * beta)
    fermi, vector, axial, spin, of_spin = weights
    charge = (1 + beta * cosine) * (fermi * allowed + vector * dipole)
    result: Floats = charge + (1 - beta * cosine / 3) * magnetism * (
        axial * allowed + spin * dipole + of_spin * magnetic
    )
    return result


def _mean_cosine(
    inputs: NuclearInputs, energy_mev: float, weights: Floats, sign: int, neutrino_mev: Floats
) -> Floats:
    """Mean cosine between lepton and neutrino for one level."""
    opens = inputs.offset_mev + energy_mev
    kinetic = np.maximum(np.minimum(neutrino_mev, inputs.end_mev) - opens, 0.0)[..., None]
    c, w = _angles()
    braces = w * _braces(inputs, kinetic, np.array(opens), weights[:, None, None], c, sign)
    result: Floats = (c * braces).sum(axis=-1) / braces.sum(axis=-1)
    return result
