"""Accretion by hot positrons on neutrons, then a thermal sphere that cools: not pinched.

In the form of G. Pagliaroli, F. Vissani, M. L. Costantini and A. Ianni, Astropart. Phys. 31 (2009)
163, arXiv:0810.0466 (formulas from memory). Per second and MeV, of one kind,

    cooling     Ṅ_c = (π c/(hc)³) 4πR² E²/[1 + exp(E/T)],  T = T_c exp(−t/4τ_c)
    accretion   Ṅ_a = (8π c/(hc)³) N_n(t) σ(E) E_e²/[1 + exp(E_e/T_a(t))]
                σ = 4.8·10⁻⁴⁴ cm² (E/MeV)²/(1 + E/260 MeV),  E_e = (E − Δ)/(1 − E/m_n)
                N_n = Y_n (M_a/m_n) (T_a/T_a(t))⁶ j(t)/(1 + t/0.5 s),  j = exp(−(t/τ_a)^k)
                T_a(t) = T_a + (0.6 T_c − T_a) (t/τ_a)^m up to τ_a, then constant
    all         Φ = [1 − exp(−t/τ_r)] {Ṅ_a(t) + [1 − j(t)] Ṅ_c(t − τ_a)}

with Δ the mass difference of neutron and proton. Accretion is of νe and ν̄e, equal to each other;
cooling gives every kind the same luminosity, the x kinds at a higher temperature.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from tenkpc.constants import (
    HBAR_C_MEV_CM,
    LIGHT_CM_PER_S,
    MEV_PER_ERG,
    NEUTRON_MASS_MEV,
    SOLAR_MASS_G,
)
from tenkpc.quadrature import gauss
from tenkpc.source.spectra import fermi_integral
from tenkpc.species import ANTI_NU_E, ANTI_NU_X, NU_E, NU_X, SPECIES

Floats = NDArray[np.float64]

GAP_MEV = 1.293  # as in the paper, four digits of the mass difference
SOLAR_MASS_MEV = SOLAR_MASS_G * LIGHT_CM_PER_S**2 * MEV_PER_ERG
# c/(hc)³ in 1/(cm² s MeV³)
PHASE_SPACE = LIGHT_CM_PER_S / (2 * np.pi * HBAR_C_MEV_CM) ** 3
SIGMA_CM2, SIGMA_FALL_MEV = 4.8e-44, 260.0
END_TEMPERATURE = 0.6  # of accretion, as a share of the cooling temperature
SLOWING_S = 0.5
# quadrature over E_e/T of what accretes: 64 nodes up to 50 give moments to 1e-9
REACH, NODES = 50.0, 64


@dataclass(frozen=True)
class TwoPhase:
    """Accretion and cooling of the module's docstring.

    Attributes
    ----------
    radius_cm, temperature_mev, cooling_time_s
        R, T_c and τ_c of the cooling sphere.
    accreting_solar_masses, neutron_share
        M_a in solar masses and Y_n.
    accretion_temperature_mev, accretion_time_s
        T_a and τ_a.
    accretion_sharpness, warming_power
        k and m.
    x_temperature_ratio
        temperature of the x kinds over that of the others, while cooling.
    rise_time_s
        τ_r.
    """

    radius_cm: float
    temperature_mev: float
    cooling_time_s: float
    accreting_solar_masses: float
    neutron_share: float
    accretion_temperature_mev: float
    accretion_time_s: float
    accretion_sharpness: float
    warming_power: float
    x_temperature_ratio: float
    rise_time_s: float

    @property
    def joints_s(self) -> tuple[float, ...]:
        """Bounce, and the end of accretion, where cooling begins."""
        return (0.0, self.accretion_time_s)

    @property
    def joints_mev(self) -> tuple[float, ...]:
        """None: what accretes begins smoothly enough, where little is emitted."""
        return ()

    def rate(self, time_s: ArrayLike, energy_mev: ArrayLike) -> Floats:
        """Emission in 1/s/MeV, shape (4, times, energies)."""
        t, energy = np.atleast_1d(time_s), np.atleast_1d(energy_mev)
        accreting = self._share(t)[0][:, None] * self.accretion(t[:, None], energy)
        cooling = self._share(t)[1][:, None] * self._cooling(t[:, None], energy)
        cooling[[NU_E, ANTI_NU_E]] += accreting
        return cooling

    def moment(self, order: float, time_s: ArrayLike) -> Floats:
        """∫ Eⁿ rate dE in MeVⁿ/s, shape (4, times)."""
        t = np.atleast_1d(time_s)
        warm, cold = self._share(t)
        temperature = self._cooling_temperature(t)
        result = np.empty((len(SPECIES), len(t)))
        scale = self._sphere() * temperature ** (3 + order) * fermi_integral(2 + order, 0.0)
        result[[NU_E, ANTI_NU_E]] = cold * scale + warm * self._accretion_moment(order, t)
        result[[NU_X, ANTI_NU_X]] = cold * scale * self.x_temperature_ratio ** (order - 1)
        return result

    def accretion(self, time_s: Floats, energy_mev: Floats) -> Floats:
        """Ṅ_a in 1/s/MeV without the rise, for arrays that broadcast; zero below Δ."""
        positron = np.maximum(energy_mev - GAP_MEV, 0.0) / (1 - energy_mev / NEUTRON_MASS_MEV)
        sigma = SIGMA_CM2 * energy_mev**2 / (1 + energy_mev / SIGMA_FALL_MEV)
        x = np.minimum(positron / self.accretion_temperature_at(time_s), 700.0)
        spectrum = 8 * np.pi * PHASE_SPACE * sigma * positron**2 / (1 + np.exp(x))
        result: Floats = self._neutrons(time_s) * spectrum
        return result

    def accretion_temperature_at(self, time_s: Floats) -> Floats:
        """T_a(t) in MeV."""
        end = END_TEMPERATURE * self.temperature_mev
        grown: Floats = np.clip(time_s / self.accretion_time_s, 0.0, 1.0) ** self.warming_power
        return self.accretion_temperature_mev + (end - self.accretion_temperature_mev) * grown

    def accreting(self, time_s: Floats) -> Floats:
        """j(t), the share of accretion that goes on."""
        t = np.maximum(time_s, 0.0)
        return np.asarray(np.exp(-((t / self.accretion_time_s) ** self.accretion_sharpness)))

    def _share(self, t: Floats) -> tuple[Floats, Floats]:
        """Factors on accretion and on cooling: the rise, the blend, and nothing too early."""
        rise = -np.expm1(-np.maximum(t, 0.0) / self.rise_time_s)
        return rise, rise * (1 - self.accreting(t)) * (t >= self.accretion_time_s)

    def _neutrons(self, time_s: Floats) -> Floats:
        """N_n(t)."""
        mass = self.accreting_solar_masses * SOLAR_MASS_MEV / NEUTRON_MASS_MEV
        warmer = self.accretion_temperature_mev / self.accretion_temperature_at(time_s)
        slowing = 1 + np.maximum(time_s, 0.0) / SLOWING_S
        result: Floats = self.neutron_share * mass * warmer**6 * self.accreting(time_s) / slowing
        return result

    def _accretion_moment(self, order: float, t: Floats) -> Floats:
        """∫ Eⁿ Ṅ_a dE, over E_e/T from 0 to where nothing is left."""
        x, w = gauss(NODES)
        temperature = self.accretion_temperature_at(t)[:, None]
        positron = REACH * x * temperature
        # E from E_e: E = (E_e + Δ)/(1 + E_e/m_n)
        energy = (positron + GAP_MEV) / (1 + positron / NEUTRON_MASS_MEV)
        slope = (1 - energy / NEUTRON_MASS_MEV) / (1 + positron / NEUTRON_MASS_MEV)
        weight = REACH * w * temperature * slope
        integral: Floats = (energy**order * self.accretion(t[:, None], energy) * weight).sum(axis=1)
        return integral

    def _sphere(self) -> float:
        """π c/(hc)³ 4πR², in 1/(s MeV³)."""
        return float(4 * np.pi**2 * self.radius_cm**2 * PHASE_SPACE)

    def _cooling_temperature(self, t: Floats) -> Floats:
        since = np.maximum(t - self.accretion_time_s, 0.0)
        return self.temperature_mev * np.exp(-since / (4 * self.cooling_time_s))

    def _cooling(self, time_s: Floats, energy_mev: Floats) -> Floats:
        """Ṅ_c(t − τ_a) in 1/s/MeV, shape (4, times, energies)."""
        temperature = self._cooling_temperature(time_s)
        ratio = np.ones((len(SPECIES), 1, 1))
        ratio[[NU_X, ANTI_NU_X]] = self.x_temperature_ratio
        x = np.minimum(energy_mev / (ratio * temperature), 700.0)
        result: Floats = self._sphere() * energy_mev**2 / (1 + np.exp(x)) / ratio**4
        return result
