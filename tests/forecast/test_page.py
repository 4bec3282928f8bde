"""The page of results, letter by letter, and where it has to say something unusual."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from tenkpc import Burst, Detector, Forecast, interactions

GOLDEN = Path(__file__).parents[1] / "golden"
TANK = Detector.gallery("mere-tank")


@pytest.mark.parametrize("name", sorted(path.stem for path in GOLDEN.glob("*.txt")))
def test_the_page_is_the_golden_one(name):
    """A change of any letter is meant, or it is a fault; numbers are whole counts."""
    detector, burst = Detector.gallery(name), Burst.preset("ordinary-collapse")
    forecast = Forecast(detector, burst, distance="10 kpc")
    expected = (GOLDEN / f"{name}.txt").read_text(encoding="utf-8")
    assert repr(forecast) + "\n" == expected


def page(**changes):
    """The page of the time-integrated burst with some changes, on one line."""
    chosen = {"distance": "10 kpc", **changes}
    words = repr(Forecast(TANK, Burst.preset("equipartition"), **chosen))
    return " ".join(words.split())


def test_a_faint_burst_says_how_often_nothing_is_seen():
    """At 1 Mpc less than one event is expected: none at all is the likely outcome."""
    assert "none at all in" in page(distance="1 Mpc")


def test_nothing_at_all_is_said_without_nonsense():
    """All interactions off: zero, with no factors on zero and no division by it."""
    off = dict.fromkeys(interactions.KEYS, False)
    words = page(interactions=off)
    assert "counts 0 events" in words
    assert "other conversions" not in words
    assert "nan" not in words.lower()


@pytest.mark.parametrize(
    ("distance", "words"), [("0.2 kpc", "200 pc"), ("0.3 Mpc", "300 kpc"), ("2 Mpc", "2 Mpc")]
)
def test_distances_come_in_the_unit_that_suits(distance, words):
    """No power of ten to be counted by the reader."""
    assert f"at {words}," in page(distance=distance)


def test_small_rows_are_collapsed():
    """A row below two parts in a thousand is named in one line at the end."""
    text = page(interactions={"electron-scattering": 0.01})
    assert re.search(r"smaller, together [^:]*: [^\n]*\n?[^\n]*electron-scattering", text)


def test_what_the_medium_does_not_see_is_named():
    """Recoils give no Cherenkov light: one line says so, and no total holds them."""
    assert "not seen: coherent-scattering, deuteron-breakup, proton-scattering" in page()
