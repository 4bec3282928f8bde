"""Pictures of a burst: luminosities, mean energies, fluences."""

from __future__ import annotations

import numpy as np
import pytest
from matplotlib import pyplot as plt

from tenkpc import Adiabatic, Burst
from tenkpc.errors import InputError
from tenkpc.show import plot
from tenkpc.species import MULTIPLICITY

FLOWING = [name for name in Burst.presets() if not Burst.preset(name).time_integrated]


@pytest.mark.parametrize("name", FLOWING)
def test_every_preset_in_time_is_drawn(name, words_on, check_looks):
    """Species, phases, pinchings and shares are named, and the whole energy at the foot."""
    axes = plot.burst(Burst.preset(name))
    words = words_on(axes.figure)
    assert {"νe", "νx, both kinds", "10%", "90%"} < set(words)
    assert f"ν̄e, α = {Burst.preset(name).summary().pinching[1]:.1f}" in words
    assert any("erg in all" in text.replace("\n", " ") for text in words)
    check_looks(axes.figure)


def test_areas_are_luminosities_of_all_kinds():
    """The top of the stack is the luminosity of six kinds."""
    burst = Burst.preset("ordinary-collapse")
    axes = plot.burst(burst)
    times, tops = max((line.get_data() for line in axes.lines), key=lambda d: np.max(d[1]))
    expected = MULTIPLICITY @ burst.luminosity(times) / 1e52
    assert tops == pytest.approx(expected)


def test_widths_of_the_lines_are_a_quarter_of_the_spectra():
    """The band of the electron antineutrinos, read back in the middle of the accretion."""
    burst = Burst.preset("ordinary-collapse")
    lower = plot.burst(burst).figure.axes[1]
    corners = lower.collections[1].get_paths()[0].vertices
    times = np.unique(corners[:, 0])
    at = times[np.argmin(np.abs(times - 0.2))]
    ends = np.unique(corners[corners[:, 0] == at, 1])
    assert ends.mean() == pytest.approx(burst.mean_energy(at)[1, 0])
    assert np.ptp(ends) == pytest.approx(0.25 * burst.energy_width(at)[1, 0])


def test_triangles_stand_where_shares_are_emitted():
    """Half of the energy of the ordinary burst is emitted between 0.5 and 2 seconds."""
    axes = plot.burst(Burst.preset("ordinary-collapse"))
    marks = [float(line.get_xdata()[0]) for line in axes.lines if line.get_marker() == "^"]
    assert len(marks) == 3
    assert 0.05 < marks[0] < 0.3 < marks[1] < 2 < marks[2] < 15


def test_a_second_burst_is_thin(check_looks):
    """Its luminosity fits in, dashed, and it is named at the foot."""
    axes = plot.burst(Burst.preset("early-explosion"), other=Burst.preset("slow-accretion"))
    assert axes.get_ylim()[1] > 30
    check_looks(axes.figure)


def test_a_burst_without_times_is_refused():
    """A sentence, for either of the two."""
    integrated = Burst.preset("equipartition")
    with pytest.raises(InputError, match="integrated over time"):
        plot.burst(integrated)
    with pytest.raises(InputError, match="integrated over time"):
        plot.burst(Burst.preset("ordinary-collapse"), other=integrated)


def test_fluences_are_those_of_the_forecast(hall, words_on, check_looks):
    """Four panels; the heavy line is what arrives, the grey area what was emitted."""
    axes = plot.fluence(hall)
    panels = axes.figure.axes
    assert len(panels) == 4
    inverted = hall.converted(Adiabatic("inverted"))
    for place, panel in enumerate(panels):
        energy, heavy = panel.lines[0].get_data()
        assert heavy == pytest.approx(hall.fluence(energy)[place])
        lines = [line.get_ydata() for line in panel.lines]
        assert any(np.array_equal(line, inverted.fluence(energy)[place]) for line in lines)
        grey = panel.collections[0].get_paths()[0].vertices[:, 1].max()
        assert grey == pytest.approx(hall.fluence(energy, converted=False)[place].max())
    words = words_on(axes.figure)
    named = {"arriving", "inverted ordering", "equilibrated", "grey: emitted, unconverted"}
    assert named < set(words)
    assert "ONE kind" in panels[0].get_ylabel()
    assert "10 kpc" in axes.figure.get_supxlabel()
    check_looks(axes.figure)


def test_the_fluence_is_conserved(hall):
    """Conversion moves neutrinos between kinds and loses none."""
    energy = np.array([3.0, 11.0, 25.0])
    before, after = hall.fluence(energy, converted=False), hall.fluence(energy)
    assert MULTIPLICITY @ before == pytest.approx(MULTIPLICITY @ after, rel=1e-12)
    twice = hall.at("20 kpc").fluence(energy)
    assert twice == pytest.approx(after / 4)


def test_pictures_go_on_axes_of_the_users_own(hall):
    """Two axes for a burst, four for fluences; no figure is made."""
    _, two = plt.subplots(2)
    _, four = plt.subplots(2, 2)
    before = plt.get_fignums()
    assert plot.burst(hall.burst, ax=two) is two[0]
    assert plot.fluence(hall, ax=four) is four[0, 0]
    assert plt.get_fignums() == before


def test_too_few_axes_are_refused(hall):
    """A burst needs two, fluences four."""
    _, one = plt.subplots()
    with pytest.raises(InputError, match="draws on 2 axes, found 1"):
        plot.burst(hall.burst, ax=one)
    with pytest.raises(InputError, match="draws on 4 axes, found 1"):
        plot.fluence(hall, ax=one)
