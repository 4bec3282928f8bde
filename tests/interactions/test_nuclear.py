"""Reactions of nuclei known by their strength: against an independent slow calculation, limits."""

from __future__ import annotations

import dataclasses

import numpy as np
import pytest
from scipy.integrate import quad

from tenkpc import data, interactions
from tenkpc.constants import (
    ANOMALOUS_MOMENT_DIFFERENCE,
    ELECTRON_MASS_MEV,
    FERMI_CONSTANT_PER_MEV2,
    HBAR_C_MEV_CM,
)
from tenkpc.interactions import nucleus_tables
from tenkpc.interactions.coulomb import coulomb_factor, effective_momentum, fermi_function
from tenkpc.interactions.nuclear import NUCLEON_MASS_MEV, nuclear

CHARGED = (
    "argon-to-potassium",
    "argon-to-chlorine",
    "iron-to-cobalt",
    "iron-to-manganese",
    "iodine-to-xenon",
    "lead-to-bismuth",
)
NEUTRAL = ("argon-excited", "iron-excited", "lead-excited")


def numbers(text):
    """Rows of numbers."""
    return np.array([line.split() for line in text.strip().splitlines()], dtype=float)


# an independent slow calculation with every Gaussian as 31 levels: E/MeV, then σ/1e-42 cm² of the
# charged reactions above, without any scaling
SLOW = numbers(
    """
5.0 0.1769 0 0.0007391 2.494e-05 1.653 0
7.5 2.055 0 0.2746 0.06818 8.813 1.118
10.0 7.296 3.908e-05 2.762 0.4761 24.97 13.21
12.5 16.34 0.001208 8.927 1.353 52.13 56.36
15.0 29.11 0.009711 19.81 2.684 108.2 135.1
17.5 45.49 0.04523 37.09 4.473 222.1 263.4
20.0 65.4 0.1509 61.4 6.757 404.1 599.2
25.0 116.1 0.8759 130.5 13.1 960.9 1927
30.0 183.2 2.956 227.4 22.38 1728 3816
35.0 270.8 7.244 355.7 35.22 2678 5614
40.0 383.6 14.48 520.9 51.95 3567 7257
45.0 526 25.12 716.5 72.37 4422 8702
50.0 690 39.21 939.9 95.75 5218 9869
60.0 1095 75.78 1451 151 6474 1.122e+04
70.0 1543 119.7 1953 214.4 7113 1.119e+04
80.0 1961 165.3 2362 264 7162 1.064e+04
100.0 2477 213.8 2718 291.4 7112 1.132e+04
"""
)
# of the neutral current, means of neutrinos and antineutrinos; of lead also with 0, 1, 2 neutrons
SLOW_NEUTRAL = numbers(
    """
10.0 0.0002933 0.04091 0.5898 0.589 0.00111 0
12.5 0.01843 0.2894 2.155 2.13 0.021 0
15.0 0.07341 0.7656 4.683 4.54 0.14 6.61e-05
17.5 0.1838 1.488 8.261 7.69 0.554 0.0206
20.0 0.3916 2.507 13.15 11.4 1.53 0.212
25.0 1.434 5.881 28.88 19.9 6.28 2.65
30.0 4.194 12.21 56.74 28.9 16.4 11.5
35.0 9.987 23.21 100.2 37 32.4 30.8
40.0 20.16 40.45 158.3 43.7 53.2 61.4
45.0 35.82 64.97 225.1 48.6 75.9 100
50.0 57.59 96.91 290.6 51.8 96.8 142
60.0 118.6 178.3 381.1 53.8 122 205
70.0 194.3 266.1 402 53.1 127 222
80.0 267.9 336.3 404 52.4 131 221
100.0 350.1 380.5 504 52.6 167 285
"""
)
# its averages over electron neutrinos of stopped muons, 1e-40 cm²
STOPPED = {
    "argon-to-potassium": 2.582,
    "iron-to-cobalt": 3.378,
    "iodine-to-xenon": 22.663,
    "lead-to-bismuth": 45.830,
}
# widest step of its levels, in widths of a Gaussian
NODES = np.linspace(-2.5, 2.5, 31)


