"""Pictures: what is on the axes, not how it looks."""

from __future__ import annotations

import numpy as np
import pytest
from matplotlib import pyplot as plt

from tenkpc import Burst, Detector, Forecast
from tenkpc.show import plot


@pytest.fixture(scope="module")
def forecast():
    """The gallery's tank and the ordinary burst."""
    return Forecast(
        Detector.gallery("mere-tank"), Burst.preset("ordinary-collapse"), distance="10 kpc"
    )


@pytest.fixture(autouse=True)
def _close():
    yield
    plt.close("all")


def words_on(figure):
    """Every text of a figure."""
    return [text.get_text() for axes in figure.axes for text in axes.texts]


@pytest.mark.parametrize("log", [False, True])
def test_the_spectrum_names_bins_energy_and_reactions(forecast, log):
    """Bin width and kind of energy on the axes, reactions on the areas, no legend, a foot line."""
    axes = plot.spectrum(forecast, log=log)
    assert axes.get_ylabel() == "events / 2 MeV"
    assert axes.figure.axes[1].get_xlabel() == "observed total energy [MeV]"
    words = words_on(axes.figure)
    assert {"ν̄e + p → e⁺ + n", "ν + e⁻ → ν + e⁻", "below threshold"} < set(words)
    assert any("10 kpc" in text and "normal ordering" in text for text in words)
    assert all(each.get_legend() is None for each in axes.figure.axes)


def test_heights_of_the_spectrum_are_counts(forecast):
    """The top of the stack is the sum over interactions, bin by bin."""
    axes = plot.spectrum(forecast)
    frame = forecast.spectrum().iloc[:-1]
    total = frame.drop(columns="width_mev").sum(axis=1).to_numpy()
    tops = [patch.get_data().values for patch in axes.patches if hasattr(patch, "get_data")]
    assert any(np.allclose(top, total) for top in tops)


def test_the_light_curve_is_a_rate(forecast):
    """Heights are counts over widths, with the total first and in heavier line."""
    axes = plot.light_curve(forecast, edges_s=[0.0, 0.01, 0.1, 1.0])
    curve = forecast.light_curve(["0 s", "10 ms", "100 ms", "1 s"])
    rate = curve.drop(columns="width_s").sum(axis=1) / curve["width_s"]
    assert axes.patches[0].get_data().values == pytest.approx(rate.to_numpy())
    assert "events / s" in axes.get_ylabel()
    assert "after bounce [s]" in axes.figure.axes[1].get_xlabel()


def test_pictures_go_on_axes_of_the_users_own(forecast):
    """Given axes are drawn on and returned, and no figure is made."""
    _, axes = plt.subplots()
    before = plt.get_fignums()
    assert plot.spectrum(forecast, ax=axes, bins="5 MeV") is axes
    assert plot.light_curve(forecast, ax=axes) is axes
    assert plt.get_fignums() == before
