"""How far a count may be from its expectation: chance, and the cross sections."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.special import betainc, gammainccinv, gammaincinv, ndtri, pdtr

Floats = NDArray[np.float64]

ONE_SIGMA = 0.6826894921370859  # probability within 1σ of a normal distribution
# above this mean a whole number is a smaller step than double precision resolves in pdtr
NORMAL_ABOVE = 1e9
# a mean known better than this leaves the Poisson distribution as it is
SMALLEST_ERROR = 1e-6


@dataclass(frozen=True)
class Interval:
    """The numbers of events between which a repetition falls with a stated probability."""

    low: float
    high: float
    probability: float


def poisson_interval(mean: float, probability: float = ONE_SIGMA) -> Interval:
    """Central interval of a Poisson distribution with the given mean.

    The smallest whole number whose cumulative probability reaches (1-p)/2, and the smallest
    whose cumulative probability reaches (1+p)/2: quantiles of the expected distribution, not
    the interval that an observed count would allow for an unknown mean.

    Parameters
    ----------
    mean
        expected number of events, not negative.
    probability
        p, between 0 and 1; the interval covers at least p.
    """
    return _interval(lambda count: float(pdtr(count, mean)), mean, math.sqrt(mean), probability)


def predictive_interval(
    mean: float, relative_error: float, probability: float = ONE_SIGMA
) -> Interval:
    """Central interval of counts whose mean is itself known to a relative error.

    The mean follows a Gamma distribution of that mean and relative error, so the counts follow
    a negative binomial one with r = 1/error² and variance N + (N error)²; it never reaches below
    zero, however large the error.

    Parameters
    ----------
    mean
        expected number of events, not negative.
    relative_error
        1σ of the mean, relative to it.
    probability
        between 0 and 1; the interval covers at least as much.
    """
    if relative_error < SMALLEST_ERROR:
        return poisson_interval(mean, probability)
    r = relative_error**-2
    if mean > NORMAL_ABOVE > r:  # chance is nothing beside the mean's own distribution
        tail = 0.5 * (1 - probability)
        low, high = (float(mean * gammaincinv(r, share) / r) for share in (tail, 1 - tail))
        return Interval(low, high, probability)

    def cumulative(count: float) -> float:
        return float(betainc(r, count + 1, r / (r + mean)))

    width = math.hypot(math.sqrt(mean), mean * relative_error)
    return _interval(cumulative, mean, width, probability)


def garwood_interval(observed: ArrayLike, probability: float = ONE_SIGMA) -> tuple[Floats, Floats]:
    """Central interval for the mean of a Poisson distribution of which a count was observed.

    F. Garwood, Biometrika 28 (1936) 437. For counts that were seen or drawn, never for
    expectations.
    """
    tail = 0.5 * (1 - probability)
    count = np.asarray(observed, dtype=float)
    low = np.where(count > 0, gammaincinv(np.maximum(count, 1), tail), 0.0)
    return low, np.asarray(gammainccinv(count + 1, tail))


def _interval(
    cumulative: Callable[[float], float], mean: float, width: float, probability: float
) -> Interval:
    """Central interval of a distribution of whole numbers, by its cumulative probability."""
    tail = 0.5 * (1 - probability)
    low, high = (_quantile(cumulative, mean, width, share) for share in (tail, 1 - tail))
    return Interval(low, high, probability)


def _quantile(
    cumulative: Callable[[float], float], mean: float, width: float, probability: float
) -> float:
    """Smallest whole number n with P(N <= n) >= probability, by halving a bracket."""
    if mean <= 0:
        return 0.0
    near = mean + float(ndtri(probability)) * width
    if mean > NORMAL_ABOVE:
        return max(near, 0.0)
    step = math.ceil(width) + 1
    low = high = max(0, math.floor(near))
    while cumulative(high) < probability:
        high, step = high + step, 2 * step
    while low > 0 and cumulative(low) >= probability:
        low, step = max(0, low - step), 2 * step
    if low == 0 and cumulative(0) >= probability:
        return 0.0
    while high - low > 1:
        middle = (low + high) // 2
        low, high = (low, middle) if cumulative(middle) >= probability else (middle, high)
    return float(high)


def in_quadrature(errors: Iterable[float]) -> float:
    """Add independent errors in quadrature."""
    return math.sqrt(math.fsum(error * error for error in errors))
