"""JSON: a forecast can be made again, on another machine, and differences are said."""

from __future__ import annotations

import json

import pytest

from tenkpc import (
    Adiabatic,
    Burst,
    Detector,
    Equilibrated,
    Forecast,
    Survival,
    Unconverted,
    data,
)
from tenkpc.errors import InputError

HALL = Detector.gallery("brine-hall")
ORDINARY = Burst.preset("ordinary-collapse")


@pytest.mark.parametrize(
    "conversion",
    [
        Adiabatic("inverted"),
        Equilibrated(),
        Survival(nu_e=0.3, anti_nu_e=0.61),
        Unconverted(),
    ],
    ids=lambda c: type(c).__name__,
)
def test_a_forecast_comes_back_as_it_was(conversion):
    """Every input and number survives the way through JSON: 1e-10, the promise of one version."""
    first = Forecast(
        HALL.replace({"response.threshold": "0.6 MeV"}),
        ORDINARY.replace({"core.rise_time": "45 ms"}),
        distance="3.7 kpc",
        conversion=conversion,
        interactions={"carbon-12-excited": 1.2, "electron-scattering": "tree"},
        background_time="7 s",
    ).within(time=("10 ms", "2 s"), energy_above="0.9 MeV")
    again = Forecast.from_json(first.to_json())
    assert again.total == pytest.approx(first.total, rel=1e-10)
    assert again.background_events == pytest.approx(first.background_events, rel=1e-12)
    assert again.to_json() == first.to_json()
    assert len(first.compare(again)) == 0


def test_tables_travel_inside(tmp_path):
    """Tables beside the file are inside the record: it is read where they are not."""
    (tmp_path / "light.csv").write_text("kinetic_mev,visible_mev\n0.5,0.1\n1,0.25\n60,50\n")
    text = HALL.text.replace('birks = "0.0104 cm/MeV"', 'quenching = { file = "light.csv" }')
    first = Forecast(Detector.parse(text, folder=str(tmp_path)), ORDINARY, distance="10 kpc")
    written = first.to_json()
    (tmp_path / "light.csv").unlink()
    assert Forecast.from_json(written).total == pytest.approx(first.total, rel=1e-10)


def test_integrated_bursts_made_in_python_travel_too():
    """A burst without a file is written as one."""
    species = ("nu_e", "anti_nu_e", "nu_x")
    burst = Burst.integrated(
        energy=dict.fromkeys(species, "4e52 erg"),
        temperature=dict.fromkeys(species, "4 MeV"),
        degeneracy=dict.fromkeys(species, 0.5),
    )
    first = Forecast(HALL, burst, distance="10 kpc")
    assert Forecast.from_json(first.to_json()).total == pytest.approx(first.total, rel=1e-10)


@pytest.mark.parametrize(
    ("key", "value", "words"),
    [
        ("tenkpc_version", "0.0.1", "version 0.0.1, now"),
        ("data", "0" * 12, "data files 000000000000, now"),
        ("total", 1.0, "total 1, now"),
    ],
)
def test_differences_are_said(key, value, words):
    """Another version, other data, another total: a warning names each."""
    record = json.loads(Forecast(HALL, ORDINARY, distance="10 kpc").to_json())
    record[key] = value
    with pytest.warns(UserWarning, match=words):
        Forecast.from_json(json.dumps(record))


@pytest.mark.parametrize("text", ["", "[]", "{}", '{"inputs": {}, "total": 1}', "[1,"])
def test_other_texts_are_refused(text):
    """What is no record ends in a sentence."""
    with pytest.raises(InputError, match="expected what to_json wrote"):
        Forecast.from_json(text)


def test_the_fingerprint_changes_with_the_data(monkeypatch):
    """Twelve digits over the contents of all data files."""
    first = data.fingerprint()
    assert len(first) == 12
    data.fingerprint.cache_clear()
    monkeypatch.setattr(data, "_contents", lambda folder, path: iter([("/x.toml", b"y = 1")]))
    assert data.fingerprint() != first
    data.fingerprint.cache_clear()
