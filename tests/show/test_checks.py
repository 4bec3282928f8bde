"""Cross sections beside measurements: every one is listed, with our average and the pull."""

from __future__ import annotations

import json

import numpy as np
import pytest

from tenkpc import data
from tenkpc.errors import UnknownNameError
from tenkpc.show import checks

ALL = {check.name: check for check in checks.all_checks()}
# averages of independent slow calculations, in the unit of each measurement
SLOW = {
    "nitrogen-ground-state-lsnd": (9.199, 1e-3),
    "nitrogen-inclusive-lampf": (9.199 + 4.668, 1e-3),
    "iodine-bound-lampf": (2.66, 1e-2),  # there in 31 levels, which blur the border
    "iron-stopped-muon-karmen": (3.378 * 0.808, 1e-3),
    "stopped-pion-argon": (18.22, 5e-3),
    "stopped-pion-caesium-iodide": (187.34, 2e-3),
    "stopped-pion-germanium": (58.72, 2e-3),
    "level-two-kinds-karmen": (10.231, 1e-3),
    "level-line-karmen": (2.721, 1e-3),
    "stopped-muon-karmen": (23.500 + 22.671, 1e-3),
    "solar-ground-state-sno-plus": (8.223, 0.05),
}


def test_every_measurement_is_listed():
    """Each entry of each file in data/measurements is a check, and has its words."""
    names = set()
    for file in data.names("measurements"):
        if file not in checks.INPUTS:
            names |= set(data.document(f"measurements/{file}.toml")) - {"provenance"}
    assert set(ALL) == names
    assert len(names) >= 11


@pytest.mark.parametrize("name", SLOW)
def test_ours_is_the_average_of_the_slow_calculation(name):
    """Carbon at beams of stopped pions and with the Sun."""
    expected, within = SLOW[name]
    assert ALL[name].ours == pytest.approx(expected, rel=within)


def test_no_pull_is_large():
    """Nothing built in disagrees with a measurement by more than two and a half deviations.

    But lead, where theory and the one measurement are options; the largest of the others is the
    reactors' deficit, which is the spectra's.
    """
    pulls = {name: check.pull for name, check in ALL.items()}
    assert pulls.pop("lead-neutrons-coherent") == pytest.approx((1 - 0.29) / 0.17)
    assert max(np.abs(list(pulls.values()))) < 2.5
    assert max(pulls, key=lambda name: abs(pulls[name])) == "reactor-yield"


def test_spectra_are_normalised():
    """Weights of beams and of the Sun add up to one."""
    for name in set(checks.SPECTRA) - {"reactor mixture"}:
        _, weight = checks.SPECTRA[name]({})
        assert weight.sum() == pytest.approx(1, rel=1e-9)


def test_the_line_of_the_pion_is_where_it_is():
    """29.79 MeV from two-body kinematics."""
    assert pytest.approx(29.792, abs=1e-3) == checks.PION_LINE_MEV


def test_the_list_is_printed_and_narrowed():
    """By reaction, with value, error, ours and pull; JSON has the same numbers."""
    words = checks.as_text("carbon-12-excited")
    assert "ν + ¹²C → ν + ¹²C*" in words
    assert "level-line-karmen" in words
    assert "lsnd" not in words
    assert all(len(line) <= 78 for line in checks.as_text().splitlines())
    rows = json.loads(checks.as_json())
    assert {row["name"] for row in rows} == set(ALL)
    assert checks.as_text("proton-scattering").startswith("No measurement")
    with pytest.raises(UnknownNameError, match="did you mean"):
        checks.as_text("proton-scatering")
