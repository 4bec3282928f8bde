"""What flavours cannot change, and what quenching must: rows of the neutral current."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tenkpc import Burst, Detector, Forecast, Survival, Unconverted

HALL, TANK = Detector.gallery("brine-hall"), Detector.gallery("mere-tank")
ORDINARY = Burst.preset("ordinary-collapse")
NEUTRAL = {HALL: ("carbon-12-excited", "proton-scattering"), TANK: ("oxygen-16-excited",)}
PROBABILITY = st.floats(0, 1)


@settings(max_examples=15)
@given(PROBABILITY, PROBABILITY)
@pytest.mark.parametrize("detector", NEUTRAL, ids=lambda d: d.title)
def test_neutral_currents_do_not_see_conversion(detector, nu_e, anti_nu_e):
    """Whatever the survival probabilities, flavour-blind rows stay as they are: 1e-9."""
    first = Forecast(detector, ORDINARY, distance="10 kpc", conversion=Unconverted())
    other = first.converted(Survival(nu_e=nu_e, anti_nu_e=anti_nu_e))
    for key in NEUTRAL[detector]:
        for column in ("reactions", "counted"):
            expected = first.counts.loc[key, column]
            assert other.counts.loc[key, column] == pytest.approx(expected, rel=1e-9)


@pytest.mark.parametrize(("hardness", "expected"), [("13 MeV", 9.4), ("16 MeV", 5.1)])
def test_recoils_without_quenching_would_be_many_times_as_many(hardness, expected):
    """Above 0.2 MeV, where quenching asks for 1.2 MeV of recoil: the size of a classic slip.

    Both factors from an independent calculation with a sharp recoil threshold: 3 %.
    """
    burst = Burst.integrated(
        energy=dict.fromkeys(("nu_e", "anti_nu_e", "nu_x"), "5e52 erg"),
        mean_energy={"nu_e": "10 MeV", "anti_nu_e": "12 MeV", "nu_x": hardness},
        pinching=dict.fromkeys(("nu_e", "anti_nu_e", "nu_x"), 3.0),
    )

    def protons(**light):
        response = {"medium": "scintillator", "threshold": "0.2 MeV", **light}
        made = HALL.replace({"response": response})
        return Forecast(made, burst, distance="10 kpc").counts.loc["proton-scattering", "counted"]

    ratio = protons(quenching="none") / protons(birks="0.01405 cm/MeV")
    assert ratio == pytest.approx(expected, rel=0.03)


def test_rows_that_are_not_seen_are_in_no_total():
    """Recoil protons and nuclei in water react, neutrons too, and are counted nowhere."""
    made = Forecast(TANK, ORDINARY, distance="10 kpc")
    unseen = {"coherent-scattering": 1000, "deuteron-breakup": 1, "proton-scattering": 1000}
    for key, least in unseen.items():
        row = made.counts.loc[key]
        assert row["reactions"] > least
        assert row["counted"] == row["above_threshold"] == 0
        assert set(made.breakdown.xs(key, level="interaction")["seen_as"]) == {"not seen"}
    seen = made.counts.drop(list(unseen))
    assert made.chain[0] == pytest.approx(seen["reactions"].sum())


def test_tables_by_what_is_seen_hold_the_same_events():
    """Spectrum and light curve by what is seen add up to those by interaction."""
    made = Forecast(HALL, ORDINARY, distance="10 kpc")
    for first, second in (
        (made.spectrum(), made.spectrum(by="seen")),
        (made.light_curve("0.1 s"), made.light_curve("0.1 s", by="seen")),
    ):
        assert first.iloc[:, 1:].to_numpy().sum() == pytest.approx(
            second.iloc[:, 1:].to_numpy().sum()
        )
    names = made.spectrum(by="seen").columns
    assert {"gamma rays", "proton recoil", "single electron"} < set(names)