def inputs(key, option=""):
    """Inputs of a reaction as shipped."""
    tables = data.document(f"nuclei/{key.split('-')[0]}.toml")
    return nucleus_tables.inputs(tables, key, option, interactions.couplings())


def bare(key):
    """The same without scaling and meant to 100 MeV, as the slow calculation has it."""
    return dataclasses.replace(inputs(key), scale_bound=1.0, scale_unbound=1.0, end_mev=100.0)


def as_levels(peaks):
    """Every Gaussian as 31 levels, those above zero, normalised."""
    made = {}
    for kind, of_kind in peaks.items():
        made[kind] = [peak for peak in of_kind if peak[1] == 0]
        for energy, width, value in of_kind:
            if width:
                at, weight = energy + NODES * width, np.exp(-0.5 * NODES**2)
                weight = np.where(at > 0, weight, 0.0)
                share = value * weight / weight.sum()
                levels = zip(at.tolist(), share.tolist(), strict=True)
                made[kind] += [(e, 0.0, v) for e, v in levels if v]
    return made


def like_slow(key):
    """The reaction with the slow calculation's levels."""
    given = bare(key)
    return nuclear(dataclasses.replace(given, peaks=as_levels(given.peaks)))


def species_of(made):
    """The species that a charged current is open to."""
    (species,) = made.branches
    return species


@pytest.mark.parametrize("key", CHARGED)
def test_charged_currents_against_a_slow_calculation(key):
    """With its levels, every digit it gives: 1e-3; with bins, 3e-3 from 20 MeV on."""
    energy, expected = SLOW[:, 0], SLOW[:, 1 + CHARGED.index(key)]
    made = like_slow(key)
    found = made.sigma(species_of(made), energy) * 1e42
    assert found == pytest.approx(expected, rel=1e-3, abs=1e-12)
    ours = nuclear(bare(key)).sigma(species_of(made), energy) * 1e42
    assert ours[energy >= 20] == pytest.approx(expected[energy >= 20], rel=6e-3)


@pytest.mark.parametrize("key", NEUTRAL)
def test_neutral_currents_against_a_slow_calculation(key):
    """Means of neutrinos and antineutrinos; of lead by number of neutrons to their three digits."""
    energy, expected = SLOW_NEUTRAL[:, 0], SLOW_NEUTRAL[:, 1 + NEUTRAL.index(key)]
    made = like_slow(key)
    kinds = ("nu_e", "anti_nu_e")
    found = sum(made.sigma(kind, energy) for kind in kinds) / 2 * 1e42
    assert found == pytest.approx(expected, rel=1e-3)
    if key == "lead-excited":
        for neutrons in range(3):
            states = [s for k in kinds for s in made.branches[k] if s.neutrons == neutrons]
            part = sum(state.sigma_cm2(energy) for state in states) / 2 * 1e42
            assert part == pytest.approx(SLOW_NEUTRAL[:, 4 + neutrons], rel=6e-3, abs=1e-12)


@pytest.mark.parametrize("key", STOPPED)
def test_averages_over_stopped_muons(key):
    """With its levels 1e-3, with bins 2e-3."""
    end = 52.828
    x = (np.arange(2000) + 0.5) / 2000
    weight = 12 * x**2 * (1 - x) / 2000
    for made, within in ((like_slow(key), 1e-3), (nuclear(bare(key)), 2e-3)):
        average = (weight * made.sigma("nu_e", end * x)).sum() * 1e40
        assert average == pytest.approx(STOPPED[key], rel=within)


