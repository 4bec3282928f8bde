"""The additive parts of a burst, as frozen dataclasses of floats.

All rates are of ONE neutrino kind each, in the order of `tenkpc.species.SPECIES`. Inside,
luminosities are in MeV/s and energies in MeV. A `Flowing` component has a rate at every time;
an `Integrated` one knows only what was emitted in all.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Protocol

import numpy as np
from numpy.typing import ArrayLike, NDArray

from tenkpc.source import spectra
from tenkpc.species import NU_E, SPECIES

Floats = NDArray[np.float64]
PerSpecies = tuple[float, float, float, float]


class Flowing(Protocol):
    """A part of a burst with a rate at every time."""

    @property
    def joints_s(self) -> tuple[float, ...]:
        """Times at which the rate is not smooth, or changes fast."""

    @property
    def joints_mev(self) -> tuple[float, ...]:
        """Energies at which the spectrum is not smooth."""

    def rate(self, time_s: ArrayLike, energy_mev: ArrayLike) -> Floats:
        """Emission in 1/s/MeV, shape (4, times, energies)."""

    def moment(self, order: float, time_s: ArrayLike) -> Floats:
        """∫ Eⁿ rate dE in MeVⁿ/s, shape (4, times): the number for n = 0, luminosity for 1."""


@dataclass(frozen=True)
class Peak:
    """The peak of electron neutrinos just after bounce: a split Gaussian in time.

    L(t) = L_peak exp(−(t − t_peak)²/(2σ²)), σ the rise time before the peak and the fall time
    after it; the spectrum keeps one mean energy and one pinching.

    Attributes
    ----------
    peak_luminosity_mev_s
        luminosity at the peak, MeV/s.
    peak_time_s, rise_time_s, fall_time_s
        time of the peak after bounce and the two Gaussian widths, s.
    mean_energy_mev, pinching
        of the pinched spectrum.
    """

    peak_luminosity_mev_s: float
    peak_time_s: float
    rise_time_s: float
    fall_time_s: float
    mean_energy_mev: float
    pinching: float

    @property
    def joints_s(self) -> tuple[float, ...]:
        """The peak and a few widths around it."""
        steps = (-6, 0, 5)
        widths = {-1: self.rise_time_s, 0: 0.0, 1: self.fall_time_s}
        return tuple(self.peak_time_s + n * widths[(n > 0) - (n < 0)] for n in steps)

    @property
    def joints_mev(self) -> tuple[float, ...]:
        """None: the spectrum is smooth."""
        return ()

    def luminosity_mev_s(self, time_s: ArrayLike) -> Floats:
        """Luminosity of electron neutrinos in MeV/s, shape (times,)."""
        since = np.asarray(time_s, float) - self.peak_time_s
        width = np.where(since < 0, self.rise_time_s, self.fall_time_s)
        return np.asarray(self.peak_luminosity_mev_s * np.exp(-0.5 * (since / width) ** 2))

    def rate(self, time_s: ArrayLike, energy_mev: ArrayLike) -> Floats:
        """Emission in 1/s/MeV, shape (4, times, energies)."""
        number = self.luminosity_mev_s(time_s) / self.mean_energy_mev
        shape = spectra.pinched_density(energy_mev, self.mean_energy_mev, self.pinching)
        return _only_nu_e(number[:, None] * shape)

    def moment(self, order: float, time_s: ArrayLike) -> Floats:
        """∫ Eⁿ rate dE in MeVⁿ/s, shape (4, times)."""
        number = self.luminosity_mev_s(time_s) / self.mean_energy_mev
        return _only_nu_e(
            number * spectra.pinched_moment(order, self.mean_energy_mev, self.pinching)
        )


def _only_nu_e(values: Floats) -> Floats:
    result = np.zeros((len(SPECIES), *values.shape))
    result[NU_E] = values
    return result


@dataclass(frozen=True)
class Core:
    """Accretion that passes over into cooling, for all species, from bounce on.

    With R = 1 − exp(−t/t_rise), w = exp(−(t/t_acc)^k), u = min(t/t_growth, 1) and a gate G,

        L(t)   = G R {A [1 + ρ u] w + C (1 + t/t_plateau)^−q exp(−(t/t_cool)^n)}
        ⟨E⟩(t) = w [E₀ + (E₁ − E₀) u] + (1 − w) E_cool (1 + t/t_E)^−s
        α(t)   = w α_acc + (1 − w) α_cool

    and G = 1 before ``cut_at_s``, exp(−(t − cut)/fall) after it (a black hole forms). Idealised
    curves of our own, of the form people use: a plateau of accretion, then a broken power law
    with a stretched exponential for the cooling (Lucente et al. 2024, arXiv:2405.00769).

    Attributes
    ----------
    accretion_mev_s, cooling_mev_s
        A and C by species, MeV/s.
    growth
        ρ by species, growth of the accretion luminosity until ``growth_time_s``.
    mean_energy_mev, mean_energy_end_mev, cooling_mean_energy_mev
        E₀, E₁ and E_cool by species, MeV.
    pinching, cooling_pinching
        α_acc and α_cool by species.
    rise_time_s, accretion_time_s, growth_time_s, plateau_s, cooling_time_s, energy_time_s
        t_rise, t_acc (infinite: accretion never ends), t_growth, t_plateau, t_cool and t_E, s.
    accretion_sharpness, cooling_power, cooling_sharpness, energy_power
        k (infinite: a step), q, n and s.
    cut_at_s, cut_fall_time_s
        start and e-folding time of the gate, s; infinite start: no gate.
    """

    accretion_mev_s: PerSpecies
    growth: PerSpecies
    mean_energy_mev: PerSpecies
    mean_energy_end_mev: PerSpecies
    pinching: PerSpecies
    cooling_mev_s: PerSpecies
    cooling_mean_energy_mev: PerSpecies
    cooling_pinching: PerSpecies
    rise_time_s: float
    accretion_time_s: float
    accretion_sharpness: float
    growth_time_s: float
    plateau_s: float
    cooling_power: float
    cooling_time_s: float
    cooling_sharpness: float
    energy_time_s: float
    energy_power: float
    cut_at_s: float = math.inf
    cut_fall_time_s: float = 1e-3

    @property
    def joints_s(self) -> tuple[float, ...]:
        """Bounce, the end of growth and of accretion, the gate and a few of its tails."""
        gate = tuple(self.cut_at_s + n * self.cut_fall_time_s for n in (0, 8, 40))
        times = (0.0, self.growth_time_s, self.accretion_time_s, *gate)
        return tuple(sorted({t for t in times if math.isfinite(t)}))

    @property
    def joints_mev(self) -> tuple[float, ...]:
        """None: the spectra are smooth."""
        return ()

    def luminosity_mev_s(self, time_s: ArrayLike) -> Floats:
        """Luminosity of one neutrino kind each in MeV/s, shape (4, times)."""
        t = _after_bounce(time_s)
        accretion = self._accreting(t) * (1 + _column(self.growth) * self._grown(t))
        cooling = (1 + t / self.plateau_s) ** -self.cooling_power
        cooling = cooling * _stretched(t, self.cooling_time_s, self.cooling_sharpness)
        both = _column(self.accretion_mev_s) * accretion + _column(self.cooling_mev_s) * cooling
        return -np.expm1(-t / self.rise_time_s) * both * self._gate(t)

    def mean_energy(self, time_s: ArrayLike) -> Floats:
        """Mean energy in MeV, shape (4, times); before bounce that at bounce."""
        t = _after_bounce(time_s)
        w, first, last = self._accreting(t), self.mean_energy_mev, self.mean_energy_end_mev
        accretion = _column(first) + (_column(last) - _column(first)) * self._grown(t)
        fall = (1 + t / self.energy_time_s) ** -self.energy_power
        return w * accretion + (1 - w) * _column(self.cooling_mean_energy_mev) * fall

    def pinching_at(self, time_s: ArrayLike) -> Floats:
        """Pinching, shape (4, times)."""
        w = self._accreting(_after_bounce(time_s))
        return w * _column(self.pinching) + (1 - w) * _column(self.cooling_pinching)

    def rate(self, time_s: ArrayLike, energy_mev: ArrayLike) -> Floats:
        """Emission in 1/s/MeV, shape (4, times, energies)."""
        mean, alpha = self.mean_energy(time_s), self.pinching_at(time_s)
        number = self.luminosity_mev_s(time_s) / mean
        shape = spectra.pinched_density(energy_mev, mean[..., None], alpha[..., None])
        return number[..., None] * shape

    def moment(self, order: float, time_s: ArrayLike) -> Floats:
        """∫ Eⁿ rate dE in MeVⁿ/s, shape (4, times)."""
        mean = self.mean_energy(time_s)
        shape = spectra.pinched_moment(order, mean, self.pinching_at(time_s))
        return self.luminosity_mev_s(time_s) / mean * shape

    def _accreting(self, t: Floats) -> Floats:
        return _stretched(t, self.accretion_time_s, self.accretion_sharpness)

    def _grown(self, t: Floats) -> Floats:
        return np.asarray(np.minimum(t / self.growth_time_s, 1.0))

    def _gate(self, t: Floats) -> Floats:
        return np.asarray(np.exp(-np.maximum(t - self.cut_at_s, 0.0) / self.cut_fall_time_s))


def _after_bounce(time_s: ArrayLike) -> Floats:
    return np.asarray(np.maximum(np.asarray(time_s, float), 0.0))


def _stretched(t: Floats, scale_s: float, power: float) -> Floats:
    """exp(−(t/scale)^power); a huge or infinite power is a step, the power then 0, 1 or inf."""
    with np.errstate(over="ignore"):
        return np.asarray(np.exp(-((t / scale_s) ** power)))


def _column(values: PerSpecies) -> Floats:
    return np.array(values)[:, None]


@dataclass(frozen=True)
class Pinched:
    """Pinched spectra, one for each species: mean energies in MeV and pinchings."""

    mean_energy_mev: PerSpecies
    pinching: PerSpecies

    def density(self, energy_mev: ArrayLike) -> Floats:
        """Normalised number spectra in 1/MeV, shape (4, energies)."""
        mean, alpha = _column(self.mean_energy_mev), _column(self.pinching)
        return spectra.pinched_density(energy_mev, mean, alpha)

    def moment(self, order: float) -> Floats:
        """Moments ⟨Eⁿ⟩ in MeVⁿ, shape (4,)."""
        return spectra.pinched_moment(order, self.mean_energy_mev, self.pinching)


@dataclass(frozen=True)
class Thermal:
    """Fermi-Dirac spectra, one for each species: temperatures in MeV and degeneracies."""

    temperature_mev: PerSpecies
    degeneracy: PerSpecies

    def density(self, energy_mev: ArrayLike) -> Floats:
        """Normalised number spectra in 1/MeV, shape (4, energies)."""
        temperature, eta = _column(self.temperature_mev), _column(self.degeneracy)
        return spectra.fermi_dirac_density(energy_mev, temperature, eta)

    def moment(self, order: float) -> Floats:
        """Moments ⟨Eⁿ⟩ in MeVⁿ, shape (4,)."""
        return spectra.fermi_dirac_moment(order, self.temperature_mev, self.degeneracy)


@dataclass(frozen=True)
class Integrated:
    """What was emitted in all: an energy for each neutrino kind and its spectrum.

    Attributes
    ----------
    energy_mev
        energy in ONE neutrino kind of each species, MeV.
    spectrum
        the spectra of the four species.
    """

    energy_mev: PerSpecies
    spectrum: Pinched | Thermal

    @property
    def joints_s(self) -> tuple[float, ...]:
        """None: it knows no time."""
        return ()

    @property
    def joints_mev(self) -> tuple[float, ...]:
        """None: the spectra are smooth."""
        return ()

    def emitted(self, energy_mev: ArrayLike) -> Floats:
        """Neutrinos of one kind each in 1/MeV, shape (4, energies)."""
        return self.moment(0)[:, None] * self.spectrum.density(energy_mev)

    def moment(self, order: float) -> Floats:
        """∫ Eⁿ emitted dE in MeVⁿ, shape (4,): the number for n = 0, the energy for 1."""
        number = np.array(self.energy_mev) / self.spectrum.moment(1)
        return number * self.spectrum.moment(order)
