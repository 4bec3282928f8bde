"""Curves through points that never overshoot them."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class Monotone:
    """A piecewise cubic through points that is monotone wherever the points are.

    Slopes are weighted harmonic means of the slopes on both sides, zero at an extremum (F. N.
    Fritsch and J. Butland, SIAM J. Sci. Stat. Comput. 5 (1984) 300). Beyond the points it goes on
    as a straight line.

    Attributes
    ----------
    x, y
        the points, three at least, x ascending.
    """

    x: tuple[float, ...]
    y: tuple[float, ...]

    @classmethod
    def through(cls, x: Iterable[float], y: Iterable[float]) -> Monotone:
        """Draw the curve through some points."""
        return cls(tuple(map(float, x)), tuple(map(float, y)))

    def __call__(self, at: ArrayLike) -> Floats:
        """Value at each place."""
        x, y, slope = self._arrays
        place = np.asarray(at, dtype=float)
        if self._even:  # as many knots as one likes, at no cost
            left = np.clip((place - x[0]) / (x[1] - x[0]), 0, len(x) - 2).astype(np.intp)
        else:
            left = np.clip(np.searchsorted(x, place, "right") - 1, 0, len(x) - 2)
        step = x[left + 1] - x[left]
        t = np.clip((place - x[left]) / step, 0.0, 1.0)
        rise = y[left + 1] - y[left]
        start, end = slope[left] * step, slope[left + 1] * step
        inside = y[left] + t * (
            start + t * (3 * rise - 2 * start - end + t * (start + end - 2 * rise))
        )
        beyond = np.minimum(place - x[0], 0) * slope[0] + np.maximum(place - x[-1], 0) * slope[-1]
        result: Floats = inside + beyond
        return result

    @cached_property
    def _even(self) -> bool:
        """Whether the points lie at even distances, to rounding."""
        step = np.diff(np.array(self.x))
        return bool(np.ptp(step) < 1e-9 * step[0])

    @cached_property
    def _arrays(self) -> tuple[Floats, Floats, Floats]:
        x, y = np.array(self.x), np.array(self.y)
        return x, y, _slopes(np.diff(x), np.diff(y) / np.diff(x))


def _slopes(step: Floats, secant: Floats) -> Floats:
    """Slopes at the points, from the steps and the secants between them."""
    slope = np.zeros(len(step) + 1)
    same = secant[:-1] * secant[1:] > 0
    first, second = 2 * step[1:] + step[:-1], step[1:] + 2 * step[:-1]
    with np.errstate(divide="ignore", invalid="ignore"):
        mean = (first + second) / (first / secant[:-1] + second / secant[1:])
    slope[1:-1] = np.where(same, mean, 0.0)
    slope[0] = _end(step[0], step[1], secant[0], secant[1])
    slope[-1] = _end(step[-1], step[-2], secant[-1], secant[-2])
    return slope


def _end(step: float, next_step: float, secant: float, next_secant: float) -> float:
    """One-sided slope of three points, kept from overshooting."""
    slope = ((2 * step + next_step) * secant - step * next_secant) / (step + next_step)
    if slope * secant <= 0:
        return 0.0
    if secant * next_secant < 0 and abs(slope) > 3 * abs(secant):
        return 3 * secant
    return float(slope)
