"""Energy spectra of emitted neutrinos: the pinched form and the degenerate Fermi-Dirac form.

Both are number spectra normalised to one, in 1/MeV, and both know their moments of any order.
All functions broadcast over their arguments. "Mean energy" is always number-weighted.
"""

from __future__ import annotations

from functools import lru_cache

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.special import expit, gammainc, gammaincc, gammaln, xlogy

from tenkpc.errors import InputError
from tenkpc.quadrature import gauss

Floats = NDArray[np.float64]


def pinched_density(energy_mev: ArrayLike, mean_mev: ArrayLike, pinching: ArrayLike) -> Floats:
    """Pinched spectrum at an energy, in 1/MeV.

    f(E) = ((α+1)/⟨E⟩)^(α+1) E^α exp(−(α+1) E/⟨E⟩) / Γ(α+1)

    A gamma distribution of shape α+1 and scale ⟨E⟩/(α+1). α = 2 is Maxwell-Boltzmann, α near
    2.3 Fermi-Dirac without degeneracy; a larger α is a narrower spectrum. It is evaluated
    through its logarithm, so that it neither overflows nor loses digits far out.

    Parameters
    ----------
    energy_mev, mean_mev
        neutrino energy E and mean energy ⟨E⟩ in MeV; zero below E = 0.
    pinching
        α, any number above −1.

    Raises
    ------
    InputError
        for α ≤ −1 or ⟨E⟩ ≤ 0, where there is no such spectrum.

    References
    ----------
    Keil, Raffelt & Janka 2003, ApJ 590, 971, astro-ph/0208035; Tamborra et al. 2012,
    Phys. Rev. D 86, 125031, arXiv:1211.3920, equation 1.

    Examples
    --------
    >>> print(f"{pinched_density(9.0, 11.0, 2.7):.5f}")
    0.07775
    """
    energy, mean, alpha = _pinched_arguments(energy_mev, mean_mev, pinching)
    rate = (alpha + 1) / mean
    constant = (alpha + 1) * np.log(rate) - gammaln(alpha + 1)
    positive = np.maximum(energy, 0.0)
    density = np.exp(constant + xlogy(alpha, positive) - rate * positive)
    return np.where(energy < 0, 0.0, density)


def pinched_moment(order: float, mean_mev: ArrayLike, pinching: ArrayLike) -> Floats:
    """Moment ⟨Eⁿ⟩ of the pinched spectrum in MeVⁿ, for any order n above −(α+1).

    ⟨Eⁿ⟩ = (⟨E⟩/(α+1))ⁿ Γ(α+1+n)/Γ(α+1)
    """
    _, mean, alpha = _pinched_arguments(0.0, mean_mev, pinching)
    if np.any(alpha + 1 + order <= 0):
        message = f"a moment of order {order:g} needs a pinching of more than {-order - 1:g}"
        raise InputError(message)
    ratio = gammaln(alpha + 1 + order) - gammaln(alpha + 1)
    moment: Floats = np.exp(order * np.log(mean / (alpha + 1)) + ratio)
    return moment


def pinched_below(energy_mev: ArrayLike, mean_mev: ArrayLike, pinching: ArrayLike) -> Floats:
    """Share of the neutrinos of a pinched spectrum below an energy, P(α+1, (α+1) E/⟨E⟩)."""
    energy, mean, alpha = _pinched_arguments(energy_mev, mean_mev, pinching)
    share: Floats = gammainc(alpha + 1, (alpha + 1) * np.maximum(energy, 0) / mean)
    return share


def pinched_above(energy_mev: ArrayLike, mean_mev: ArrayLike, pinching: ArrayLike) -> Floats:
    """Share of the neutrinos of a pinched spectrum above an energy, exact far out in the tail."""
    energy, mean, alpha = _pinched_arguments(energy_mev, mean_mev, pinching)
    share: Floats = gammaincc(alpha + 1, (alpha + 1) * np.maximum(energy, 0) / mean)
    return share


def pinched_energy_below(energy_mev: ArrayLike, mean_mev: ArrayLike, pinching: ArrayLike) -> Floats:
    """Share of the energy that neutrinos below an energy carry, P(α+2, (α+1) E/⟨E⟩)."""
    energy, mean, alpha = _pinched_arguments(energy_mev, mean_mev, pinching)
    share: Floats = gammainc(alpha + 2, (alpha + 1) * np.maximum(energy, 0) / mean)
    return share


def pinching_from_moments(mean_mev: ArrayLike, mean_square_mev2: ArrayLike) -> Floats:
    """Pinching α of the pinched spectrum with these two moments (of any spectrum whatever).

    α = (2⟨E⟩² − ⟨E²⟩)/(⟨E²⟩ − ⟨E⟩²)
    """
    mean, square = np.asarray(mean_mev, float), np.asarray(mean_square_mev2, float)
    variance = square - mean**2
    if not np.all(variance > 0):
        message = "the mean square of the energy must be larger than the square of its mean"
        raise InputError(message)
    alpha: Floats = (mean**2 - variance) / variance
    return alpha


