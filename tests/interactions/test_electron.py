"""Scattering on electrons: computed tables, closed forms, the functions of the corrections."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.integrate import quad

from tenkpc import interactions
from tenkpc.constants import ELECTRON_MASS_MEV
from tenkpc.interactions import recoil
from tenkpc.interactions.electron import (
    SCALE_CM2_PER_MEV,
    ElectronInputs,
    electron_scattering,
)
from tenkpc.interactions.electron_radiative import corrections, kappa_other

ES = interactions.by_key("electron-scattering")
TREE = interactions.by_key("electron-scattering", "tree")
SPECIES = ("nu_e", "anti_nu_e", "nu_x", "anti_nu_x")

# an independent slow calculation: energy in MeV, then totals in 1e-46 cm² by species, at tree
# level and with radiative corrections
TOTALS = {
    0.384: ((19.6656, 10.4820, 4.9612, 4.6028), (19.1555, 10.2309, 5.0805, 4.7015)),
    0.862: ((59.4517, 27.8551, 12.5215, 11.2884), (57.8556, 27.1762, 12.8099, 11.5068)),
    1.442: ((111.9090, 50.0513, 21.6378, 19.2237), (108.8439, 48.8182, 22.1222, 19.5726)),
    5.0: ((446.9184, 190.6369, 77.0505, 67.0490), (434.2150, 185.8119, 78.6661, 68.1157)),
    10.0: ((922.0770, 389.8860, 154.7031, 133.9340), (895.4924, 379.8993, 157.8288, 135.9309)),
    20.0: ((1873.7188, 788.9448, 309.9339, 267.5997), (1819.0742, 768.5657, 315.9470, 271.3321)),
}


@pytest.mark.parametrize("energy", TOTALS)
def test_totals_are_those_of_the_slow_calculation(energy):
    """All species, tree and corrected, to the digits of the table."""
    tree, corrected = TOTALS[energy]
    found = [float(TREE.sigma(s, energy)) * 1e46 for s in SPECIES]
    assert found == pytest.approx(tree, abs=6e-5, rel=1e-7)
    found = [float(ES.sigma(s, energy)) * 1e46 for s in SPECIES]
    assert found == pytest.approx(corrected, abs=6e-5, rel=1e-7)


@pytest.mark.parametrize("species", SPECIES)
@pytest.mark.parametrize("energy", [0.5, 8.0, 60.0])
def test_the_fixed_quadrature_is_good_enough(species, energy):
    """Totals agree with adaptive quadrature over the recoil, logarithms and all: 2e-7."""
    (state,) = ES.final_states(species)
    highest = float(recoil.highest_recoil_mev(np.array(energy), ELECTRON_MASS_MEV))
    integrand = lambda t: float(state.deposit.differential(np.array(energy), np.array(t)))
    expected = quad(integrand, 0, highest, epsabs=0, epsrel=1e-10, limit=200)[0]
    assert state.sigma_cm2(np.array(energy)) == pytest.approx(expected, rel=2e-7, abs=0)


@pytest.mark.parametrize(
    ("sine", "limits"),
    [(0.23122, (9.5211, 3.9926, 1.5520, 1.3363)), (0.23863, (9.7288, 4.1152, 1.5043, 1.3737))],
)
def test_totals_at_high_energy_are_proportional_to_energy(sine, limits):
    """σ/E in 1e-45 cm²/MeV at high energy, from the closed form: digits given."""
    tree = electron_scattering(ElectronInputs(sine, 0.03, radiative=False))
    found = [float(tree.sigma(s, 1e7)) / 1e7 * 1e45 for s in SPECIES]
    assert found == pytest.approx(limits, abs=6e-5)


def test_the_scale_is_the_known_one():
    """2 G_F² m/π = 17.2327e-45 cm²/MeV."""
    assert pytest.approx(17.2327e-45, rel=3e-6, abs=0) == SCALE_CM2_PER_MEV


@pytest.mark.parametrize("energy", [2.0, 15.0])
def test_the_tree_total_is_the_closed_form(energy):
    """∫ of the tree formula above a recoil, by hand: rounding."""
    highest, least = float(recoil.highest_recoil_mev(np.array(energy), ELECTRON_MASS_MEV)), 0.4
    (state,) = TREE.final_states("nu_e")
    low, high = least / energy, highest / energy
    a, b = 0.5 + 0.23122, 0.23122
    closed = a * a * (high - low) + b * b * ((1 - low) ** 3 - (1 - high) ** 3) / 3
    closed -= a * b * ELECTRON_MASS_MEV / energy * (high**2 - low**2) / 2
    integrand = lambda t: float(state.deposit.differential(np.array(energy), np.array(t)))
    found = quad(integrand, least, highest, epsrel=1e-11)[0]
    assert found == pytest.approx(SCALE_CM2_PER_MEV * energy * closed, rel=1e-9, abs=0)


@pytest.mark.parametrize(
    ("species", "expected"),
    [("nu_e", 90.5532), ("anti_nu_e", 21.9948), ("nu_x", 13.7356), ("anti_nu_x", 11.0600)],
)
def test_tree_cross_sections_above_a_recoil(species, expected):
    """15 MeV, recoils above 5 MeV, in 1e-45 cm²: digits given."""
    (state,) = TREE.final_states(species)
    integrand = lambda t: float(state.deposit.differential(np.array(15.0), np.array(t)))
    found = quad(
        integrand, 5.0, float(recoil.highest_recoil_mev(np.array(15.0), ELECTRON_MASS_MEV))
    )[0]
    assert found * 1e45 == pytest.approx(expected, rel=2e-5)


@pytest.mark.parametrize(
    ("energy", "kinetic", "expected"),
    [(10, 5, 0.957764), (20, 5, 0.934483), (20, 15, 0.992303)],
)
def test_angles_follow_from_two_body_kinematics(energy, kinetic, expected):
    """Cosine of the recoil to the digits given, 1 at the largest recoil."""
    assert recoil.cosine(energy, kinetic, ELECTRON_MASS_MEV) == pytest.approx(expected, abs=1e-6)
    highest = recoil.highest_recoil_mev(energy, ELECTRON_MASS_MEV)
    assert recoil.cosine(energy, highest, ELECTRON_MASS_MEV) == pytest.approx(1.0, rel=1e-12)


def test_recoil_bounds_are_each_others_inverse():
    """The lowest neutrino energy for the largest recoil is the energy itself."""
    energy = np.geomspace(0.1, 150, 20)
    highest = recoil.highest_recoil_mev(energy, ELECTRON_MASS_MEV)
    assert recoil.lowest_neutrino_mev(highest, ELECTRON_MASS_MEV) == pytest.approx(
        energy, rel=1e-12
    )
    assert recoil.lowest_neutrino_mev(5.0, ELECTRON_MASS_MEV) == pytest.approx(5.24363, abs=1e-5)


@pytest.mark.parametrize("energy", [1e4, 1e5])
def test_corrections_have_the_known_integrals(energy):
    """∫f₋ and 3∫(1-z)²f₊ go like -(2/3) ln(2E/m) with constants -0.8533 and 0.1467.

    Sarantakos, Sirlin and Marciano, Nucl. Phys. B 217 (1983) 84, from memory; what is left at
    these energies falls like a power of m/E: 0.003 at 10⁴ MeV, 4e-4 at 10⁵.
    """
    highest = float(recoil.highest_recoil_mev(np.array(energy), ELECTRON_MASS_MEV))

    def integral(which, factor):
        value = lambda u: float(corrections(np.array(energy), np.array(highest * u))[which])
        parts = [(1e-9, 1e-4), (1e-4, 0.1), (0.1, 0.9), (0.9, 0.9999), (0.9999, 1 - 1e-12)]
        total = sum(quad(value, a, b, epsrel=1e-7, limit=200)[0] for a, b in parts)
        return factor * total * highest / energy + 2 / 3 * np.log(2 * energy / ELECTRON_MASS_MEV)

    tolerance = 0.003 if energy < 5e4 else 5e-4
    assert integral(0, 1.0) == pytest.approx(-(np.pi**2 - 19 / 4) / 6, abs=tolerance)
    assert integral(1, 3.0) == pytest.approx(-(np.pi**2 - 43 / 4) / 6, abs=tolerance)


@pytest.mark.parametrize(
    ("species", "z", "expected"),
    [
        ("nu_e", 0.1, 0.9770),
        ("nu_e", 0.5, 0.9736),
        ("nu_e", 0.9, 0.9594),
        ("nu_x", 0.1, 1.0245),
        ("nu_x", 0.5, 1.0221),
        ("nu_x", 0.9, 1.0087),
    ],
)
def test_corrections_bend_the_spectrum(species, z, expected):
    """Corrected over tree at 10 MeV, by share of the energy: digits given."""
    values = [
        float(i.final_states(species)[0].deposit.differential(np.array(10.0), np.array(10 * z)))
        for i in (ES, TREE)
    ]
    assert values[0] / values[1] == pytest.approx(expected, abs=6e-5)


def test_effective_couplings_are_those_of_the_review():
    """Couplings |g_V| and |g_A| of muon neutrinos at 5 MeV of recoil.

    0.0398 and 0.5064 in the Review of Particle Physics, from memory; they run, so 4e-4.
    """
    sine = 0.23122 * float(kappa_other(np.array(5.0)))
    left, right = 1.0126 * (0.5 - sine), -1.0126 * sine
    assert left + right == pytest.approx(0.0398, abs=4e-4)
    assert left - right == pytest.approx(0.5064, abs=4e-4)


def test_zero_energy_scatters_nothing():
    """No neutrino, no cross section, and no warning either."""
    assert all(ES.sigma(s, 0.0) == 0 for s in SPECIES)
    (state,) = ES.final_states("nu_e")
    assert state.mean_cosine(np.array([0.0, 10.0]))[1] > 0.8
