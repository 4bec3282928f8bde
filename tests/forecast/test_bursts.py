"""The range over bursts: least, middle, most, and no standard deviation."""

from __future__ import annotations

import statistics

import pytest

from tenkpc import Burst, Detector, Equilibrated, Forecast
from tenkpc.errors import InputError

HALL = Detector.gallery("brine-hall")
BURSTS = [Burst.preset(name) for name in Burst.presets()]


def test_the_range_is_that_of_single_forecasts():
    """Every burst as in its own forecast, with the same arguments."""
    found = Forecast.range(HALL, BURSTS, distance="7 kpc", conversion=Equilibrated())
    totals = [
        Forecast(HALL, burst, distance="7 kpc", conversion=Equilibrated()).total for burst in BURSTS
    ]
    assert (found.minimum, found.maximum) == (min(totals), max(totals))
    assert found.median == statistics.median(totals)
    assert found.table["counted"].tolist() == totals
    assert found.table["factor_to_median"].median() == pytest.approx(1.0)


def test_the_range_speaks_of_itself_as_one():
    """The page says least, most and middle, names every burst, and warns of the word sigma."""
    words = " ".join(repr(Forecast.range(HALL, BURSTS, distance="10 kpc")).split())
    assert "over 6 bursts at 10 kpc" in words
    assert "no standard deviation" in words
    assert all(burst.title in words for burst in BURSTS)
    assert "<table" in Forecast.range(HALL, BURSTS, distance="10 kpc")._repr_html_()


def test_an_empty_range_is_refused():
    """No bursts, no range."""
    with pytest.raises(InputError, match="at least one burst"):
        Forecast.range(HALL, [], distance="10 kpc")
