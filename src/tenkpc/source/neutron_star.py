"""What a neutron star can give: its binding energy and its lepton number.

    E_b = M c² 0.6 β/(1 − 0.5 β),    β = GM/(R c²)

with M the gravitational mass, the coefficient 0.60 ± 0.05 (J. M. Lattimer and M. Prakash,
Astrophys. J. 550 (2001) 426, arXiv:astro-ph/0002232, from memory). The star holds
N_B = (M + E_b/c²)/m_u baryons; a collapsed core loses about 0.4 leptons for each of them.
"""

from __future__ import annotations

from dataclasses import dataclass

from tenkpc.constants import (
    ATOMIC_MASS_MEV,
    GRAM_MEV,
    MEV_PER_ERG,
    SOLAR_MASS_G,
    SOLAR_RADIUS_OF_GRAVITY_CM,
)

COEFFICIENT, COEFFICIENT_ERROR = 0.60, 0.05
# leptons that a core loses for each baryon; outside of them something is amiss
USUAL_LEPTONS = (0.3, 0.5)


@dataclass(frozen=True)
class NeutronStar:
    """The star that a burst leaves: gravitational mass and radius.

    Attributes
    ----------
    solar_masses
        M in solar masses.
    radius_cm
        R in cm.
    """

    solar_masses: float
    radius_cm: float

    @property
    def binding_energy_erg(self) -> float:
        """E_b in erg: all that its neutrinos may carry."""
        return self._bound(COEFFICIENT)

    @property
    def highest_binding_energy_erg(self) -> float:
        """E_b with the coefficient 1σ up, erg."""
        return self._bound(COEFFICIENT + COEFFICIENT_ERROR)

    @property
    def baryons(self) -> float:
        """Number of baryons."""
        mass_mev = self._mass_mev + self.binding_energy_erg * MEV_PER_ERG
        return mass_mev / ATOMIC_MASS_MEV

    @property
    def _mass_mev(self) -> float:
        return self.solar_masses * SOLAR_MASS_G * GRAM_MEV

    def _bound(self, coefficient: float) -> float:
        beta = self.solar_masses * SOLAR_RADIUS_OF_GRAVITY_CM / self.radius_cm
        return self._mass_mev * coefficient * beta / (1 - 0.5 * beta) / MEV_PER_ERG
