"""Units: the traps of masses, what is refused, and that nothing is left behind."""

from __future__ import annotations

import re

import pint
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tenkpc import units
from tenkpc.errors import UnitError


def mass(value):
    """Read a mass in kg."""
    return units.to_float(value, "kg", "mass", "12 kt")


@pytest.mark.parametrize(
    "text",
    [
        "32.5 kt",
        "32.5 kton",
        "32.5 kiloton",
        "0.0325 Mt",
        "0.0325 Mton",
        "32500 tonne",
        "32500 t",
        "3.25e7 kg",
        "32.5kt",
    ],
)
def test_tons_are_metric(text):
    """Whatever the shorthand, a kiloton is a million kilograms."""
    assert mass(text) == pytest.approx(3.25e7, rel=1e-12)


def test_a_bare_ton_is_refused_with_the_choices():
    """It may be 907, 1000 or 1016 kg, so the message names all three."""
    with pytest.raises(UnitError, match=r"tonne \(1000 kg\), short_ton \(907 kg\) or long_ton"):
        mass("5 ton")


def test_quantities_in_tempting_units_are_refused():
    """A knot is a speed, and a short ton hardly what a physicist means."""
    registry = pint.get_application_registry()
    with pytest.raises(UnitError, match="a knot"):
        mass(registry.Quantity(32, "kt"))
    with pytest.raises(UnitError, match="short tons"):
        mass(registry.Quantity(32, "kton"))


def test_quantities_of_any_registry_are_accepted():
    """A registry of the user's own is read by value and unit."""
    foreign = pint.UnitRegistry()
    assert mass(foreign.Quantity(2.0, "tonne")) == pytest.approx(2000)
    assert units.to_float(foreign.Quantity(1, "kpc"), "cm", "d", "1 kpc") > 3e21


@pytest.mark.parametrize(
    ("value", "message"),
    [
        (32.5, "expected a value with its unit"),
        (True, "expected a value with its unit"),
        (None, "expected a value with its unit"),
        ("32.5", "lacks its unit"),
        ("32.5 kpc", "is a length; expected a mass"),
        ("32.5 kpcc", "unknown unit 'kpcc'"),
        ("heavy", "unknown unit"),
        ("nan kg", "finite"),
        ("inf kg", "finite"),
        ("3 kg +", "cannot read|unknown|expected"),
        ("", "lacks its unit|cannot read"),
    ],
)
def test_what_is_no_mass_is_refused(value, message):
    """Each message names the argument and an example."""
    with pytest.raises(UnitError, match=message) as caught:
        mass(value)
    assert str(caught.value).startswith("mass: ")
    assert "12 kt" in str(caught.value)


@pytest.mark.parametrize(
    ("text", "unit", "expected"),
    [
        ("1e-9 /s/m^3", "1/s/m^3", 1e-9),
        ("40 /day", "1/s", 40 / 86400),
        ("51.8 deg", "deg", 51.8),
        ("5 ms", "s", 0.005),
        ("5e52 erg", "erg", 5e52),
        ("0.0098 cm/MeV", "cm/MeV", 0.0098),
    ],
)
def test_other_quantities_read_well(text, unit, expected):
    """Rates, angles, times and energies as people write them."""
    assert units.to_float(text, unit, "x", "1 s") == pytest.approx(expected)


@pytest.mark.parametrize(
    ("value", "expected"), [(0.94, 0.94), ("94 %", 0.94), ("0.94", 0.94), (1, 1.0), ("0 %", 0.0)]
)
def test_shares_are_fractions_or_per_cent(value, expected):
    """A share is written as a number or as per cent."""
    assert units.to_fraction(value, "efficiency") == pytest.approx(expected)


@pytest.mark.parametrize("value", [95, "95", -0.1, 1.01, "101 %", "nan", True, None, "most"])
def test_what_is_no_share_is_refused(value):
    """Percent taken as a fraction is the commonest slip, so 95 is refused, not scaled."""
    with pytest.raises(UnitError, match="between 0 and 1"):
        units.to_fraction(value, "efficiency")


@given(st.floats(1e-6, 1e6))
def test_there_and_back(value):
    """A float that is given a unit and read again is the same float."""
    assert mass(units.quantity(value, "kg")) == pytest.approx(value, rel=1e-12)


def test_nothing_is_defined_in_the_users_registry():
    """After use a knot is still a knot there."""
    mass("3 kt")
    assert pint.get_application_registry().Quantity("1 kt").check("[speed]")


@pytest.mark.parametrize(
    ("words", "unit"),
    [(w, u) for known in units._COMMON.values() for w in known for u in known if w[0] != "1"],
)
def test_common_units_are_those_of_pint(words, unit):
    """Every factor that is known beside pint is pint's to 1e-11, its parsec being that much off."""
    spelled = {"kt": "kilotonne", "kton": "kilotonne", "kiloton": "kilotonne"}
    spelled |= {"Mt": "megatonne", "Mton": "megatonne"}
    words_of_pint, unit_of_pint = (
        re.sub(r"^/", "1/", spelled.get(name, name)) for name in (words, unit)
    )
    expected = units.registry().Quantity(f"1 * ({words_of_pint})").to(unit_of_pint).magnitude
    assert units.to_float(f"1 {words}", unit, "", "") == pytest.approx(float(expected), rel=1e-11)
