"""Bursts that come with the package, against independently computed tables."""

import math

import numpy as np
import pytest

from tenkpc.constants import CM_PER_KPC
from tenkpc.errors import UnknownNameError
from tenkpc.source.burst import Burst

# time in s; luminosity in 1e52 erg/s, mean energy in MeV, of nu_e, anti_nu_e, each nu_x; pinching
ORDINARY = [
    (0.05, (5.6551, 5.4955, 3.8073), (10.307, 12.880, 14.638), (2.997, 3.590, 2.300)),
    (0.10, (6.3762, 6.1911, 4.2659), (10.613, 13.242, 14.721), (2.985, 3.546, 2.300)),
    (0.20, (5.4039, 5.2601, 3.6844), (11.085, 13.733, 14.602), (2.925, 3.326, 2.300)),
    (0.50, (1.6804, 1.7213, 1.5969), (10.646, 12.847, 13.061), (2.718, 2.565, 2.300)),
    (1.00, (0.9450, 0.9844, 0.9844), (10.335, 12.440, 12.631), (2.700, 2.500, 2.300)),
    (3.00, (0.3595, 0.3745, 0.3745), (9.553, 11.499, 11.675), (2.700, 2.500, 2.300)),
    (10.0, (0.0459, 0.0478, 0.0478), (7.738, 9.315, 9.458), (2.700, 2.500, 2.300)),
]


@pytest.mark.parametrize("row", ORDINARY, ids=lambda row: f"{row[0]} s")
def test_ordinary_collapse_at_a_time(row: tuple[float, tuple[float, ...], ...]) -> None:
    """Luminosities, mean energies and pinchings agree to half a unit of the last digit."""
    time, luminosity, mean, pinching = row
    burst = Burst.preset("ordinary-collapse")
    core = burst.components[1]
    assert burst.luminosity(time)[:3, 0] / 1e52 == pytest.approx(luminosity, abs=0.51e-4)
    assert burst.mean_energy(time)[:3, 0] == pytest.approx(mean, abs=0.51e-3)
    assert core.pinching_at([time])[:3, 0] == pytest.approx(pinching, abs=0.51e-3)
    np.testing.assert_array_equal(burst.luminosity(time)[2], burst.luminosity(time)[3])


def test_ordinary_collapse_in_all() -> None:
    """Total energy and net lepton number agree with the table to its digits."""
    summary = Burst.preset("ordinary-collapse").summary()
    assert summary.total_energy_erg == pytest.approx(2.8499e53, abs=0.51e49)
    assert summary.net_lepton_number == pytest.approx(7.148e56, abs=0.51e53)
    assert summary.energy_erg[1:] == pytest.approx((5.068e52, 4.515e52, 4.515e52), abs=0.51e49)
    assert summary.number[1] == pytest.approx(2.618e57, abs=0.51e54)
    assert summary.warnings == ()


def test_ordinary_collapse_without_its_peak() -> None:
    """Energies, mean energies and effective pinchings of the core alone agree with the table."""
    burst = Burst.preset("ordinary-collapse").replace({"peak.peak_luminosity": "0 erg/s"})
    core = burst.summary()
    assert core.energy_erg[:3] == pytest.approx((4.989e52, 5.068e52, 4.515e52), abs=0.51e49)
    assert core.mean_energy_mev[:3] == pytest.approx((9.962, 12.083, 12.302), abs=0.51e-3)
    assert core.pinching[:3] == pytest.approx((2.598, 2.564, 2.069), abs=0.51e-3)
    whole = Burst.preset("ordinary-collapse").summary()
    assert whole.energy_erg[0] - core.energy_erg[0] == pytest.approx(3.810e51, abs=0.51e48)


def test_ordinary_collapse_loses_the_leptons_it_should() -> None:
    """A baryon of the core, of which there are 1.8660e57, loses 0.3831 leptons."""
    lost = Burst.preset("ordinary-collapse").summary().net_lepton_number
    assert lost / 1.8660e57 == pytest.approx(0.3831, abs=0.51e-4)


def test_equipartition_fluence() -> None:
    """At 10 kpc the fluence of nu_e of 12 MeV is 2.1735e11 per square centimetre."""
    burst = Burst.preset("equipartition")
    assert burst.time_integrated
    x, w = np.polynomial.legendre.leggauss(80)
    number = 100 * w @ burst.emitted(100 * (x + 1))[0]
    area = 4 * math.pi * (10 * CM_PER_KPC) ** 2
    assert number / area == pytest.approx(2.173539e11, rel=3e-7)
    assert number == pytest.approx(2.600629e57, rel=3e-7)
    assert burst.summary().total_energy_erg == pytest.approx(3e53, rel=1e-12)


@pytest.mark.parametrize("name", Burst.presets())
def test_presets_are_complete(name: str) -> None:
    """Every preset loads, sums up to a usual energy, and says where its numbers are from."""
    burst = Burst.preset(name)
    assert burst.origin == name
    assert burst.summary().warnings == ()
    for key in ("source", "columns", "validity", "uncertainty", "obtained", "version", "date"):
        assert f"# {key}: " in burst.text
    assert "not any group's model" in burst.text


def test_unknown_preset() -> None:
    """A misspelt preset is answered with the nearest name."""
    with pytest.raises(UnknownNameError, match="did you mean 'ordinary-collapse'"):
        Burst.preset("ordinary-colapse")
