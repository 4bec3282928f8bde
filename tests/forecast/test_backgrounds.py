"""Background in a forecast: its window, its columns, and that no total holds it."""

from __future__ import annotations

import numpy as np
import pytest

from tenkpc import Burst, Detector, Forecast
from tenkpc.errors import InputError

HALL = Detector.gallery("brine-hall")
ORDINARY = Burst.preset("ordinary-collapse")
FORECAST = Forecast(HALL, ORDINARY, distance="10 kpc")
RATES = 40 / 86400, 9 / 3600


def test_the_window_is_the_burst_but_20_seconds_at_most():
    """A long burst 20 s, a short one its length, a window of time its own, a given time that."""
    assert FORECAST.live_s == 20.0
    short = FORECAST.of(Burst.preset("black-hole-cutoff"))
    assert short.live_s == pytest.approx(0.63)
    assert FORECAST.within(time=("1 s", "4 s")).live_s == pytest.approx(3.0)
    given = Forecast(HALL, ORDINARY, distance="10 kpc", background_time="1 minute")
    assert given.live_s == 60.0
    assert given.within(time=("1 s", "4 s")).live_s == 60.0


def test_the_table_holds_rates_and_events():
    """By name: rate, time, and their product."""
    table = FORECAST.background
    assert table["rate_hz"].tolist() == pytest.approx(list(RATES))
    assert table["counted"].tolist() == pytest.approx([20 * rate for rate in RATES])
    assert FORECAST.background_events == pytest.approx(table["counted"].sum())


def test_spectrum_and_light_curve_have_a_column_of_it():
    """Both add up to the rate times the time they cover, and it is in no other column."""
    spectrum = FORECAST.spectrum(bins="0.5 MeV")
    assert spectrum["background"].sum() == pytest.approx(20 * sum(RATES))
    edges = ["-10 ms", "0 s", "5 s", "9 s"]
    curve = FORECAST.light_curve(edges)
    assert curve["background"].to_numpy() == pytest.approx(sum(RATES) * np.array([0.01, 5, 4]))
    assert FORECAST.total == pytest.approx(spectrum[list(FORECAST.keys)].sum().sum())
    assert "background" not in FORECAST.spectrum(of="neutrino").columns
    assert "background" not in FORECAST.counts.index


def test_a_cut_in_energy_cuts_the_background_too():
    """Above 5 MeV half of a peak at 5 MeV is left, but for what lies below the threshold."""
    cut = FORECAST.within(energy_above="5 MeV")
    from scipy.special import ndtr

    left = 0.5 / (1 - ndtr((0.25 - 5) / 2.5))
    assert cut.background.loc["cosmogenic decays", "rate_hz"] == pytest.approx(RATES[1] * left)
    assert cut.spectrum()["background"].sum() == pytest.approx(cut.background_events)


def test_distance_and_conversion_leave_it_alone():
    """Background does not scale with the distance of a star."""
    assert FORECAST.at("50 kpc").background_events == FORECAST.background_events


def test_a_detector_without_backgrounds_has_no_column():
    """Nothing is said of what the file does not hold."""
    tank = Forecast(Detector.gallery("mere-tank"), ORDINARY, distance="10 kpc")
    assert "background" not in tank.spectrum().columns
    assert "background" not in tank.light_curve("1 s").columns
    assert tank.background_events == 0
    assert len(tank.background) == 0
    assert "background" not in repr(tank)


def test_the_page_says_how_many_and_for_how_long():
    """A line of its own, in no total."""
    assert "0.0593 events in 20 s, in no total" in repr(FORECAST)


@pytest.mark.parametrize(("time", "words"), [("3", "lacks its unit"), ("-3 s", "zero or more")])
def test_times_that_make_no_sense(time, words):
    """Each in a sentence that names the argument."""
    with pytest.raises(InputError, match=f"background_time: .*{words}"):
        Forecast(HALL, ORDINARY, distance="10 kpc", background_time=time)
