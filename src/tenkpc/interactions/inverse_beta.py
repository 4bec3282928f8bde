"""Inverse beta decay, ν̄e + p → e⁺ + n, on free protons."""

from __future__ import annotations

from functools import partial

import numpy as np
from numpy.typing import ArrayLike, NDArray

from tenkpc.constants import ELECTRON_MASS_MEV
from tenkpc.interactions.base import FinalState, Interaction, Reference, Spread
from tenkpc.interactions.inverse_beta_kernel import (
    THRESHOLD_MEV,
    InverseBetaInputs,
    cosine_to_neutrino,
    neutrino_energy_mev,
    per_positron_energy,
    positron_bounds_mev,
)
from tenkpc.quadrature import gauss

Floats = NDArray[np.float64]

# dσ/dE_e is a smooth function of t, close to a polynomial of low degree, times a slow logarithm;
# 12 nodes give the total to 1e-12 up to 300 MeV (8 nodes to 1e-9, tried)
NODES = 12
# pions open above 150 MeV or so and are not in the formula, which counts the elastic part alone
HIGHEST_MEV = 300.0

REFERENCES = (
    Reference(
        "A. Strumia and F. Vissani",
        "Phys. Lett. B 564 (2003) 42, arXiv:astro-ph/0302055",
        "matrix element, kinematics, radiative factor",
    ),
    Reference(
        "R. L. Workman et al. (Particle Data Group)",
        "Prog. Theor. Exp. Phys. 2022, 083C01",
        "V_ud and g_A/g_V",
    ),
)


def inverse_beta_decay(inputs: InverseBetaInputs) -> Interaction:
    """Build inverse beta decay from its inputs.

    The positron's kinetic energy follows exact two-body kinematics: for a neutrino of 20 MeV it
    spreads over 0.8 MeV with the angle. Valid from the threshold to 300 MeV.
    """
    state = FinalState(
        label="positron and neutron",
        sigma_cm2=partial(total_cm2, inputs=inputs),
        lead="positron",
        deposit=Spread(
            differential=partial(_per_kinetic_energy, inputs=inputs),
            lowest_mev=partial(_neutrino_energy, cosine=1.0),
            highest_mev=partial(_neutrino_energy, cosine=-1.0),
        ),
        window_mev=(THRESHOLD_MEV, HIGHEST_MEV),
        relative_error=relative_error,
        neutrons=1,
        mean_cosine=partial(mean_cosine, inputs=inputs),
    )
    return Interaction(
        key="inverse-beta-decay",
        equation="ν̄e + p → e⁺ + n",
        target="H-1",
        threshold_mev=THRESHOLD_MEV,
        references=REFERENCES,
        branches={"anti_nu_e": (state,)},
    )


def total_cm2(neutrino_mev: ArrayLike, inputs: InverseBetaInputs) -> Floats:
    """Total cross section in cm² per proton against neutrino energy in MeV.

    Zero below the threshold, held at its value at 300 MeV above it.
    """
    energy = np.asarray(neutrino_mev, dtype=float)
    _, weighted = _over_positron(np.clip(energy, THRESHOLD_MEV, HIGHEST_MEV), inputs)
    return np.where(energy > THRESHOLD_MEV, weighted.sum(axis=-1), 0.0)


def mean_cosine(neutrino_mev: ArrayLike, inputs: InverseBetaInputs) -> Floats:
    """Mean cosine between positron and neutrino; zero below the threshold."""
    energy = np.asarray(neutrino_mev, dtype=float)
    held = np.clip(energy, THRESHOLD_MEV, HIGHEST_MEV)
    positron, weighted = _over_positron(held, inputs)
    cosine = cosine_to_neutrino(held[..., None], positron)
    total = np.where(energy > THRESHOLD_MEV, weighted.sum(axis=-1), 1.0)
    mean = (cosine * weighted).sum(axis=-1) / total
    return np.where(energy > THRESHOLD_MEV, mean, 0.0)


def relative_error(neutrino_mev: ArrayLike) -> Floats:
    """Relative 1σ error: 0.5 % up to 30 MeV, then on a line through 1 % at 60 MeV.

    What goes into it, as shifts of the total worked out with this module. g_A/g_V and V_ud (PDG
    2022) give 0.17 % and 0.06 % at all energies; the axial radius, r_A² = (0.46 ± 0.16) fm²
    (from memory), 0.02 % at 10 MeV, 0.2 % at 30, 0.8 % at 60, 2 % at 100 and 5 % at 200 MeV. The
    rest at low energies is for radiative corrections: Strumia and Vissani state 0.4 %. At the
    high end of the window the line runs below the axial radius, which matters to no supernova.
    """
    energy = np.asarray(neutrino_mev, dtype=float)
    return 0.005 + 0.005 * np.maximum(energy - 30.0, 0.0) / 30.0


def _over_positron(neutrino_mev: Floats, inputs: InverseBetaInputs) -> tuple[Floats, Floats]:
    """Positron energies on a last axis and dσ/dE_e there times the weights of quadrature."""
    x, w = gauss(NODES)
    low, high = positron_bounds_mev(neutrino_mev[..., None])
    positron = low + (high - low) * x
    return positron, (high - low) * w * per_positron_energy(
        neutrino_mev[..., None], positron, inputs
    )


def _per_kinetic_energy(
    neutrino_mev: Floats, kinetic_mev: Floats, inputs: InverseBetaInputs
) -> Floats:
    return per_positron_energy(neutrino_mev, kinetic_mev + ELECTRON_MASS_MEV, inputs)


def _neutrino_energy(kinetic_mev: Floats, cosine: float) -> Floats:
    return neutrino_energy_mev(kinetic_mev + ELECTRON_MASS_MEV, cosine)
