"""Spectrum and light curve: what is on the axes."""

from __future__ import annotations

import numpy as np
import pytest
from matplotlib import pyplot as plt

from tenkpc.show import counts, plot


def heights(axes):
    """Heights of everything that is drawn as steps."""
    return [patch.get_data().values for patch in axes.patches if hasattr(patch, "get_data")]


@pytest.mark.parametrize("log", [False, True])
def test_the_spectrum_names_bins_energy_and_what_is_seen(tank, words_on, check_looks, log):
    """Bin width and kind of energy on the axes, names on the areas, no legend, a foot line."""
    axes = plot.spectrum(tank, log=log)
    assert axes.get_ylabel() == "events / 2 MeV"
    assert axes.figure.axes[1].get_xlabel() == "observed total energy [MeV]"
    words = words_on(axes.figure)
    seen = {"positron, then neutron capture", "single electron", "gamma rays", "below threshold"}
    assert seen < set(words)
    assert any("10 kpc" in text and "normal ordering" in text for text in words)
    check_looks(axes.figure)


def test_heights_of_the_spectrum_are_counts(hall):
    """The top of the stack is the sum over interactions, bin by bin, background on top."""
    axes = plot.spectrum(hall)
    frame = hall.spectrum().iloc[:-1]
    total = frame[list(hall.keys)].sum(axis=1).to_numpy()
    found = heights(axes)
    assert any(np.allclose(top, total) for top in found)
    assert any(np.allclose(top, total + frame["background"].to_numpy()) for top in found)


def test_lines_of_a_logarithmic_spectrum_are_counts_of_each_kind(hall):
    """Lines are not stacked: each is what is seen in one way, and one is their sum."""
    axes = plot.spectrum(hall, log=True, bins="1 MeV")
    frame = hall.spectrum(bins="1 MeV", by="seen").iloc[:-1]
    found = heights(axes)
    for name in ("proton recoil", "gamma rays", "positron, then neutron capture"):
        assert any(np.allclose(line, frame[name].to_numpy()) for line in found)


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


def test_background_that_is_seen_is_a_line(hall, words_on):
    """A high level crosses the picture and has its name."""
    loud = hall.replace({"background.outside gammas.rate": "30 Hz"})
    axes = plot.light_curve(loud)
    assert any(np.allclose(line, 30 + 9 / 3600) for line in heights(axes))
    assert "background" in words_on(axes.figure)


def test_many_ways_of_being_seen_are_named_in_part():
    """Of nine columns six have their names, the others are one."""
    from pandas import DataFrame

    frame = DataFrame({"width": [1.0, 1.0], **{f"w{n}": [9.0 - n, 1.0] for n in range(9)}})
    names, parts = counts._ranked(frame)
    assert names == ["w0", "w1", "w2", "w3", "w4", "w5", "3 smaller"]
    assert parts.sum() == pytest.approx(frame.drop(columns="width").to_numpy().sum())


def test_nothing_is_drawn_without_a_fault(hall, check_looks):
    """A detector that counts nothing still has its axes."""
    off = dict.fromkeys(hall.keys, False)
    from tenkpc import Forecast

    nothing = Forecast(hall.detector, hall.burst, distance="10 kpc", interactions=off)
    check_looks(plot.spectrum(nothing).figure)


def test_pictures_go_on_axes_of_the_users_own(tank):
    """Given axes are drawn on and returned, and no figure is made."""
    _, axes = plt.subplots()
    before = plt.get_fignums()
    assert plot.spectrum(tank, ax=axes, bins="5 MeV") is axes
    assert plot.light_curve(tank, ax=axes) is axes
    assert plt.get_fignums() == before
