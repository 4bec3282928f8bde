"""A transition between two nuclear levels whose strength is known from a decay.

For a 0⁺ → 1⁺ transition, with the recoil of the nucleus left out (below 0.7 % at 50 MeV), E_l and
p of the lepton that leaves, c the cosine of its angle θ, q the momentum transfer,
q_μ² = q² − ΔM², and the upper sign for neutrinos,

    dσ/dc = (G²/π) p E_l F(Z, E_l) f(q)² (S/3) {cos²(θ/2) ΔM²/q²
            + [q_μ²/(2q²) cos²(θ/2) + sin²(θ/2)] 2(1 + ρ²)
            ± 4ρ (sin(θ/2)/q) √(q_μ² cos²(θ/2) + q² sin²(θ/2))}

An analogue transition adds B(F) (1 + βc)/2 to (S/3) {…}, with β the velocity of the lepton.

It is the multipole cross section (T. W. Donnelly and J. D. Walecka, Annu. Rev. Nucl. Sci. 25
(1975) 329, from memory) with one axial form factor f, and becomes (G²/π) p E_l F S without weak
magnetism and form factor. S is g_A² B(GT); ρ = μ q/(2 M g_A) the weak magnetism, from the width
of the analogue's gamma decay.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from tenkpc.constants import (
    ELECTRON_MASS_MEV,
    HBAR_C_MEV_CM,
    HBAR_MEV_S,
    NEUTRON_MASS_MEV,
    PROTON_MASS_MEV,
)
from tenkpc.interactions.coulomb import fermi_function
from tenkpc.quadrature import gauss

Floats = NDArray[np.float64]

MEAN_MASS_MEV = 0.5 * (NEUTRON_MASS_MEV + PROTON_MASS_MEV)
# nodes over the angle: 24 give 1e-11 to 200 MeV, tried
NODES = 24


@dataclass(frozen=True)
class Transition:
    """What the cross section of a transition depends on.

    Attributes
    ----------
    coupling_per_mev2
        G: of beta decay with its inner radiative correction, or G_F for the neutral current.
    strength
        S = g_A² B(GT), a number.
    energy_mev
        ΔM: the neutrino's energy less the total energy of the lepton that leaves, MeV.
    moment_over_axial
        μ/g_A of the weak magnetism in nuclear magnetons, negative for antineutrinos.
    oscillator_fm
        oscillator length b of the form factor f = (1 − 2y/3) e^(−y), y = (bq/2ħc)², fm.
    fermi
        B(F) of an analogue transition; a number, often 0.
    charge, nucleons
        Z (negative for positrons, 0 for the neutral current) and A of the nucleus that is left.
    """

    coupling_per_mev2: float
    strength: float
    energy_mev: float
    moment_over_axial: float
    oscillator_fm: float
    charge: int
    nucleons: int
    fermi: float = 0.0

    @property
    def lepton_mass_mev(self) -> float:
        """Mass of the lepton that leaves: an electron's, or none."""
        return ELECTRON_MASS_MEV if self.charge else 0.0

    def total_cm2(self, neutrino_mev: ArrayLike) -> Floats:
        """Total cross section in cm² per nucleus; zero below the threshold."""
        energy = np.asarray(neutrino_mev, dtype=float)
        return self.scale_cm2(energy) * over_angle(self, energy, self._bracket(energy))

    def mean_cosine(self, neutrino_mev: ArrayLike) -> Floats:
        """Mean cosine between the lepton that leaves and the neutrino."""
        energy = np.asarray(neutrino_mev, dtype=float)
        bracket = self._bracket(energy)
        along = over_angle(self, energy, lambda c, q: c * bracket(c, q))
        result: Floats = along / over_angle(self, energy, bracket)
        return result

    def scale_cm2(self, neutrino_mev: Floats) -> Floats:
        """(G²/π) p E_l F in cm²; zero below the threshold."""
        p = self.momentum_mev(neutrino_mev)
        energy = np.sqrt(p**2 + self.lepton_mass_mev**2)
        enhanced = fermi_function(p, self.charge, self.nucleons)
        square = self.coupling_per_mev2**2 * HBAR_C_MEV_CM**2 / np.pi
        return square * p * energy * enhanced

    def momentum_mev(self, neutrino_mev: Floats) -> Floats:
        """Momentum p of the lepton that leaves, MeV; zero below the threshold."""
        energy = np.maximum(neutrino_mev - self.energy_mev, self.lepton_mass_mev)
        return np.sqrt(energy**2 - self.lepton_mass_mev**2)

    def form_factor_squared(self, q_mev: Floats) -> Floats:
        """f² at a momentum transfer in MeV."""
        y = self.oscillator_y(q_mev)
        result: Floats = ((1 - 2 * y / 3) * np.exp(-y)) ** 2
        return result

    def oscillator_y(self, q_mev: Floats) -> Floats:
        """Y = (bq/2ħc)²."""
        result: Floats = (self.oscillator_fm * 1e-13 * q_mev / (2 * HBAR_C_MEV_CM)) ** 2
        return result

    def velocity(self, neutrino_mev: Floats) -> Floats:
        """β of the lepton that leaves; zero below the threshold."""
        energy = np.maximum(neutrino_mev - self.energy_mev, self.lepton_mass_mev)
        return np.divide(
            self.momentum_mev(neutrino_mev), energy, out=np.zeros_like(energy), where=energy > 0
        )

    def _bracket(self, neutrino_mev: Floats) -> Callable[[Floats, Floats], Floats]:
        """f² [B(F)(1 + βc)/2 + (S/3) {…}] of the module's docstring, against c and q."""
        beta = self.velocity(neutrino_mev)[..., None]

        def bracket(cosine: Floats, q_mev: Floats) -> Floats:
            both = self.fermi * (1 + beta * cosine) / 2 + self.strength / 3 * self._axial(
                cosine, q_mev
            )
            result: Floats = self.form_factor_squared(q_mev) * both
            return result

        return bracket

    def _axial(self, cosine: Floats, q_mev: Floats) -> Floats:
        """{…} of the module's docstring."""
        forward, backward = (1 + cosine) / 2, (1 - cosine) / 2
        rho = self.moment_over_axial * q_mev / (2 * MEAN_MASS_MEV)
        longitudinal = (self.energy_mev / q_mev) ** 2
        virtual = np.maximum(1 - longitudinal, 0.0)  # q_μ²/q²
        transverse = virtual / 2 * forward + backward
        interference = np.sqrt(backward * (virtual * forward + backward))
        braces: Floats = (
            longitudinal * forward + 2 * (1 + rho**2) * transverse + 4 * rho * interference
        )
        return braces


def beta_coupling_per_mev2(twice_superallowed_ft_s: float) -> float:
    """G of beta decay in MeV⁻² from 2 Ft of superallowed Fermi decays in s.

    G² = 2π³ ln2 ħ/(2Ft m_e⁵) holds G_F², V_ud² and the inner radiative correction.
    """
    square = 2 * np.pi**3 * np.log(2) * HBAR_MEV_S
    return float(np.sqrt(square / (twice_superallowed_ft_s * ELECTRON_MASS_MEV**5)))


def over_angle(
    transition: Transition, neutrino_mev: Floats, weight: Callable[[Floats, Floats], Floats]
) -> Floats:
    """∫ dc weight(c, q) over all angles, q the momentum transfer in MeV."""
    t, w = gauss(NODES)
    c = 1 - 2 * t**2  # crowded towards c = 1, where q² may be small
    energy = np.maximum(neutrino_mev, transition.energy_mev)[..., None]
    p = transition.momentum_mev(energy)
    q = np.sqrt(energy**2 + p**2 - 2 * energy * p * c)
    integral: Floats = (4 * w * t * weight(c, q)).sum(axis=-1)
    return integral
