"""Light of slow protons: stopping power, Birks' law, both ways of the table."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tenkpc import Detector, data
from tenkpc.constants import AVOGADRO_PER_MOL, PROTON_MASS_MEV
from tenkpc.detector import materials
from tenkpc.detector.quenching import (
    Plain,
    Quenched,
    lindhard,
    quenched_protons,
    stopping_mev_cm2_g,
)
from tenkpc.errors import FileError

TABLE = data.document("stopping/protons.toml")
ATOMS = {s: n / 1e3 for s, n in materials.elements(materials.of_formula("CH2")).items()}
DENSITY = 0.78

# an independent slow calculation in CH2: kinetic energy in MeV, stopping power in MeV cm²/g
STOPPING = [
    (0.010, 697.59),
    (0.050, 1171.47),
    (0.100, 1124.02),
    (0.500, 469.99),
    (0.999, 294.69),
    (1.000, 293.79),
    (2.000, 176.29),
    (5.000, 86.56),
    (10.00, 49.58),
]
# the same: Birks' constant in cm/MeV, visible energies at some kinetic ones, and the kinetic
# energy that gives 0.2 MeV of light, at 0.78 g/cm³
KINETIC = (0.5, 1.0, 2.0, 3.0, 5.0, 10.0)
LIGHT = [
    (0.0096, (0.0793, 0.2141, 0.5909, 1.0628, 2.1864, 5.5701), 0.954),
    (0.0128, (0.0621, 0.1706, 0.4829, 0.8843, 1.8652, 4.9217), 1.112),
    (0.0150, (0.0541, 0.1497, 0.4291, 0.7932, 1.6953, 4.5616), 1.211),
]


@pytest.mark.parametrize(("kinetic", "expected"), STOPPING)
def test_stopping_powers_are_those_of_the_slow_calculation(kinetic, expected):
    """All branches and the joint at 1 MeV, to half a unit of the last digit."""
    found = stopping_mev_cm2_g(np.array([kinetic]), ATOMS, TABLE)
    assert found == pytest.approx([expected], abs=6e-3)


@pytest.mark.parametrize(("kinetic", "within"), [(2.0, 0.012), (5.0, 0.003), (10.0, 0.003)])
def test_fast_protons_stop_as_bethe_says(kinetic, within):
    """H. Bethe's formula with I = 57.4 eV and no shell terms, which are missing at 2 MeV."""
    beta2 = 1 - (1 + kinetic / PROTON_MASS_MEV) ** -2
    per_gram = 8 / 14.027 * AVOGADRO_PER_MOL
    classical_radius_cm = 2.8179403e-13
    scale = 4 * np.pi * classical_radius_cm**2 * 0.51099895 * per_gram / beta2
    bethe = scale * (np.log(2 * 0.51099895e6 * beta2 / (1 - beta2) / 57.4) - beta2)
    found = stopping_mev_cm2_g(np.array([kinetic]), ATOMS, TABLE)
    assert found == pytest.approx([bethe], rel=within)


@pytest.mark.parametrize(("constant", "expected", "threshold"), LIGHT)
def test_light_is_that_of_the_slow_calculation(constant, expected, threshold):
    """Visible energies and the recoil that gives 0.2 MeV, to half a unit of the last digit."""
    light = quenched_protons(ATOMS, TABLE, constant * DENSITY)
    assert light.visible(np.array(KINETIC)) == pytest.approx(expected, abs=6e-5)
    assert light.kinetic(np.array([0.2])) == pytest.approx([threshold], abs=6e-4)


@given(st.floats(0, 300))
def test_the_table_is_read_both_ways(kinetic):
    """Kinetic energy to light and back, beyond the table too: 1e-9, by rounding."""
    light = quenched_protons(ATOMS, TABLE, 0.01)
    visible = light.visible(np.array([kinetic]))
    assert visible[0] <= kinetic * (1 + 1e-12)
    assert light.kinetic(visible) == pytest.approx([kinetic], rel=1e-9, abs=1e-12)


def test_without_a_constant_nothing_is_quenched():
    """k_B = 0 gives the kinetic energy itself: 1e-12."""
    light = quenched_protons(ATOMS, TABLE, 0.0)
    kinetic = np.array([0.0, 0.3, 4.0, 60.0])
    assert light.visible(kinetic) == pytest.approx(kinetic, rel=1e-12)


def test_other_lights():
    """A plain particle adds an offset, a table goes on with its last slope."""
    assert Plain(1.0).visible(np.array(3.0)) == 4.0
    assert Plain(1.0).kinetic(np.array([0.5, 4.0])).tolist() == [0.0, 3.0]
    table = Quenched((0.0, 1.0, 3.0), (0.0, 0.2, 1.0))
    assert table.visible(np.array([0.5, 2.0, 5.0])) == pytest.approx([0.1, 0.6, 1.8])
    assert table.kinetic(np.array([-1.0, 0.6, 1.8])) == pytest.approx([0.0, 2.0, 5.0])


@pytest.mark.parametrize(
    ("element", "protons", "nucleons", "k", "expected"),
    [
        ("Si", 14, 28.0855, 0.146, (0.190, 0.210, 0.232, 0.268, 0.302)),
        ("Ar", 18, 39.948, 0.144, (0.174, 0.192, 0.211, 0.242, 0.271)),
        ("Ge", 32, 72.63, 0.157, (0.156, 0.171, 0.188, 0.213, 0.234)),
        ("Xe", 54, 131.293, 0.166, (0.139, 0.152, 0.167, 0.188, 0.206)),
    ],
)
def test_lindhard(element, protons, nucleons, k, expected):
    """Q at 0.5, 1, 2, 5, 10 keV of an independent calculation, with the mean mass number."""
    kinetic = 1e-3 * np.array([0.5, 1.0, 2.0, 5.0, 10.0])
    made = lindhard(protons, nucleons)
    assert made.visible(kinetic) / kinetic == pytest.approx(np.array(expected), abs=6e-4)
    given = lindhard(protons, nucleons, k)
    assert given.visible(kinetic) == pytest.approx(made.visible(kinetic), rel=4e-3)
    assert made.kinetic(made.visible(kinetic)) == pytest.approx(kinetic, rel=1e-9)


@pytest.mark.parametrize("rows", ["0,0", "0,1\n1,2", "1,5\n10,8", "1,0.2\n0.5,0.3"])
def test_tables_that_make_light_of_nothing_are_refused(rows, tmp_path):
    """One point at zero, light without energy, more light than energy, energies that fall."""
    (tmp_path / "light.csv").write_text(f"kinetic_mev,visible_mev\n{rows}\n")
    text = Detector.gallery("brine-hall").text.replace(
        'birks = "0.0104 cm/MeV"', 'quenching = { file = "light.csv", beyond = "extend" }'
    )
    with pytest.raises(FileError, match=r"response\.quenching"):
        Detector.parse(text, folder=str(tmp_path))
