"""Coherent elastic scattering on whole nuclei, ν + A → ν + A, of every species.

    dσ/dT = G_F² M/(4π) Q_W² [1 − T/E − MT/(2E²)] F(q)²,    q² = 2MT,    0 < T < 2E²/(M + 2E)

with the mass M of the nucleus and the weak charge Q_W = N − (1 − 4 sin²θ_W) Z, the same for all
flavours, or −2 (g_V^n N + g_V^p Z) with radiative corrections, where g_V^p depends on the flavour
(D. Z. Freedman, Phys. Rev. D 9 (1974) 1389; exact for a nucleus without spin). The form factor is

    F = 3 j₁(qR)/(qR) exp(−q²s²/2),    R² = c² + (7/3) π²a² − 5s²,    c = 1.23 A^(1/3) − 0.60 fm

(R. H. Helm, Phys. Rev. 104 (1956) 1466; J. D. Lewin and P. F. Smith, Astropart. Phys. 6 (1996)
87), and exp(−q²r²/6) for helium. Hydrogen is excluded: scattering on protons is another reaction.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import partial

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.special import spherical_jn

from tenkpc.constants import FERMI_CONSTANT_PER_MEV2, HBAR_C_MEV_CM
from tenkpc.interactions import recoil
from tenkpc.interactions.base import FinalState, Interaction, Nucleus, Reference, Spread
from tenkpc.quadrature import gauss
from tenkpc.species import SPECIES

Floats = NDArray[np.float64]

END_MEV = 100.0
EVERY_NUCLEUS = "every nucleus but hydrogen"
# of T/T_max: the form factor of lead has its second zero near 100 MeV, 40 nodes give 1e-12
NODES = 40
FM_PER_MEV = 1e-13 / HBAR_C_MEV_CM

REFERENCES = (
    Reference("D. Z. Freedman", "Phys. Rev. D 9 (1974) 1389", "cross section, from memory"),
    Reference(
        "J. D. Lewin and P. F. Smith",
        "Astropart. Phys. 6 (1996) 87",
        "form factor, from memory",
    ),
    Reference(
        "O. Tomalak, P. Machado, V. Pandey and R. Plestid",
        "arXiv:2011.05960, abstract",
        "size of the radiative corrections",
    ),
)


@dataclass(frozen=True)
class CoherentInputs:
    """What the cross section depends on beside G_F and masses.

    Attributes
    ----------
    neutron_charge
        weak charge of a neutron.
    proton_charges
        weak charges of a proton, by species: one for each flavour that a species stands for.
    slope_fm, step_fm, diffuseness_fm, skin_fm
        of the form factor: c = slope A^(1/3) − step, a and s.
    light_radii_fm
        rms radii of nuclei too light for that form, by name.
    radius_error, other_error
        1σ of ln R, and of ln σ at low energy.
    """

    neutron_charge: float
    proton_charges: Mapping[str, tuple[float, ...]]
    slope_fm: float
    step_fm: float
    diffuseness_fm: float
    skin_fm: float
    light_radii_fm: Mapping[str, float]
    radius_error: float
    other_error: float


def coherent_scattering(inputs: CoherentInputs) -> Interaction:
    """Build coherent scattering, which needs a nucleus to become a cross section."""
    return Interaction(
        key="coherent-scattering",
        equation="ν + A → ν + A",
        target=EVERY_NUCLEUS,
        threshold_mev=0.0,
        references=REFERENCES,
        branches={},
        of_nucleus=partial(on_nucleus, inputs=inputs),
    )


def on_nucleus(nucleus: Nucleus, inputs: CoherentInputs) -> Interaction | None:
    """Build coherent scattering on one nucleus; None for hydrogen, which is no such target."""
    if nucleus.protons == 1:
        return None
    # flavours with the same weak charges share their final state
    states = {
        charges: _state(nucleus, _mean_square(nucleus, charges, inputs), inputs)
        for charges in set(inputs.proton_charges.values())
    }
    return Interaction(
        key="coherent-scattering",
        equation="ν + A → ν + A",
        target=nucleus.name,
        threshold_mev=0.0,
        references=REFERENCES,
        branches={s: (states[inputs.proton_charges[s]],) for s in SPECIES},
    )


def _mean_square(
    nucleus: Nucleus, proton_charges: tuple[float, ...], inputs: CoherentInputs
) -> float:
    """Q_W², averaged over the flavours that a species stands for."""
    neutrons = nucleus.nucleons - nucleus.protons
    charges = [inputs.neutron_charge * neutrons + q * nucleus.protons for q in proton_charges]
    return float(np.mean(np.square(charges)))


def _state(nucleus: Nucleus, charge_squared: float, inputs: CoherentInputs) -> FinalState:
    shape = partial(form_factor, nucleus=nucleus, inputs=inputs)
    differential = partial(
        per_recoil_energy, mass_mev=nucleus.mass_mev, charge_squared=charge_squared, shape=shape
    )
    return FinalState(
        label=f"recoil of {nucleus.name}",
        sigma_cm2=partial(total_cm2, mass_mev=nucleus.mass_mev, differential=differential),
        lead=nucleus.name,
        deposit=Spread(
            differential=differential,
            lowest_mev=partial(recoil.lowest_neutrino_mev, mass_mev=nucleus.mass_mev),
            highest_mev=partial(np.full_like, fill_value=np.inf),
        ),
        window_mev=(0.0, END_MEV),
        relative_error=partial(_error, nucleus=nucleus, inputs=inputs),
    )


def radius_fm(nucleons: int, inputs: CoherentInputs) -> float:
    """R of the form factor, fm."""
    c = inputs.slope_fm * nucleons ** (1 / 3) - inputs.step_fm
    square = c**2 + 7 / 3 * (np.pi * inputs.diffuseness_fm) ** 2 - 5 * inputs.skin_fm**2
    return float(np.sqrt(square))


def form_factor(q_mev: Floats, nucleus: Nucleus, inputs: CoherentInputs) -> Floats:
    """F at a momentum transfer in MeV; 1 at zero."""
    q = q_mev * FM_PER_MEV
    if nucleus.name in inputs.light_radii_fm:
        gaussian: Floats = np.exp(-((q * inputs.light_radii_fm[nucleus.name]) ** 2) / 6)
        return gaussian
    x = np.maximum(q * radius_fm(nucleus.nucleons, inputs), 1e-4)
    result: Floats = 3 * spherical_jn(1, x) / x * np.exp(-((q * inputs.skin_fm) ** 2) / 2)
    return result


def per_recoil_energy(
    neutrino_mev: Floats,
    kinetic_mev: Floats,
    mass_mev: float,
    charge_squared: float,
    shape: partial[Floats],
) -> Floats:
    """dσ/dT in cm²/MeV inside 0 < T < 2E²/(M + 2E)."""
    scale = FERMI_CONSTANT_PER_MEV2**2 * mass_mev / (4 * np.pi) * HBAR_C_MEV_CM**2
    of_recoil = scale * charge_squared * shape(np.sqrt(2 * mass_mev * kinetic_mev)) ** 2
    share = 1 - kinetic_mev / neutrino_mev - mass_mev * kinetic_mev / (2 * neutrino_mev**2)
    # at the largest recoil rounding would leave a trifle below zero
    result: Floats = of_recoil * np.maximum(share, 0.0)
    return result


def total_cm2(neutrino_mev: ArrayLike, mass_mev: float, differential: partial[Floats]) -> Floats:
    """Total cross section in cm² per nucleus; zero at zero.

    Above the window it goes on as the formula says, together with the recoil spectrum.
    """
    energy = np.asarray(neutrino_mev, dtype=float)
    positive = np.where(energy > recoil.LOWEST_MEV, energy, 1.0)[..., None]
    x, w = gauss(NODES)
    highest = recoil.highest_recoil_mev(positive, mass_mev)
    values = differential(positive, highest * x) * highest * w
    return np.where(energy > recoil.LOWEST_MEV, values.sum(axis=-1), 0.0)


def _error(neutrino_mev: Floats, nucleus: Nucleus, inputs: CoherentInputs) -> Floats:
    """1σ of ln σ: of F² ≈ exp(−q²R²/5) at the mean q² = 4E²/3, and what else is left out."""
    energy = np.minimum(neutrino_mev, END_MEV)
    x2 = 4 / 3 * (energy * FM_PER_MEV * radius_fm(nucleus.nucleons, inputs)) ** 2
    return np.hypot(inputs.other_error, 2 / 5 * x2 * inputs.radius_error)
