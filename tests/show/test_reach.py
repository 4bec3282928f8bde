"""Interaction probabilities and counts against distance."""

from __future__ import annotations

import numpy as np
import pytest
from matplotlib import pyplot as plt

from tenkpc import Burst, interactions
from tenkpc.show import plot


@pytest.mark.parametrize("name", ["hall", "tank"])
def test_probabilities_are_cross_section_times_targets(request, name, words_on, check_looks):
    """Every interaction is named by its reaction; one curve is checked against its product."""
    forecast = request.getfixturevalue(name)
    axes = plot.interaction_probability(forecast)
    words = words_on(axes.figure)
    for key in forecast.keys:
        assert interactions.by_key(key).equation in words
    detector = forecast.detector
    per_kt = detector.targets("H-1") / detector.mass_kg * 1e6
    energy = np.geomspace(1.0, 100.0, 400)
    expected = per_kt * interactions.by_key("inverse-beta-decay").sigma("anti_nu_e", energy)
    lines = [line.get_data() for line in axes.lines]
    wanted = expected[expected > 0]
    assert any(
        len(y) == len(energy) and np.allclose(y[np.isfinite(y)], wanted)
        for _, y in lines
        if np.isfinite(y).sum() == len(wanted)
    )
    check_looks(axes.figure)


def test_values_beyond_a_window_are_dotted(hall):
    """The excited part of carbon ends at 60 MeV; from there its curve is dotted."""
    axes = plot.interaction_probability(hall)
    dotted = [line.get_xdata() for line in axes.lines if line.get_linestyle() == ":"]
    starts = [x.min() for x in dotted if len(x)]
    assert any(60 < start < 61 for start in starts)


def test_counts_fall_with_the_square_of_the_distance(hall, words_on, check_looks):
    """Slope −2, bands of other bursts and of chance, places by their names."""
    bursts = [Burst.preset(name) for name in Burst.presets()]
    axes = plot.counts_versus_distance(hall, bursts=bursts)
    distances, totals = axes.lines[0].get_data()
    assert np.diff(np.log(totals)) / np.diff(np.log(distances)) == pytest.approx(-2)
    assert np.interp(10.0, distances, totals) == pytest.approx(hall.total, rel=0.02)
    words = words_on(axes.figure)
    assert {"Galactic Centre", "Andromeda", "5 other bursts"} < set(words)
    check_looks(axes.figure)


def test_pictures_go_on_axes_of_the_users_own(hall):
    """Given axes are drawn on and returned, and no figure is made."""
    _, axes = plt.subplots()
    _, more = plt.subplots()
    before = plt.get_fignums()
    assert plot.interaction_probability(hall, ax=axes) is axes
    assert plot.counts_versus_distance(hall, ax=more) is more
    assert plt.get_fignums() == before
