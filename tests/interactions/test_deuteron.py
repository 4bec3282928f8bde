"""The deuteron: the table and what lies between, moments of the lepton, exactness when folded."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.integrate import quad

from tenkpc import data, interactions
from tenkpc.constants import ELECTRON_MASS_MEV
from tenkpc.detector.media import MEDIA
from tenkpc.detector.response import Response
from tenkpc.forecast.compiled import FIRST_BIN, REACTIONS, Exposure, compile_rows
from tenkpc.forecast.grid import EnergyGrid

TABLES = data.document("cross_sections/deuteron.toml")
PROTONS = interactions.by_key("deuteron-to-two-protons")
NEUTRONS = interactions.by_key("deuteron-to-two-neutrons")
BREAKUP = interactions.by_key("deuteron-breakup")
CHARGED = [("to_two_protons", PROTONS, "nu_e"), ("to_two_neutrons", NEUTRONS, "anti_nu_e")]
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


@EACH
def test_the_spectrum_has_its_norm_and_mean(name, made, species):
    """∫ dσ/dT is σ to 1e-5, and the mean energies are the computed ones to 1e-4 where given."""
    (state,) = made.final_states(species)
    differential = state.deposit.differential
    moments = TABLES[name]["lepton"]
    expected = dict(zip(moments["energy_mev"], moments["mean_mev"], strict=True))
    for energy in (5.0, 10.0, 23.0, 50.0, 100.0, 150.0):
        end = energy - made.threshold_mev
        stops = [end * part for part in (0.5, 0.9, 0.99, 0.999)]
        norm, mean = (
            quad(
                lambda t, p=power, e=energy: (
                    (t + ELECTRON_MASS_MEV) ** p * float(differential(np.array(e), np.array(t)))
                ),
                0,
                end,
                points=stops,
                limit=300,
            )[0]
            for power in (0, 1)
        )
        assert norm == pytest.approx(float(made.sigma(species, energy)), rel=1e-5)
        if energy in expected:
            assert mean / norm == pytest.approx(expected[energy], rel=1e-4)


@EACH
def test_counts_and_bins_against_quadrature(name, made, species):
    """Folded with a pinched flux: total 1e-4, bins of 2 MeV that hold 1 % of it 1e-3."""
    (state,) = made.final_states(species)
    light = {**MEDIA["cherenkov"].light}
    response = Response(kind="kinetic", light=light)
    edges, grid = np.arange(0.0, 61.0, 2.0), EnergyGrid()
    compiled = compile_rows([Exposure("v", 1.0, made, response)], grid, edges)
    flux = lambda e: e**3 * np.exp(-4 * e / 14)
    ours = flux(grid.nodes_mev) @ compiled.tensor[0]
    total = quad(lambda e: flux(e) * float(made.sigma(species, e)), 0, 200, limit=400)[0]
    assert ours[REACTIONS] == pytest.approx(total, rel=1e-6)
    assert ours[FIRST_BIN:].sum() == pytest.approx(total, rel=1e-4)
    x, w = np.polynomial.legendre.leggauss(60)
    for place in (4, 7, 12):
        low, high = edges[place : place + 2]
        kinetic = low + (high - low) * (x + 1) / 2
        sums = 0.0
        for t, weight in zip(kinetic, w * (high - low) / 2, strict=True):
            start, span = made.threshold_mev + t, 199 - t - made.threshold_mev
            # nodes crowded towards the lowest energy, where the two nucleons are at rest
            pieces = np.concatenate([[0.0], np.geomspace(1e-5, 1.0, 16)]) * span
            inner = (pieces[:-1, None] + np.diff(pieces)[:, None] * (x + 1) / 2).ravel()
            inner_weight = (np.diff(pieces)[:, None] * w / 2).ravel()
            energy = start + inner
            values = flux(energy) * state.deposit.differential(energy, np.full_like(energy, t))
            sums += weight * (values @ inner_weight)
        assert ours[FIRST_BIN + place] == pytest.approx(sums, rel=1e-3)


def test_what_is_left():
    """Neutrons of each reaction, and a breakup that only counters of neutrons see."""
    numbers = ((PROTONS, 0), (NEUTRONS, 2), (BREAKUP, 1))
    for made, neutrons in numbers:
        for states in made.branches.values():
            assert [state.neutrons for state in states] == [neutrons]
    assert all(states[0].lead == "neutron" for states in BREAKUP.branches.values())
