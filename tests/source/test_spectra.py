"""Energy spectra: closed forms against tables of computed values, and against mpmath."""

import math

import mpmath
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import quad

from tenkpc.errors import InputError
from tenkpc.source import spectra

# η, ⟨E⟩/T, ⟨E²⟩/⟨E⟩², equivalent α, ⟨E³⟩/⟨E⟩³; computed independently, all digits count
FERMI_DIRAC = [
    (-20.0, 3.000000, 1.3333333, 2.000000, 2.222222),
    (-5.0, 3.001261, 1.3330533, 2.002522, 2.221056),
    (-2.0, 3.024499, 1.3279812, 2.048955, 2.199929),
    (-1.0, 3.063039, 1.3199170, 2.125811, 2.166372),
    (0.0, 3.151374, 1.3029109, 2.301300, 2.095772),
    (0.5, 3.225317, 1.2900635, 2.447521, 2.042630),
    (1.0, 3.324458, 1.2745299, 2.642591, 1.978652),
    (1.5, 3.451058, 1.2570753, 2.889911, 1.907194),
    (2.0, 3.605538, 1.2387429, 3.188606, 1.832721),
    (2.5, 3.786724, 1.2205620, 3.533872, 1.759546),
    (3.0, 3.992384, 1.2033328, 3.918047, 1.690921),
    (4.0, 4.466098, 1.1734358, 4.765821, 1.573787),
    (5.0, 5.005104, 1.1501928, 5.658110, 1.484732),
    (7.0, 6.212783, 1.1196506, 7.357669, 1.370968),
    (10.0, 8.204754, 1.0965484, 9.357502, 1.287889),
    (20.0, 15.365357, 1.0750686, 12.321156, 1.213451),
]
# α, T in MeV and η for a mean of 12 MeV
PARTNERS = [
    (2.05, 3.966914, -1.978120),
    (2.3014, 3.807802, 0.000402),
    (2.5, 3.690115, 0.648162),
    (3.0, 3.420971, 1.694185),
    (3.5, 3.184031, 2.453516),
    (4.0, 2.972581, 3.101535),
    (5.0, 2.607025, 4.264155),
]
# mean, α; rms, standard deviation, mode, median; share below 10, below 20, above 50 MeV, f(10)
PINCHED = [
    (12, 3.0, 13.416408, 6.0, 9.0, 11.016182, 0.42701401, 0.89911628, 5.3627e-05, 0.07340328),
    (
        15,
        2.3,
        17.122553,
        8.257228,
        10.454545,
        13.515099,
        0.30857992,
        0.76701603,
        1.9087e-03,
        0.05570004,
    ),
    (
        10,
        2.5,
        11.338934,
        5.345225,
        7.142857,
        9.065445,
        0.57112014,
        0.94881865,
        1.1184e-05,
        0.07288384,
    ),
    (
        16,
        2.0,
        18.475209,
        9.237604,
        10.666667,
        14.261655,
        0.28953519,
        0.72293156,
        4.6074e-03,
        0.05054424,
    ),
]

means = st.floats(3.0, 40.0)
pinchings = st.floats(-0.5, 12.0)


@pytest.mark.parametrize(
    ("order", "value"), [(2, 1.80308535), (3, 5.68219698), (4, 23.33087449), (5, 118.266131)]
)
def test_fermi_integral_at_zero(order: int, value: float) -> None:
    """F_k(0) agrees with the computed table to its digits."""
    assert float(spectra.fermi_integral(order, 0.0)) == pytest.approx(value, rel=5e-9)


@pytest.mark.parametrize(
    ("order", "closed"),
    [(2, 1.5 * mpmath.zeta(3)), (3, 7 * math.pi**4 / 120), (4, 22.5 * mpmath.zeta(5))],
)
def test_fermi_integral_closed_forms(order: int, closed: float) -> None:
    """F_k(0) equals its closed form to rounding."""
    assert float(spectra.fermi_integral(order, 0.0)) == pytest.approx(float(closed), rel=1e-14)


@pytest.mark.parametrize("order", [1, 2, 2.5, 3, 4, 6])
@pytest.mark.parametrize("eta", [-30.0, -5.0, -0.3, 0.0, 0.7, 3.0, 11.0, 25.0, 39.99, 40.0, 40.4])
def test_fermi_integral_against_mpmath(order: float, eta: float) -> None:
    """F_k(η) agrees with 25-digit quadrature to 1e-12, across the split at η = 40 too."""
    with mpmath.workdps(25):
        points = sorted({0, 1, *(max(eta, 0) + d for d in (-30, -10, -3, 0, 3, 10, 30, 80, 150))})
        reference = mpmath.quad(
            lambda x: x**order / (1 + mpmath.exp(x - eta)), [p for p in points if p >= 0]
        )
    assert float(spectra.fermi_integral(order, eta)) == pytest.approx(float(reference), rel=1e-12)


