"""The budget: every row against what a changed detector, cross section or angle really does."""

from __future__ import annotations

import math

import numpy as np
import pytest

from tenkpc import Adiabatic, Burst, Detector, Forecast, Survival, Unconverted, interactions
from tenkpc.propagation.mixing import mixing_parameters

HALL = Detector.gallery("brine-hall")
BURST = Burst.preset("ordinary-collapse")
FORECAST = Forecast(HALL, BURST, distance="10 kpc")
BUDGET = FORECAST.budget


def test_every_cause_has_a_row():
    """Chance, each interaction that counts, what the file says of the detector, both angles."""
    seen = [key for key in FORECAST.keys if FORECAST.counts.loc[key, "counted"] > 0]
    causes = ["chance", *seen, "mass", "efficiency", "energy scale"]
    assert list(BUDGET.index) == [*causes, "sin2_theta12", "sin2_theta13"]
    assert set(BUDGET["kind"]) == {"chance", "cross section", "detector", "mixing angle"}
    assert (BUDGET[["fall", "rise"]] > 0).all(axis=None)
    assert BUDGET["origin"].str.len().min() > 0
    per_cent = BUDGET["fall"] / FORECAST.total * 100
    assert BUDGET["fall_percent"].to_numpy() == pytest.approx(per_cent.to_numpy())


@pytest.mark.parametrize("key", [key for key in FORECAST.keys if key in BUDGET.index])
def test_a_cross_section_row_is_its_factor(key):
    """An error that is the same at all energies is a factor exp(±error) on the row's counts."""
    row, counted = BUDGET.loc[key], FORECAST.counts.loc[key, "counted"]
    states = [s for b in interactions.by_key(key).branches.values() for s in b]
    errors = [s.relative_error(np.array([5.0, 20.0, 40.0, 90.0])) for s in states]
    low, high = np.min(errors), np.max(errors)
    assert counted * (1 - math.exp(-low)) * 0.999 <= row["fall"]
    assert row["fall"] <= counted * (1 - math.exp(-high)) * 1.001
    assert counted * (math.exp(low) - 1) * 0.999 <= row["rise"]
    assert row["rise"] <= counted * (math.exp(high) - 1) * 1.001


def test_factor_like_errors_never_take_more_than_all():
    """An error of a factor 20 falls by 95 % of the counts and rises by 19 times them."""
    scaled = Forecast(
        HALL,
        BURST,
        distance="10 kpc",
        interactions={key: False for key in FORECAST.keys if key != "carbon-12-excited"},
    )
    fall, rise = scaled.cross_section_error
    assert 0 < fall < scaled.total
    assert rise > fall
    assert scaled.predictive.low >= 0


def test_mass_and_efficiency_rows_are_shares_of_the_total():
    """1 % and 1.5 % of everything, as the file says."""
    assert BUDGET.loc["mass", "fall"] == pytest.approx(0.01 * FORECAST.total)
    assert BUDGET.loc["efficiency", "rise"] == pytest.approx(0.015 * FORECAST.total)


@pytest.mark.parametrize("sign", [-1, 1])
def test_the_energy_scale_moves_the_threshold(sign):
    """Reading 0.5 % high is the same as a threshold 0.5 % lower: 1e-3 of the effect, by cells."""
    moved = FORECAST.replace({"response.threshold": f"{0.25 / (1 + sign * 0.005)!r} MeV"})
    expected = moved.total - FORECAST.total
    column = "rise" if sign > 0 else "fall"
    assert sign * BUDGET.loc["energy scale", column] == pytest.approx(expected, rel=0.01)


def test_the_energy_scale_moves_the_efficiency_too():
    """A curve against observed energy is read at the energy that is reported."""
    points = [["5 MeV", 0.2], ["20 MeV", 0.9]]
    tank = Detector.gallery("mere-tank").replace(
        {
            "response.threshold": "5 MeV",
            "response.efficiency": {"points": points, "beyond": "hold"},
            "uncertainty": {"energy_scale": "1 %"},
        }
    )
    lower = [[f"{5 / 1.01!r} MeV", 0.2], [f"{20 / 1.01!r} MeV", 0.9]]
    there = tank.replace(
        {
            "response.threshold": f"{5 / 1.01!r} MeV",
            "response.efficiency": {"points": lower, "beyond": "hold"},
        }
    )
    first, second = (Forecast(d, BURST, distance="10 kpc") for d in (tank, there))
    rise = first.budget.loc["energy scale", "rise"]
    assert rise == pytest.approx(second.total - first.total, rel=0.01)


def test_mixing_rows_are_other_angles():
    """Each angle 1σ up and down, as pairs of survival probabilities."""
    angles = mixing_parameters("normal")
    s12, s13 = angles.sin2_theta12, angles.sin2_theta13.value
    totals = [
        FORECAST.converted(Survival(nu_e=s13, anti_nu_e=(1 - value) * (1 - s13))).total
        for value in (s12.value - s12.error_down, s12.value + s12.error_up)
    ]
    row = BUDGET.loc["sin2_theta12"]
    assert row["fall"] == pytest.approx(FORECAST.total - min(totals), rel=1e-9)
    assert row["rise"] == pytest.approx(max(totals) - FORECAST.total, rel=1e-9)


def test_a_conversion_without_angles_has_no_such_rows():
    """Unconverted fluxes depend on no mixing angle."""
    kinds = set(FORECAST.converted(Unconverted()).budget["kind"])
    assert "mixing angle" not in kinds
    assert "mixing angle" in set(FORECAST.converted(Adiabatic("inverted")).budget["kind"])


def test_a_detector_without_errors_has_no_such_rows():
    """What the file does not state is no row of zeros."""
    plain = Forecast(Detector.gallery("mere-tank"), BURST, distance="10 kpc")
    assert "detector" not in set(plain.budget["kind"])


def test_the_error_of_cross_sections_adds_up_in_quadrature():
    """Interactions are independent of one another."""
    rows = BUDGET[BUDGET["kind"] == "cross section"]
    fall, rise = FORECAST.cross_section_error
    assert fall == pytest.approx(math.sqrt((rows["fall"] ** 2).sum()))
    assert rise == pytest.approx(math.sqrt((rows["rise"] ** 2).sum()))


def test_chance_and_cross_sections_together_are_wider_than_chance():
    """The predictive interval holds the interval of chance."""
    both, chance = FORECAST.predictive, FORECAST.chance
    assert both.low < chance.low < FORECAST.total < chance.high < both.high
