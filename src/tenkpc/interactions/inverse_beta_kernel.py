"""Kinematics and matrix element of ν̄e + p → e⁺ + n, with all masses.

Energies of the positron are TOTAL energies here, in the rest frame of the proton and in MeV.
Everything takes arrays that broadcast and knows nothing of final states or detectors.

The matrix element is that of A. Strumia and F. Vissani, Phys. Lett. B 564 (2003) 42,
arXiv:astro-ph/0302055: the exact spin sum for vector, axial, weak-magnetism and pseudoscalar
form factors (the tests hold it against an explicit Dirac trace).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from tenkpc.constants import (
    ALPHA,
    ANOMALOUS_MOMENT_DIFFERENCE,
    CHARGED_PION_MASS_MEV,
    ELECTRON_MASS_MEV,
    FERMI_CONSTANT_PER_MEV2,
    HBAR_C_MEV_CM,
    NEUTRON_MASS_MEV,
    PROTON_MASS_MEV,
)

Floats = NDArray[np.float64]

THRESHOLD_MEV = ((NEUTRON_MASS_MEV + ELECTRON_MASS_MEV) ** 2 - PROTON_MASS_MEV**2) / (
    2 * PROTON_MASS_MEV
)
# δ: what the neutrino of a very heavy proton would lose to the positron's total energy
OFFSET_MEV = (NEUTRON_MASS_MEV**2 - PROTON_MASS_MEV**2 - ELECTRON_MASS_MEV**2) / (
    2 * PROTON_MASS_MEV
)
MEAN_MASS_MEV = 0.5 * (NEUTRON_MASS_MEV + PROTON_MASS_MEV)


@dataclass(frozen=True)
class InverseBetaInputs:
    """What the cross section of inverse beta decay depends on beside masses and G_F.

    Attributes
    ----------
    v_ud
        element of the quark mixing matrix.
    axial_coupling
        |g_A / g_V| at zero momentum transfer.
    axial_mass_mev
        M_A of the axial dipole form factor, MeV.
    vector_mass_squared_mev2
        M_V² of the vector dipole form factors, MeV².
    moment_difference
        ξ = κ_p − κ_n, in nuclear magnetons.
    radiative
        whether radiative corrections are included.
    """

    v_ud: float
    axial_coupling: float
    axial_mass_mev: float
    vector_mass_squared_mev2: float
    moment_difference: float = ANOMALOUS_MOMENT_DIFFERENCE
    radiative: bool = True


def momentum_mev(positron_mev: Floats) -> Floats:
    """Positron momentum p_e = √(E_e² − m_e²) in MeV; zero for a positron at rest."""
    squared: Floats = np.maximum(positron_mev**2 - ELECTRON_MASS_MEV**2, 0.0)
    return np.sqrt(squared)


def positron_bounds_mev(neutrino_mev: Floats) -> tuple[Floats, Floats]:
    """Lowest and highest total energy of the positron in MeV.

    E_e = E_ν − δ − E_ν* (E_e* ± p_e*) / m_p, with starred energies those of the centre of mass.
    Below threshold both are the value at threshold.
    """
    energy = np.maximum(neutrino_mev, THRESHOLD_MEV)
    s = PROTON_MASS_MEV * (PROTON_MASS_MEV + 2 * energy)
    root = np.sqrt(s)
    neutrino = PROTON_MASS_MEV * energy / root
    positron = (s - NEUTRON_MASS_MEV**2 + ELECTRON_MASS_MEV**2) / (2 * root)
    middle = energy - OFFSET_MEV - neutrino * positron / PROTON_MASS_MEV
    half = neutrino * momentum_mev(positron) / PROTON_MASS_MEV
    return middle - half, middle + half


def neutrino_energy_mev(positron_mev: Floats, cosine: float) -> Floats:
    """Neutrino energy that gives a positron of this energy at this angle, MeV.

    E_ν = m_p (E_e + δ) / (m_p − E_e + p_e cos θ); infinite where no energy is large enough.
    """
    below = PROTON_MASS_MEV - positron_mev + cosine * momentum_mev(positron_mev)
    possible = below > 0
    energy = PROTON_MASS_MEV * (positron_mev + OFFSET_MEV) / np.where(possible, below, 1.0)
    result: Floats = np.where(possible, energy, np.inf)
    return result


def positron_energy_mev(neutrino_mev: Floats, cosine: Floats) -> Floats:
    """Total energy of a positron emitted at an angle, MeV.

    Exact two-body kinematics. Within 1e-6 MeV of the threshold, where the positron has a second,
    lower energy at the same angle, the higher one is given; below the threshold the value is
    that at threshold.

    Parameters
    ----------
    neutrino_mev
        neutrino energy, MeV.
    cosine
        cosine of the angle between positron and neutrino in the laboratory.
    """
    energy = np.maximum(neutrino_mev, THRESHOLD_MEV)
    ratio = energy / PROTON_MASS_MEV
    kappa = (1 + ratio) ** 2 - (ratio * cosine) ** 2
    free = energy - OFFSET_MEV
    root = np.sqrt(np.maximum(free**2 - ELECTRON_MASS_MEV**2 * kappa, 0.0))
    result: Floats = (free * (1 + ratio) + ratio * cosine * root) / kappa
    return result


def cosine_to_neutrino(neutrino_mev: Floats, positron_mev: Floats) -> Floats:
    """Cosine between positron and neutrino, cos θ = (t − m_e² + 2 E_ν E_e) / (2 E_ν p_e).

    Clipped to [−1, 1] against rounding at the bounds of the positron's energy.
    """
    momentum = np.maximum(momentum_mev(positron_mev), 1e-12)
    t = transfer_mev2(neutrino_mev, positron_mev)
    energies = 2 * neutrino_mev * positron_mev
    cosine = (t - ELECTRON_MASS_MEV**2 + energies) / (2 * neutrino_mev * momentum)
    return np.clip(cosine, -1.0, 1.0)


def transfer_mev2(neutrino_mev: Floats, positron_mev: Floats) -> Floats:
    """Squared momentum transfer t = m_n² − m_p² − 2 m_p (E_ν − E_e), MeV², negative."""
    masses = NEUTRON_MASS_MEV**2 - PROTON_MASS_MEV**2
    result: Floats = masses - 2 * PROTON_MASS_MEV * (neutrino_mev - positron_mev)
    return result


def form_factors(
    t_mev2: Floats, inputs: InverseBetaInputs
) -> tuple[Floats, Floats, Floats, Floats]:
    """Vector, weak-magnetism, axial and pseudoscalar form factors f1, f2, g1, g2 at t.

    Dipoles for f1, f2 and g1; g2 from the pion pole (partially conserved axial current).
    """
    tau = t_mev2 / (4 * MEAN_MASS_MEV**2)
    xi = inputs.moment_difference
    dipole = 1 / ((1 - tau) * (1 - t_mev2 / inputs.vector_mass_squared_mev2) ** 2)
    f1 = (1 - (1 + xi) * tau) * dipole
    f2 = xi * dipole
    g1 = -inputs.axial_coupling / (1 - t_mev2 / inputs.axial_mass_mev**2) ** 2
    g2 = 2 * MEAN_MASS_MEV**2 * g1 / (CHARGED_PION_MASS_MEV**2 - t_mev2)
    return f1, f2, g1, g2


def matrix_element(neutrino_mev: Floats, positron_mev: Floats, inputs: InverseBetaInputs) -> Floats:
    """|M|² = A − (s − u) B + (s − u)² C in MeV⁴, summed over spins as in the reference."""
    t = transfer_mev2(neutrino_mev, positron_mev)
    difference = 2 * PROTON_MASS_MEV * (neutrino_mev + positron_mev) - ELECTRON_MASS_MEV**2
    a, b, c = _abc(t, *form_factors(t, inputs))
    result: Floats = a - difference * b + difference**2 * c
    return result


def _abc(
    t: Floats, f1: Floats, f2: Floats, g1: Floats, g2: Floats
) -> tuple[Floats, Floats, Floats]:
    """Coefficients A, B and C of the reference, with m = m_e, M the mean and Δ = m_n − m_p."""
    m2, M2 = ELECTRON_MASS_MEV**2, MEAN_MASS_MEV**2
    delta = NEUTRON_MASS_MEV - PROTON_MASS_MEV
    a = (t - m2) * (
        4 * f1**2 * (4 * M2 + t + m2)
        + 4 * g1**2 * (-4 * M2 + t + m2)
        + f2**2 * (t**2 / M2 + 4 * t + 4 * m2)
        + 4 * m2 * t * g2**2 / M2
        + 8 * f1 * f2 * (2 * t + m2)
        + 16 * m2 * g1 * g2
    )
    a -= delta**2 * (
        (4 * f1**2 + t * f2**2 / M2) * (4 * M2 + t - m2)
        + 4 * g1**2 * (4 * M2 - t + m2)
        + 4 * m2 * g2**2 * (t - m2) / M2
        + 8 * f1 * f2 * (2 * t - m2)
        + 16 * m2 * g1 * g2
    )
    a -= 32 * m2 * MEAN_MASS_MEV * delta * g1 * (f1 + f2)
    b = 16 * t * g1 * (f1 + f2)
    b += 4 * m2 * delta * (f2**2 + f1 * f2 + 2 * g1 * g2) / MEAN_MASS_MEV
    c = 4 * (f1**2 + g1**2) - t * f2**2 / M2
    return a / 16, b / 16, c / 16


def radiative_factor(positron_mev: Floats) -> Floats:
    """Radiative corrections of order α, for a detector that sees the photon with the positron.

    1 + (α/π) [6.00 + 3/2 ln(m_p / 2 E_e) + 1.2 (m_e / E_e)^1.5], inner and outer part together
    for a nucleon at rest (Strumia and Vissani 2003, from memory).
    """
    logarithm = 1.5 * np.log(PROTON_MASS_MEV / (2 * positron_mev))
    bracket = 6.00 + logarithm + 1.2 * (ELECTRON_MASS_MEV / positron_mev) ** 1.5
    result: Floats = 1 + ALPHA / np.pi * bracket
    return result


def per_positron_energy(
    neutrino_mev: Floats, positron_mev: Floats, inputs: InverseBetaInputs
) -> Floats:
    """dσ/dE_e in cm²/MeV, for energies that two-body kinematics allows.

    dσ/dE_e = 2 m_p G_F² V_ud² |M|² / [2π (s − m_p²)²], with s − m_p² = 2 m_p E_ν.
    """
    coupling = (FERMI_CONSTANT_PER_MEV2 * inputs.v_ud * HBAR_C_MEV_CM) ** 2
    flux = 4 * np.pi * PROTON_MASS_MEV * neutrino_mev**2
    result: Floats = coupling / flux * matrix_element(neutrino_mev, positron_mev, inputs)
    return result * radiative_factor(positron_mev) if inputs.radiative else result


def per_cosine(neutrino_mev: Floats, cosine: Floats, inputs: InverseBetaInputs) -> Floats:
    """dσ/dcos θ in cm² per unit cosine; zero below the threshold.

    dσ/dcos θ = dσ/dE_e · p_e ε / [1 + ε (1 − E_e cos θ / p_e)], with ε = E_ν / m_p.
    """
    energy = np.maximum(neutrino_mev, THRESHOLD_MEV)
    positron = positron_energy_mev(energy, cosine)
    momentum = np.maximum(momentum_mev(positron), 1e-12)
    ratio = energy / PROTON_MASS_MEV
    jacobian = momentum * ratio / (1 + ratio * (1 - positron * cosine / momentum))
    result: Floats = jacobian * per_positron_energy(energy, positron, inputs)
    return np.where(neutrino_mev > THRESHOLD_MEV, result, 0.0)
