"""Compositions: a mixture counts what its parts would, each nucleus once."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tenkpc import Burst, Detector, Forecast

BURST = Burst.preset("equipartition")
PARTS = ("H2O", "C6H12", "C3H8O3", "H-2", "C-13")


def total(volumes):
    """Reactions by interaction of a detector of some volumes, (mass in kt, composition)."""
    tables = "\n".join(
        f'[[volume]]\nname = "v{n}"\nmass = "{mass!r} kt"\n{made_of}'
        for n, (mass, made_of) in enumerate(volumes)
    )
    text = f'title = "x"\n{tables}\n[response]\nmedium = "cherenkov"\n'
    return Forecast(Detector.parse(text), BURST, distance="10 kpc").counts["reactions"]


@settings(max_examples=6)
@given(st.sampled_from(PARTS), st.sampled_from(PARTS), st.floats(0.02, 0.98))
def test_a_mixture_is_the_sum_of_its_parts(first, second, share):
    """Mass fractions of two formulas, or two volumes of them: the same reactions, 1e-9."""
    if first == second:
        return
    fractions = f'mass_fractions = {{ "{first}" = {share!r}, "{second}" = {1 - share!r} }}'
    mixed = total([(1.0, fractions)])
    apart = total([(share, f'formula = "{first}"'), (1 - share, f'formula = "{second}"')])
    assert mixed.to_dict() == pytest.approx(apart.to_dict(), rel=1e-9)


@pytest.mark.parametrize(
    ("natural", "isotope", "keys"),
    [
        ("C", "C-12", {"carbon-12-excited", "carbon-12-to-nitrogen-12"}),
        ("C", "C-13", {"carbon-13-excited", "carbon-13-to-nitrogen-13"}),
        ("O", "O-18", {"oxygen-18-to-fluorine-18"}),
    ],
)
def test_isotopes_react_for_themselves(natural, isotope, keys):
    """A pure isotope has its own reactions alone, and a natural element its share of them."""
    pure, mixed = (total([(1.0, f'formula = "{made}"')]) for made in (isotope, natural))
    nuclear = [key for key in pure.index if key != "electron-scattering"]
    assert set(nuclear) >= keys
    other = {key for key in mixed.index if key not in pure.index}
    assert not other & keys
    assert all(mixed[key] < pure[key] for key in keys)
