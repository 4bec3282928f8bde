"""Compositions: a mixture counts what its parts would, each nucleus once."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tenkpc import Burst, Detector, Forecast

BURST = Burst.preset("equipartition")
PARTS = ("H2O", "C6H12", "C3H8O3", "H-2", "C-13", "Ar", "PbF2", "Fe2O3", "NaI")
MEDIA = {
    "cherenkov": "",
    "ionisation": "gamma_containment = 0.5",
    "neutron-counter": "neutron_efficiency = 0.5",
    "recoil": 'threshold = "1 keVee"\nquenching = "lindhard"',
    "scintillator": 'quenching = "none"',
}


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


@pytest.mark.parametrize("medium", MEDIA)
@settings(max_examples=4)
@given(st.sampled_from(PARTS), st.sampled_from(PARTS), st.floats(2, 60))
def test_counts_are_finite_and_lose_along_the_chain(medium, first, second, energy):
    """Any two volumes, any medium, spectra that reach 200 MeV: 0 ≤ counted ≤ above ≤ reactions.

    Lower and upper cross sections stand on their sides of the counts; counts are good to 1e-4.
    """
    text = (
        'title = "x"\n[[volume]]\nname = "v"\nmass = "1 kt"\n'
        f'mass_fractions = {{ "{first}" = 1.0 }}\n[[volume]]\nname = "w"\nmass = "1 kt"\n'
        f'mass_fractions = {{ "{second}" = 1.0 }}\n'
        f'[response]\nmedium = "{medium}"\n{MEDIA[medium]}\n'
    )
    kinds = {"nu_e": "5e52 erg", "anti_nu_e": "5e52 erg", "nu_x": "5e52 erg"}
    burst = Burst.integrated(
        energy=kinds,
        mean_energy=dict.fromkeys(kinds, f"{energy} MeV"),
        pinching=dict.fromkeys(kinds, 2.0),
    )
    frame = Forecast(Detector.parse(text), burst, distance="10 kpc").breakdown
    numbers = frame.select_dtypes("number").to_numpy()
    assert np.isfinite(numbers).all()
    assert numbers.min() >= -1e-9
    slack = 1e-4 * frame["reactions"] + 1e-9
    assert (frame["counted"] <= frame["above_threshold"] + slack).all()
    assert (frame["above_threshold"] <= frame["reactions"] + slack).all()
    assert (frame["cross_section_low"] <= frame["counted"] + slack).all()
    assert (frame["counted"] <= frame["cross_section_high"] + slack).all()


@pytest.mark.parametrize(
    ("natural", "isotope", "keys"),
    [
        ("C", "C-12", {"carbon-12-excited", "carbon-12-to-nitrogen-12"}),
        ("C", "C-13", {"carbon-13-excited", "carbon-13-to-nitrogen-13"}),
        ("O", "O-18", {"oxygen-18-to-fluorine-18"}),
        ("H", "H-2", {"deuteron-breakup", "deuteron-to-two-protons"}),
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
