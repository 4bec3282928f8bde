"""Time panels: what is integrated on them agrees with adaptive quadrature."""

import itertools

import numpy as np
import pytest
from scipy.integrate import quad

from tenkpc.source.burst import Burst
from tenkpc.source.panels import panel_integrals

FAST = {
    "ordinary-collapse": {},
    "a short peak": {"peak.rise_time": "0.4 ms", "peak.fall_time": "0.6 ms"},
    "a sudden end": {"core.cut_at": "0.2 s", "core.cut_fall_time": "0.3 ms"},
    "a sharp edge of accretion": {"core.accretion_sharpness": 15.0},
}


def burst_of(name: str) -> Burst:
    """Change the ordinary collapse in one way."""
    return Burst.preset("ordinary-collapse").replace(FAST[name])


@pytest.mark.parametrize("name", FAST)
@pytest.mark.parametrize("threshold_mev", [0.0, 15.0])
def test_counts_to_three_in_a_million(name: str, threshold_mev: float) -> None:
    """Counts of a flat-topped and of a steep reaction agree with scipy's quad to 3e-6.

    The reaction counts neutrinos with (E - threshold)², or its fourth power above 15 MeV; 3e-6 is
    what 8 points a panel are promised to reach.
    """
    burst = burst_of(name)
    x, w = np.polynomial.legendre.leggauss(40)
    energies = threshold_mev + 60.0 * (x + 1)
    sigma = w * (energies - threshold_mev) ** (4 if threshold_mev else 2)

    def counts(times: np.ndarray) -> np.ndarray:
        return burst.rate(times, energies) @ sigma

    found = panel_integrals(counts, burst.time_panels()).sum(axis=-1)
    edges = sorted({-0.03, 0.001, 0.01, 0.06, 0.201, 0.21, 1.0, 4.0, 12.0, 80.0, *burst.joints_s})
    # quad stops at 1e-9 of each piece, far below what is tested
    reference = [
        sum(
            quad(lambda t, s=s: counts(np.array([t]))[s, 0], *piece, epsrel=1e-9, limit=200)[0]
            for piece in itertools.pairwise(edges)
        )
        for s in (0, 1, 2)
    ]
    assert found[:3] == pytest.approx(reference, rel=3e-6)


@pytest.mark.parametrize("name", FAST)
def test_panels_span_the_burst_and_break_at_joints(name: str) -> None:
    """Panels run from start to end, ascend, and break at every joint."""
    burst = burst_of(name)
    edges = burst.time_panels()
    assert (edges[0], edges[-1]) == (burst.start_s, burst.end_s)
    assert np.all(np.diff(edges) > 1e-9)
    for joint in burst.joints_s:
        assert np.min(np.abs(edges - joint)) < 1e-11


def test_few_panels() -> None:
    """The ordinary collapse needs no more than twenty panels."""
    assert len(Burst.preset("ordinary-collapse").time_panels()) <= 21
