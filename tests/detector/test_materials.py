"""Materials: nuclei per kilogram, and that nothing is lost or counted twice."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from tenkpc.constants import AVOGADRO_PER_MOL
from tenkpc.detector import materials
from tenkpc.errors import InputError

FORMULAS = ("H2O", "C18H30", "Ar", "Pb", "D2O", "Xe", "Gd2(SO4)3", "CsI", "Fe")


@pytest.mark.parametrize(
    ("formula", "kind", "expected"),
    [
        ("H2O", "H-1", 6.685e25),
        ("H2O", "O-16", 3.335e25),
        ("H2O", "electron", 3.3429e26),
        ("C18H30", "H-1", 7.330e25),
        ("C18H30", "C-12", 4.352e25),
        ("Ar", "Ar-40", 1.5014e25),
        ("Xe", "Xe-132", 1.234e24),
        ("Pb", "Pb-208", 1.523e24),
        ("D2O", "H-2", 6.014e25),
    ],
)
def test_nuclei_per_kilogram(formula, kind, expected):
    """Avogadro's number over the molar mass, to the four digits that were worked out by hand."""
    assert materials.of_formula(formula).targets(kind) == pytest.approx(expected, rel=1e-3)


def test_ten_kilotonnes_of_water():
    """6.69e32 protons, 3.34e33 electrons and 3.34e32 oxygen-16, within 0.3 %."""
    water = materials.of_formula("H2O")
    found = [1e7 * water.targets(kind) for kind in ("H-1", "electron", "O-16")]
    assert found == pytest.approx([6.69e32, 3.34e33, 3.34e32], rel=3e-3)


@pytest.mark.parametrize("formula", FORMULAS)
def test_matter_is_neutral_and_weighs_what_it_should(formula):
    """Electrons equal protons, and the nuclei of a kilogram weigh a kilogram: rounding."""
    made = materials.of_formula(formula)
    grams = math.fsum(n.mass_g_per_mol * count for n, count in made.nuclei_per_kg.items())
    assert grams / AVOGADRO_PER_MOL == pytest.approx(1000, rel=1e-12)
    protons = math.fsum(n.protons * count for n, count in made.nuclei_per_kg.items())
    assert made.targets("electron") == protons


@given(st.floats(0.001, 0.999))
def test_mixtures_are_sums(share):
    """A mixture holds what its parts hold, in proportion; nothing is counted twice."""
    mixed = materials.of_mass_fractions({"H2O": share, "Gd2(SO4)3": 1 - share})
    parts = materials.of_formula("H2O"), materials.of_formula("Gd2(SO4)3")
    for kind in ("H-1", "O-16", "Gd-158", "electron"):
        expected = share * parts[0].targets(kind) + (1 - share) * parts[1].targets(kind)
        assert mixed.targets(kind) == pytest.approx(expected, rel=1e-9)


@pytest.mark.parametrize(
    ("fractions", "message"),
    [
        ({"C": 0.9, "H": 0.2}, "add up to 1.1"),
        ({"C": 1.2, "H": -0.2}, "more than 0"),
        ({}, "add up to 0"),
    ],
)
def test_fractions_that_do_not_add_up_are_refused(fractions, message):
    """The message holds the sum and the parts."""
    with pytest.raises(InputError, match=message):
        materials.of_mass_fractions(fractions)


def test_named_materials_say_where_they_are_from():
    """Every named material has a formula that reads, a density and a source."""
    for name in materials.names():
        material = materials.named(name)
        assert materials.of_formula(material.formula).electrons_per_kg > 1e26
        assert 0.1 < material.density_g_cm3 < 25
        assert material.source
    with pytest.raises(InputError, match="did you mean 'light water'"):
        materials.named("lihgt water")
