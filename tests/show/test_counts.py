"""The observed spectrum: what is on the axes."""

from __future__ import annotations

import numpy as np
import pytest
from matplotlib import pyplot as plt

from tenkpc import Forecast
from tenkpc.show import plot


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


def test_heights_of_the_spectrum_are_counts(hall, heights):
    """The top of the stack is the sum over interactions, bin by bin, background on top."""
    axes = plot.spectrum(hall)
    frame = hall.spectrum().iloc[:-1]
    total = frame[list(hall.keys)].sum(axis=1).to_numpy()
    found = heights(axes)
    assert any(np.allclose(top, total) for top in found)
    assert any(np.allclose(top, total + frame["background"].to_numpy()) for top in found)


def test_lines_of_a_logarithmic_spectrum_are_counts_of_each_kind(hall, heights):
    """Lines are not stacked: each is what is seen in one way, and one is their sum."""
    axes = plot.spectrum(hall, log=True, bins="1 MeV")
    frame = hall.spectrum(bins="1 MeV", by="seen").iloc[:-1]
    found = heights(axes)
    for name in ("proton recoil", "gamma rays", "positron, then neutron capture"):
        assert any(np.allclose(line, frame[name].to_numpy()) for line in found)


def test_nothing_is_drawn_without_a_fault(hall, check_looks):
    """A detector that counts nothing still has its axes."""
    off = dict.fromkeys(hall.keys, False)
    nothing = Forecast(hall.detector, hall.burst, distance="10 kpc", interactions=off)
    check_looks(plot.spectrum(nothing).figure)


def test_pictures_go_on_axes_of_the_users_own(tank):
    """Given axes are drawn on and returned, and no figure is made."""
    _, axes = plt.subplots()
    before = plt.get_fignums()
    assert plot.spectrum(tank, ax=axes, bins="5 MeV") is axes
    assert plt.get_fignums() == before
