"""Burst files: every mistake is reported, all in one run, with line, path and nearest name."""

from pathlib import Path

import pytest

from tenkpc.errors import FileError
from tenkpc.source.burst import Burst
from tenkpc.source.burst_file import BurstKeys

PEAK = """
title = "peak only"
end = "1 s"

[[component]]
name = "peak"
kind = "peak"
peak_luminosity = "3.6e53 erg/s"
peak_time = "6 ms"
rise_time = "3 ms"
fall_time = "6 ms"
mean_energy = "11 MeV"
pinching = 3.5
"""
ACCRETION = (
    'accretion_luminosity_each = { nu_e = "5e52 erg/s", anti_nu_e = "5e52 erg/s", '
    'nu_x_sum_of_four = "9e52 erg/s" }'
)
CORE = f"""
[[component]]
name = "core"
kind = "core"
rise_time = "30 ms"
{ACCRETION}
mean_energy = {{ nu_e = "10 MeV", anti_nu_e = "12 MeV", nu_x = "14 MeV", anti_nu_x = "14.5 MeV" }}
pinching = {{ nu_e = 3.0, anti_nu_e = 3.5, nu_x = 2.3 }}
"""
INTEGRATED = """
[[component]]
name = "all"
kind = "integrated"
energy_each = { nu_e = "5e52 erg", anti_nu_e = "5e52 erg", nu_x = "5e52 erg" }
temperature = { nu_e = "4 MeV", anti_nu_e = "4 MeV", nu_x = "5 MeV" }
degeneracy = { nu_e = 0.0, anti_nu_e = 0.0, nu_x = 0.0 }
"""


def problems(text: str) -> dict[str, tuple[int, str]]:
    """Line and message of every problem by key path."""
    with pytest.raises(FileError) as caught:
        Burst.parse(text, origin="mine.toml")
    return {p.path: (p.line, p.message) for p in caught.value.problems}


@pytest.mark.parametrize("text", [PEAK, PEAK + CORE, 'title = "t"\n' + INTEGRATED])
def test_good_files(text: str, tmp_path: Path) -> None:
    """A file is read from disk as from its text, and its text reads back to the same burst."""
    path = tmp_path / "mine.toml"
    path.write_text(text, encoding="utf-8")
    burst = Burst.load(path)
    assert burst == Burst.parse(text)
    assert burst.text == text
    assert burst.origin == str(path)


def test_core_without_cooling() -> None:
    """A core may go on accreting: what is left out stays as it was at bounce."""
    core = Burst.parse(PEAK + CORE).components[1]
    assert core.mean_energy([0.9])[:, 0] == pytest.approx((10, 12, 14, 14.5))
    luminosity = core.luminosity_mev_s([0.9])[:, 0]
    assert luminosity[2] / luminosity[0] == pytest.approx(2.25 / 5)


def test_every_mistake_at_once() -> None:
    """Seven mistakes in one file are reported together, each on its line."""
    text = (
        PEAK.replace('end = "1 s"', "end = 1")
        .replace('kind = "peak"', 'kind = "peak"\nluminositi = "1e52 erg/s"')
        .replace('"3.6e53 erg/s"', "3.6e53")
        .replace('"6 ms"\nrise', '"6 MeV"\nrise')
        .replace("pinching = 3.5", "pinching = -1.5")
    ) + CORE.replace('rise_time = "30 ms"\n', "").replace("nu_e = 3.0, ", "")
    found = problems(text)
    lines = text.splitlines()
    assert set(found) == {
        "end",
        "component.peak.luminositi",
        "component.peak.peak_luminosity",
        "component.peak.peak_time",
        "component.peak.pinching",
        "component.core.rise_time",
        "component.core.pinching.nu_e",
    }
    assert lines[found["component.peak.peak_time"][0] - 1].startswith("peak_time")
    assert lines[found["component.core.pinching.nu_e"][0] - 1].startswith("pinching = { anti")
    assert "did you mean 'peak_luminosity'" in found["component.peak.luminositi"][1]
    assert "required key is missing" in found["component.core.rise_time"][1]
    assert "more than -1" in found["component.peak.pinching"][1]


def test_bare_luminosity_is_refused() -> None:
    """A luminosity without a unit is refused, with an example."""
    message = problems(PEAK.replace('"3.6e53 erg/s"', "3.6e53"))["component.peak.peak_luminosity"][
        1
    ]
    assert "4e52 erg/s" in message


def test_mixing_natures_is_refused() -> None:
    """Integrated components beside ones with a time profile are refused in a sentence."""
    message = problems(PEAK + INTEGRATED)["component.all.kind"][1]
    assert message == "a burst is integrated over time in all its components or in none"


@pytest.mark.parametrize(
    ("text", "path", "words"),
    [
        (
            PEAK + PEAK[PEAK.index("[[") :],
            "component.peak.name",
            "two components are called 'peak'",
        ),
        (
            PEAK.replace('kind = "peak"', 'kind = "peek"'),
            "component.peak.kind",
            "did you mean 'peak'",
        ),
        (PEAK.replace('kind = "peak"\n', ""), "component.peak.kind", "missing"),
        ('title = "nothing"\n', "component", "missing"),
        ('title = "nothing"\ncomponent = []\n', "component", "at least one"),
        (PEAK.replace('end = "1 s"', 'end = "-1 s"'), "end", "must be later than start"),
        (
            PEAK + CORE + 'accretion_time = "0.4 s"\n',
            "component.core.accretion_sharpness",
            "is missing",
        ),
        (
            PEAK + CORE + 'accretion_time = "0.4 s"\naccretion_sharpness = 2.0\n',
            "component.core.accretion_time",
            "passes over into cooling",
        ),
        (PEAK + CORE + 'cooling_time = "9 s"\n', "component.core.cooling_power", "is missing"),
        (PEAK + CORE + 'cut_at = "0.5 s"\n', "component.core.cut_fall_time", "is missing"),
        (
            PEAK + CORE + "accretion_growth = { nu_e = 1.0, anti_nu_e = 1.0, nu_x = 1.0 }\n",
            "component.core.accretion_growth",
            "needs growth_time",
        ),
        (
            PEAK + CORE.replace("nu_x_sum", 'nu_x = "1e52 erg/s", nu_x_sum'),
            "component.core.accretion_luminosity_each.nu_x",
            "give only one of them",
        ),
        (
            PEAK + CORE.replace("nu_x_sum_of_four", "anti_nu_x"),
            "component.core.accretion_luminosity_each",
            "nu_x is missing",
        ),
        (
            'title = "t"\n' + INTEGRATED.replace("degeneracy", "# degeneracy"),
            "component.all.degeneracy",
            "is missing",
        ),
        (
            'title = "t"\n'
            + INTEGRATED
            + "pinching = { nu_e = 2.0, anti_nu_e = 2.0, nu_x = 2.0 }\n",
            "component.all.temperature",
            "in one way only",
        ),
    ],
)
def test_rules(text: str, path: str, words: str) -> None:
    """Keys that need or exclude one another are checked, and the message says which."""
    found = problems(text)
    assert path in found
    assert words in found[path][1]


def test_json_schema() -> None:
    """A schema for editors can be made, and knows all kinds of components."""
    schema = str(BurstKeys.model_json_schema())
    assert all(word in schema for word in ("peak_luminosity", "cooling_power", "energy_each"))


def test_missing_file(tmp_path: Path) -> None:
    """A file that is not there is named."""
    with pytest.raises(FileError, match=r"nothing\.toml"):
        Burst.load(tmp_path / "nothing.toml")
