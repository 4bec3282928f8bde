"""Parts of a burst: shapes in time, closed moments, and limits."""

import dataclasses
import math

import numpy as np
import pytest
from scipy.integrate import quad

from tenkpc.constants import MEV_PER_ERG
from tenkpc.source.components import Core, Integrated, Peak, Pinched, Thermal

PEAK = Peak(
    peak_luminosity_mev_s=3.8e53 * MEV_PER_ERG,
    peak_time_s=5e-3,
    rise_time_s=2.5e-3,
    fall_time_s=5.5e-3,
    mean_energy_mev=11.5,
    pinching=3.8,
)
CORE = Core(
    accretion_mev_s=(3e58, 2.8e58, 1.5e58, 1.4e58),
    growth=(0.2, 0.1, 0.0, 0.0),
    mean_energy_mev=(10.0, 12.0, 14.0, 14.5),
    mean_energy_end_mev=(12.0, 14.0, 15.0, 15.5),
    pinching=(3.0, 3.4, 2.3, 2.4),
    cooling_mev_s=(2e58, 2e58, 2.1e58, 2.1e58),
    cooling_mean_energy_mev=(10.0, 12.0, 12.5, 12.5),
    cooling_pinching=(2.7, 2.5, 2.2, 2.2),
    rise_time_s=0.03,
    accretion_time_s=0.4,
    accretion_sharpness=2.0,
    growth_time_s=0.4,
    plateau_s=0.5,
    cooling_power=1.1,
    cooling_time_s=8.0,
    cooling_sharpness=1.4,
    energy_time_s=11.0,
    energy_power=0.5,
)
ENERGIES = np.linspace(0.0, 200.0, 41)
TIMES = np.array([-0.02, 0.0, 0.004, 0.1, 0.4, 2.0, 30.0])


# computed for peaks of 3.8, 3.5 and 4.0e53 erg/s at 11.5, 11 and 12 MeV
@pytest.mark.parametrize(
    ("luminosity", "mean", "energy_erg", "number"),
    [
        (3.8e53, 11.5, 3.8101e51, 2.0679e56),
        (3.5e53, 11.0, 3.5093e51, 1.9912e56),
        (4.0e53, 12.0, 4.0106e51, 2.0860e56),
    ],
)
def test_energy_of_a_peak(luminosity: float, mean: float, energy_erg: float, number: float) -> None:
    """A split Gaussian holds L sqrt(pi/2) (rise + fall), to the digits of the table."""
    peak = dataclasses.replace(
        PEAK, peak_luminosity_mev_s=luminosity * MEV_PER_ERG, mean_energy_mev=mean
    )

    def integral(order: int) -> float:
        sides = [(-0.05, 5e-3), (5e-3, 0.1)]
        return sum(
            quad(lambda t: peak.moment(order, np.array([t]))[0, 0], *s, epsrel=1e-11)[0]
            for s in sides
        )

    assert integral(1) / MEV_PER_ERG == pytest.approx(energy_erg, rel=2e-5)
    assert integral(0) == pytest.approx(number, rel=4e-5)
    closed = luminosity * math.sqrt(math.pi / 2) * (PEAK.rise_time_s + PEAK.fall_time_s)
    assert integral(1) / MEV_PER_ERG == pytest.approx(closed, rel=1e-9)


def test_width_of_a_peak() -> None:
    """The full width at half maximum is 9.419 ms for widths of 2.5 and 5.5 ms."""
    half = math.sqrt(2 * math.log(2))
    ends = np.array([5e-3 - half * 2.5e-3, 5e-3 + half * 5.5e-3])
    np.testing.assert_allclose(PEAK.luminosity_mev_s(ends) / PEAK.peak_luminosity_mev_s, 0.5)
    assert (ends[1] - ends[0]) * 1e3 == pytest.approx(9.419, abs=5e-4)


def test_a_peak_is_of_electron_neutrinos() -> None:
    """All other species of a peak are zero."""
    rate = PEAK.rate(TIMES, ENERGIES)
    assert rate.shape == (4, len(TIMES), len(ENERGIES))
    assert rate[0].max() > 0
    assert not rate[1:].any()