def test_coulomb_factors():
    """Fermi function and effective momentum of an independent calculation, to the digits given."""
    rows = {
        (19, 40): ((2, 1.66, 37.20), (10, 1.59, 4.00), (30, 1.55, 1.78), (50, 1.54, 1.44)),
        (83, 208): ((2, 18.15, 191.48), (10, 9.08, 12.42), (30, 5.79, 3.39), (50, 4.70, 2.26)),
    }
    for (charge, nucleons), values in rows.items():
        for energy, fermi, effective in values:
            p = np.array([np.sqrt(energy**2 - ELECTRON_MASS_MEV**2)])
            assert fermi_function(p, charge, nucleons)[0] == pytest.approx(fermi, abs=0.006)
            assert effective_momentum(p, charge, nucleons)[0] == pytest.approx(effective, abs=0.006)
            assert coulomb_factor(p, charge, nucleons)[0] == pytest.approx(
                min(fermi, effective), abs=0.006
            )
            positron = coulomb_factor(p, -charge, nucleons)[0]
            assert 0 < positron < 1
    assert effective_momentum(np.array([5.0]), 0, 40)[0] == 1.0


def simple(**changes):
    """A reaction of one level without size, to which closed forms apply."""
    given = inputs("argon-to-potassium")
    return dataclasses.replace(
        given, peaks={"fermi": [(0.0, 0.0, 1.0)]}, radius_squared_fm2=0.0, end_mev=100.0, **changes
    )


def test_the_allowed_limit():
    """Fermi strength without size is (G_F² V_ud²/π) p E F_C B(F), to 1e-6."""
    made = nuclear(simple())
    energy = np.array([5.0, 20.0, 60.0])
    lepton = energy - 1.5044 + ELECTRON_MASS_MEV
    p = np.sqrt(lepton**2 - ELECTRON_MASS_MEV**2)
    scale = (FERMI_CONSTANT_PER_MEV2 * 0.97373 * HBAR_C_MEV_CM) ** 2 / np.pi
    expected = scale * p * lepton * coulomb_factor(p, 19, 40)
    assert made.sigma("nu_e", energy) == pytest.approx(expected, rel=1e-6, abs=0)


def test_weak_magnetism_of_a_free_nucleon():
    """With B(F) = 1 and B(GT) = 3 the cross section rises as 1 + 4 μ g_A/(1 + 3 g_A²) E/M."""
    peaks = {"fermi": [(0.0, 0.0, 1.0)], "gamow_teller": [(0.0, 0.0, 3.0)]}
    given = dataclasses.replace(simple(), peaks=peaks, mass_difference_mev=0.0)
    none = dataclasses.replace(given, peaks={"fermi": peaks["fermi"]})
    energy = np.array([10.0, 20.0])
    ratio = nuclear(given).sigma("nu_e", energy) / nuclear(none).sigma("nu_e", energy)
    axial = 1.2754
    slope = np.diff(ratio / (1 + 3 * axial**2)) / np.diff(energy) * NUCLEON_MASS_MEV
    moment = 1 + ANOMALOUS_MOMENT_DIFFERENCE
    # E + p²/E_e is 2E + m_e up to 1e-3
    assert slope[0] == pytest.approx(4 * moment * axial / (1 + 3 * axial**2), rel=2e-3)


def test_cosines_against_quadrature():
    """Mean cosine of one level from the printed formula: Fermi strength alone is β/3."""
    (state,) = nuclear(simple()).final_states("nu_e")
    energy = np.array([10.0, 40.0])
    lepton = energy - 1.5044 + ELECTRON_MASS_MEV
    beta = np.sqrt(lepton**2 - ELECTRON_MASS_MEV**2) / lepton
    assert state.mean_cosine(energy) == pytest.approx(beta / 3, rel=1e-6)
    given = dataclasses.replace(simple(), peaks={"gamow_teller": [(0.0, 0.0, 1.0)]})
    (state,) = nuclear(given).final_states("nu_e")
    assert state.mean_cosine(energy) == pytest.approx(-beta / 9, rel=1e-6)


