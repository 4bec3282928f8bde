"""Cooling of a neutron star over minutes, in the analytic form of diffusion through its matter.

With m the mass in 1.4 solar masses, r the radius in 10 km, k = gβ/3 and x = (t + t₀)/100 s,

    L   = 3.3e51 erg/s m⁶ r⁻⁶ k⁴ x⁻⁶         of each of the six kinds
    ⟨E⟩ = 16 MeV m^(3/2) r⁻² k x^(−3/2)
    t₀  = 210 s m^(6/5) r^(−6/5) k^(4/5) (E_tot/1e52 erg)^(−1/5)

(Y. Suwa, A. Harada, K. Nakazato and K. Sumiyoshi, PTEP 2021, 013E01, arXiv:2008.07070, from
memory; the three close on E_tot to 3 %). It does not hold in the first second.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from tenkpc.constants import MEV_PER_ERG
from tenkpc.source import spectra
from tenkpc.species import SPECIES

Floats = NDArray[np.float64]

LUMINOSITY_MEV_S = 3.3e51 * MEV_PER_ERG
ENERGY_MEV, SINCE_S, UNIT_S, UNIT_MEV = 16.0, 210.0, 100.0, 1e52 * MEV_PER_ERG
UNIT_SOLAR_MASSES, UNIT_CM = 1.4, 1e6


@dataclass(frozen=True)
class LongCooling:
    """A neutron star that cools by diffusion, all kinds alike.

    Attributes
    ----------
    solar_masses, radius_cm
        mass and radius of the star.
    density_correction, opacity_boost
        g, for the profile near the surface (0.04 to 0.1), and β, for coherent scattering on
        nuclei (3 without, about 40 when a crust forms).
    total_energy_mev
        E_tot, MeV.
    pinching
        of the spectra.
    begins_s
        nothing is emitted before this time after bounce, s.
    """

    solar_masses: float
    radius_cm: float
    density_correction: float
    opacity_boost: float
    total_energy_mev: float
    pinching: float
    begins_s: float

    @property
    def joints_s(self) -> tuple[float, ...]:
        """When it begins."""
        return (self.begins_s,)

    @property
    def joints_mev(self) -> tuple[float, ...]:
        """None: the spectra are smooth."""
        return ()

    @property
    def shift_s(self) -> float:
        """t₀ in s."""
        m, r, k = self._units()
        energy = self.total_energy_mev / UNIT_MEV
        return float(SINCE_S * m**1.2 * r**-1.2 * k**0.8 * energy**-0.2)

    def luminosity_mev_s(self, time_s: ArrayLike) -> Floats:
        """Luminosity of ONE kind in MeV/s, shape (times,)."""
        m, r, k = self._units()
        on = np.asarray(time_s, float) >= self.begins_s
        return np.where(on, LUMINOSITY_MEV_S * m**6 * r**-6 * k**4 * self._x(time_s) ** -6, 0.0)

    def mean_energy(self, time_s: ArrayLike) -> Floats:
        """Mean energy in MeV, shape (times,)."""
        m, r, k = self._units()
        return np.asarray(ENERGY_MEV * m**1.5 * r**-2 * k * self._x(time_s) ** -1.5)

    def rate(self, time_s: ArrayLike, energy_mev: ArrayLike) -> Floats:
        """Emission in 1/s/MeV, shape (4, times, energies)."""
        mean = self.mean_energy(time_s)
        number = self.luminosity_mev_s(time_s) / mean
        shape = spectra.pinched_density(energy_mev, mean[:, None], self.pinching)
        return _alike(number[:, None] * shape)

    def moment(self, order: float, time_s: ArrayLike) -> Floats:
        """∫ Eⁿ rate dE in MeVⁿ/s, shape (4, times)."""
        mean = self.mean_energy(time_s)
        shape = spectra.pinched_moment(order, mean, self.pinching)
        return _alike(self.luminosity_mev_s(time_s) / mean * shape)

    def _units(self) -> tuple[float, float, float]:
        k = self.density_correction * self.opacity_boost / 3
        return self.solar_masses / UNIT_SOLAR_MASSES, self.radius_cm / UNIT_CM, k

    def _x(self, time_s: ArrayLike) -> Floats:
        after = np.maximum(np.asarray(time_s, float), self.begins_s)
        return np.asarray((after + self.shift_s) / UNIT_S)


def _alike(values: Floats) -> Floats:
    """Give every species the same."""
    return np.broadcast_to(values, (len(SPECIES), *values.shape)).copy()
