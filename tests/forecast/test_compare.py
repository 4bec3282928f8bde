"""Factors between two forecasts: their product is the ratio, each is one change."""

from __future__ import annotations

import pytest

from tenkpc import Adiabatic, Burst, Detector, Forecast, Unconverted
from tenkpc.errors import InputError

HALL, TANK = Detector.gallery("brine-hall"), Detector.gallery("mere-tank")
ORDINARY = Burst.preset("ordinary-collapse")
FIRST = Forecast(HALL, ORDINARY, distance="10 kpc")


def product(first, second):
    """The factor table, checked against the ratio of the totals."""
    table = first.compare(second)
    assert table["factor"].prod() == pytest.approx(second.total / first.total, rel=1e-12)
    assert table.attrs["ratio"] == pytest.approx(second.total / first.total, rel=1e-12)
    return table


def test_every_change_has_its_line():
    """Mass, threshold, distance, conversion, burst and window, one line each, in a fixed order."""
    second = (
        FIRST.replace({"response.threshold": "1 MeV", "volume.sphere.mass": "20 kt"})
        .of(Burst.preset("slow-accretion"))
        .at("20 kpc")
        .converted(Unconverted())
        .within(time=("0 s", "1 s"), energy_above="3 MeV")
    )
    table = product(FIRST, second)
    assert list(table.index) == [
        "volume.sphere.mass",
        "response.threshold",
        "burst",
        "distance",
        "conversion",
        "time window",
        "energy above",
    ]
    assert table.loc["volume.sphere.mass", "factor"] == pytest.approx(20 / 12)
    assert table.loc["distance", "factor"] == pytest.approx(0.25)
    assert table.loc["response.threshold", ["from", "to"]].tolist() == ["0.25 MeV", "1 MeV"]
    assert table["factor"].loc["energy above"] < 1


def test_equal_forecasts_have_no_factors():
    """Nothing changed, nothing to say."""
    again = Forecast(Detector.gallery("brine-hall"), ORDINARY, distance="10 kpc")
    assert len(product(FIRST, again)) == 0


def test_keys_that_are_left_out_are_changes_too():
    """A perfect efficiency and a perfect resolution, by leaving the keys out."""
    text = HALL.text.replace('efficiency = "94 %"\n', "", 1)
    text = text.replace("resolution = { stochastic = 0.041, constant = 0.009 }\n", "")
    second = Forecast(Detector.parse(text), ORDINARY, distance="10 kpc")
    table = product(FIRST, second)
    assert set(table.index) == {"response.efficiency", "response.resolution"}
    assert table.loc["response.efficiency", "to"] == "—"
    assert table.loc["response.efficiency", "factor"] == pytest.approx(1 / 0.94)


def test_another_medium_is_one_change():
    """Half a detector makes no sense, so all of it is one factor."""
    second = Forecast(TANK, ORDINARY, distance="10 kpc", conversion=Adiabatic("inverted"))
    assert list(product(FIRST, second).index) == ["detector", "conversion"]


def test_other_volumes_are_one_change():
    """Volumes of other names are changed as a whole, interactions by their keys."""
    text = HALL.text.replace('name = "sphere"', 'name = "core"').replace("12 kt", "6 kt")
    text += "\n[interactions]\ncarbon-12-excited = false\n"
    second = Forecast(
        Detector.parse(text),
        ORDINARY,
        distance="10 kpc",
        interactions={"proton-scattering": 1.1},
    )
    table = product(FIRST, second)
    assert list(table.index) == ["volume", "interactions", "interactions"]
    assert table["factor"].iloc[0] == pytest.approx(0.5)
    assert list(product(second, FIRST).index) == ["volume", "interactions", "interactions"]


def test_tables_beside_the_files_come_along(tmp_path):
    """An efficiency in a table of one file is known on the way from the other."""
    (tmp_path / "eff.csv").write_text("energy_mev,efficiency\n0.2,0.3\n3,0.9\n")
    text = HALL.text.replace('"94 %"', '{ file = "eff.csv", beyond = "hold" }', 1)
    second = Forecast(Detector.parse(text, folder=str(tmp_path)), ORDINARY, distance="10 kpc")
    assert list(product(FIRST, second).index) == ["response.efficiency"]
    assert list(product(second, FIRST).index) == ["response.efficiency"]
    third = Forecast(
        Detector.parse(text.replace("0.25 MeV", "0.5 MeV"), folder=str(tmp_path)),
        ORDINARY,
        distance="10 kpc",
    )
    # the table is needed after another key has changed, and the folder is gone by then
    (tmp_path / "eff.csv").unlink()
    assert list(product(FIRST, third).index) == ["response.threshold", "response.efficiency"]


def test_nothing_has_no_factors():
    """A forecast that counts nothing is refused in a sentence."""
    nothing = FIRST.within(energy_above="199 MeV")
    off = dict.fromkeys(FIRST.keys, False)
    nothing = Forecast(HALL, ORDINARY, distance="10 kpc", interactions=off)
    with pytest.raises(InputError, match="counts nothing"):
        FIRST.compare(nothing)
