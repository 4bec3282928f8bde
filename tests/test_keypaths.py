"""Key paths: their lines in all the ways TOML can be written, and changes along them."""

from __future__ import annotations

import tomllib

import pytest

from tenkpc.errors import FileError
from tenkpc.keypaths import as_text, changed, dotted, line_of

TEXT = '''title = "x"
about = """
title = "not this one"
"""
points = [
  ["1 MeV", 0.2], # ] not this one
  ["3 MeV", 0.9],
]

[[volume]]
name = "left"
mass = "1 kt"

[[volume]]
name = "right"
"mass" = "2 kt"

  [volume.response]
  threshold = { value = "5 MeV", of = "total" }

[response]
resolution.stochastic = 0.1
'other key' = 1
'''


@pytest.mark.parametrize(
    ("path", "line"),
    [
        (("title",), 1),
        (("about",), 2),
        (("points",), 5),
        (("points", 1, 0), 5),
        (("volume", 0), 10),
        (("volume", 0, "mass"), 12),
        (("volume", 1, "mass"), 16),
        (("volume", 1, "response", "threshold", "of"), 19),
        (("volume", 1, "density"), 14),
        (("response", "resolution", "stochastic"), 22),
        (("response", "other key"), 23),
        (("response", "missing"), 21),
        (("nowhere",), 1),
    ],
)
def test_lines_of_key_paths(path, line):
    """The line of a key, or of the nearest table around it where it is missing."""
    assert line_of(TEXT, path) == line


def test_elements_of_arrays_are_printed_by_name():
    """A volume goes by its name, and by its number, from one, where it has none."""
    document = tomllib.loads(TEXT)
    assert dotted(("volume", 1, "mass"), document) == "volume.right.mass"
    assert dotted(("points", 0), document) == "points.1"


@pytest.mark.parametrize("value", ["8 MeV", 3, 2.5, True, [1, "a"], {"a": 1, "b c": "x"}, 'q"q'])
def test_values_written_as_toml_read_back_the_same(value):
    """Text made of a value is TOML for that value."""
    assert tomllib.loads(f"v = {as_text(value)}")["v"] == value


def test_changes_leave_the_original_alone():
    """Values change along a path, by name in arrays, in a copy."""
    document = tomllib.loads(TEXT)
    made = changed(document, [("volume.right.mass", '"3 kt"'), ("response.new.key", "1")], "x")
    assert made["volume"][1]["mass"] == "3 kt"
    assert made["response"]["new"] == {"key": 1}
    assert document["volume"][1]["mass"] == "2 kt"


@pytest.mark.parametrize(
    ("path", "message"),
    [("volume.rigth.mass", "did you mean 'right'"), ("title.x", "not a table|no table")],
)
def test_paths_that_lead_nowhere_are_refused(path, message):
    """The message names the part that is wrong and the nearest name."""
    with pytest.raises(FileError, match=message):
        changed(tomllib.loads(TEXT), [(path, "1")], "x")
