"""The shell: as a process where it matters, in process elsewhere."""

from __future__ import annotations

import json
import subprocess
import sys

import pytest
from click.testing import CliRunner

from tenkpc import Burst, Detector, Forecast
from tenkpc.cli import main

MISTAKES = """title = "eight"
[[volume]]
name = "tank"
mass = "25 kpc"
formula = "H20"
[response]
medium = "cherenkof"
treshold = "5 MeV"
resolution = { stochastic = "wide" }
efficiency = 95
live_fraction = -0.1
[interactions]
inverse-beta-decy = false
"""


def run(*words):
    """Run a command in process."""
    return CliRunner().invoke(main, [str(word) for word in words])


def as_process(*words, cwd):
    """Run a command as a process of its own."""
    command = [sys.executable, "-m", "tenkpc", *words]
    return subprocess.run(command, capture_output=True, text=True, cwd=cwd, check=False)


def test_the_main_job_as_a_process(tmp_path):
    """A number for a gallery detector, on stdout, from an empty folder, with code 0."""
    done = as_process("forecast", "mere-tank", "--distance", "10 kpc", cwd=tmp_path)
    assert done.returncode == 0
    assert done.stderr == ""
    assert "Mere Tank" in done.stdout
    assert list(tmp_path.iterdir()) == []


def test_mistakes_as_a_process(tmp_path):
    """Eight mistakes, eight lines on stderr, code 2, no traceback and no file."""
    (tmp_path / "tank.toml").write_text(MISTAKES)
    done = as_process("forecast", "tank.toml", "--out", "page.txt", cwd=tmp_path)
    assert done.returncode == 2
    assert done.stdout == ""
    assert done.stderr.startswith("8 problems in tank.toml")
    assert sum(line.startswith("tank.toml:") for line in done.stderr.splitlines()) == 8
    assert "Traceback" not in done.stderr
    assert [entry.name for entry in tmp_path.iterdir()] == ["tank.toml"]


def test_json_holds_the_numbers_of_python():
    """Options reach the forecast, and JSON has its very numbers."""
    words = ("--burst", "equipartition", "--distance", "3 kpc", "--conversion", "unconverted")
    record = json.loads(run("forecast", "mere-tank", *words, "--json").output)
    from tenkpc import Unconverted

    forecast = Forecast(
        Detector.gallery("mere-tank"),
        Burst.preset("equipartition"),
        distance="3 kpc",
        conversion=Unconverted(),
    )
    assert record["total"] == forecast.total
    assert record["counts"].keys() == set(forecast.keys)


@pytest.mark.parametrize("kind", ["burst", "detector"])
def test_new_writes_a_file_to_begin_with(tmp_path, kind):
    """The file is valid as it is, and never written over another."""
    path = tmp_path / "mine.toml"
    assert "tenkpc check" in run("new", kind, str(path)).output
    assert run("check", str(path)).exit_code == 0
    text = path.read_text(encoding="utf-8")
    path.write_text(text + "# mine")
    done = run("new", kind, str(path))
    assert done.exit_code == 2
    assert "left as it is" in done.output
    assert path.read_text(encoding="utf-8").endswith("# mine")


@pytest.mark.parametrize(("suffix", "words"), [("md", "| seen as |"), ("tex", r"\begin{tabular}")])
def test_pages_go_into_reports(tmp_path, suffix, words):
    """Markdown and LaTeX of the same page."""
    path = tmp_path / f"page.{suffix}"
    assert run("forecast", "brine-hall", "--out", str(path)).exit_code == 0
    assert words in path.read_text(encoding="utf-8")


def test_only_and_between_narrow_the_forecast():
    """Other interactions are switched off, and other times left out."""
    words = ("--only", "electron-scattering", "--between", "0 s", "1 s", "--json")
    record = json.loads(run("forecast", "mere-tank", *words).output)
    assert list(record["counts"]) == ["electron-scattering"]
    assert record["inputs"]["window_s"] == [0.0, 1.0]


