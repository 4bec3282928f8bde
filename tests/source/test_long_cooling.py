"""Cooling over minutes: scalings, closure on the total energy, and bursts that hold it."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.integrate import quad

from tenkpc import Burst, Detector, Forecast
from tenkpc.constants import MEV_PER_ERG
from tenkpc.source.long_cooling import LongCooling


def star(boost=3.0, energy=1e52, masses=1.4, radius=1e6, begins=0.0):
    """A star of unit mass and radius unless told otherwise; g = 1 as in the formulas."""
    return LongCooling(masses, radius, 1.0, boost, energy * MEV_PER_ERG, 2.3, begins)


# mass, radius in km, gβ, E_tot in erg; t₀ in s, L in erg/s and ⟨E⟩ in MeV at bounce, of an
# independent calculation
CASES = [
    ((1.5, 12.0, 0.12, 4e52), (10.58, 3.06e51, 14.33)),
    ((1.5, 12.0, 1.6, 1e53), (69.9, 1.16e51, 11.23)),
]


@pytest.mark.parametrize(("inputs", "expected"), CASES)
def test_against_an_independent_calculation(inputs, expected):
    """To the digits given, three and four."""
    masses, radius, boost, energy = inputs
    made = star(boost, energy, masses, radius * 1e5)
    shift, luminosity, mean = expected
    assert made.shift_s == pytest.approx(shift, rel=1e-3)
    assert made.luminosity_mev_s(0.0) / MEV_PER_ERG == pytest.approx(luminosity, rel=5e-3)
    assert made.mean_energy(0.0) == pytest.approx(mean, rel=1e-3)


def test_units_are_the_formulas_own():
    """At 100 s less t₀ a star of 1.4 solar masses and 10 km with gβ = 3 has the constants."""
    made = star()
    at = 100.0 - made.shift_s
    assert made.shift_s == pytest.approx(210.0)
    assert at < 0
    late = made._x(0.0)
    assert made.mean_energy(0.0) == pytest.approx(16.0 * late**-1.5)
    assert made.luminosity_mev_s(0.0) == pytest.approx(3.3e51 * MEV_PER_ERG * late**-6)


@pytest.mark.parametrize("inputs", [case[0] for case in CASES])
def test_it_emits_its_total_energy(inputs):
    """Six kinds emit 0.970 of E_tot, as the rounded constants of the formulas have it: 1e-3."""
    masses, radius, boost, energy = inputs
    made = star(boost, energy, masses, radius * 1e5)
    end = 200 * made.shift_s
    total = quad(lambda t: float(made.luminosity_mev_s(t)), 0, end, limit=400)[0]
    assert 6 * total / (energy * MEV_PER_ERG) == pytest.approx(0.970, abs=1e-3)


def test_rates_and_moments_agree():
    """Number and luminosity are integrals of the rate: 1e-6, all species alike."""
    made = star(0.12, 4e52, 1.5, 1.2e6, begins=2.0)
    times = np.array([1.0, 5.0, 60.0])
    energy = np.linspace(1e-3, 150.0, 6001)
    rate = made.rate(times, energy)
    assert np.all(rate[:, 0] == 0)
    for order in (0, 1):
        found = np.trapezoid(rate * energy**order, energy, axis=2)
        assert found[:, 1:] == pytest.approx(made.moment(order, times)[:, 1:], rel=1e-5)
    assert np.all(rate[0] == rate[3])


def test_a_burst_with_a_tail():
    """A component of a file beside others: counts after it begins add to those of the core."""
    text = Burst.preset("ordinary-collapse").text
    tail = (
        '\n[[component]]\nname = "tail"\nkind = "long-cooling"\nbegins_at = "20 s"\n'
        'solar_masses = 1.5\nradius = "12 km"\ntotal_energy = "1e53 erg"\n'
        "density_correction = 0.05\nopacity_boost = 20.0\npinching = 2.3\n"
    )
    tank = Detector.gallery("mere-tank")
    plain, longer = (
        Forecast(tank, Burst.parse(made), distance="10 kpc") for made in (text, text + tail)
    )
    early = {"time": ("0 s", "20 s")}
    assert longer.within(**early).total == pytest.approx(plain.within(**early).total, rel=1e-6)
    assert longer.total > plain.total
    curve = longer.light_curve("1 s").drop(columns="width_s").sum(axis=1)
    assert curve.sum() == pytest.approx(longer.total, rel=1e-4)
