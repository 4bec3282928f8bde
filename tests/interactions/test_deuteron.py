"""The deuteron: the table and what lies between, moments of the lepton, exactness when folded."""

from __future__ import annotations

from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.integrate import quad

from tenkpc import data, interactions
from tenkpc.constants import ELECTRON_MASS_MEV, NEUTRON_MASS_MEV, PROTON_MASS_MEV
from tenkpc.detector.media import MEDIA
from tenkpc.detector.response import Response
from tenkpc.forecast.compiled import FIRST_BIN, REACTIONS, Exposure, compile_rows
from tenkpc.forecast.grid import EnergyGrid
from tenkpc.quadrature import gauss

TABLES = data.document("cross_sections/deuteron.toml")
PROTONS = interactions.by_key("deuteron-to-two-protons")
NEUTRONS = interactions.by_key("deuteron-to-two-neutrons")
BREAKUP = interactions.by_key("deuteron-breakup")
CHARGED = [("to_two_protons", PROTONS, "nu_e"), ("to_two_neutrons", NEUTRONS, "anti_nu_e")]
# CODATA 2018 (from memory)
DEUTERON_MASS_MEV = 1875.61294257
# 1/cm²: makes numbers near one of σ; else approx and quad, which have absolute tolerances of their
# own, pass anything
UNIT = 1e42
# where the table of b or of σ has a knot, and further stops for quadrature, MeV
STOPS_MEV = (5.0, 10.0, 20.0, 30.0, 50.0, 80.0, 100.0, 150.0)
EACH = pytest.mark.parametrize(("name", "made", "species"), CHARGED, ids=["protons", "neutrons"])


def test_knots_and_middles():
    """The table itself, and what the calculation gave at 15 and 17.5 MeV: 5e-4."""
    energy = np.array(TABLES["energy_mev"])
    for found, expected in (
        (PROTONS.sigma("nu_e", energy), TABLES["to_two_protons"]["sigma"]),
        (NEUTRONS.sigma("anti_nu_e", energy), TABLES["to_two_neutrons"]["sigma"]),
        (BREAKUP.sigma("nu_x", energy), TABLES["breakup"]["neutrino"]),
        (BREAKUP.sigma("anti_nu_e", energy), TABLES["breakup"]["antineutrino"]),
    ):
        assert found * 1e42 == pytest.approx(np.array(expected), rel=1e-9)
    between = np.array([15.0, 17.5])
    for found, expected in (
        (PROTONS.sigma("nu_e", between), [7.9078, 11.595]),
        (NEUTRONS.sigma("anti_nu_e", between), [4.5844, 6.9977]),
        (BREAKUP.sigma("nu_e", between), [3.4135, 5.0698]),
        (BREAKUP.sigma("anti_nu_x", between), [3.175, 4.6544]),
    ):
        assert found * 1e42 == pytest.approx(expected, rel=5e-4)


def test_ends():
    """Closed at the threshold, rising from it without a step, held above 100 MeV."""
    for made, species in ((PROTONS, "nu_e"), (NEUTRONS, "anti_nu_e"), (BREAKUP, "nu_e")):
        start = made.threshold_mev
        found = made.sigma(species, start + np.array([-0.1, 0.0, 1e-3, 1e-2, 0.1]))
        assert found[0] == found[1] == 0
        assert 0 < found[2] < 1e-3 * found[4]
        assert np.all(np.diff(found[1:]) > 0)
        assert made.sigma(species, 180.0) == made.sigma(species, 100.0)


def test_thresholds():
    """Those of the masses with recoil left out, rounded to 1 keV or less."""
    binding = PROTON_MASS_MEV + NEUTRON_MASS_MEV - DEUTERON_MASS_MEV
    apart = NEUTRON_MASS_MEV - PROTON_MASS_MEV
    assert pytest.approx(binding, abs=1e-3) == BREAKUP.threshold_mev
    for made, sign in ((PROTONS, -1), (NEUTRONS, 1)):
        expected = binding + sign * apart + ELECTRON_MASS_MEV
        assert made.threshold_mev == pytest.approx(expected, abs=1e-3)


@EACH
def test_given_means_can_be_reached(name, made, species):
    """Total energies of the lepton: above its mass, below all that the neutrino leaves it."""
    moments = TABLES[name]["lepton"]
    for energy, mean in zip(moments["energy_mev"], moments["mean_mev"], strict=True):
        assert ELECTRON_MASS_MEV < mean < energy - made.threshold_mev + ELECTRON_MASS_MEV


@EACH
def test_cosines_are_the_given(name, made, species):
    """At the energies of the table, between its neighbours elsewhere, held beyond."""
    (state,) = made.final_states(species)
    moments = TABLES[name]["lepton"]
    energy, cosine = np.array(moments["energy_mev"]), moments["cosine"]
    assert state.mean_cosine(energy) == pytest.approx(cosine, rel=1e-12)
    assert min(cosine[3:5]) < state.mean_cosine(np.array([40.0]))[0] < max(cosine[3:5])
    assert state.mean_cosine(np.array([3.0, 150.0])) == pytest.approx([cosine[0], cosine[-1]])


