"""Elastic scattering on free protons, ν + p → ν + p, of every species.

With Q² = 2MT, τ = Q²/4M², W = 4E/M − Q²/M² and the upper sign for neutrinos,

    dσ/dQ² = G_F² M²/(8π E²) [A ± B W + C W²]
    A = 4τ [G²(1 + τ) − F₁²(1 − τ) + F₂² τ(1 − τ) + 4τ F₁F₂]
    B = 4τ G (F₁ + F₂),    C = (G² + F₁² + τF₂²)/4

(L. A. Ahrens et al., Phys. Rev. D 35 (1987) 785; J. F. Beacom, W. M. Farr and P. Vogel,
Phys. Rev. D 66 (2002) 033001, arXiv:hep-ph/0205220), with the neutral-current form factors

    F_i = (1/2 − 2 sin²θ_W) F_i^p − F_i^n/2,    G = (g_A − Δs)/2 / (1 + Q²/M_A²)²

and F_i^p, F_i^n from dipole electric and magnetic form factors. The recoil goes forward and is
crowded towards its highest energy, since the axial coupling dominates.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import partial

import numpy as np
from numpy.typing import ArrayLike, NDArray

from tenkpc.constants import (
    FERMI_CONSTANT_PER_MEV2,
    HBAR_C_MEV_CM,
    NEUTRON_MOMENT,
    PROTON_MOMENT,
)
from tenkpc.constants import PROTON_MASS_MEV as M
from tenkpc.interactions import recoil
from tenkpc.interactions.base import FinalState, Interaction, Reference, Spread
from tenkpc.quadrature import gauss
from tenkpc.species import SPECIES

Floats = NDArray[np.float64]

# G_F² M²/8π in cm² MeV² per MeV²
SCALE_CM2 = FERMI_CONSTANT_PER_MEV2**2 * M**2 / (8 * np.pi) * HBAR_C_MEV_CM**2
# dσ/dT is close to a polynomial of second degree in T/T_max: 12 nodes give 1e-13 to 300 MeV
NODES = 12
# above this pions are produced, which the elastic formula does not count
HIGHEST_MEV = 300.0

REFERENCES = (
    Reference(
        "J. F. Beacom, W. M. Farr and P. Vogel",
        "Phys. Rev. D 66 (2002) 033001, arXiv:hep-ph/0205220",
        "cross section at low energies",
    ),
    Reference(
        "L. A. Ahrens et al. (E734 Collaboration)",
        "Phys. Rev. D 35 (1987) 785",
        "form factors, from memory",
    ),
    Reference(
        "R. Gupta et al.", "arXiv:1809.03509, abstract", "size of the strange part of the spin"
    ),
)


@dataclass(frozen=True)
class ProtonInputs:
    """What the cross section depends on beside G_F, masses and magnetic moments.

    Attributes
    ----------
    sin2_theta_w
        sin²θ_W at zero momentum transfer.
    axial_coupling, strange_coupling
        g_A and Δs: the neutral current sees (g_A − Δs)/2.
    axial_mass_mev, vector_mass_squared_mev2
        M_A and M_V² of the dipoles, MeV and MeV².
    relative_error
        1σ of the cross section, relative.
    """

    sin2_theta_w: float
    axial_coupling: float
    strange_coupling: float
    axial_mass_mev: float
    vector_mass_squared_mev2: float
    relative_error: float


def proton_scattering(inputs: ProtonInputs) -> Interaction:
    """Build elastic scattering on free protons; the same for all flavours."""
    plain, anti = (_state(sign, inputs) for sign in (1.0, -1.0))
    return Interaction(
        key="proton-scattering",
        equation="ν + p → ν + p",
        target="H-1",
        threshold_mev=0.0,
        references=REFERENCES,
        branches={s: (anti if s.startswith("anti_") else plain,) for s in SPECIES},
    )


def _state(sign: float, inputs: ProtonInputs) -> FinalState:
    return FinalState(
        label="recoil proton",
        sigma_cm2=partial(total_cm2, sign=sign, inputs=inputs),
        lead="proton",
        deposit=Spread(
            differential=partial(per_recoil_energy, sign=sign, inputs=inputs),
            lowest_mev=partial(recoil.lowest_neutrino_mev, mass_mev=M),
            highest_mev=partial(np.full_like, fill_value=np.inf),
        ),
        window_mev=(0.0, HIGHEST_MEV),
        relative_error=partial(np.full_like, fill_value=inputs.relative_error),
    )


def form_factors(q2_mev2: Floats, inputs: ProtonInputs) -> tuple[Floats, Floats, Floats]:
    """Neutral-current F₁, F₂ and G of the proton at Q² in MeV²."""
    tau = q2_mev2 / (4 * M**2)
    dipole = 1 / (1 + q2_mev2 / inputs.vector_mass_squared_mev2) ** 2
    # Sachs form factors are dipoles, the neutron's electric one none; F₁ and F₂ from them
    f1_proton = (1 + tau * PROTON_MOMENT) / (1 + tau) * dipole
    f2_proton = (PROTON_MOMENT - 1) / (1 + tau) * dipole
    f1_neutron = tau * NEUTRON_MOMENT / (1 + tau) * dipole
    f2_neutron = NEUTRON_MOMENT / (1 + tau) * dipole
    charge = 0.5 - 2 * inputs.sin2_theta_w
    axial = (inputs.axial_coupling - inputs.strange_coupling) / 2
    return (
        charge * f1_proton - f1_neutron / 2,
        charge * f2_proton - f2_neutron / 2,
        axial / (1 + q2_mev2 / inputs.axial_mass_mev**2) ** 2,
    )


def per_recoil_energy(
    neutrino_mev: Floats, kinetic_mev: Floats, sign: float, inputs: ProtonInputs
) -> Floats:
    """dσ/dT = 2M dσ/dQ² in cm²/MeV inside 0 < T < 2E²/(M + 2E); sign −1 for antineutrinos."""
    q2 = 2 * M * kinetic_mev
    tau = q2 / (4 * M**2)
    f1, f2, g = form_factors(q2, inputs)
    w = 4 * neutrino_mev / M - 4 * tau
    a = 4 * tau * (g**2 * (1 + tau) - f1**2 * (1 - tau) + f2**2 * tau * (1 - tau))
    a = a + 16 * tau**2 * f1 * f2
    b = 4 * tau * g * (f1 + f2)
    c = (g**2 + f1**2 + tau * f2**2) / 4
    result: Floats = 2 * M * SCALE_CM2 / neutrino_mev**2 * (a + sign * b * w + c * w**2)
    return result


def total_cm2(neutrino_mev: ArrayLike, sign: float, inputs: ProtonInputs) -> Floats:
    """Total cross section in cm² per proton; zero at zero, sign −1 for antineutrinos.

    Held at its value at 300 MeV above it.
    """
    energy = np.minimum(np.asarray(neutrino_mev, dtype=float), HIGHEST_MEV)
    positive = np.where(energy > recoil.LOWEST_MEV, energy, 1.0)[..., None]
    x, w = gauss(NODES)
    highest = recoil.highest_recoil_mev(positive, M)
    values = per_recoil_energy(positive, highest * x, sign, inputs)
    return np.where(energy > recoil.LOWEST_MEV, (values * highest * w).sum(axis=-1), 0.0)
