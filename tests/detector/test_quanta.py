"""Thresholds in numbers of quanta: against simulation and closed limits."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tenkpc.detector.quanta import Above, Registered, Yield
from tenkpc.detector.quenching import lindhard

KINETIC = np.array([0.0005, 0.002, 0.005, 0.02])
FLAT = Yield((0.0,), (1000.0,))


def simulated(rng, mean, registered, trials=200_000):
    """Share of trials in which enough quanta are registered."""
    if registered.binomial:
        released = np.floor(mean) + (rng.random(trials) < mean % 1)
    else:
        released = rng.poisson(mean, trials)
    found = rng.binomial(released.astype(int), registered.probability)
    return np.mean(found >= registered.at_least)


@pytest.mark.parametrize("binomial", [False, True])
@pytest.mark.parametrize(("number", "probability"), [(1, 1.0), (1, 0.3), (3, 0.3), (4, 0.9)])
def test_against_simulation(number, probability, binomial):
    """Released, then registered one by one: within five standard deviations."""
    made = Registered(number, FLAT, probability, binomial)
    rng = np.random.default_rng(5)
    for kinetic, kept in zip(KINETIC, made.kept(KINETIC), strict=True):
        share = simulated(rng, 1000 * kinetic, made)
        assert abs(share - kept) <= 5 * np.sqrt(max(kept * (1 - kept), 1e-6) / 200_000)


@given(st.floats(0, 0.1), st.floats(0, 0.1), st.integers(1, 8), st.floats(0, 1), st.booleans())
def test_more_energy_is_never_kept_less_often(first, second, number, probability, binomial):
    """Between 0 and 1, and monotone."""
    made = Registered(number, FLAT, probability, binomial)
    low, high = made.kept(np.sort(np.array([first, second])))
    assert 0 <= low <= high + 1e-12 <= 1 + 2e-12


def test_a_fixed_number_all_of_which_is_registered_is_a_step():
    """With every quantum registered the binomial threshold rises from none to all over one."""
    made = Registered(4, FLAT, 1.0, binomial=True)
    assert made.kept(np.array([0.003, 0.0035, 0.004, 0.9])) == pytest.approx([0.0, 0.5, 1.0, 1.0])


def test_yields():
    """A table is linear inside and zero or held outside; per keVee it goes with the quenching."""
    knots = ((0.001, 0.003), (1000.0, 3000.0))
    at = np.array([0.0005, 0.002, 0.004])
    assert Yield(*knots).mean(at) == pytest.approx([0.5, 4.0, 12.0])
    assert Yield(*knots, zero_outside=True).mean(at) == pytest.approx([0.0, 4.0, 0.0])
    quenched = lindhard(54, 131)
    assert Yield((0.0,), (1000.0,), light=quenched).mean(at) == pytest.approx(
        1000 * quenched.visible(at)
    )


def test_a_cut_in_another_kind_of_energy():
    """All above and none below, with a border at the cut."""
    made = Above(0.002)
    assert made.kept(np.array([0.0019, 0.0021])).tolist() == [0.0, 1.0]
    assert made.knots_mev == (0.002,)
