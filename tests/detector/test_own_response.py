"""Volumes with a response of their own, and passive structure around what sees."""

from __future__ import annotations

import pytest

from tenkpc import Burst, Detector, Forecast
from tenkpc.errors import FileError

TEXT = """
title = "Two Rooms"
[[volume]]
name = "inner"
mass = "3 kt"
material = "light water"

[[volume]]
name = "outer"
mass = "5 kt"
material = "light water"
[volume.response]
threshold = "9 MeV"
efficiency = "40 %"

[response]
medium = "cherenkov"
threshold = "5 MeV"
resolution = { stochastic = 0.4 }
efficiency = "90 %"
live_fraction = 0.98
"""
ORDINARY = Burst.preset("ordinary-collapse")


def test_own_keys_take_the_place_of_common_ones():
    """Threshold and efficiency are the outer room's own, the rest is as for the whole."""
    inner, outer = (v.response for v in Detector.parse(TEXT).volumes)
    assert (inner.threshold_mev, outer.threshold_mev) == (5.0, 9.0)
    assert (inner.efficiency.values, outer.efficiency.values) == ((0.9,), (0.4,))
    assert inner.resolution == outer.resolution
    assert inner.live_fraction == outer.live_fraction == 0.98


def test_a_forecast_is_the_sum_of_its_volumes():
    """Each volume counts what a detector of it alone would."""
    alone = []
    for volume in ("inner", "outer"):
        other = {"inner": "outer", "outer": "inner"}[volume]
        made = Detector.parse(TEXT).replace({f"volume.{other}.mass": "1e-9 kg"})
        alone.append(Forecast(made, ORDINARY, distance="10 kpc").total)
    both = Forecast(Detector.parse(TEXT), ORDINARY, distance="10 kpc")
    assert both.total == pytest.approx(sum(alone), rel=1e-9)
    counted = both.breakdown["counted"].groupby(level="volume").sum()
    assert counted.to_numpy() == pytest.approx(alone, rel=1e-9)


def test_the_page_names_both_thresholds():
    """Where volumes differ, the sentence says which counts from where; explain lists own keys."""
    made = Forecast(Detector.parse(TEXT), ORDINARY, distance="10 kpc")
    words = " ".join(repr(made).split())
    assert "above 5 MeV of total energy in inner, above 9 MeV of total energy in outer" in words
    lines = [line.split("  ")[-1].strip() for line in made.explain().splitlines()]
    assert "above 9 MeV of total energy (detector)" in lines
    cut = made.within(energy_above="12 MeV")
    assert "observed above 12 MeV of total energy" in " ".join(repr(cut).split())


def test_own_keys_are_changed_by_their_path():
    """`volume.outer.response.efficiency`, as for any other key."""
    made = Detector.parse(TEXT).replace({"volume.outer.response.efficiency": "80 %"})
    assert made.volumes[1].response.efficiency.values == (0.8,)
    table = Forecast(Detector.parse(TEXT), ORDINARY, distance="10 kpc").compare(
        Forecast(made, ORDINARY, distance="10 kpc")
    )
    assert list(table.index) == ["volume.outer.response"]


def test_structure_that_hardly_sees():
    """A frame whose electrons seldom reach the liquid: an efficiency of its own, as a share."""
    text = """
    title = "Frame"
    [[volume]]
    name = "liquid"
    mass = "1 kt"
    material = "linear alkylbenzene"
    [[volume]]
    name = "frame"
    mass = "0.5 kt"
    formula = "CH2"
    [volume.response]
    quenching = "none"
    efficiency = "5 %"
    [response]
    medium = "scintillator"
    threshold = "5 MeV"
    birks = "0.011 cm/MeV"
    """
    made = Detector.parse(text)
    assert made.volumes[1].response.visible("proton", 3.0) == 3.0
    counted = Forecast(made, ORDINARY, distance="10 kpc").breakdown["counted"]
    shares = counted.groupby(level="volume").sum()
    assert 0.01 < shares["frame"] / shares["liquid"] < 0.05


@pytest.mark.parametrize(
    ("old", "new", "words"),
    [
        ('"9 MeV"', '"9 s"', "volume.outer.response.threshold: .*is a time"),
        ('threshold = "9', 'treshold = "9', "volume.outer.response.treshold: unknown key; did you"),
        ('"40 %"', "40", "volume.outer.response.efficiency: .*did you mean"),
        (
            'efficiency = "40 %"',
            'energy = "kinetic"',
            "volume.outer.response: all volumes report one kind of energy; found kinetic",
        ),
        (
            'efficiency = "40 %"',
            'medium = "scintillator"',
            "volume.outer.response: the light of recoil protons",
        ),
        (
            'efficiency = "40 %"',
            'efficiency = { points = [["9 MeV", 0.5]] }',
            "volume.outer.response.efficiency: the points cover",
        ),
        (
            'efficiency = "40 %"',
            'birks = "0.01 cm/MeV"',
            "volume.outer.response.birks: does not belong",
        ),
    ],
)
def test_mistakes_are_told_where_they_stand(old, new, words):
    """In the volume's own table."""
    assert old in TEXT
    with pytest.raises(FileError, match=words):
        Detector.parse(TEXT.replace(old, new, 1))