def fermi_integral(order: float, degeneracy: ArrayLike) -> Floats:
    """Complete Fermi-Dirac integral F_k(η) = ∫₀^∞ x^k / (1 + e^(x−η)) dx, for k ≥ 1.

    Gauss-Legendre on panels of width 4 from η − 40 (or 0) up to 110 above; the poles of the
    integrand lie π off the axis, which makes 20 points a panel exact to rounding. Below
    η − 40 the integrand is x^k but for e⁻⁴⁰. The first panel, of width 1, is stretched by
    x = s⁴, which smooths the branch point at zero of an order that is no integer.
    """
    eta = np.asarray(degeneracy, float)[..., None]
    if order < 1 or not np.all(np.isfinite(eta)):
        message = "the Fermi integral is computed for orders from 1 and any finite degeneracy"
        raise InputError(message)
    base = np.maximum(eta - 40.0, 0.0)
    s, w = gauss(20)
    filled = base * _power_sum(base * s**4, order, 4 * s**3 * w)[..., None]
    x, weights = _wide_nodes()
    edge = _power_sum(base + x, order, weights * expit(eta - base - x))
    return filled[..., 0] + edge


def fermi_dirac_density(
    energy_mev: ArrayLike, temperature_mev: ArrayLike, degeneracy: ArrayLike
) -> Floats:
    """Fermi-Dirac spectrum at an energy, in 1/MeV.

    f(E) = E² / (T³ F₂(η) [1 + exp(E/T − η)])

    Parameters
    ----------
    energy_mev, temperature_mev
        neutrino energy E and temperature T in MeV; zero below E = 0.
    degeneracy
        η, the chemical potential over the temperature.

    Examples
    --------
    >>> print(f"{fermi_dirac_density(9.0, 3.5, 0.0):.5f}")
    0.07439
    """
    energy, temperature = np.asarray(energy_mev, float), _positive(temperature_mev, "temperature")
    eta = np.asarray(degeneracy, float)
    x = np.maximum(energy, 0.0) / temperature
    density: Floats = x**2 * expit(eta - x) / (temperature * fermi_integral(2, eta))
    return density


def fermi_dirac_moment(order: float, temperature_mev: ArrayLike, degeneracy: ArrayLike) -> Floats:
    """Moment ⟨Eⁿ⟩ = Tⁿ F_{n+2}(η)/F₂(η) of the Fermi-Dirac spectrum in MeVⁿ, n ≥ −1."""
    temperature = _positive(temperature_mev, "temperature")
    ratio = fermi_integral(order + 2, degeneracy) / fermi_integral(2, degeneracy)
    moment: Floats = temperature**order * ratio
    return moment


def pinched_from_fermi_dirac(temperature_mev: float, degeneracy: float) -> tuple[float, float]:
    """Mean energy in MeV and pinching of the pinched spectrum with the same two moments."""
    mean, square = (fermi_dirac_moment(n, temperature_mev, degeneracy) for n in (1, 2))
    return float(mean), float(pinching_from_moments(mean, square))


def fermi_dirac_from_pinched(mean_mev: float, pinching: float) -> tuple[float, float]:
    """Temperature in MeV and degeneracy of the Fermi-Dirac spectrum with the same two moments.

    The pinching rises with η from 2 (no degeneracy left) to 14 (a filled Fermi sphere), so that
    only 2 < α < 14 has a partner; it is found by bisection. The two spectra share the mean and
    the mean square, not the tail.

    Raises
    ------
    InputError
        for a pinching outside 2 to 14.
    """
    if not 2 < pinching < 14:
        message = (
            "no Fermi-Dirac spectrum has the moments of a pinched one with pinching "
            f"{pinching:g}; it must lie between 2 and 14"
        )
        raise InputError(message)
    low, high = -36.0, 1e7
    while high - low > 1e-15 * max(1.0, abs(low), abs(high)):
        middle = 0.5 * (low + high)
        below = pinched_from_fermi_dirac(1.0, middle)[1] < pinching
        low, high = (middle, high) if below else (low, middle)
    eta = 0.5 * (low + high)
    return float(mean_mev / fermi_dirac_moment(1, 1.0, eta)), eta


def _pinched_arguments(
    energy_mev: ArrayLike, mean_mev: ArrayLike, pinching: ArrayLike
) -> tuple[Floats, Floats, Floats]:
    alpha = np.asarray(pinching, float)
    if not np.all(alpha > -1):
        message = "a pinching must be above -1: a spectrum with less cannot be normalised"
        raise InputError(message)
    return np.asarray(energy_mev, float), _positive(mean_mev, "mean energy"), alpha


def _positive(value: ArrayLike, what: str) -> Floats:
    array = np.asarray(value, float)
    if not np.all(array > 0):
        message = f"a {what} must be above 0 MeV"
        raise InputError(message)
    return array


@lru_cache(maxsize=1)
def _wide_nodes() -> tuple[Floats, Floats]:
    s, w = gauss(20)
    starts = np.arange(1.0, 110.0, 4.0)[:, None]
    x = np.concatenate([s**4, (starts + 4 * s).ravel()])
    return x, np.concatenate([4 * s**3 * w, np.tile(4 * w, len(starts))])


def _power_sum(x: Floats, order: float, weights: Floats) -> Floats:
    total: Floats = np.sum(weights * x**order, axis=-1)
    return total
