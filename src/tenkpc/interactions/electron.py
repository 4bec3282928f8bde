"""Elastic scattering on electrons, ν + e⁻ → ν + e⁻, of every species.

    dσ/dT = (2 G_F² m/π) [g_L² + g_R² (1 - T/E)² - g_L g_R m T/E²],  0 < T < 2E²/(m + 2E)

with T the recoil's kinetic energy; antineutrinos have g_L and g_R exchanged. Electrons are
taken as free and at rest, fine above 0.1 MeV of recoil.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import lru_cache, partial

import numpy as np
from numpy.typing import ArrayLike, NDArray

from tenkpc.constants import ALPHA, FERMI_CONSTANT_PER_MEV2, HBAR_C_MEV_CM
from tenkpc.constants import ELECTRON_MASS_MEV as M
from tenkpc.interactions import recoil
from tenkpc.interactions.base import FinalState, Interaction, Reference, Spread
from tenkpc.interactions.electron_radiative import RHO, corrections, kappa_electron, kappa_other
from tenkpc.quadrature import gauss

Floats = NDArray[np.float64]

# 2 G_F² m/π in cm²/MeV
SCALE_CM2_PER_MEV = 2 * FERMI_CONSTANT_PER_MEV2**2 * M / np.pi * HBAR_C_MEV_CM**2
# nodes over the recoil, crowded towards both ends where logarithms are: totals to 1e-7
NODES = 48
# the formula holds as long as E is far below M_W²/m; nothing here reaches further than this
HIGHEST_MEV = 1e4


@dataclass(frozen=True)
class ElectronInputs:
    """What the cross section depends on beside G_F and the electron's mass.

    Attributes
    ----------
    sin2_theta_w
        sin²θ_W at M_Z in the modified minimal subtraction scheme.
    relative_error
        1σ of the cross section, relative.
    radiative
        whether radiative corrections are included.
    """

    sin2_theta_w: float
    relative_error: float
    radiative: bool


TREE_REFERENCE = Reference(
    "G. 't Hooft", "Phys. Lett. B 37 (1971) 195", "cross section at tree level"
)
RADIATIVE_REFERENCE = Reference(
    "J. N. Bahcall, M. Kamionkowski and A. Sirlin",
    "Phys. Rev. D 51 (1995) 6146, arXiv:astro-ph/9502003",
    "radiative corrections",
)
UNCERTAINTY_REFERENCE = Reference(
    "O. Tomalak and R. J. Hill",
    "Phys. Rev. D 101 (2020) 033006, arXiv:1907.03379",
    "size of what the corrections leave open",
)


def electron_scattering(inputs: ElectronInputs) -> Interaction:
    """Build elastic scattering on electrons for all species.

    Recoils go forward: cosθ = (E + m)/E √(T/(T + 2m)).
    """
    sources = (RADIATIVE_REFERENCE, UNCERTAINTY_REFERENCE) if inputs.radiative else ()
    return Interaction(
        key="electron-scattering",
        equation="ν + e⁻ → ν + e⁻",
        target="electron",
        threshold_mev=0.0,
        references=(TREE_REFERENCE, *sources),
        branches={
            species: (_state(species, inputs),)
            for species in ("nu_e", "anti_nu_e", "nu_x", "anti_nu_x")
        },
    )


def _state(species: str, inputs: ElectronInputs) -> FinalState:
    return FinalState(
        label="recoil electron",
        sigma_cm2=partial(total_cm2, species=species, inputs=inputs),
        lead="electron",
        deposit=Spread(
            differential=partial(per_recoil_energy, species=species, inputs=inputs),
            lowest_mev=partial(recoil.lowest_neutrino_mev, mass_mev=M),
            highest_mev=partial(np.full_like, fill_value=np.inf),
        ),
        window_mev=(0.0, HIGHEST_MEV),
        relative_error=partial(_constant, value=inputs.relative_error),
        mean_cosine=partial(mean_cosine, species=species, inputs=inputs),
    )


def couplings(species: str, kinetic_mev: Floats, inputs: ElectronInputs) -> tuple[Floats, Floats]:
    """g_L and g_R of a species, exchanged for antineutrinos; they run if radiative."""
    of_electron = species in ("nu_e", "anti_nu_e")
    sine, rho = inputs.sin2_theta_w * np.ones_like(kinetic_mev), 1.0
    if inputs.radiative:
        sine = sine * (kappa_electron if of_electron else kappa_other)(kinetic_mev)
        rho = RHO
    left, right = rho * (0.5 - sine) - of_electron, -rho * sine
    return (right, left) if species.startswith("anti_") else (left, right)


def per_recoil_energy(
    neutrino_mev: Floats, kinetic_mev: Floats, species: str, inputs: ElectronInputs
) -> Floats:
    """dσ/dT in cm²/MeV, inside the kinematic range 0 < T < 2E²/(m + 2E)."""
    z = kinetic_mev / neutrino_mev
    left, right = couplings(species, kinetic_mev, inputs)
    straight, flipped, mixed = np.ones_like(z), (1 - z) ** 2, np.ones_like(z)
    if inputs.radiative:
        minus, plus, both = corrections(neutrino_mev, kinetic_mev)
        straight = straight + ALPHA / np.pi * minus
        flipped = flipped + ALPHA / np.pi * plus
        mixed = mixed + ALPHA / np.pi * both
    interference = left * right * M / neutrino_mev * z * mixed
    result: Floats = SCALE_CM2_PER_MEV * (left**2 * straight + right**2 * flipped - interference)
    return result


def total_cm2(neutrino_mev: ArrayLike, species: str, inputs: ElectronInputs) -> Floats:
    """Total cross section in cm² per electron against neutrino energy in MeV; zero at zero."""
    return _integral(neutrino_mev, species, inputs, lambda energy, kinetic: 1.0)


def mean_cosine(neutrino_mev: ArrayLike, species: str, inputs: ElectronInputs) -> Floats:
    """Mean cosine between recoil and neutrino; zero at zero energy."""
    total = total_cm2(neutrino_mev, species, inputs)
    along = _integral(neutrino_mev, species, inputs, partial(recoil.cosine, mass_mev=M))
    return np.divide(along, total, out=np.zeros_like(total), where=total > 0)


def _integral(
    neutrino_mev: ArrayLike,
    species: str,
    inputs: ElectronInputs,
    weight: Callable[[Floats, Floats], Floats | float],
) -> Floats:
    """∫ dT weight dσ/dT over all recoils, zero at zero energy."""
    energy = np.asarray(neutrino_mev, dtype=float)
    positive = np.where(energy > recoil.LOWEST_MEV, energy, 1.0)[..., None]
    share, width = _recoil_nodes()
    highest = recoil.highest_recoil_mev(positive, M)
    kinetic = highest * share
    values = per_recoil_energy(positive, kinetic, species, inputs) * weight(positive, kinetic)
    summed: Floats = (values * width * highest).sum(axis=-1)
    return np.where(energy > recoil.LOWEST_MEV, summed, 0.0)


@lru_cache(maxsize=1)
def _recoil_nodes() -> tuple[Floats, Floats]:
    """Nodes and weights on [0, 1] under u = t³(10 - 15t + 6t²), flat at both ends."""
    t, w = gauss(NODES)
    return t**3 * (10 - 15 * t + 6 * t * t), w * 30 * t**2 * (1 - t) ** 2


def _constant(neutrino_mev: Floats, value: float) -> Floats:
    return np.full_like(neutrino_mev, value)