def test_a_dipole_by_the_printed_formula():
    """One dipole level of lead at 40 MeV, integrated over the angle by other means: 1e-6."""
    given = dataclasses.replace(
        bare("lead-to-bismuth"),
        peaks={"spin_dipole": [(22.0, 0.0, 580.4)]},
        separation_mev=(),
        end_mev=60.0,
    )
    energy, radius = 40.0, 1.12 * 208 ** (1 / 3) + 0.3
    lepton = energy - 2.8784 - 22.0 + ELECTRON_MASS_MEV
    p = np.sqrt(lepton**2 - ELECTRON_MASS_MEV**2)
    beta, fm = p / lepton, 1e-13 / HBAR_C_MEV_CM
    moment = 1 + ANOMALOUS_MOMENT_DIFFERENCE
    weak = 1 + 2 * moment / (3 * 1.2754 * NUCLEON_MASS_MEV) * (energy + p**2 / lepton)

    def integrand(c):
        q = np.sqrt(energy**2 + p**2 - 2 * energy * p * c) * fm
        x = q * radius
        bessel = 3 * (np.sin(x) / x**2 - np.cos(x) / x) / x
        return (1 - beta * c / 3) * weak * 3 * 1.2754**2 * q**2 * 580.4 * bessel**2

    scale = (FERMI_CONSTANT_PER_MEV2 * 0.97373 * HBAR_C_MEV_CM) ** 2 / (2 * np.pi)
    factor = coulomb_factor(np.array([p]), 83, 208)[0]
    expected = scale * p * lepton * factor * quad(integrand, -1, 1)[0]
    assert float(nuclear(given).sigma("nu_e", energy)) == pytest.approx(expected, rel=1e-6, abs=0)


def test_held_above_the_window():
    """Above 60 MeV the cross section stays what it is there."""
    made = interactions.by_key("argon-to-potassium")
    found = made.sigma("nu_e", np.array([60.0, 61.0, 150.0]))
    assert found[0] == found[1] == found[2]


def test_energies_add_up():
    """Lepton, gammas and what a neutron costs make the neutrino's energy, or less by its motion."""
    made = interactions.by_key("lead-to-bismuth")
    cost = (0.0, 6.887, 14.985)
    for state in made.final_states("nu_e"):
        gammas = dict(state.extras).get("gamma", 0.0)
        left = state.deposit.offset_mev - 2.8784 - gammas
        assert left >= cost[state.neutrons] - 1e-9
        if state.neutrons == 0:
            assert left == pytest.approx(0.0, abs=1e-9)


@pytest.mark.parametrize("key", ["lead-to-bismuth", "iodine-to-xenon"])
def test_options_scale_their_parts(key):
    """Measurement scales what emits neutrons and leaves the rest."""
    energy = np.array([15.0, 30.0])
    sums = {}
    for option in interactions.OPTIONS[key]:
        for neutrons in (0, 1):
            states = interactions.by_key(key, option).final_states("nu_e")
            sums[option, neutrons] = sum(
                s.sigma_cm2(energy) for s in states if s.neutrons == neutrons
            )
    bound = sums["measurement-scaled", 0] / sums["theory", 0]
    unbound = sums["measurement-scaled", 1] / sums["theory", 1]
    assert bound == pytest.approx(1.0)
    assert unbound == pytest.approx(0.29 if key == "lead-to-bismuth" else 0.327, rel=1e-3)


def test_options_and_targets_are_those_of_the_files():
    """What is listed without reading the files is what stands in them."""
    for key, (file, symbol) in interactions._NUCLEI.items():
        tables = data.document(f"nuclei/{file}.toml")
        assert tables["stands_for"] == symbol
        assert nucleus_tables.options(tables, key) == interactions.OPTIONS.get(key, ())
    for key in interactions.KEYS:
        assert interactions.by_key(key).target == interactions.TARGETS[key]
