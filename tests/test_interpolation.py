"""Monotone curves: against scipy's, which is too slow to load at run time."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.interpolate import PchipInterpolator

from tenkpc.interpolation import Monotone

VALUES = st.lists(st.integers(-50, 50), min_size=3, max_size=12)
STEPS = st.lists(st.integers(1, 9), min_size=12, max_size=12)


@given(VALUES, STEPS)
def test_it_is_the_curve_of_scipy(values, steps):
    """Inside the points, whatever they are: to rounding, 1e-13 of the largest value."""
    x = np.cumsum(steps[: len(values)]).astype(float)
    at = np.linspace(x[0], x[-1], 101)
    expected = PchipInterpolator(x, values)(at)
    assert Monotone.through(x, values)(at) == pytest.approx(
        expected, rel=0, abs=1e-13 * (1 + np.abs(values).max())
    )


@given(VALUES, STEPS)
def test_it_never_overshoots(values, steps):
    """Between two points it stays between their values."""
    x = np.cumsum(steps[: len(values)]).astype(float)
    curve = Monotone.through(x, values)
    for left in range(len(x) - 1):
        inside = curve(np.linspace(x[left], x[left + 1], 11))
        low, high = sorted(values[left : left + 2])
        assert np.all((inside >= low - 1e-9) & (inside <= high + 1e-9))


def test_it_goes_on_as_a_line():
    """Beyond the points with the slopes at the ends."""
    curve = Monotone.through([0, 1, 2, 3], [0, 1, 2, 3])
    assert curve([-2.0, 5.0]) == pytest.approx([-2.0, 5.0])
