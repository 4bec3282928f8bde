"""Likely slips of a user, and records that were written by nobody: sentences, no tracebacks."""

from __future__ import annotations

import itertools
import json
import math
import warnings

import pytest

from tenkpc import Burst, Detector, Forecast
from tenkpc.detector import gallery
from tenkpc.errors import InputError
from tenkpc.show import plot

HALL, BURST = Detector.gallery("brine-hall"), Burst.preset("ordinary-collapse")
FORECAST = Forecast(HALL, BURST, distance="10 kpc")


@pytest.mark.parametrize(
    ("call", "words"),
    [
        (lambda: Forecast("brine-hall", BURST, distance="10 kpc"), "detector: expected"),
        (lambda: Forecast(HALL, "ordinary-collapse", distance="10 kpc"), "burst: expected"),
        (
            lambda: Forecast(HALL, BURST, distance="10 kpc", conversion="adiabatic"),
            "conversion: expected",
        ),
        (
            lambda: Forecast(HALL, BURST, distance="10 kpc", interactions=["proton-scattering"]),
            "interactions: expected",
        ),
        (
            lambda: Forecast(
                HALL, BURST, distance="1 kpc", interactions={"proton-scattering": 1e9}
            ),
            "factor of 1e\\+06 at most",
        ),
        (lambda: Forecast.range(HALL, BURST, distance="10 kpc"), "bursts: expected"),
        (lambda: Forecast.range(HALL, "ab", distance="10 kpc"), "burst: expected"),
        (
            lambda: FORECAST.within(time=("30 s", "40 s")).of(BURST.replace({"end": "20 s"})),
            "no part of 30 s to 40 s lies within the burst",
        ),
        (lambda: FORECAST.compare(3), "compare: expected a forecast"),
        (lambda: FORECAST.replace("abc"), "changes: expected"),
        (lambda: FORECAST.replace({3: 3}), "changes: expected"),
        (lambda: FORECAST.at("1e-300 kpc"), "at least 1e-09 kpc and at most"),
        (lambda: FORECAST.at("1e200 kpc"), "at least 1e-09 kpc and at most"),
        (lambda: plot.light_curve(FORECAST, seed=-1), "seed: expected"),
        (lambda: plot.spectrum(FORECAST, ax=[1, 2]), "ax: expected axes"),
    ],
)
def test_slips_are_answered(call, words):
    """A text in place of a detector, one burst in place of several, distances beyond all sense."""
    with pytest.raises(InputError, match=words):
        call()


@pytest.mark.parametrize("cut", ["60 MeV", "120 MeV", "150 MeV", "190 MeV"])
@pytest.mark.parametrize("name", ["early-explosion", "ordinary-collapse", "equipartition"])
def test_no_count_is_negative(name, cut):
    """Where next to nothing is left a polynomial may dip below zero; counts never do."""
    made = Forecast(HALL, Burst.preset(name), distance="1e-6 kpc").within(energy_above=cut)
    assert made.total >= 0
    assert made.counts.select_dtypes("number").to_numpy().min() >= 0
    assert made.spectrum(bins="2 MeV").to_numpy().min() >= 0
    assert "counts" in repr(made)
    assert made.sentence()
    assert json.loads(made.to_json())["total"] == made.total


def test_every_pair_of_the_gallery_compares():
    """Also by way of detectors that would see nothing: the factors make the ratio, 1e-9."""
    made = [
        Forecast(Detector.gallery(name), Burst.preset("equipartition"), distance="10 kpc")
        for name in gallery.names()
    ]
    for first, second in itertools.permutations(made[1:], 2):
        table = first.compare(second)
        product = math.prod(table["factor"])
        assert product == pytest.approx(second.total / first.total, rel=1e-9)
        assert table.attrs["ratio"] == pytest.approx(product, rel=1e-9)


RECORD = json.loads(FORECAST.to_json())


@pytest.mark.parametrize(
    ("field", "value"),
    [
        ("distance_kpc", 0),
        ("distance_kpc", -5),
        ("distance_kpc", math.nan),
        ("energy_above_mev", "5"),
        ("energy_above_mev", [5]),
        ("energy_above_mev", -5),
        ("background_time_s", "5"),
        ("background_time_s", -1),
        ("window_s", [1]),
        ("window_s", [2, 1]),
        ("window_s", [1, 2, 3]),
        ("window_s", [math.nan, 1]),
        ("interactions", {"proton-scattering": None}),
        ("interactions", {"proton-scattering": []}),
        ("interactions", {"proton-scattering": -1}),
        ("interactions", {"foo": True}),
        ("interactions", 3),
        ("conversion", {}),
        ("detector", None),
        ("burst", {"text": 3}),
    ],
)
def test_records_are_not_trusted(field, value):
    """One field changed to what no forecast has: refused in a sentence."""
    changed = {**RECORD, "inputs": {**RECORD["inputs"], field: value}}
    with pytest.raises(InputError):
        Forecast.from_json(json.dumps(changed))


@pytest.mark.parametrize("text", ["", "[" * 100_000, "{}", "3", '{"inputs": 3}'])
def test_texts_that_are_no_records(text):
    """Refused, however deep."""
    with pytest.raises(InputError, match="expected what to_json wrote"):
        Forecast.from_json(text)


@pytest.mark.parametrize("total", [math.nan, math.inf, 3000.0])
def test_a_total_that_differs_is_told(total):
    """Also where it is no number."""
    with warnings.catch_warnings(record=True) as told:
        warnings.simplefilter("always")
        Forecast.from_json(json.dumps({**RECORD, "total": total}))
    assert "not as it was written" in str(told[0].message)
