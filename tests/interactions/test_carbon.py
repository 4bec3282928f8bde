"""Carbon-12: computed tables, decays, what holds between its three reactions."""

from __future__ import annotations

import numpy as np
import pytest

from tenkpc import interactions
from tenkpc.interactions.base import Fixed, Shifted
from tenkpc.species import SPECIES

NITROGEN = interactions.by_key("carbon-12-to-nitrogen-12")
BORON = interactions.by_key("carbon-12-to-boron-12")
LEVEL = interactions.by_key("carbon-12-excited")

# an independent slow calculation, 1e-42 cm²: E in MeV, then to ¹²N and above it, to ¹²B and
# above it, to the level by neutrinos and antineutrinos
TABLE = (
    (15.0, 0, 0, 0.024296, 0, 0, 0),
    (17.5, 0.0091513, 0, 0.28002, 0, 0.07349, 0.069277),
    (20.0, 0.28572, 0, 0.78778, 0, 0.30752, 0.28565),
    (25.0, 1.924, 0.019565, 2.4786, 0.090765, 1.2502, 1.1279),
    (30.0, 4.9994, 0.50659, 4.9224, 0.58973, 2.7968, 2.4516),
    (35.0, 9.4436, 2.2871, 7.9331, 1.8859, 4.891, 4.1681),
    (40.0, 15.128, 6.4979, 11.324, 4.4199, 7.4544, 6.1803),
    (50.0, 29.444, 28.178, 18.549, 14.83, 13.595, 10.697),
    (60.0, 46.038, 79, 25.419, 34.044, 20.345, 15.266),
    (70.0, 62.737, None, 31.173, None, 26.832, 19.318),
    (80.0, 77.57, None, 35.496, None, 32.35, 22.517),
    (90.0, 89.139, None, 38.436, None, 36.47, 24.764),
    (100.0, 96.812, None, 40.261, None, 39.072, 26.141),
)


@pytest.mark.parametrize("row", TABLE, ids=lambda row: f"{row[0]:g} MeV")
def test_cross_sections_are_those_of_the_slow_calculation(row):
    """All six columns inside their windows: 1e-3, from rounded thresholds near them."""
    energy, *expected = row
    found = [
        *(float(s.sigma_cm2(np.array(energy))) for s in NITROGEN.final_states("nu_e")),
        *(float(s.sigma_cm2(np.array(energy))) for s in BORON.final_states("anti_nu_e")),
        float(LEVEL.sigma("nu_x", energy)),
        float(LEVEL.sigma("anti_nu_e", energy)),
    ]
    for mine, theirs in zip(found, expected, strict=True):
        if theirs is not None:
            assert mine * 1e42 == pytest.approx(theirs, rel=1e-3)


def test_mean_cosines_are_those_of_the_slow_calculation():
    """Of electron and positron at some energies, three digits."""
    table = {20.0: (-0.123, -0.089), 30.0: (-0.121, -0.060), 50.0: (-0.091, 0.028)}
    for energy, (electron, positron) in table.items():
        found = NITROGEN.final_states("nu_e")[0].mean_cosine(np.array(energy))
        assert float(found) == pytest.approx(electron, abs=6e-4)
        found = BORON.final_states("anti_nu_e")[0].mean_cosine(np.array(energy))
        assert float(found) == pytest.approx(positron, abs=6e-4)


def test_values_above_the_window_are_held():
    """The ground states stay as at 100 MeV, the parts above them as at 60 MeV."""
    ground, above = NITROGEN.final_states("nu_e")
    assert ground.sigma_cm2(np.array(150.0)) == ground.sigma_cm2(np.array(100.0))
    assert above.sigma_cm2(np.array(150.0)) == above.sigma_cm2(np.array(60.0))
    assert ground.window_mev[1] == 100.0
    assert above.window_mev[1] == 60.0


def test_the_level_decays_in_three_ways_that_add_up():
    """Shares of one; gammas carry the whole level, alphas what is left after the break-up."""
    for species in SPECIES:
        states = LEVEL.final_states(species)
        shares = [float(s.sigma_cm2(np.array(30.0)) / LEVEL.sigma(species, 30.0)) for s in states]
        assert shares == pytest.approx([0.90, 0.06, 0.04], rel=1e-12)
        energies = [s.deposit.kinetic_mev + sum(e for _, e in s.extras) for s in states]
        assert energies == pytest.approx([15.11, 15.11, 7.835], abs=1e-9)
        assert all(isinstance(s.deposit, Fixed) for s in states)


def test_offsets_and_tags():
    """Kinetic energies start at the thresholds; decays, neutrons and protons are where they are."""
    ground, above = NITROGEN.final_states("nu_e")
    assert ground.deposit == Shifted(pytest.approx(17.338))
    assert above.deposit == Shifted(pytest.approx(17.338 + 6.5))
    assert (ground.delayed, ground.neutrons, ground.extras) == ("N-12", 0, ())
    assert above.extras == (("proton", 5.4),)
    ground, above = BORON.final_states("anti_nu_e")
    assert ground.deposit == Shifted(pytest.approx(14.3914))
    assert (ground.delayed, ground.neutrons) == ("B-12", 0)
    assert (above.delayed, above.neutrons) == (None, 1)


def test_errors_grow_with_energy():
    """4 % at 20 MeV, 6 % at 50 MeV, 20 % at 100 MeV and held, half as much again for nothing."""
    ground, above = NITROGEN.final_states("nu_e")
    found = ground.relative_error(np.array([20.0, 42.5, 50.0, 100.0, 150.0]))
    assert found == pytest.approx([0.04, 0.05, 0.06, 0.20, 0.20])
    assert above.relative_error(np.array([40.0])) == pytest.approx([0.25])