@pytest.mark.parametrize("ending", ["txt", "html", "json", "csv"])
def test_results_go_where_they_are_sent(tmp_path, ending):
    """One whole file, of the kind that its ending says, and nothing on the screen."""
    path = tmp_path / f"result.{ending}"
    done = run("forecast", "mere-tank", "--out", path)
    assert (done.exit_code, done.output) == (0, "")
    assert [entry.name for entry in tmp_path.iterdir()] == [path.name]
    words = path.read_text()
    assert "inverse-beta-decay" in words


def test_a_csv_of_counts_reads_back(tmp_path):
    """Comments hold the inputs, the table the counts, units in no need of saying."""
    import pandas as pd

    path = tmp_path / "counts.csv"
    run("forecast", "mere-tank", "--out", path)
    frame = pd.read_csv(path, comment="#", index_col="interaction")
    forecast = Forecast(
        Detector.gallery("mere-tank"), Burst.preset("ordinary-collapse"), distance="10 kpc"
    )
    assert frame["counted"].sum() == pytest.approx(forecast.total)


@pytest.mark.parametrize(
    ("words", "message"),
    [
        (("forecast", "mere-tnk"), "did you mean 'mere-tank'"),
        (("forecast", "nowhere.toml"), "no such file"),
        (("forecast", "mere-tank", "--distance", "10"), "lacks its unit"),
        (("forecast", "mere-tank", "--distance", "10 s"), "is a time; expected a length"),
        (("forecast", "mere-tank", "--burst", "ordinry-collapse"), "did you mean 'ordinary"),
        (("forecast", "mere-tank", "--only", "x"), "no interaction is called 'x'"),
        (("forecast", "mere-tank", "--between", "1", "2"), "lacks its unit"),
        (("forecast", "mere-tank", "--out", "x.pdf"), "expected a name that ends in"),
        (("forecast", "mere-tank", "--out", "no/such/folder/x.txt"), "cannot write"),
        (("forecast", "mere-tank", "--conversion", "adiabtic"), "adiabatic"),
        (("forecst",), "forecast"),
        (("list", "stars"), "materials"),
        (("list", "materials", "mercury"), "no material is called"),
        (("check", "."), "folder"),
    ],
)
def test_what_cannot_be_done_ends_with_code_2_and_a_sentence(words, message):
    """Plain words, and never a traceback."""
    done = run(*words)
    assert done.exit_code == 2
    assert message in done.output
    assert "Traceback" not in done.output


@pytest.mark.parametrize("what", ["bursts", "detectors", "interactions", "materials"])
def test_every_list_and_every_entry_prints(what):
    """A line for each name, and a page for each that is as wide as a terminal."""
    listed = json.loads(run("list", what, "--json").output)
    assert run("list", what).output.count("\n") == len(listed)
    for name in listed:
        page = run("list", what, name)
        assert page.exit_code == 0
        assert max(map(len, page.output.splitlines())) <= 82
        assert json.loads(run("list", what, name, "--json").output)["name"] == name


def test_check_says_what_a_file_describes(tmp_path):
    """A good detector file is described, and so is a good burst file."""
    detector, burst = tmp_path / "d.toml", tmp_path / "b.toml"
    detector.write_text(Detector.gallery("mere-tank").text)
    burst.write_text(Burst.preset("ordinary-collapse").text)
    assert "free protons" in run("check", detector).output
    assert "mean energy" in run("check", burst).output
    assert json.loads(run("check", detector, "--json").output)["problems"] == 0


def test_help_names_every_command():
    """The first thing that a newcomer types."""
    output = run("--help").output
    assert all(name in output for name in ("check", "forecast", "list"))


def test_interactions_are_held_against_measurements():
    """The option belongs to interactions alone."""
    assert "pull" in run("list", "interactions", "--checks").output
    assert "karmen" in run("list", "interactions", "carbon-12-excited", "--checks").output
    done = run("list", "bursts", "--checks")
    assert done.exit_code == 2
    assert "only interactions" in done.output
