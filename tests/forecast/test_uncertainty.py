"""Intervals of chance against scipy's own Poisson distribution and by simulation."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy.stats import poisson

from tenkpc.forecast.uncertainty import in_quadrature, poisson_interval


@pytest.mark.parametrize("mean", [0.0, 0.02, 0.7, 3.0, 11.4, 250.0, 9000.5, 3e6])
@pytest.mark.parametrize("probability", [0.6827, 0.9, 0.99])
def test_quantiles_are_those_of_scipy(mean, probability):
    """Both ends are quantiles of the Poisson distribution as scipy.stats has them."""
    found = poisson_interval(mean, probability)
    tails = (0.5 * (1 - probability), 0.5 * (1 + probability))
    assert [found.low, found.high] == [max(poisson.ppf(t, mean), 0.0) for t in tails]


def test_intervals_cover_what_they_say():
    """At least the stated share of seeded draws falls inside, to the error of 20 000 draws."""
    rng = np.random.default_rng(11)
    for mean in (2.5, 40.0, 900.0):
        interval = poisson_interval(mean)
        draws = rng.poisson(mean, 20_000)
        inside = np.mean((draws >= interval.low) & (draws <= interval.high))
        assert inside > interval.probability - 3 * math.sqrt(0.25 / 20_000)


def test_huge_means_are_normal():
    """Where whole numbers no longer matter the interval is the normal one."""
    interval = poisson_interval(1e12)
    assert interval.high - 1e12 == pytest.approx(1e6, rel=1e-3)


def test_independent_errors_add_in_quadrature():
    """3, 4 and 12 make 13."""
    assert in_quadrature([3.0, 4.0, 12.0]) == 13.0
