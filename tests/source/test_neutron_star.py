"""Binding energy and lepton number of the star that is left."""

from __future__ import annotations

import pytest

from tenkpc import Burst
from tenkpc.errors import FileError
from tenkpc.source.neutron_star import NeutronStar

# solar masses, radius in km, binding energy in 1e53 erg of an independent calculation
CASES = [
    (1.4, 11, 3.11),
    (1.4, 12, 2.83),
    (1.4, 13, 2.59),
    (1.2, 12, 2.05),
    (1.6, 12, 3.75),
    (2.0, 12, 6.02),
]
STAR = '[neutron_star]\nsolar_masses = {}\nradius = "12 km"\n\n'


@pytest.mark.parametrize(("masses", "radius", "expected"), CASES)
def test_binding_energies(masses, radius, expected):
    """To the three digits given."""
    made = NeutronStar(masses, radius * 1e5)
    assert made.binding_energy_erg == pytest.approx(expected * 1e53, rel=2e-3)
    assert made.highest_binding_energy_erg == pytest.approx(0.65 / 0.60 * made.binding_energy_erg)


def test_baryons():
    """1.5 solar masses of baryons are 1.796e57 of them: with the binding energy put back."""
    made = NeutronStar(1.5 - 0.166, 12e5)
    assert made.binding_energy_erg / 1.787e54 == pytest.approx(0.143, abs=0.01)
    per_solar_mass = 1.796e57 / 1.5
    baryonic = 1.334 + made.binding_energy_erg / 1.787e54
    assert made.baryons == pytest.approx(per_solar_mass * baryonic, rel=1e-3)


def with_star(name, masses):
    """A preset with the star that it leaves."""
    text = Burst.preset(name).text
    first = text.index("[[component]]")
    return Burst.parse(text[:first] + STAR.format(masses) + text[first:])


@pytest.mark.parametrize(
    ("name", "masses", "leptons"),
    [
        ("early-explosion", 1.20, 0.395),
        ("ordinary-collapse", 1.40, 0.383),
        ("slow-accretion", 1.65, 0.365),
    ],
)
def test_presets_keep_to_their_stars(name, masses, leptons):
    """Energy within the binding energy, and the lepton number that they were made with: 2 %."""
    summary = with_star(name, masses).summary()
    assert summary.warnings == ()
    assert summary.total_energy_erg <= summary.star.highest_binding_energy_erg
    found = summary.net_lepton_number / summary.star.baryons
    assert found == pytest.approx(leptons, rel=0.02)
    words = " ".join(str(summary).split())
    assert f"leptons per baryon: {found:.3f}" in words
    assert "of the neutron star's binding energy" in words


def test_more_than_the_star_has_is_told():
    """Too light a star for the energy, and a lepton number out of range."""
    warnings = with_star("slow-accretion", 1.2).summary().warnings
    assert "more than the binding energy of its neutron star" in warnings[0]
    warnings = with_star("early-explosion", 2.2).summary().warnings
    assert any("leptons for each baryon" in warning for warning in warnings)


@pytest.mark.parametrize(
    ("old", "new", "words"),
    [("12 km", "12 m", "at least"), ("12 km", "12 kg", "is a mass"), ("1.4", "-1", "solar_masses")],
)
def test_mistakes_are_named(old, new, words):
    """A radius that is none, a mass that is none."""
    text = Burst.preset("ordinary-collapse").text
    first = text.index("[[component]]")
    with pytest.raises(FileError, match=words):
        Burst.parse(text[:first] + STAR.format(1.4).replace(old, new) + text[first:])
