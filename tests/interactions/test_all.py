"""What must hold for every interaction, under every option."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tenkpc import interactions
from tenkpc.detector.materials import nucleus
from tenkpc.errors import UnknownNameError
from tenkpc.interactions.base import HIGHEST_ENERGY_MEV, Fixed, Shifted, Spread
from tenkpc.species import SPECIES

CASES = [
    (key, option) for key in interactions.KEYS for option in interactions.OPTIONS.get(key, (None,))
]
XENON = nucleus("Xe-132")
EVERY = pytest.mark.parametrize(("key", "option"), CASES, ids=lambda value: value or "")
ENERGIES = st.floats(0, HIGHEST_ENERGY_MEV)


def reaction(key, option=None):
    """Give an interaction, on xenon where it needs a nucleus."""
    made = interactions.by_key(key, option)
    return made if made.of_nucleus is None else made.on(XENON)


@EVERY
@given(ENERGIES)
def test_cross_sections_are_finite_and_closed_below_threshold(key, option, energy):
    """No negative, no infinite value up to 200 MeV, and nothing below the threshold."""
    made = reaction(key, option)
    for species in SPECIES:
        sigma = float(made.sigma(species, energy))
        assert np.isfinite(sigma)
        assert sigma >= 0
        if energy < made.threshold_mev:
            assert sigma == 0


@EVERY
def test_errors_are_positive_and_finite(key, option):
    """1σ of ln σ at every energy, no more than a factor of ten."""
    energy = np.linspace(0.0, HIGHEST_ENERGY_MEV, 401)
    for states in reaction(key, option).branches.values():
        for state in states:
            error = state.relative_error(energy)
            assert error.shape == energy.shape
            assert np.all((error > 0) & (error < np.log(10)))


@EVERY
def test_final_states_tell_themselves_apart(key, option):
    """States of one label are seen alike; windows begin at thresholds; every one has its words."""
    made = reaction(key, option)
    assert made.key == key
    assert made.references
    for states in made.branches.values():
        seen = {(state.label, state.seen_as()) for state in states}
        alike = {(state.label, state.neutrons, state.delayed) for state in states}
        assert len(alike) == len({label for label, _ in seen})
        assert min(state.window_mev[0] for state in states) >= made.threshold_mev - 1e-9
        assert all(state.window_mev[0] < state.window_mev[1] for state in states)
        assert all(state.seen_as() for state in states)


@EVERY
def test_energy_is_not_made(key, option):
    """What a final state shows never exceeds the neutrino's energy and what capture releases.

    Charged current: kinetic energy, gammas and protons together are less than E − threshold of
    the ground state plus the level's energy, which is E itself; a line is at most its threshold.
    """
    made = reaction(key, option)
    for states in made.branches.values():
        for state in states:
            extra = sum(energy for _, energy in state.extras)
            match state.deposit:
                case Shifted(offset_mev=offset):
                    assert offset >= 0
                    assert extra <= offset
                case Fixed(kinetic_mev=kinetic):
                    assert kinetic + extra <= state.window_mev[0] + 1e-9
                case Spread():
                    recoil = np.array([0.5, 5.0, 40.0])
                    assert np.all(state.deposit.lowest_mev(recoil) >= recoil)


def test_nothing_is_counted_twice():
    """One key for each reaction: the same target and the same products stand nowhere else."""
    seen = {}
    for key in interactions.KEYS:
        made = reaction(key)
        for species, states in made.branches.items():
            for state in states:
                extras = tuple(sorted(state.extras))
                what = (made.target, species, state.lead, repr(state.deposit)[:60], extras)
                what += (state.neutrons, state.window_mev[0])
                assert seen.get(what, key) == key
                seen[what] = key
        assert made.target == "electron" or made.target[0].isalpha()
    assert tuple(sorted(interactions.KEYS)) == interactions.KEYS


def test_every_equation_is_its_own():
    """No two keys print the same reaction."""
    equations = [interactions.by_key(key).equation for key in interactions.KEYS]
    assert len(set(equations)) == len(equations)


def test_unknown_keys_and_options_are_answered_with_the_nearest():
    """Names that are not there."""
    with pytest.raises(UnknownNameError, match="did you mean 'proton-scattering'"):
        interactions.by_key("proton-scatering")
    with pytest.raises(UnknownNameError, match="did you mean 'with-strangeness'"):
        interactions.by_key("proton-scattering", "with-strangenes")


@EVERY
def test_angles_are_held_like_cross_sections(key, option):
    """Mean cosines lie between -1 and 1, and stay where a cross section is held."""
    for states in reaction(key, option).branches.values():
        for state in states:
            if state.mean_cosine is None:
                continue
            start, end = state.window_mev
            inside = np.linspace(start + 0.5, min(end, HIGHEST_ENERGY_MEV), 21)
            assert np.all(np.abs(state.mean_cosine(inside)) <= 1)
            beyond = np.array([end, 0.5 * (end + HIGHEST_ENERGY_MEV)])
            held = end < HIGHEST_ENERGY_MEV and np.ptp(state.sigma_cm2(beyond)) == 0
            if held:
                assert np.ptp(state.mean_cosine(beyond)) < 1e-12
