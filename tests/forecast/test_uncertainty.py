"""Intervals of chance against scipy's own Poisson distribution and by simulation."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.stats import nbinom, poisson

from tenkpc.forecast.uncertainty import in_quadrature, poisson_interval, predictive_interval


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


@pytest.mark.parametrize("mean", [0.0, 0.3, 4.0, 80.0, 7000.0])
@pytest.mark.parametrize("error", [0.004, 0.05, 0.4, 1.5])
def test_predictive_quantiles_are_those_of_scipy(mean, error):
    """Both ends are quantiles of the negative binomial distribution as scipy.stats has them."""
    found = predictive_interval(mean, error)
    r = error**-2
    tails = (0.5 * (1 - found.probability), 0.5 * (1 + found.probability))
    expected = [max(nbinom.ppf(t, r, r / (r + mean)), 0.0) for t in tails]
    assert [found.low, found.high] == expected


def test_predictive_intervals_cover_what_they_say():
    """Means drawn from a Gamma distribution, then counts: the stated share falls inside."""
    rng = np.random.default_rng(12)
    for mean, error in ((3.0, 0.5), (60.0, 0.2), (3000.0, 0.02)):
        interval = predictive_interval(mean, error)
        means = rng.gamma(error**-2, mean * error**2, 20_000)
        draws = rng.poisson(means)
        inside = np.mean((draws >= interval.low) & (draws <= interval.high))
        assert inside > interval.probability - 3 * math.sqrt(0.25 / 20_000)
        assert inside < interval.probability + (0.25 if mean < 10 else 0.03)


def test_an_exactly_known_mean_is_a_poisson_distribution():
    """Without an error of the mean both intervals are one, and a tiny one changes nothing."""
    for mean in (0.5, 12.0, 4000.0):
        assert predictive_interval(mean, 0.0) == poisson_interval(mean)
        tiny = predictive_interval(mean, 1e-5)
        assert (tiny.low, tiny.high) == (poisson_interval(mean).low, poisson_interval(mean).high)


@given(st.floats(0, 1e5), st.floats(0, 3), st.floats(0.5, 0.99))
def test_predictive_intervals_never_reach_below_zero(mean, error, probability):
    """However large a factor-like error is; they hold the middle and widen with the error."""
    found = predictive_interval(mean, error, probability)
    assert 0 <= found.low <= found.high
    wider = predictive_interval(mean, error, 0.999)
    assert wider.low <= found.low
    assert wider.high >= found.high


@pytest.mark.parametrize("error", [0.3, 1.0])
def test_huge_means_keep_the_shape_of_their_error(error):
    """Just below and above the mean from which chance is normal: the same shares of it, 1e-4."""
    below, above = (predictive_interval(mean, error) for mean in (0.999e9, 1.001e9))
    assert below.low / 0.999 == pytest.approx(above.low / 1.001, rel=1e-4)
    assert below.high / 0.999 == pytest.approx(above.high / 1.001, rel=1e-4)
