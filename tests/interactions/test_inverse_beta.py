"""Inverse beta decay: computed tables, an independent expansion, an explicit Dirac trace."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.integrate import quad

from tenkpc import interactions
from tenkpc.constants import (
    ANOMALOUS_MOMENT_DIFFERENCE,
    CHARGED_PION_MASS_MEV,
    ELECTRON_MASS_MEV,
    FERMI_CONSTANT_PER_MEV2,
    HBAR_C_MEV_CM,
    NEUTRON_MASS_MEV,
    PROTON_MASS_MEV,
)
from tenkpc.interactions import inverse_beta_kernel as kernel
from tenkpc.interactions.inverse_beta import inverse_beta_decay, mean_cosine
from tenkpc.interactions.inverse_beta_kernel import InverseBetaInputs

IBD = interactions.by_key("inverse-beta-decay")
(STATE,) = IBD.final_states("anti_nu_e")
INPUTS = InverseBetaInputs(0.97373, 1.2754, 1014.0, 0.71e6)

# an independent slow calculation with these inputs: neutrino energy in MeV, cross section in
# 1e-42 cm² with and without radiative factor, mean total positron energy, mean cosine
TABLE = (
    (2.0, 0.033108, 0.031887, 0.7044, -0.02084),
    (3.0, 0.264680, 0.255982, 1.7003, -0.02794),
    (4.0, 0.679046, 0.657898, 2.6941, -0.02654),
    (5.0, 1.273409, 1.235160, 3.6858, -0.02445),
    (6.0, 2.043492, 1.983790, 4.6754, -0.02219),
    (8.0, 4.093958, 3.979248, 6.6484, -0.01751),
    (10.0, 6.797574, 6.613032, 8.6133, -0.01274),
    (12.0, 10.122762, 9.854889, 10.5702, -0.00792),
    (15.0, 16.209833, 15.794091, 13.4912, -0.00065),
    (20.0, 29.048025, 28.332663, 18.3226, 0.01159),
    (25.0, 44.891251, 43.820448, 23.1102, 0.02395),
    (30.0, 63.356419, 61.884605, 27.8569, 0.03642),
    (40.0, 106.793657, 104.416113, 37.2378, 0.06166),
    (50.0, 156.956577, 153.578430, 46.4860, 0.08718),
    (60.0, 211.897657, 207.463947, 55.6207, 0.11291),
    (80.0, 330.221403, 323.621238, 73.6192, 0.16456),
    (100.0, 452.984730, 444.257890, 91.3592, 0.21581),
)
ROWS = pytest.mark.parametrize("row", TABLE, ids=lambda row: f"{row[0]:g} MeV")


@ROWS
def test_the_total_is_that_of_the_slow_calculation(row):
    """Seven digits of the table, with the masses of an edition later: 1e-5."""
    assert IBD.sigma("anti_nu_e", row[0]) == pytest.approx(row[1] * 1e-42, rel=3e-5, abs=0)
    plain = inverse_beta_decay(InverseBetaInputs(0.97373, 1.2754, 1014.0, 0.71e6, radiative=False))
    assert plain.sigma("anti_nu_e", row[0]) == pytest.approx(row[2] * 1e-42, rel=3e-5, abs=0)


@ROWS
def test_mean_energy_and_direction_are_those_of_the_slow_calculation(row):
    """Mean positron energy and cosine to the digits given."""
    spread = STATE.deposit
    low, high = kernel.positron_bounds_mev(np.array(row[0]))
    norm, first = (
        quad(
            lambda e, power=power: (
                e**power * float(spread.differential(row[0], e - ELECTRON_MASS_MEV))
            ),
            float(low),
            float(high),
            epsrel=1e-10,
        )[0]
        for power in (0, 1)
    )
    assert first / norm == pytest.approx(row[3], abs=6e-5)
    assert mean_cosine(row[0], INPUTS) == pytest.approx(row[4], abs=6e-6)
    assert STATE.sigma_cm2(np.array(row[0])) == pytest.approx(norm, rel=1e-8, abs=0)


@pytest.mark.parametrize(
    ("energy", "low", "high"),
    [
        (2.0, 0.70339, 0.70545),
        (5.0, 3.66702, 3.70573),
        (10.0, 8.52438, 8.70576),
        (20.0, 17.94121, 18.70577),
        (50.0, 44.01500, 48.70577),
        (100.0, 81.36294, 98.70577),
    ],
)
def test_positron_energies_lie_between_the_kinematic_bounds(energy, low, high):
    """Bounds to the digits given, and the way back from each bound to the neutrino energy."""
    found = kernel.positron_bounds_mev(np.array(energy))
    assert np.array(found) == pytest.approx([low, high], abs=6e-6)
    for positron, cosine in zip(found, (-1.0, 1.0), strict=True):
        back = kernel.neutrino_energy_mev(positron, cosine)
        assert back == pytest.approx(energy, rel=1e-10)


def test_the_threshold_is_the_kinematic_one():
    """1.806066 MeV, zero below, and small but positive just above."""
    assert IBD.threshold_mev == pytest.approx(1.806066, abs=1e-6)
    assert IBD.sigma("anti_nu_e", [0.0, 1.0, 1.806]).tolist() == [0, 0, 0]
    assert 0 < IBD.sigma("anti_nu_e", 1.8061) < 1e-45


@pytest.mark.parametrize("species", ["nu_e", "nu_x", "anti_nu_x"])
def test_other_species_are_closed(species):
    """Only electron antineutrinos turn free protons into neutrons."""
    assert IBD.final_states(species) == ()
    assert IBD.sigma(species, 20.0) == 0


@pytest.mark.parametrize(
    ("energy", "ratios"),
    [
        (3.0, (0.99474, 1.00001, 0.99999)),
        (30.0, (0.99432, 1.00200, 0.99787)),
        (60.0, (0.99363, 1.00769, 0.99188)),
    ],
)
def test_inputs_move_the_total_as_they_should(energy, ratios):
    """Older couplings and other axial radii, relative to the default: digits given, 2e-5."""
    radius = lambda squared: float(np.sqrt(12 / squared)) * HBAR_C_MEV_CM * 1e13
    old = InverseBetaInputs(0.9746, 1.270, 1000.0, 0.71e6)
    others = [old, *(InverseBetaInputs(0.97373, 1.2754, radius(r), 0.71e6) for r in (0.30, 0.62))]
    base = IBD.sigma("anti_nu_e", energy)
    found = [inverse_beta_decay(i).sigma("anti_nu_e", energy) / base for i in others]
    assert found == pytest.approx(ratios, abs=5e-5)


def squared_by_traces(dirac, energy, positron):
    """Spin sum of inverse beta decay by explicit traces, in the normalisation of dσ/dt."""
    mp, mn, me = PROTON_MASS_MEV, NEUTRON_MASS_MEV, ELECTRON_MASS_MEV
    mass = 0.5 * (mp + mn)
    t = mn**2 - mp**2 - 2 * mp * (energy - positron)
    momentum = np.sqrt(positron**2 - me**2)
    cosine = (t - me**2 + 2 * energy * positron) / (2 * energy * momentum)
    k = np.array([energy, 0, 0, energy])
    p = np.array([mp, 0, 0, 0.0])
    e = np.array([positron, momentum * np.sqrt(max(1 - cosine**2, 0)), 0, momentum * cosine])
    n, q = k + p - e, k - e
    xi, tau = ANOMALOUS_MOMENT_DIFFERENCE, t / (4 * mass**2)
    dipole = (1 - t / 0.71e6) ** 2
    f1 = (1 - (1 + xi) * tau) / ((1 - tau) * dipole)
    f2 = xi / ((1 - tau) * dipole)
    g1 = -1.2754 / (1 - t / 1014.0**2) ** 2
    g2 = 2 * mass**2 * g1 / (CHARGED_PION_MASS_MEV**2 - t)
    lower = [dirac.metric[i, i] * q[i] for i in range(4)]
    current = []
    for i in range(4):
        sigma_q = sum(
            0.5j * (dirac.gamma[i] @ dirac.gamma[j] - dirac.gamma[j] @ dirac.gamma[i]) * lower[j]
            for j in range(4)
        )
        vector = f1 * dirac.gamma[i] + 1j * f2 / (2 * mass) * sigma_q
        axial = g1 * dirac.gamma[i] @ dirac.gamma5 + g2 / mass * q[i] * dirac.gamma5
        current.append(vector + axial)
    bar = [dirac.gamma0 @ c.conj().T @ dirac.gamma0 for c in current]
    total = 0
    for a in range(4):
        for b in range(4):
            sign = dirac.metric[a, a] * dirac.metric[b, b]
            lepton = np.trace(
                dirac.slash(k)
                @ dirac.gamma[a]
                @ (np.eye(4) - dirac.gamma5)
                @ (dirac.slash(e) - me * np.eye(4))
                @ (np.eye(4) + dirac.gamma5)
                @ dirac.gamma[b]
            )
            hadron = np.trace(
                (dirac.slash(n) + mn * np.eye(4))
                @ current[a]
                @ (dirac.slash(p) + mp * np.eye(4))
                @ bar[b]
            )
            total += sign * lepton * hadron
    return total.real


@pytest.mark.parametrize("energy", [2.5, 10.0, 50.0, 200.0])
def test_the_matrix_element_is_the_spin_sum(dirac, energy):
    """The shape in positron energy agrees with explicit Dirac traces: 1e-9 by rounding."""
    low, high = (float(b) for b in kernel.positron_bounds_mev(np.array(energy)))
    positrons = low + (high - low) * np.array([0.1, 0.5, 0.9])
    plain = InverseBetaInputs(0.97373, 1.2754, 1014.0, 0.71e6, radiative=False)
    found = kernel.per_positron_energy(np.array(energy), positrons, plain)
    mp = PROTON_MASS_MEV
    scale = FERMI_CONSTANT_PER_MEV2**2 * 0.97373**2 * HBAR_C_MEV_CM**2
    expected = np.array([squared_by_traces(dirac, energy, p) for p in positrons])
    # dσ/dt = |M|²/(64 π (m_p E)²) for G_F/√2 currents, half the proton spin average, dE = dt/2m_p
    expected *= scale / 2 / (2 * 16 * np.pi * 4 * (mp * energy) ** 2) * 2 * mp
    assert found / expected == pytest.approx(np.full(3, found[0] / expected[0]), rel=1e-9)
    assert found[0] / expected[0] == pytest.approx(1.0, rel=1e-9)


def first_order(energy):
    """Total to first order in 1/M by Vogel and Beacom 1999, no radiative terms, same inputs."""
    gap = NEUTRON_MASS_MEV - PROTON_MASS_MEV
    me, mass = ELECTRON_MASS_MEV, 0.5 * (NEUTRON_MASS_MEV + PROTON_MASS_MEV)
    f, g, f2 = 1.0, 1.2754, ANOMALOUS_MOMENT_DIFFERENCE
    sigma0 = FERMI_CONSTANT_PER_MEV2**2 * 0.97373**2 / np.pi * HBAR_C_MEV_CM**2
    e0 = energy - gap
    p0 = np.sqrt(e0**2 - me**2)
    v0 = p0 / e0

    def per_cosine(c):
        e1 = e0 * (1 - energy / mass * (1 - v0 * c)) - (gap**2 - me**2) / 2 / mass
        p1 = np.sqrt(e1**2 - me**2)
        gamma = (
            2 * (f + f2) * g * ((2 * e0 + gap) * (1 - v0 * c) - me**2 / e0)
            + (f**2 + g**2) * (gap * (1 + v0 * c) + me**2 / e0)
            + (f**2 + 3 * g**2) * ((e0 + gap) * (1 - c / v0) - gap)
            + (f**2 - g**2) * ((e0 + gap) * (1 - c / v0) - gap) * v0 * c
        )
        first = ((f**2 + 3 * g**2) + (f**2 - g**2) * p1 / e1 * c) * e1 * p1
        return sigma0 / 2 * (first - gamma / mass * e0 * p0)

    return quad(per_cosine, -1, 1)[0]


@pytest.mark.parametrize(
    ("energy", "ratio"), [(2.5, 0.99986), (3, 0.99980), (5, 0.99937), (10, 0.99721), (20, 0.98769)]
)
def test_the_expansion_in_nucleon_mass_agrees_where_it_holds(energy, ratio):
    """Vogel and Beacom (Phys. Rev. D 60, 053003) to first order: its known deviations, 3e-5."""
    plain = inverse_beta_decay(InverseBetaInputs(0.97373, 1.2754, 1014.0, 0.71e6, radiative=False))
    assert first_order(energy) / plain.sigma("anti_nu_e", energy) == pytest.approx(ratio, abs=1e-4)
