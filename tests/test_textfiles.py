"""Text files: every mistake in one go, in plain words, on the right line."""

from __future__ import annotations

import contextlib
from typing import Annotated, Literal

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pydantic import Field

from tenkpc import textfiles
from tenkpc.errors import FileError, InputError
from tenkpc.fields import Energy, Fraction, InUnit, Mass
from tenkpc.textfiles import Strict, parse


class Round(Strict):
    """One kind of part."""

    kind: Literal["round"]
    radius: Annotated[float, InUnit("m", "3 m", above=0.0)]


class Square(Strict):
    """Another kind of part."""

    kind: Literal["square"]
    side: Annotated[float, InUnit("m", "3 m")]

    @classmethod
    def cross_rules(cls, raw):
        """Check a rule between keys."""
        if raw.get("side") == raw.get("kind"):
            yield ("side",), "cannot be its kind"


class Thing(Strict):
    """A whole file."""

    name: str
    mass: Mass
    share: Fraction = 1.0
    threshold: Energy = 0.0
    shape: Literal["flat", "tall"] = "flat"
    count: Annotated[int, Field(ge=1)] = 1
    part: tuple[Annotated[Round | Square, Field(discriminator="kind")], ...] = ()


WRONG = """name = 3
mass = "32 kpc"
shar = 0.5
threshold = 5
shape = "flatt"
count = 0

[[part]]
kind = "rond"

[[part]]
kind = "round"
radius = "-1 m"
side = "2 m"

[[part]]
kind = "square"
side = "square"
"""


def problems(text):
    """Problems of a text as (line, path, message)."""
    with pytest.raises(FileError) as caught:
        parse(text, Thing, "thing.toml")
    return [(p.line, p.path, p.message) for p in caught.value.problems]


@pytest.mark.parametrize(
    ("line", "path", "words"),
    [
        (1, "name", "expected a text in quotes; found 3"),
        (2, "mass", "is a length; expected a mass"),
        (3, "shar", "did you mean 'share'"),
        (4, "threshold", 'such as "5 MeV"'),
        (5, "shape", "did you mean 'flat'"),
        (6, "count", "at least 1"),
        (9, "part.1.kind", "expected one of round, square"),
        (13, "part.2.radius", "expected more than 0 m"),
        (14, "part.2.side", "unknown key; known here: kind, radius"),
        (18, "part.3.side", "cannot be its kind"),
    ],
)
def test_every_mistake_is_reported_at_once(line, path, words):
    """Ten mistakes of ten sorts, each with its line, key path and a remedy."""
    found = {(number, where): message for number, where, message in problems(WRONG)}
    assert words in found[line, path]


def test_nothing_else_is_reported():
    """Ten mistakes are eleven lines: the misspelt length of a square also lacks a unit."""
    assert len(problems(WRONG)) == 11


def test_a_missing_key_is_reported_where_it_should_stand():
    """A required key that is missing belongs to its table."""
    assert (1, "mass", "required key is missing") in problems('name = "x"\n[[part]]\nkind="round"')
    assert (2, "part.1.radius", textfiles.MISSING) in problems(
        'name = "x"\n[[part]]\nkind = "round"'
    )


@pytest.mark.parametrize(
    ("text", "line"),
    [("name = ", 1), ("name = 'a'\nname = 'b'\n", 2), ("\n\n[x\n", 3), ("a = 1\nb = 0b2", 2)],
)
def test_what_is_not_toml_is_said_with_its_line(text, line):
    """Syntax errors, duplicated keys included, carry their line and no traceback."""
    found = problems(text)
    assert len(found) == 1
    assert "not valid TOML" in found[0][2]
    assert abs(found[0][0] - line) <= 1


def test_the_message_can_be_clicked():
    """Lines begin with file:line: so that editors find the place, with the line quoted below."""
    with pytest.raises(FileError) as caught:
        parse(WRONG, Thing, "thing.toml")
    lines = str(caught.value).splitlines()
    assert lines[0] == "11 problems in thing.toml"
    assert lines[3].startswith("thing.toml:2: mass: ")
    assert lines[4] == '    mass = "32 kpc"'


def test_a_good_file_gives_floats():
    """Units are gone once a file is read."""
    made = parse('name = "x"\nmass = "2 kt"\nshare = "40 %"\nthreshold = "5 keV"', Thing, "x")
    assert (made.mass, made.share, made.threshold) == pytest.approx((2e6, 0.4, 0.005))


def test_a_schema_can_be_made():
    """Editors can complete: quantities are texts with an example."""
    schema = Thing.model_json_schema()
    assert schema["properties"]["mass"]["type"] == "string"
    assert schema["additionalProperties"] is False


@given(st.text(max_size=200))
def test_no_text_brings_it_down(text):
    """Whatever is in the file, the answer is a value or a FileError."""
    with contextlib.suppress(FileError):
        assert isinstance(parse(text, Thing, "x"), Thing)


def test_files_that_cannot_be_read(tmp_path):
    """Missing, a folder, not text, far too long: one sentence each."""
    (tmp_path / "tank.toml").write_text("x")
    (tmp_path / "binary.toml").write_bytes(b"\xff\xfe\x00")
    (tmp_path / "noise.toml").write_bytes(b"a" * (textfiles.MOST_BYTES + 1))
    for name, words in (
        ("tnk.toml", "did you mean 'tank.toml'"),
        ("", "folder"),
        ("binary.toml", "UTF-8"),
        ("noise.toml", "longer than"),
    ):
        with pytest.raises(InputError, match=words):
            textfiles.read_text(tmp_path / name)


def test_columns_are_read_by_name():
    """Comments and further columns do not matter; the order of the headings does not either."""
    text = "# read off a plot\nefficiency, energy_mev, note\n0.2, 1, a\n0.9, 3, b # c\n"
    columns = textfiles.read_columns(text, ("energy_mev", "efficiency"), "e.csv")
    assert columns == {"energy_mev": [1.0, 3.0], "efficiency": [0.2, 0.9]}


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("energy_mev,efficiency\n1,x\n2,nan\n3\n", "e.csv:4: efficiency"),
        ("energy,efficiency\n1,0.2\n", "e.csv:1: expected a line of headings"),
        ("", "empty"),
    ],
)
def test_columns_that_are_wrong_are_refused(text, words):
    """Every cell that is no number is named with its line."""
    with pytest.raises(FileError, match=words):
        textfiles.read_columns(text, ("energy_mev", "efficiency"), "e.csv")
