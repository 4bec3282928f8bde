"""Strength by excitation energy, and what is emitted: sums, borders, evaporation."""

from __future__ import annotations

from functools import partial

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.integrate import quad

from tenkpc import data
from tenkpc.interactions.strength import CUT, emissions, excited

PEAKS = st.lists(
    st.tuples(st.floats(0.5, 30), st.one_of(st.just(0.0), st.floats(0.2, 6)), st.floats(0.01, 100)),
    min_size=1,
    max_size=5,
)


def gaussian(x, energy, width, power=0):
    """A Gaussian times a power of its argument."""
    return x**power * np.exp(-0.5 * ((x - energy) / width) ** 2)


@given(PEAKS, PEAKS, st.lists(st.floats(2, 20), max_size=2, unique=True))
def test_no_strength_is_lost(first, second, borders):
    """Levels and bins of each kind add up to what was given, wherever the borders lie."""
    found = excited({"fermi": first, "spin_dipole": second}, sorted(borders))
    for kind, peaks in (("fermi", first), ("spin_dipole", second)):
        assert found.of[kind].sum() == pytest.approx(sum(p[2] for p in peaks), rel=1e-9)
        assert np.all(found.of[kind] >= 0)
    assert np.all(np.diff(found.energy_mev) >= 0)
    assert np.all(found.energy_mev > 0)


def test_the_mean_energy_is_kept():
    """A Gaussian far from zero has its middle, one near zero what is left of it."""
    for energy, width in ((20.0, 4.0), (5.0, 4.0)):
        found = excited({"fermi": [(energy, width, 1.0)]}, ())
        mean = (found.energy_mev * found.of["fermi"]).sum()
        low, high = max(energy - CUT * width, 0), energy + CUT * width
        shape = partial(gaussian, energy=energy, width=width)
        moment = partial(gaussian, energy=energy, width=width, power=1)
        expected = quad(moment, low, high)[0] / quad(shape, low, high)[0]
        assert mean == pytest.approx(expected, abs=0.03)


def test_borders_are_edges_of_bins():
    """What lies below a separation energy is told from what lies above it, exactly."""
    found = excited({"fermi": [(7.0, 3.0, 1.0)]}, (6.887,))
    below = found.of["fermi"][found.energy_mev < 6.887].sum()
    shape = lambda x: np.exp(-0.5 * ((x - 7) / 3) ** 2)
    total = quad(shape, 0, 7 + CUT * 3)[0]
    assert below == pytest.approx(quad(shape, 0, 6.887)[0] / total, rel=1e-9)


@given(st.floats(0.1, 60), st.floats(2, 12), st.floats(0.5, 12), st.integers(12, 240))
def test_decays_are_complete_and_make_no_energy(energy, first, further, nucleons):
    """Shares add up to 1; gammas and the neutrons' separation never exceed the excitation."""
    found = list(emissions(energy, (first, first + further), nucleons))
    assert sum(e.share for e in found) == pytest.approx(1)
    for emission in found:
        cost = (0.0, first, first + further)[emission.neutrons]
        assert 0 <= emission.gamma_mev <= energy - cost + 1e-9
        assert emission.share >= 0
    assert {e.neutrons for e in found} <= {0, 1, 2}
    if energy <= first:
        assert [e.neutrons for e in found] == [0]


def test_two_neutrons_against_quadrature():
    """The share with two neutrons, and the mean energy left after one."""
    energy, separation, nucleons = 22.0, (6.887, 14.985), 208
    t = np.sqrt((energy - separation[0]) / (nucleons / 10))
    spectrum = lambda e: e * np.exp(-e / t) / t**2
    share = quad(spectrum, 0, energy - separation[1])[0]
    found = {e.neutrons: e for e in emissions(energy, separation, nucleons)}
    assert found[2].share == pytest.approx(share, rel=1e-9)
    ends = energy - separation[1], energy - separation[0]
    mean = quad(lambda e: e * spectrum(e), *ends)[0] / quad(spectrum, *ends)[0]
    assert found[1].gamma_mev == pytest.approx(energy - separation[0] - mean, rel=1e-6)


@pytest.mark.parametrize(
    ("name", "key", "excess"),
    [
        ("argon", "argon-to-potassium", 4),
        ("iron", "iron-to-cobalt", 4),
        ("iodine", "iodine-to-xenon", 21),
        ("lead", "lead-to-bismuth", 44),
    ],
)
def test_sum_rules(name, key, excess):
    """B(F) is N − Z, and B(GT) stays below 3(N − Z), as far as charge exchange finds it."""
    table = data.document(f"nuclei/{name}.toml")["reactions"][key]
    assert sum(p[2] for p in table["fermi"]) == excess
    axial = 1.2754**2
    found = sum(p[2] for p in table.get("gamow_teller", ()))
    found += sum(p[2] for p in table.get("gamow_teller_with_axial_coupling", ())) / axial
    assert 0.4 < found / (3 * excess) < 0.9
