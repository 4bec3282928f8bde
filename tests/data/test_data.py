"""Data files: each says where its numbers are from, and the guide to them is complete."""

from __future__ import annotations

import tomllib
from importlib.resources import files

import pytest

from tenkpc import data
from tenkpc.errors import ComputationError

ROOT = files("tenkpc.data")
FOLDERS = ("cross_sections", "galaxy", "materials", "measurements", "nuclei", "stopping")
FILES = ["mixing.toml", *(f"{d}/{n}.toml" for d in FOLDERS for n in data.names(d))]


@pytest.mark.parametrize("file", FILES)
def test_every_file_has_its_provenance(file):
    """Source, columns, validity, uncertainty, how obtained, version and date, none empty."""
    provenance = data.document(file)["provenance"]
    assert all(str(provenance[key]).strip() for key in data.PROVENANCE)


@pytest.mark.parametrize("name", data.names("bursts"))
def test_presets_say_whose_they_are(name):
    """Presets are burst files, so the same stands in comments at their top."""
    text = data.text(f"bursts/{name}.toml")
    comments = [line for line in text.splitlines() if line.startswith("#")]
    for key in data.PROVENANCE:
        assert any(line.startswith(f"# {key}:") for line in comments), key


def test_a_file_without_provenance_is_refused(monkeypatch):
    """A number of unknown origin does not get in."""
    monkeypatch.setattr(data, "text", lambda relative: "x = 1\n[provenance]\nsource = ''\n")
    data.document.cache_clear()
    with pytest.raises(ComputationError, match="lacks provenance: source, columns"):
        data.document("nothing.toml")
    data.document.cache_clear()


def test_the_guide_has_a_section_for_every_file():
    """data/README.md and the folder hold the same files."""
    guide = ROOT.joinpath("README.md").read_text(encoding="utf-8")
    sections = {line.removeprefix("## ") for line in guide.splitlines() if line.startswith("## ")}
    bursts = {f"bursts/{name}.toml" for name in data.names("bursts")}
    assert sections == {*FILES, *bursts}


def test_all_files_are_toml():
    """Presets too."""
    for name in data.names("bursts"):
        assert tomllib.loads(data.text(f"bursts/{name}.toml"))["title"]
