"""Nuclides: what periodictable is asked for, and what is refused before it is."""

from __future__ import annotations

import pytest

from tenkpc.errors import InputError
from tenkpc.nuclides import atoms


def test_elements_come_as_they_are_found():
    """Natural abundances add up to one atom, with carbon-13 at 1.1 %."""
    carbon = {nuclide.name: count for nuclide, count in atoms("C")}
    assert sum(carbon.values()) == pytest.approx(1.0)
    assert carbon["C-13"] == pytest.approx(0.0107, abs=2e-4)


def test_an_isotope_is_only_itself():
    """Xe-136 has 54 protons and 82 neutrons."""
    ((nuclide, count),) = atoms("Xe-136")
    assert (nuclide.name, nuclide.protons, nuclide.neutrons, count) == ("Xe-136", 54, 82, 1.0)


def test_deuterium_is_hydrogen_two():
    """D2O holds two H-2 and no H-1."""
    heavy = {nuclide.name: count for nuclide, count in atoms("D2O")}
    assert heavy["H-2"] == 2
    assert "H-1" not in heavy


@pytest.mark.parametrize(
    ("formula", "message"),
    [
        ("H20", "did you mean 'H2O', with the letter O"),
        ("C99", "99 atoms of one element"),
        ("Xx2", "no element has the symbol 'Xx'"),
        ("h2o", "no chemical formula"),
        ("(CH2)n", "no chemical formula"),
        ("", "no chemical formula"),
        ("water", "no chemical formula"),
        ("Xe-999", "no isotope is called"),
        ("Zz-12", "no element has the symbol"),
        ("Pu", "no natural isotopes"),
    ],
)
def test_slips_are_refused_in_plain_words(formula, message):
    """Each refusal says what was found and, where there is one, what was meant."""
    with pytest.raises(InputError, match=message):
        atoms(formula)