@pytest.mark.parametrize("row", FERMI_DIRAC, ids=lambda row: f"eta={row[0]}")
def test_fermi_dirac_table(row: tuple[float, ...]) -> None:
    """Mean, mean square, pinching and third moment agree with the table to its digits."""
    eta, mean, square, pinching, cube = row
    moments = [float(spectra.fermi_dirac_moment(n, 1.0, eta)) for n in (1, 2, 3)]
    assert moments[0] == pytest.approx(mean, abs=0.5001e-6)
    assert moments[1] / moments[0] ** 2 == pytest.approx(square, abs=0.5001e-7)
    assert moments[2] / moments[0] ** 3 == pytest.approx(cube, abs=0.5001e-6)
    found = spectra.pinched_from_fermi_dirac(1.0, eta)[1]
    assert found == pytest.approx(pinching, abs=0.5001e-6)


@pytest.mark.parametrize(("pinching", "temperature", "eta"), PARTNERS)
def test_fermi_dirac_partner(pinching: float, temperature: float, eta: float) -> None:
    """The Fermi-Dirac partner of a pinched spectrum agrees with the table and maps back."""
    found = spectra.fermi_dirac_from_pinched(12.0, pinching)
    assert found == pytest.approx((temperature, eta), abs=0.5001e-6)
    assert spectra.pinched_from_fermi_dirac(*found) == pytest.approx((12.0, pinching), rel=1e-12)


@pytest.mark.parametrize("pinching", [2.0, 1.0, 14.0, 20.0, -0.5])
def test_no_fermi_dirac_partner(pinching: float) -> None:
    """A pinching outside 2 to 14 has no partner, and the message says so."""
    with pytest.raises(InputError, match="must lie between 2 and 14"):
        spectra.fermi_dirac_from_pinched(12.0, pinching)


@pytest.mark.parametrize("row", PINCHED, ids=lambda row: f"mean={row[0]}")
def test_pinched_table(row: tuple[float, ...]) -> None:
    """Moments, median, shares and density of the pinched form agree with the table."""
    mean, alpha, rms, deviation, mode, median, to10, to20, above50, density = row
    square = float(spectra.pinched_moment(2, mean, alpha))
    assert square**0.5 == pytest.approx(rms, abs=0.5001e-6)
    assert (square - mean**2) ** 0.5 == pytest.approx(deviation, abs=0.5001e-6)
    around = spectra.pinched_density(np.array([mode - 0.01, mode, mode + 0.01]), mean, alpha)
    assert around[1] > max(around[0], around[2])
    assert float(spectra.pinched_below(median, mean, alpha)) == pytest.approx(0.5, abs=1e-7)
    assert float(spectra.pinched_below(10, mean, alpha)) == pytest.approx(to10, abs=0.5001e-8)
    assert float(spectra.pinched_below(20, mean, alpha)) == pytest.approx(to20, abs=0.5001e-8)
    assert float(spectra.pinched_above(50, mean, alpha)) == pytest.approx(above50, rel=5e-5)
    assert float(spectra.pinched_density(10, mean, alpha)) == pytest.approx(density, abs=0.5001e-8)


@pytest.mark.parametrize(("order", "value"), [(1, 12.0), (2, 180.0), (3, 3240.0), (4, 68040.0)])
def test_pinched_moments(order: int, value: float) -> None:
    """Moments of the spectrum with mean 12 MeV and pinching 3 are whole numbers."""
    assert float(spectra.pinched_moment(order, 12.0, 3.0)) == pytest.approx(value, rel=1e-13)


def test_energy_weighted_share() -> None:
    """Below its mean energy a spectrum of pinching 3 carries 37.1 per cent of its energy."""
    share = float(spectra.pinched_energy_below(12.0, 12.0, 3.0))
    assert share == pytest.approx(0.37116306, abs=0.5001e-8)
    part = quad(lambda e: e * spectra.pinched_density(e, 12.0, 3.0), 0, 12)[0]
    assert share == pytest.approx(part / 12.0, rel=1e-10)


def test_mixture_of_two() -> None:
    """The effective pinching of a mixture follows from the summed moments and is lower."""
    share = np.array([0.7, 0.3])
    mean = share @ spectra.pinched_moment(1, [11.0, 16.0], [3.0, 2.2])
    square = share @ spectra.pinched_moment(2, [11.0, 16.0], [3.0, 2.2])
    assert (mean, square) == pytest.approx((12.5, 206.675), rel=1e-12)
    assert float(spectra.pinching_from_moments(mean, square)) == pytest.approx(2.098661, abs=5e-7)


@pytest.mark.parametrize(("mean", "alpha"), [(12.0, 3.0), (9.0, 0.8), (14.0, -0.3), (11.0, 6.0)])
@pytest.mark.parametrize("energy", [0.01, 1.0, 10.0, 60.0, 190.0])
def test_density_against_mpmath(mean: float, alpha: float, energy: float) -> None:
    """The density keeps ten digits everywhere, also where it is tiny."""
    with mpmath.workdps(30):
        shape, scale = mpmath.mpf(alpha) + 1, mpmath.mpf(mean) / (mpmath.mpf(alpha) + 1)
        x = mpmath.mpf(energy) / scale
        reference = x ** (shape - 1) * mpmath.exp(-x) / (scale * mpmath.gamma(shape))
    assert float(spectra.pinched_density(energy, mean, alpha)) == pytest.approx(
        float(reference), rel=1e-10
    )


