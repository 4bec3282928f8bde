"""Oxygen-16: the table of the fit, groups and tags, gammas and why their constant is halved."""

from __future__ import annotations

import numpy as np
import pytest

from tenkpc import interactions
from tenkpc.interactions.base import Fixed
from tenkpc.species import SPECIES

FLUORINE = interactions.by_key("oxygen-16-to-fluorine-16")
NITROGEN = interactions.by_key("oxygen-16-to-nitrogen-16")
GAMMAS = interactions.by_key("oxygen-16-excited")

# an independent slow calculation, 1e-42 cm²: E in MeV, to fluorine, to nitrogen, gammas
TABLE = (
    (15.0, 0, 0.012582, 0),
    (17.5, 0.0050275, 0.051829, 0.00014453),
    (20.0, 0.03524, 0.14421, 0.0023125),
    (25.0, 0.36397, 0.71241, 0.037),
    (30.0, 1.8961, 2.5122, 0.18731),
    (35.0, 6.4424, 6.3534, 0.592),
    (40.0, 16.18, 12.87, 1.4453),
    (50.0, 59.457, 35.786, 5.5523),
    (60.0, 146.89, 74.063, 15.172),
    (70.0, 291.54, 129.48, None),
    (80.0, 504.6, 203.21, None),
    (90.0, 795.79, 296.03, None),
    (100.0, 1173.6, 408.46, None),
)
# share of each group in the total, from the same
SHARES = {
    20: ((1.0, 0.0, 0.0, 0.0), (0.945, 0.055, 0.0, 0.0)),
    40: ((0.348, 0.449, 0.034, 0.17), (0.325, 0.311, 0.192, 0.172)),
    100: ((0.197, 0.395, 0.119, 0.289), (0.204, 0.329, 0.22, 0.247)),
}


@pytest.mark.parametrize("row", TABLE, ids=lambda row: f"{row[0]:g} MeV")
def test_cross_sections_are_those_of_the_slow_calculation(row):
    """Inside their windows, to the digits of the table: 5e-5."""
    energy, *expected = row
    found = (
        FLUORINE.sigma("nu_e", energy),
        NITROGEN.sigma("anti_nu_e", energy),
        GAMMAS.sigma("nu_x", energy),
    )
    for mine, theirs in zip(found, expected, strict=True):
        if theirs is not None:
            assert float(mine) * 1e42 == pytest.approx(theirs, rel=5e-5)


@pytest.mark.parametrize("energy", SHARES)
def test_groups_have_their_shares(energy):
    """Each group's part of the total, three digits."""
    for interaction, species, expected in zip(
        (FLUORINE, NITROGEN), ("nu_e", "anti_nu_e"), SHARES[energy], strict=True
    ):
        states = interaction.final_states(species)
        total = interaction.sigma(species, energy)
        found = [float(s.sigma_cm2(np.array(float(energy))) / total) for s in states]
        assert found == pytest.approx(expected, abs=6e-4)


def test_no_group_rises_towards_its_threshold():
    """The parabola of the fit would turn up again where no electron can leave: it is cut there."""
    for interaction, species in ((FLUORINE, "nu_e"), (NITROGEN, "anti_nu_e")):
        for state in interaction.final_states(species):
            energy = np.linspace(10.0, 100.0, 9001)
            assert np.all(np.diff(state.sigma_cm2(energy)) >= 0)
            assert state.sigma_cm2(np.array(state.window_mev[0])) == 0


def test_values_above_the_window_are_held():
    """Charged current as at 100 MeV, gammas as at 60 MeV."""
    assert FLUORINE.sigma("nu_e", 180.0) == FLUORINE.sigma("nu_e", 100.0)
    assert GAMMAS.sigma("nu_e", 180.0) == GAMMAS.sigma("nu_e", 60.0)


def test_bound_nitrogen_decays_and_the_rest_has_a_neutron():
    """The first group is ¹⁶N that lives for seconds; the others end in a neutron and ¹⁵N."""
    first, *others = NITROGEN.final_states("anti_nu_e")
    assert (first.delayed, first.neutrons) == ("N-16", 0)
    assert all((s.delayed, s.neutrons) == (None, 1) for s in others)
    assert all((s.delayed, s.neutrons) == (None, 0) for s in FLUORINE.final_states("nu_e"))


def test_every_gamma_line_is_bound_and_has_its_share():
    """Shares of one, lines between 5 and 6.4 MeV, the same for each of the species."""
    for species in SPECIES:
        states = GAMMAS.final_states(species)
        total = GAMMAS.sigma(species, 40.0)
        assert sum(float(s.sigma_cm2(np.array(40.0))) for s in states) == pytest.approx(total)
        assert all(isinstance(s.deposit, Fixed) for s in states)
        assert all(5 < s.deposit.kinetic_mev < 6.4 for s in states)


def test_errors_are_factors_near_threshold():
    """A factor 2 up to 20 MeV, 1.5 at 25 to 30 MeV, 25 % from 40 MeV; 50 % for gammas."""
    error = FLUORINE.final_states("nu_e")[0].relative_error
    found = np.exp(error(np.array([16.0, 27.0, 40.0, 80.0])))
    assert found == pytest.approx([2.0, 1.5, np.exp(0.25), np.exp(0.25)], rel=5e-3)
    gammas = GAMMAS.final_states("nu_x")[0].relative_error(np.array([30.0]))
    assert gammas == pytest.approx([0.5])
