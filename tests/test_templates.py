"""Files to begin with: valid, complete, and so are their alternatives."""

from __future__ import annotations

import re

import pytest

from tenkpc import Burst, Detector, Forecast, data, interactions, templates
from tenkpc.detector.detector_file import BackgroundKeys, DetectorKeys, UncertaintyKeys, VolumeKeys
from tenkpc.detector.media import MEDIA
from tenkpc.detector.own_reactions import InteractionKeys, OwnNucleusKeys
from tenkpc.detector.response_file import ResponseKeys, YieldKeys
from tenkpc.source.burst_file import (
    CoreKeys,
    IntegratedKeys,
    LongCoolingKeys,
    NeutronStarKeys,
    PeakKeys,
    TwoPhaseKeys,
)

DETECTORS = {medium: templates.detector(medium) for medium in templates.MEDIA}
BURST = templates.burst()
EVERY = pytest.mark.parametrize("medium", templates.MEDIA)
TABLES = {
    "light.csv": "kinetic_mev,visible_mev\n1,0.2\n10,5\n",
    "recoils.csv": "recoil_kev,visible_kev\n1,0.2\n10,3\n",
    "yield.csv": "recoil_kev,quanta_per_kev\n1,6\n10,4\n",
    "efficiency.csv": "energy_mev,efficiency\n0.3,0.5\n20,0.9\n",
    "shape.csv": "energy_mev,density\n0.0005,1\n15,0\n",
}
# keys that an alternative needs beside it
NEEDS = {"formula": ("density",), "mass_fractions": ("density",)}
SHAPES = {
    "constant": ("from", "to"),
    "gaussian": ("mean", "width"),
    "power": ("index", "from", "to"),
    "table": ("file",),
}
# keys that take one another's place
EITHER = ({"formula", "mass_fractions", "material"}, {"birks", "quenching"})


@EVERY
def test_they_make_a_forecast(medium):
    """Both files as they are, together."""
    made = Forecast(Detector.parse(DETECTORS[medium]), Burst.parse(BURST), distance="10 kpc")
    assert made.total > 5
    assert made.burst.summary().warnings == ()
    assert made.detector.medium == medium


def test_every_medium_has_one():
    """What a detector may see by, and what there are files for."""
    assert set(templates.MEDIA) == set(MEDIA)


@pytest.mark.parametrize(
    ("texts", "models"),
    [
        (
            DETECTORS.values(),
            (
                DetectorKeys,
                VolumeKeys,
                ResponseKeys,
                BackgroundKeys,
                UncertaintyKeys,
                YieldKeys,
                InteractionKeys,
                OwnNucleusKeys,
            ),
        ),
        (
            [BURST],
            (PeakKeys, CoreKeys, TwoPhaseKeys, LongCoolingKeys, IntegratedKeys, NeutronStarKeys),
        ),
    ],
    ids=["detector", "burst"],
)
def test_every_key_is_there(texts, models):
    """A key that a file may have stands in one to begin with, as a key or a table."""
    for model in models:
        for name, field in model.model_fields.items():
            key = re.escape(field.alias or name)
            pattern = rf"(^|\s|\[|\{{){key}( =|\]|\s)"
            assert any(re.search(pattern, text) for text in texts), (model.__name__, key)


@EVERY
def test_every_key_of_a_medium_is_in_its_file(medium):
    """Keys that only some media have stand in the files of those, and in no others."""
    for key in frozenset().union(*(each.keys for each in MEDIA.values())):
        there = re.search(rf"^(#: )?{key} = ", DETECTORS[medium].split("[[background]]")[0], re.M)
        assert bool(there) == (key in MEDIA[medium].keys), key


def alternatives(text):
    """Every alternative of a file on a line of its own: key and value."""
    return re.findall(r"^#: (\S+) = (.*)$", text, re.MULTILINE)


def with_alternative(text, key, value):
    """Put an alternative in its place, with what it needs beside it."""
    given = dict(alternatives(text))
    shape = re.match(r'"(\w+)"', value)[1] if key == "shape" else ""
    needed = [*NEEDS.get(key, ()), *SHAPES.get(shape, ())]
    beside = [f"{k} = {given.get(k, '')}" for k in needed if k in given]
    gone = {key}.union(*(keys for keys in EITHER if key in keys))
    gone |= {"mean"} if shape not in ("", "gaussian") else set()
    lines = [key + " = " + value, *beside]
    for name in gone:
        text = re.sub(rf"^{name} = .*\n", "", text, count=1, flags=re.MULTILINE)
    if key == "quenching":
        text = re.sub(r"^lindhard_k.*\n", "", text, flags=re.MULTILINE)
    place = f"#: {key} = {value}"
    return text.replace(place, "\n".join(lines))


@EVERY
def test_alternatives_of_the_detector_are_valid(medium, tmp_path):
    """Each in place of what it replaces makes a detector; tables it names are given."""
    text = DETECTORS[medium]
    for name, content in TABLES.items():
        (tmp_path / name).write_text(content)
    text = text.replace("light.csv", "recoils.csv") if medium == "recoil" else text
    tried = 0
    for key, value in alternatives(text):
        if key not in ("density", "width", "index", "from", "to", "file"):
            Detector.parse(with_alternative(text, key, value), folder=str(tmp_path))
            tried += 1
    assert tried >= 5


def test_own_reactions_of_the_detector_are_valid(tmp_path):
    """The block of reactions of one's own, with a table and a nucleus beside it."""
    (tmp_path / "sigma.csv").write_text("E,xs\n6,0.1\n20,8\n60,90\n")
    strange = data.text("nuclei/argon.toml").replace('stands_for = "Ar"', 'stands_for = "Ne"')
    for key in interactions.KEYS:
        strange = strange.replace(f'"{key}"', f'"own-{key}"')
        strange = strange.replace(f"reactions.{key}", f"reactions.own-{key}")
    (tmp_path / "nucleus.toml").write_text(strange)
    made = Detector.parse(DETECTORS["scintillator"].replace("#+ ", ""), folder=str(tmp_path))
    assert made.own[0].key == "my-reaction"
    assert len(made.own) == 4


def test_alternatives_of_the_burst_are_valid():
    """The cut and two more forms beside the core; the integrated form alone, both spectra."""
    assert len(Burst.parse(BURST.replace("#: ", "")).components) == 4
    lines = [line[3:] for line in BURST.splitlines() if line.startswith("#! ")]
    alone = 'title = "x"\n' + "\n".join(lines)
    assert Burst.parse(alone).time_integrated
    thermal = re.sub(r"^(mean_energy|pinching) .*\n", "", alone, flags=re.MULTILINE)
    thermal = re.sub(r"^# (temperature|degeneracy)", r"\1", thermal, flags=re.MULTILINE)
    assert Burst.parse(thermal).time_integrated