def test_fermi_dirac_density_against_mpmath() -> None:
    """The Fermi-Dirac density keeps ten digits from its rise to its far tail."""
    for energy in (0.1, 5.0, 30.0, 150.0):
        with mpmath.workdps(30):
            integral = -2 * mpmath.polylog(3, -mpmath.exp(mpmath.mpf(1.5)))
            t = mpmath.mpf("3.2")
            reference = energy**2 / (t**3 * integral * (1 + mpmath.exp(energy / t - 1.5)))
        found = float(spectra.fermi_dirac_density(energy, 3.2, 1.5))
        assert found == pytest.approx(float(reference), rel=1e-10)


@given(mean=means, pinching=pinchings)
def test_normalised(mean: float, pinching: float) -> None:
    """A pinched spectrum holds all its neutrinos: the shares below and above sum to one."""
    energies = np.array([0.5, 5.0, 20.0, 80.0])
    both = spectra.pinched_below(energies, mean, pinching) + spectra.pinched_above(
        energies, mean, pinching
    )
    np.testing.assert_allclose(both, 1.0, rtol=1e-12)


@given(mean=means, pinching=st.floats(0.0, 12.0))
def test_density_is_the_slope_of_the_share(mean: float, pinching: float) -> None:
    """Integrating the density over two mean energies gives the share between them."""
    x, w = np.polynomial.legendre.leggauss(40)
    low, high = 0.5 * mean, 2 * mean
    energies = low + 0.5 * (high - low) * (x + 1)
    integral = 0.5 * (high - low) * w @ spectra.pinched_density(energies, mean, pinching)
    shares = spectra.pinched_below([low, high], mean, pinching)
    assert integral == pytest.approx(shares[1] - shares[0], rel=1e-9, abs=1e-13)


@given(mean=means, pinching=pinchings)
def test_moments_round_trip(mean: float, pinching: float) -> None:
    """The pinching comes back from the first two moments."""
    square = spectra.pinched_moment(2, mean, pinching)
    # the variance is a difference of two squares, at worst 14 times smaller than they are
    found = float(spectra.pinching_from_moments(mean, square))
    assert found == pytest.approx(pinching, abs=1e-11)


# each example is a bisection; the clock of a shared machine proves nothing
@settings(deadline=None, max_examples=50)
@given(eta=st.floats(-10.0, 60.0), mean=means)
def test_fermi_dirac_round_trip(eta: float, mean: float) -> None:
    """Degeneracy to pinching and back returns where it started."""
    temperature = mean / float(spectra.fermi_dirac_moment(1, 1.0, eta))
    found = spectra.fermi_dirac_from_pinched(*spectra.pinched_from_fermi_dirac(temperature, eta))
    # at -10 the pinching is 2 + 1.7e-5, known to 1e-14: eight digits of the degeneracy remain
    assert found == pytest.approx((temperature, eta), rel=1e-7, abs=1e-7)


def test_edges_of_the_energy_axis() -> None:
    """Below zero there is nothing, at zero the limit, far out zero without a warning."""
    assert spectra.pinched_density([-1.0, 0.0, 1e6], 12.0, 2.0).tolist() == [0.0, 0.0, 0.0]
    assert float(spectra.pinched_density(0.0, 12.0, 0.0)) == pytest.approx(1 / 12)
    assert spectra.fermi_dirac_density([-1.0, 0.0, 1e6], 4.0, 0.0).tolist() == [0.0, 0.0, 0.0]


@pytest.mark.parametrize(
    ("call", "words"),
    [
        (lambda: spectra.pinched_density(1.0, 12.0, -1.0), "a pinching must be above -1"),
        (lambda: spectra.pinched_density(1.0, 12.0, math.nan), "a pinching must be above -1"),
        (lambda: spectra.pinched_density(1.0, 0.0, 2.0), "a mean energy must be above 0 MeV"),
        (
            lambda: spectra.pinched_moment(-4, 12.0, 3.0),
            "a moment of order -4 needs a pinching of more than 3",
        ),
        (lambda: spectra.fermi_dirac_density(1.0, -3.0, 0.0), "a temperature must be above 0 MeV"),
        (lambda: spectra.fermi_integral(0.5, 0.0), "orders from 1"),
        (lambda: spectra.fermi_integral(2, math.inf), "any finite degeneracy"),
        (lambda: spectra.pinching_from_moments(12.0, 144.0), "mean square"),
    ],
)
def test_refusals(call: object, words: str) -> None:
    """What has no spectrum is refused in a plain sentence."""
    assert callable(call)
    with pytest.raises(InputError, match=words):
        call()
