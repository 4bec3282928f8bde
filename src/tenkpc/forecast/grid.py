"""The grid of neutrino energies on which a flux is sampled, and the panels of time.

Fluxes are smooth, kernels are not. A flux is therefore known by its values at the
Gauss-Legendre nodes of a few panels, that is, by one polynomial of degree 11 on each panel, and
cross sections and responses are integrated against those polynomials once and for all.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.polynomial.legendre import leggauss, legvander
from numpy.typing import NDArray

from tenkpc.interactions.base import HIGHEST_ENERGY_MEV
from tenkpc.quadrature import gauss

Floats = NDArray[np.float64]

PANELS_MEV = (0.0, 2.0, 5.0, 10.0, 16.0, 24.0, 36.0, 60.0, 100.0, HIGHEST_ENERGY_MEV)
NODES_PER_PANEL = 12


@dataclass(frozen=True)
class EnergyGrid:
    """Panels of neutrino energy with 12 Gauss-Legendre nodes each.

    Attributes
    ----------
    panels_mev
        edges of the panels in MeV; the flux must be smooth inside each.
    """

    panels_mev: tuple[float, ...] = PANELS_MEV

    @classmethod
    def with_joints(cls, joints_mev: Iterable[float]) -> EnergyGrid:
        """Add a grid whose panels also break at ``joints_mev`` (where a flux is not smooth)."""
        inside = {float(e) for e in joints_mev if 0 < e < HIGHEST_ENERGY_MEV}
        return cls(tuple(sorted(inside.union(PANELS_MEV))))

    @property
    def count(self) -> int:
        """Number of nodes."""
        return NODES_PER_PANEL * (len(self.panels_mev) - 1)

    @property
    def nodes_mev(self) -> Floats:
        """All nodes in MeV, ascending."""
        return panel_nodes(np.array(self.panels_mev), NODES_PER_PANEL)[0]

    @property
    def weights_mev(self) -> Floats:
        """Weight of each node in ∫ dE, in MeV."""
        return panel_nodes(np.array(self.panels_mev), NODES_PER_PANEL)[1]

    def panel_of(self, energy_mev: float) -> int:
        """Index of the panel that holds an energy."""
        last = len(self.panels_mev) - 2
        return min(max(int(np.searchsorted(self.panels_mev, energy_mev, "right")) - 1, 0), last)

    def basis(self, panel: int, energy_mev: Floats) -> Floats:
        """Lagrange polynomials of a panel's nodes at energies inside it, (..., 12)."""
        low, high = self.panels_mev[panel], self.panels_mev[panel + 1]
        x = 2.0 * (energy_mev - low) / (high - low) - 1.0
        values: Floats = legvander(x, NODES_PER_PANEL - 1) @ _legendre_coefficients()
        return values


@lru_cache(maxsize=1)
def _legendre_coefficients() -> Floats:
    """Legendre coefficients (rows) of the Lagrange polynomials of the nodes (columns)."""
    x, w = leggauss(NODES_PER_PANEL)
    degree = np.arange(NODES_PER_PANEL)
    return (degree[:, None] + 0.5) * legvander(x, NODES_PER_PANEL - 1).T * w


def panel_nodes(panels: Floats, order: int) -> tuple[Floats, Floats]:
    """Gauss-Legendre nodes and weights of every panel, both of shape (panels × order,)."""
    x, w = gauss(order)
    width = np.diff(panels)[:, None]
    return (panels[:-1, None] + width * x).ravel(), (width * w).ravel()