@EACH
@given(energy=st.floats(0.0, 200.0), part=st.floats(0.0, 1.0))
def test_nothing_is_negative(name, made, species, energy, part):
    """Neither σ nor dσ/dT, finite up to the ends of what is open."""
    (state,) = made.final_states(species)
    assert 0 <= float(made.sigma(species, energy)) < np.inf
    kinetic = part * max(energy - made.threshold_mev, 0.0)
    assert 0 <= float(state.deposit.differential(np.array(energy), np.array(kinetic))) < np.inf


@EACH
@pytest.mark.parametrize("energy", [*STOPS_MEV, 23.0, 39.8, 99.5, 100.4])
def test_the_spectrum_has_its_norm_and_mean(name, made, species, energy):
    """∫ dσ/dT is σ to 2e-5, what its table is good for, and mean energies are the given to 1e-4."""
    (state,) = made.final_states(species)
    moments = TABLES[name]["lepton"]
    expected = dict(zip(moments["energy_mev"], moments["mean_mev"], strict=True))
    end = energy - made.threshold_mev

    def density(kinetic, power):
        values = state.deposit.differential(np.array(energy), np.array(kinetic))
        return UNIT * (kinetic + ELECTRON_MASS_MEV) ** power * float(values)

    stops = [end * part for part in (0.5, 0.9, 0.99, 0.999)]
    norm, mean = (
        quad(density, 0, end, args=(power,), points=stops, limit=300)[0] for power in (0, 1)
    )
    assert norm == pytest.approx(UNIT * float(made.sigma(species, energy)), rel=2e-5)
    if energy in expected:
        assert mean / norm == pytest.approx(expected[energy], rel=1e-4)


@EACH
def test_the_spectrum_has_its_shape(name, made, species):
    """Square roots at both ends, and half of the root's rise where ε is ε_s: at 100 MeV b is far.

    There b and the lepton take 5 % at most.
    """
    (state,) = made.final_states(species)
    end = 100.0 - made.threshold_mev
    density = lambda kinetic: UNIT * state.deposit.differential(np.array([100.0]), kinetic)
    slow = density(np.array([1e-6, 4e-6]))
    # momentum of a slow lepton, then relative momentum of two slow nucleons
    assert slow[1] / slow[0] == pytest.approx(2.0, rel=1e-4)
    # ħ² over the nucleon's mass in MeV fm²
    pole = 41.47 / TABLES[name]["scattering_length_fm"] ** 2
    pair = pole * np.array([1e-6, 4e-6, 1.0])
    rise = density(end - pair) / np.sqrt(pair)
    assert rise[1] / rise[0] == pytest.approx(1.0, rel=1e-4)
    assert rise[2] / rise[0] == pytest.approx(0.5, rel=0.05)


def by_quadrature(state, flux, kinetic):
    """∫ dE flux dσ/dT at one T, 1e-42 cm², apart between stops and crowded at the lowest E."""
    x, w = gauss(40)
    start = float(state.deposit.lowest_mev(np.array(kinetic)))
    later = {stop for stop in STOPS_MEV if stop > start}.union(start + np.geomspace(1e-3, 10, 9))
    total = 0.0
    for low, high in pairwise([start, *sorted(later), 200.0]):
        energy = low + (high - low) * x**2
        values = state.deposit.differential(energy, np.full_like(energy, kinetic))
        total += UNIT * (flux(energy) * values) @ (2 * x * w * (high - low))
    return total


@EACH
def test_counts_and_bins_against_quadrature(name, made, species):
    """Folded with a pinched flux: total 1e-6, and bins of 1 MeV with 1e-3 of it to 1e-4."""
    (state,) = made.final_states(species)
    light = {**MEDIA["cherenkov"].light}
    response = Response(kind="kinetic", light=light)
    edges, grid = np.arange(0.0, 61.0), EnergyGrid()
    compiled = compile_rows([Exposure("v", 1.0, made, response)], grid, edges)
    flux = lambda e: e**3 * np.exp(-4 * e / 14)
    ours = UNIT * (flux(grid.nodes_mev) @ compiled.tensor[0])
    rate = lambda e: UNIT * flux(e) * float(made.sigma(species, e))
    knots = [made.threshold_mev, *(e for e in TABLES["energy_mev"] if e > made.threshold_mev)]
    total = sum(quad(rate, low, high)[0] for low, high in pairwise([*knots, 130.0, 200.0]))
    assert ours[REACTIONS] == pytest.approx(total, rel=1e-6)
    assert ours[FIRST_BIN:].sum() == pytest.approx(total, rel=1e-6)
    x, w = gauss(12)
    for place, found in enumerate(ours[FIRST_BIN : FIRST_BIN + len(edges) - 1]):
        if found > 1e-3 * total:
            values = [by_quadrature(state, flux, t) for t in edges[place] + x]
            assert found == pytest.approx(w @ values, rel=1e-4)


def test_what_is_left():
    """Neutrons of each reaction, and a breakup that only counters of neutrons see."""
    numbers = ((PROTONS, 0), (NEUTRONS, 2), (BREAKUP, 1))
    for made, neutrons in numbers:
        for states in made.branches.values():
            assert [state.neutrons for state in states] == [neutrons]
    assert all(states[0].lead == "neutron" for states in BREAKUP.branches.values())
