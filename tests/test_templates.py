"""Files to begin with: valid, complete, and so are their alternatives."""

from __future__ import annotations

import re

import pytest

from tenkpc import Burst, Detector, Forecast, templates
from tenkpc.detector.detector_file import BackgroundKeys, DetectorKeys, UncertaintyKeys, VolumeKeys
from tenkpc.detector.response_file import ResponseKeys
from tenkpc.source.burst_file import CoreKeys, IntegratedKeys, PeakKeys, TwoPhaseKeys

DETECTOR, BURST = templates.text("detector"), templates.text("burst")


def test_they_make_a_forecast():
    """Both files as they are, together."""
    made = Forecast(Detector.parse(DETECTOR), Burst.parse(BURST), distance="10 kpc")
    assert made.total > 100
    assert made.burst.summary().warnings == ()


@pytest.mark.parametrize(
    ("text", "models"),
    [
        (DETECTOR, (DetectorKeys, VolumeKeys, ResponseKeys, BackgroundKeys, UncertaintyKeys)),
        (BURST, (PeakKeys, CoreKeys, TwoPhaseKeys, IntegratedKeys)),
    ],
    ids=["detector", "burst"],
)
def test_every_key_is_there(text, models):
    """A key that a file may have stands in the file to begin with, as a key or a table."""
    for model in models:
        for name, field in model.model_fields.items():
            key = re.escape(field.alias or name)
            assert re.search(rf"(^|\s|\[|\{{){key}( =|\]|\s)", text), (model.__name__, key)


def detector_with(*replacements):
    """Take alternatives, which are lines that begin with the sign, for the lines they replace."""
    text = DETECTOR
    for old, new in replacements:
        assert re.search(old, text, re.MULTILINE), old
        text = re.sub(old, new, text, count=1, flags=re.MULTILINE)
    return Detector.parse(text)


def alternatives():
    """Every alternative of the detector file on a line of its own."""
    return re.findall(r"^#: (\S+) = (.*)$", DETECTOR, re.MULTILINE)


def test_alternatives_of_the_detector_are_valid(tmp_path):
    """Each in place of what it replaces makes a detector; tables it names are given."""
    (tmp_path / "light.csv").write_text("kinetic_mev,visible_mev\n1,0.2\n10,5\n")
    (tmp_path / "efficiency.csv").write_text("energy_mev,efficiency\n0.3,0.5\n20,0.9\n")
    (tmp_path / "shape.csv").write_text("energy_mev,density\n0.2,1\n5,0\n")
    needs = {
        "formula": 'density = "0.87 g/cm^3"\n',
        "mass_fractions": 'density = "0.87 g/cm^3"\n',
        "constant": 'from = "0.5 MeV"\nto = "3 MeV"\n',
        "gaussian": 'mean = "1.1 MeV"\nwidth = "0.4 MeV"\n',
        "power": 'index = -2.0\nfrom = "0.5 MeV"\nto = "3 MeV"\n',
        "table": 'file = "shape.csv"\n',
    }
    replaced = {"formula": "material", "mass_fractions": "material", "quenching": "birks"}
    tried = 0
    for key, value in alternatives():
        if key in ("density", "width", "index", "from", "to", "file"):
            continue
        line = f"{key} = {value}\n"
        shape = re.match(r'"(\w+)"', value)
        line += needs.get(key, "") + (needs.get(shape[1], "") if key == "shape" else "")
        text = DETECTOR
        old = replaced.get(key, key)
        text = re.sub(rf"^{old} = .*\n(?:mean = .*\n)?", "", text, count=1, flags=re.MULTILINE)
        text = re.sub(rf"^#: {re.escape(key)} = {re.escape(value)}$", line, text, flags=re.M)
        if "kinetic" in value and key == "threshold":
            text = text.replace('"scintillator" ', '"cherenkov" ').replace('"visible"', '"total"')
            text = re.sub(r"^birks.*\n", "", text, flags=re.MULTILINE)
        Detector.parse(text, folder=str(tmp_path))
        tried += 1
    assert tried >= 12


def test_alternatives_of_the_burst_are_valid():
    """The cut and the second form beside the core; the integrated form alone, both spectra."""
    assert len(Burst.parse(BURST.replace("#: ", "")).components) == 3
    lines = [line[3:] for line in BURST.splitlines() if line.startswith("#! ")]
    alone = 'title = "x"\n' + "\n".join(lines)
    assert Burst.parse(alone).time_integrated
    thermal = re.sub(r"^(mean_energy|pinching) .*\n", "", alone, flags=re.MULTILINE)
    thermal = re.sub(r"^# (temperature|degeneracy)", r"\1", thermal, flags=re.MULTILINE)
    assert Burst.parse(thermal).time_integrated
