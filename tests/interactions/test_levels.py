"""Carbon-13 and oxygen-18: computed tables, windows, what is emitted."""

from __future__ import annotations

import numpy as np
import pytest

from tenkpc import interactions
from tenkpc.interactions.base import Fixed, Shifted

NITROGEN = interactions.by_key("carbon-13-to-nitrogen-13")
EXCITED = interactions.by_key("carbon-13-excited")
FLUORINE = interactions.by_key("oxygen-18-to-fluorine-18")

# an independent slow calculation, 1e-42 cm²: E in MeV, to the ground state of nitrogen-13, to its
# level at 3.5 MeV, neutral current, to fluorine-18
TABLE = (
    (5.0, 0.27523, 0, 0.010716, 1.8397),
    (10.0, 1.7583, 0.66465, 0.24857, 10.635),
    (15.0, 4.496, 2.8158, 0.79707, 26.717),
    (17.5, 6.3183, 4.4514, 1.1844, 37.426),
    (20.0, 8.4293, 6.4541, 1.6436, 49.846),
    (25.0, 13.466, 11.519, 2.7631, 79.514),
    (30.0, 19.482, 17.886, 4.1193, 114.96),
    (40.0, 33.846, 33.755, 7.3528, 199.15),
    (60.0, 66.982, 70.669, 14.365, 386.15),
    (80.0, 97.397, 100.39, 19.56, 537.34),
    (100.0, 119.14, 113.69, 21.649, 616.52),
)


@pytest.mark.parametrize("row", TABLE, ids=lambda row: f"{row[0]:g} MeV")
def test_cross_sections_are_those_of_the_slow_calculation(row):
    """All four columns to 2e-4, from thresholds rounded to 1 keV."""
    energy, *expected = row
    ground, level = NITROGEN.final_states("nu_e")
    found = [
        float(ground.sigma_cm2(np.array(energy))),
        float(level.sigma_cm2(np.array(energy))),
        float(EXCITED.sigma("nu_x", energy)),
        float(FLUORINE.sigma("nu_e", energy)),
    ]
    assert np.array(found) * 1e42 == pytest.approx(expected, rel=2e-4)


def test_values_above_the_window_are_held():
    """As at 100 MeV."""
    for interaction, species in ((NITROGEN, "nu_e"), (EXCITED, "nu_x"), (FLUORINE, "nu_e")):
        assert interaction.sigma(species, 180.0) == interaction.sigma(species, 100.0)


def test_levels_emit_what_they_must():
    """A proton from 3.5 MeV, gammas from the others, nothing from ground states; no fast decay."""
    ground, level = NITROGEN.final_states("nu_e")
    assert (ground.deposit, ground.extras) == (Shifted(2.2205), ())
    # 12/13 of what 3.502 MeV leave above the separation energy of 1.944 MeV
    assert level.extras == (("proton", pytest.approx(12 / 13 * (3.502 - 1.944), abs=0.005)),)
    _, analogue = FLUORINE.final_states("nu_e")
    assert analogue.extras == (("gamma", 1.04),)
    (gamma,) = EXCITED.final_states("anti_nu_x")
    assert gamma.deposit == Fixed(3.68)
    states = (ground, level, analogue, gamma)
    assert all(s.delayed is None and s.neutrons == 0 for s in states)


def test_antineutrinos_scatter_a_little_less():
    """Weak magnetism changes its sign: a few per cent at 20 MeV."""
    ratio = EXCITED.sigma("anti_nu_e", 20.0) / EXCITED.sigma("nu_e", 20.0)
    assert 0.9 < float(ratio) < 0.98


def test_strengths_are_those_of_the_decays():
    """At small energies σ is G² p E F (B(F) + S): 1.321, 4.96, and 2 for the analogue."""
    ground, _ = NITROGEN.final_states("nu_e")
    one, two = FLUORINE.final_states("nu_e")
    kinetic = np.array([0.5])
    values = [float(s.sigma_cm2(kinetic + s.window_mev[0])[0]) for s in (ground, one, two)]
    # the same lepton energy, so charges and strengths alone make the ratios
    from tenkpc.interactions.coulomb import fermi_function

    momentum = np.sqrt(kinetic * (kinetic + 2 * 0.51099895))
    coulomb = [float(fermi_function(momentum, z, a)[0]) for z, a in ((7, 13), (9, 18), (9, 18))]
    strengths = np.array(values) / np.array(coulomb)
    assert strengths[1:] / strengths[0] == pytest.approx([4.961 / 1.3208, 2 / 1.3208], rel=0.02)
