"""The README: its example gives its number, its detector file is one, its commands are there."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from tenkpc import Detector, Forecast

ROOT = Path(__file__).parents[1]
README = (ROOT / "README.md").read_text(encoding="utf-8")


def block(language):
    """Give the first fenced block of a language."""
    return re.search(rf"```{language}\n(.*?)```", README, re.DOTALL)[1]


def test_the_example_ends_in_its_number():
    """The last line's comment is what the last line gives."""
    names = {}
    exec(block("python"), names)
    stated = int(re.search(r"round\(forecast\.total\)\s+# (\d+)", README)[1])
    assert isinstance(names["forecast"], Forecast)
    assert round(names["forecast"].total) == stated


def test_the_detector_file_is_one():
    """The file that newcomers copy is read without a complaint."""
    assert Detector.parse(block("toml")).mass_kg == pytest.approx(2.5e7)


def test_both_commands_are_there_and_the_machine_runs_the_second():
    """The set-up commands stand on lines of their own; the check runs the very test command."""
    commands = [line.strip() for line in README.splitlines() if "python3 -m venv" in line]
    assert len(commands) == 2
    assert commands[0].endswith('tenkpc forecast brine-hall --distance "10 kpc"')
    script = ROOT / ".ci" / "run"
    if script.exists():
        assert commands[1] in script.read_text(encoding="utf-8")
