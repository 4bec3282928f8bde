"""Background shapes: each integral against quadrature, and normalised above the threshold."""

from __future__ import annotations

import itertools
from functools import partial

import numpy as np
import pytest
from scipy.integrate import quad

from tenkpc.detector import background
from tenkpc.detector.background import Background, lies_above

KNOTS, DENSITIES = (1.0, 2.0, 5.0), (0.0, 3.0, 1.0)
SHAPES = {
    "constant": (
        partial(background.constant, start=2.0, end=7.0),
        lambda e: float(2.0 <= e <= 7.0),
    ),
    "exponential": (partial(background.exponential, mean=1.5), lambda e: np.exp(-e / 1.5)),
    "gaussian": (
        partial(background.gaussian, mean=4.0, width=1.2),
        lambda e: np.exp(-0.5 * ((e - 4.0) / 1.2) ** 2),
    ),
    "power": (
        partial(background.power, index=-2.3, start=1.5, end=12.0),
        lambda e: e**-2.3 * (1.5 <= e <= 12.0),
    ),
    "reciprocal": (
        partial(background.power, index=-1.0, start=1.5, end=12.0),
        lambda e: (1.5 <= e <= 12.0) / e,
    ),
    "table": (
        partial(background.table, energies=KNOTS, densities=DENSITIES),
        lambda e: float(np.interp(e, KNOTS, DENSITIES, left=0, right=0)),
    ),
}
EDGES = np.array([0.0, 1.0, 2.5, 3.0, 6.0, 9.0])


@pytest.mark.parametrize("name", SHAPES)
def test_shares_are_integrals_of_the_shape(name):
    """Every bin against quadrature of the density above the threshold, to 1e-8 of the rate."""
    cumulative, density = SHAPES[name]
    source = Background("x", 3.0, cumulative)
    threshold = 1.8
    points = [1.5, 2.0, 5.0, 7.0, 12.0]

    def integral(low, high):
        inside = [p for p in points if low < p < high]
        return quad(density, low, high, points=inside or None, epsabs=1e-11, limit=200)[0]

    whole = integral(threshold, 60.0)
    found = source.spectrum_hz(EDGES, 0.0, threshold)
    edges = np.append(np.maximum(EDGES, threshold), 60.0)
    expected = [
        3.0 * integral(a, b) / whole if b > a else 0.0 for a, b in itertools.pairwise(edges)
    ]
    assert found == pytest.approx(expected, abs=3e-8)
    assert found.sum() == pytest.approx(3.0, rel=1e-12)
    assert source.above_hz(4.0, threshold) == pytest.approx(3.0 * integral(4.0, 60.0) / whole)


def test_a_cut_above_the_threshold_takes_its_share():
    """The rate is recorded above the threshold; a higher cut leaves less in every bin."""
    source = Background("x", 2.0, SHAPES["exponential"][0])
    assert source.above_hz(0.5, 1.8) == pytest.approx(2.0)
    assert source.above_hz(3.3, 1.8) == pytest.approx(2.0 * np.exp(-1.0))
    assert source.spectrum_hz(EDGES, 3.3, 1.8).sum() == pytest.approx(2.0 * np.exp(-1.0))


def test_a_shape_below_the_threshold_is_told_apart():
    """Nothing above the threshold, or something."""
    cumulative = SHAPES["constant"][0]
    assert lies_above(cumulative, 6.9)
    assert not lies_above(cumulative, 7.0)
