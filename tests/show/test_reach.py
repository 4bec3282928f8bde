"""Interaction probabilities and counts against distance."""

from __future__ import annotations

import numpy as np
import pytest
from matplotlib import pyplot as plt

from tenkpc import Burst, Forecast, interactions
from tenkpc.forecast.uncertainty import poisson_interval
from tenkpc.show import plot, reach


@pytest.mark.parametrize("name", ["hall", "tank"])
def test_probabilities_are_cross_section_times_targets(request, name, words_on, check_looks):
    """Six interactions are named by their reaction; one curve is checked against its product."""
    forecast = request.getfixturevalue(name)
    axes = plot.interaction_probability(forecast)
    words = words_on(axes.figure)
    named = [key for key in forecast.keys if interactions.by_key(key).equation in words]
    assert len(named) == 6
    assert {"inverse-beta-decay", "proton-scattering"} < set(named)
    assert f"{len(forecast.keys) - 6} smaller, thin grey" in words
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
    assert totals == pytest.approx([hall.total * (10 / d) ** 2 for d in distances])
    others = [hall.of(burst).total for burst in bursts]
    band = axes.collections[0].get_paths()[0].vertices
    nearest = band[band[:, 0] == distances[0], 1]
    assert [nearest.min(), nearest.max()] == pytest.approx([min(others) * 1e4, max(others) * 1e4])
    words = words_on(axes.figure)
    assert {"Galactic Centre", "Andromeda", "with 5 other bursts", "68 % of chance"} < set(words)
    check_looks(axes.figure)


def test_the_darker_band_is_the_interval_of_chance(hall):
    """Its edges at the far end are quantiles of the Poisson distribution, or below the picture."""
    axes = plot.counts_versus_distance(hall)
    distances, totals = axes.lines[0].get_data()
    band = axes.collections[0].get_paths()[0].vertices
    for at in (60, 180):
        interval = poisson_interval(totals[at])
        edges = band[band[:, 0] == distances[at], 1]
        assert [edges.min(), edges.max()] == pytest.approx([interval.low, interval.high])


def test_bands_are_one_sigma_as_in_the_counts(hall):
    """Final states of one interaction are off together: σ exp(±error) of each, summed."""
    curve = next(c for c in reach._curves(hall) if c.equation.endswith("¹²N"))
    at = int(np.argmin(np.abs(reach.ENERGY_MEV - 40)))
    energy = reach.ENERGY_MEV[[at]]
    states = interactions.by_key("carbon-12-to-nitrogen-12").final_states("nu_e")
    sigma = np.array([state.sigma_cm2(energy)[0] for state in states])
    error = np.array([state.relative_error(energy)[0] for state in states])
    assert len(set(error)) > 1
    per_kt = hall.detector.targets("C-12") / hall.detector.mass_kg * 1e6
    assert curve.middle[at] == pytest.approx(per_kt * sigma.sum())
    assert curve.high[at] == pytest.approx(per_kt * sigma @ np.exp(error))
    assert curve.low[at] == pytest.approx(per_kt * sigma @ np.exp(-error))


def test_factors_and_switches_of_the_forecast_apply(hall, words_on):
    """Half of an interaction is half of its curve, and one that is off is not drawn."""
    chosen = {"inverse-beta-decay": 0.5, "proton-scattering": False}
    half = Forecast(hall.detector, hall.burst, distance="10 kpc", interactions=chosen)
    equation = interactions.by_key("inverse-beta-decay").equation
    whole, scaled = (
        next(c.middle for c in reach._curves(forecast) if c.equation == equation)
        for forecast in (hall, half)
    )
    assert scaled == pytest.approx(0.5 * whole)
    words = words_on(plot.interaction_probability(half).figure)
    assert interactions.by_key("proton-scattering").equation not in words


def test_of_ten_curves_six_are_named():
    """The largest have their equations, the others are one lot."""
    flat = np.ones_like(reach.ENERGY_MEV)
    curves = [reach.Curve(f"reaction {n}", flat / 2**n, flat, flat, 100.0) for n in range(10)]
    names, ends = reach._names(curves)
    assert names == [*(f"reaction {n}" for n in range(6)), "4 smaller, thin grey"]
    assert [end for _, end in ends] == pytest.approx([2.0**-n for n in range(7)])


def test_a_detector_that_sees_nothing_has_empty_axes(hall, check_looks):
    """With every interaction off there is nothing to draw, and no fault."""
    off = dict.fromkeys(hall.keys, False)
    nothing = Forecast(hall.detector, hall.burst, distance="10 kpc", interactions=off)
    check_looks(plot.interaction_probability(nothing).figure)
    check_looks(plot.counts_versus_distance(nothing).figure)


def test_pictures_go_on_axes_of_the_users_own(hall):
    """Given axes are drawn on and returned, and no figure is made."""
    _, axes = plt.subplots()
    _, more = plt.subplots()
    before = plt.get_fignums()
    assert plot.interaction_probability(hall, ax=axes) is axes
    assert plot.counts_versus_distance(hall, ax=more) is more
    assert plt.get_fignums() == before
