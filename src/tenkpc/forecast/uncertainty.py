"""How far a count may be from its expectation: chance, and the cross sections."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass

from scipy.special import ndtri, pdtr

ONE_SIGMA = 0.6826894921370859  # probability within 1σ of a normal distribution
# above this mean a whole number is a smaller step than double precision resolves in pdtr
NORMAL_ABOVE = 1e9


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
    tail = 0.5 * (1 - probability)
    return Interval(_quantile(mean, tail), _quantile(mean, 1 - tail), probability)


def _quantile(mean: float, probability: float) -> float:
    """Smallest whole number n with P(N <= n) >= probability."""
    if mean <= 0:
        return 0.0
    near = mean + float(ndtri(probability)) * math.sqrt(mean)
    if mean > NORMAL_ABOVE:
        return near
    count = max(0, math.floor(near))
    while pdtr(count, mean) < probability:
        count += 1
    while count > 0 and pdtr(count - 1, mean) >= probability:
        count -= 1
    return float(count)


def in_quadrature(errors: Iterable[float]) -> float:
    """Add independent errors in quadrature."""
    return math.sqrt(math.fsum(error * error for error in errors))