@pytest.mark.parametrize("part", [PEAK, CORE], ids=["peak", "core"])
@pytest.mark.parametrize("order", [0, 1, 2])
def test_moments_are_integrals_of_the_rate(part: Peak | Core, order: int) -> None:
    """Closed moments equal the quadrature of the rate over energy."""
    x, w = np.polynomial.legendre.leggauss(60)
    edges = np.array([0.0, 10.0, 30.0, 80.0, 250.0])
    low, width = edges[:-1, None], np.diff(edges)[:, None]
    energies, weights = (low + 0.5 * width * (x + 1)).ravel(), (0.5 * width * w).ravel()
    integral = part.rate(TIMES, energies) @ (weights * energies**order)
    # 60 points a panel are exact to rounding but for E^α at zero, with α of 2.2 to 3.8
    np.testing.assert_allclose(integral, part.moment(order, TIMES), rtol=1e-8)


def test_core_is_the_stated_formula() -> None:
    """Luminosity, mean energy and pinching equal the formula written out for one time."""
    t, s = 0.25, 2
    rise, w, u = 1 - math.exp(-t / 0.03), math.exp(-((t / 0.4) ** 2)), t / 0.4
    cooling = 2.1e58 * (1 + t / 0.5) ** -1.1 * math.exp(-((t / 8) ** 1.4))
    luminosity = rise * (1.5e58 * w + cooling)
    energy = w * (14 + u) + (1 - w) * 12.5 * (1 + t / 11) ** -0.5
    assert CORE.luminosity_mev_s([t])[s, 0] == pytest.approx(luminosity, rel=1e-13)
    assert CORE.mean_energy([t])[s, 0] == pytest.approx(energy, rel=1e-13)
    assert CORE.pinching_at([t])[s, 0] == pytest.approx(w * 2.3 + (1 - w) * 2.2, rel=1e-13)
    grown = CORE.luminosity_mev_s([t])[0, 0]
    without = dataclasses.replace(CORE, growth=(0.0,) * 4).luminosity_mev_s([t])[0, 0]
    assert grown - without == pytest.approx(rise * 3e58 * 0.2 * u * w, rel=1e-10)


def test_nothing_before_bounce() -> None:
    """A core is dark until bounce."""
    assert not CORE.rate(np.array([-1.0, -1e-3, 0.0]), ENERGIES).any()


def test_gate_of_a_black_hole() -> None:
    """Before the cut nothing changes; after it everything falls exponentially."""
    cut = dataclasses.replace(CORE, cut_at_s=0.55, cut_fall_time_s=5e-4)
    before, after = np.array([0.1, 0.5499]), np.array([0.5505, 0.552])
    np.testing.assert_array_equal(cut.rate(before, ENERGIES), CORE.rate(before, ENERGIES))
    ratio = cut.luminosity_mev_s(after) / CORE.luminosity_mev_s(after)
    np.testing.assert_allclose(ratio, np.tile(np.exp([-1.0, -4.0]), (4, 1)), rtol=1e-9)
    assert {0.55, 0.554, 0.57} <= {round(t, 9) for t in cut.joints_s}


def test_endless_and_sharp_accretion() -> None:
    """Accretion without an end never fades; with an infinite sharpness it is a step."""
    endless = dataclasses.replace(CORE, accretion_time_s=math.inf)
    np.testing.assert_array_equal(endless.pinching_at([5.0])[:, 0], CORE.pinching)
    step = dataclasses.replace(CORE, accretion_sharpness=math.inf)
    shape = step.pinching_at([0.39, 0.41])
    np.testing.assert_array_equal(shape, np.array([CORE.pinching, CORE.cooling_pinching]).T)


@pytest.mark.parametrize(
    "spectrum",
    [
        Pinched((10.0, 12.0, 14.0, 15.0), (3.0, 2.5, 0.5, 2.0)),
        Thermal((3.0, 4.0, 4.4, 4.5), (2.0, 0.0, -1.0, 0.0)),
    ],
    ids=["pinched", "thermal"],
)
def test_integrated_holds_its_energy(spectrum: Pinched | Thermal) -> None:
    """The first moment of what is emitted is the energy, for both kinds of spectra."""
    part = Integrated((3e58, 2e58, 1e58, 0.0), spectrum)
    np.testing.assert_allclose(part.moment(1), part.energy_mev, rtol=1e-13)
    for species in range(3):
        total = quad(lambda e, s=species: e * part.emitted([e])[s, 0], 0, 300, epsrel=1e-10)[0]
        assert total == pytest.approx(part.energy_mev[species], rel=1e-9)
    assert not part.emitted(ENERGIES)[3].any()
