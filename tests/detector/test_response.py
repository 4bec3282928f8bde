"""Response: closed forms against numerical integration, and what must always hold."""

from __future__ import annotations

from types import MappingProxyType

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import quad
from scipy.special import ndtr

from tenkpc.detector.quenching import Plain
from tenkpc.detector.response import Curve, Resolution, Response

EDGES = np.arange(0.0, 41.0, 1.0)
LOW = np.array([0.0, 4.2, 5.0, 20.0])
HIGH = np.array([0.05, 4.3, 5.05, 20.5])


def observed_density(response, low, high):
    """Density of the observed energy of a deposit uniform between low and high."""
    sigma = float(response.resolution.sigma_mev(np.array(0.5 * (low + high))))
    return lambda x: float(ndtr((x - low) / sigma) - ndtr((x - high) / sigma)) / (high - low)


@pytest.mark.parametrize("cell", range(1, 4))
@pytest.mark.parametrize("place", [4, 5, 6, 20])
def test_shares_are_the_integrals_they_stand_for(cell, place):
    """Efficiency × observed density over a bin, by quadrature: 1e-10 is quad's own accuracy."""
    response = Response(
        resolution=Resolution(0.1, 0.02),
        threshold_mev=4.3,
        efficiency=Curve((3.0, 6.0, 9.0), (0.1, 0.7, 0.95)),
    )
    density = observed_density(response, LOW[cell], HIGH[cell])
    integrand = lambda x: density(x) * float(response.efficiency(np.array(x)))
    start = max(EDGES[place], 4.3)
    expected = quad(integrand, start, EDGES[place + 1], epsabs=1e-13)[0]
    assert response.share(LOW, HIGH, EDGES)[cell, place] == pytest.approx(expected, abs=1e-10)


def test_terms_of_a_resolution_add_in_quadrature_or_linearly():
    """The three terms at 4 MeV: 0.2, 0.4 and 0.1 MeV."""
    energy = np.array([4.0])
    assert Resolution(0.1, 0.1, 0.1).sigma_mev(energy) == pytest.approx(np.sqrt(0.21))
    assert Resolution(0.1, 0.1, 0.1, linear=True).sigma_mev(energy) == pytest.approx(0.7)


def test_a_perfect_detector_has_an_exact_step():
    """At zero resolution a deposit that straddles the threshold is kept in proportion."""
    response = Response(threshold_mev=5.02)
    assert response.above_threshold(LOW, HIGH) == pytest.approx([0, 0, 0.6, 1])
    assert response.share(LOW, HIGH, EDGES)[2].sum() == pytest.approx(0.6, abs=1e-12)


def test_a_curve_may_end_in_a_step():
    """Outside its points a curve is held, or zero where the file says so."""
    curve = Curve((5.0, 10.0), (0.5, 0.9), zero_outside=True)
    assert curve(np.array([4.9, 5.0, 7.5, 10.0, 10.1])) == pytest.approx([0, 0.5, 0.7, 0.9, 0])
    share = Response(efficiency=curve).share(np.array([8.0]), np.array([12.0]), EDGES)
    assert share.sum() == pytest.approx((0.74 + 0.9) / 2 * 2 / 4, abs=1e-12)


def test_true_efficiency_acts_before_resolution():
    """An efficiency in true energy multiplies the whole row of a deposit."""
    sharp = Response(resolution=Resolution(constant=0.2))
    kept = Response(
        resolution=Resolution(constant=0.2), true_efficiency=Curve((0.0, 40.0), (0.0, 1.0))
    )
    ratio = kept.share(LOW, HIGH, EDGES).sum(1) / sharp.share(LOW, HIGH, EDGES).sum(1)
    assert ratio == pytest.approx(0.5 * (LOW + HIGH) / 40)


def test_what_is_observed_below_the_first_edge_goes_into_the_first_bin():
    """Fluctuations below zero are not lost where there is no threshold."""
    response = Response(resolution=Resolution(noise_mev=2.0))
    share = response.share(np.array([0.0]), np.array([0.1]), EDGES)
    assert share.sum() == pytest.approx(1, abs=1e-12)
    assert share[0, 0] > 0.5


def test_particles_add_what_the_medium_sees_of_them():
    """Offsets belong to particles, and an unseen particle has no visible energy at all."""
    response = Response(light=MappingProxyType({"electron": Plain(), "positron": Plain(1.0)}))
    assert response.visible("positron", 3.0) == 4.0
    assert response.visible("neutron", 3.0) is None
    assert response.kinetic("positron", np.array([0.5, 4.0])).tolist() == [0.0, 3.0]


@settings(max_examples=60, deadline=None)
@given(
    st.floats(0, 0.8),
    st.floats(0, 0.3),
    st.floats(0, 2),
    st.floats(0, 30),
    st.lists(st.tuples(st.floats(0, 40), st.floats(0, 1)), min_size=1, max_size=6),
)
def test_shares_stay_between_nothing_and_everything(a, b, c, threshold, points):
    """No bin is negative, no row exceeds 1, and efficiency never adds events (to rounding)."""
    knots = sorted({round(x, 2): y for x, y in points}.items())
    curve = Curve(tuple(x for x, _ in knots), tuple(y for _, y in knots))
    response = Response(resolution=Resolution(a, b, c), threshold_mev=threshold, efficiency=curve)
    share = response.share(LOW, HIGH, EDGES)
    assert share.min() > -1e-9
    assert np.all(share.sum(axis=1) <= response.above_threshold(LOW, HIGH) + 1e-9)


@settings(max_examples=40, deadline=None)
@given(st.floats(0, 20), st.floats(0, 5), st.floats(0, 0.5))
def test_a_higher_threshold_never_counts_more(threshold, step, width):
    """Shares fall with the threshold."""
    lower = Response(threshold_mev=threshold, resolution=Resolution(constant=width))
    higher = Response(threshold_mev=threshold + step, resolution=Resolution(constant=width))
    gain = higher.above_threshold(LOW, HIGH) - lower.above_threshold(LOW, HIGH)
    assert gain.max() <= 1e-12
