"""The light curve: what is on the axes."""

from __future__ import annotations

import numpy as np
import pytest
from matplotlib import pyplot as plt

from tenkpc.show import plot


def test_the_light_curve_is_a_rate(tank, check_looks):
    """Heights are counts over widths, with the total first and in heavier line."""
    axes = plot.light_curve(tank, edges_s=[0.0, 0.01, 0.1, 1.0])
    curve = tank.light_curve(["0 s", "10 ms", "100 ms", "1 s"])
    rate = curve.drop(columns="width_s").sum(axis=1) / curve["width_s"]
    assert axes.patches[0].get_data().values == pytest.approx(rate.to_numpy())
    assert "events / s" in axes.get_ylabel()
    assert "after bounce [s]" in axes.figure.axes[1].get_xlabel()
    check_looks(axes.figure)


def test_one_pseudo_burst_is_drawn_the_same_for_the_same_seed(hall, words_on):
    """Points are whole counts over widths, close to the expectation, and seeds are kept."""
    edges = [0.0, 0.05, 0.3, 1.0, 5.0]

    def points(seed):
        axes = plot.light_curve(hall, edges_s=edges, seed=seed)
        return axes, axes.lines[0].get_ydata() if axes.lines else np.array([])

    axes, first = points(3)
    assert np.array_equal(first, points(3)[1])
    assert not np.array_equal(first, points(4)[1])
    drawn = first * np.diff(edges)
    assert drawn == pytest.approx(np.round(drawn), abs=1e-9)
    curve = hall.light_curve([f"{e} s" for e in edges])
    expected = curve.drop(columns="width_s").sum(axis=1).to_numpy()
    assert np.all(np.abs(drawn - expected) < 5 * np.sqrt(expected))
    assert "points: one pseudo-burst" in words_on(axes.figure)
    assert "points: one pseudo-burst" not in words_on(points(None)[0].figure)


def test_background_that_lies_below_is_said(hall, words_on):
    """A level below the picture is a number on it."""
    words = words_on(plot.light_curve(hall).figure)
    assert any(text.startswith("background 0.003 per s") for text in words)


def test_background_that_is_seen_is_a_line(hall, words_on, heights):
    """A high level crosses the picture and has its name."""
    loud = hall.replace({"background.outside gammas.rate": "30 Hz"})
    axes = plot.light_curve(loud)
    assert any(np.allclose(line, 30 + 9 / 3600) for line in heights(axes))
    assert "background" in words_on(axes.figure)


def test_the_window_of_time_is_said_at_the_foot(tank, words_on):
    """A cut in time is part of what was assumed."""
    words = words_on(plot.light_curve(tank.within(time=("0 s", "1 s"))).figure)
    assert any("0 s to 1 s after bounce" in text.replace("\n", " ") for text in words)


def test_pictures_go_on_axes_of_the_users_own(tank):
    """Given axes are drawn on and returned, and no figure is made."""
    _, axes = plt.subplots()
    before = plt.get_fignums()
    assert plot.light_curve(tank, ax=axes) is axes
    assert plt.get_fignums() == before
