"""Events in light water from the literature of 1998.

J. F. Beacom and P. Vogel, Phys. Rev. D 58 (1998) 053010, hep-ph/9802424, table I, and Phys. Rev.
D 58 (1998) 093012, hep-ph/9806311, both from memory: 3e53 erg shared equally by six kinds,
Fermi-Dirac with zero degeneracy and temperatures 3.5, 5 and 8 MeV, 10 kpc, no conversion.

Their inverse beta decay is 4 to 5 % above a full calculation, both at 32 kt and at 1.4 kt: the
cross section of the time, not a slip here. The tolerance of 8 % is that plus rounding of the
published numbers; a cross section of zeroth order misses by 15 %.
"""

from __future__ import annotations

import pytest

from tenkpc import Burst, Detector, Forecast, Unconverted

BURST = Burst.integrated(
    energy=dict.fromkeys(("nu_e", "anti_nu_e", "nu_x"), "5e52 erg"),
    temperature={"nu_e": "3.5 MeV", "anti_nu_e": "5 MeV", "nu_x": "8 MeV"},
    degeneracy=dict.fromkeys(("nu_e", "anti_nu_e", "nu_x"), 0.0),
)


def breakdown(mass, threshold):
    """Counted events by interaction and species of a plain tank of light water."""
    cut = f'threshold = "{threshold}"' if threshold else ""
    detector = Detector.parse(
        f"""
        title = "plain tank"
        [[volume]]
        name = "tank"
        mass = "{mass}"
        material = "light water"
        [response]
        medium = "cherenkov"
        {cut}
        """
    )
    forecast = Forecast(detector, BURST, distance="10 kpc", conversion=Unconverted())
    return forecast.breakdown["counted"].groupby(level=["interaction", "species"]).sum()


def test_inverse_beta_decay_in_32_kt():
    """8300 positrons above 5 MeV of total energy."""
    found = breakdown("32 kt", "5 MeV")["inverse-beta-decay"].sum()
    assert found == pytest.approx(8300, rel=0.08)


def test_scattered_electrons_in_32_kt():
    """200 from electron neutrinos and antineutrinos, 120 from the other four, above 5 MeV."""
    found = breakdown("32 kt", "5 MeV")["electron-scattering"]
    assert found[["nu_e", "anti_nu_e"]].sum() == pytest.approx(200, rel=0.08)
    assert found[["nu_x", "anti_nu_x"]].sum() == pytest.approx(120, rel=0.08)


def test_inverse_beta_decay_in_1400_t():
    """365 without threshold, the light-water part of a heavy-water detector."""
    found = breakdown("1.4 kt", "")["inverse-beta-decay"].sum()
    assert found == pytest.approx(365, rel=0.08)


def test_both_tables_are_off_by_the_same_factor():
    """One normalisation explains both: 8300 and 365 are reproduced to the same ratio, 1.5 %."""
    ratios = (
        breakdown("32 kt", "5 MeV")["inverse-beta-decay"].sum() / 8300,
        breakdown("1.4 kt", "")["inverse-beta-decay"].sum() / 365,
    )
    assert ratios[0] == pytest.approx(ratios[1], rel=0.015)


# a slow independent calculation: 1 kt of water, pinched spectra with pinching 3 and mean
# energies 12, 14 and 16 MeV, 5e52 erg each, 10 kpc, no conversion
EXPECTED = {
    ("inverse-beta-decay", "anti_nu_e"): 215.522,
    ("electron-scattering", "nu_e"): 7.84951,
    ("electron-scattering", "anti_nu_e"): 3.33442,
    ("electron-scattering", "nu_x"): 2 * 1.37687,
    ("electron-scattering", "anti_nu_x"): 2 * 1.18326,
}


def test_the_slow_calculation_of_pinched_spectra():
    """Counts by species of 1 kt: 4e-4, since the slow one takes all hydrogen as protons."""
    detector = Detector.gallery("mere-tank").replace(
        {"volume.tank.mass": "1 kt", "response": {"medium": "cherenkov"}}
    )
    burst = Burst.preset("equipartition")
    forecast = Forecast(detector, burst, distance="10 kpc", conversion=Unconverted())
    found = forecast.breakdown["counted"].groupby(level=["interaction", "species"]).sum()
    for row, expected in EXPECTED.items():
        assert found[row] == pytest.approx(expected, rel=4e-4)
    above = forecast.within(energy_above="5 MeV").counts.loc["inverse-beta-decay", "counted"]
    assert above == pytest.approx(213.866, rel=4e-4)
