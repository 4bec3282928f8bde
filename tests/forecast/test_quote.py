"""The sentence to be quoted: complete, and rounded as its errors allow."""

from __future__ import annotations

import re

import pytest

from tenkpc import Burst, Detector, Forecast

FORECAST = Forecast(
    Detector.gallery("brine-hall"), Burst.preset("ordinary-collapse"), distance="10 kpc"
)


def number(words):
    """Read a number in groups."""
    return float(words.replace("\u202f", ""))


@pytest.mark.parametrize("distance", ["0.3 kpc", "10 kpc", "50 kpc", "300 kpc"])
def test_value_and_errors_end_at_the_same_place(distance):
    """As many decimals, and the last digit is the second of the largest error."""
    forecast = FORECAST.at(distance)
    found = re.search(r"count ([\d\u202f.]+) (.*) events", forecast.sentence())
    value, errors = found[1], re.findall(r"[±+−] ([\d\u202f.]+)", found[2])
    decimals = {len(text.partition(".")[2]) for text in (value, *errors)}
    assert len(decimals) == 1
    largest = max(map(number, errors))
    step = 10.0 ** -max(decimals)
    while largest / step >= 100:
        step *= 10
    assert number(value) == pytest.approx(forecast.total, abs=0.51 * step)
    assert number(value) / step == pytest.approx(round(number(value) / step))


def test_everything_that_matters_is_in_it():
    """Detector with mass, burst, distance, conversion, threshold, sources, version."""
    words = FORECAST.sentence()
    for part in (
        "Brine Hall (12 kt linear alkylbenzene seen by scintillation light)",
        "observed above 0.25 MeV of visible energy",
        "“ordinary collapse” at 10 kpc with adiabatic conversion, normal ordering",
        "(chance)",
        "(cross sections)",
        "(detector)",
        "(mixing angles)",
        "inverse-beta-decay: A. Strumia and F. Vissani",
        "tenkpc 0.",
    ):
        assert part in words
    assert "from 0 s to 1 s after bounce" in FORECAST.within(time=("0 s", "1 s")).sentence()


def test_nothing_is_said_without_nonsense():
    """No events: no errors but those of chance, which are nothing."""
    off = dict.fromkeys(FORECAST.keys, False)
    nothing = Forecast(FORECAST.detector, FORECAST.burst, distance="1 kpc", interactions=off)
    assert "is expected to count 0 events observed" in nothing.sentence()
