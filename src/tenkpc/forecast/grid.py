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
from numpy.polynomial.legendre import leg2poly, leggauss, legvander
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

    def panels_of(self, energy_mev: Floats) -> NDArray[np.intp]:
        """Index of the panel that holds each energy."""
        found = np.searchsorted(self.panels_mev, energy_mev, "right") - 1
        return np.clip(found, 0, len(self.panels_mev) - 2)

    def basis(self, panel: int | NDArray[np.intp], energy_mev: Floats) -> Floats:
        """Lagrange polynomials of the nodes of a panel, one or one for each energy, (..., 12)."""
        edges = np.array(self.panels_mev)
        low, high = edges[panel], edges[panel + 1]
        x = 2.0 * (energy_mev - low) / (high - low) - 1.0
        powers = np.ones((*x.shape, NODES_PER_PANEL))
        powers[..., 1:] = x[..., None]
        np.multiply.accumulate(powers, axis=-1, out=powers)
        values: Floats = powers @ _coefficients()
        return values


@lru_cache(maxsize=1)
def _coefficients() -> Floats:
    """Coefficients of powers (rows) of the Lagrange polynomials of the nodes (columns).

    Powers lose three digits of fifteen at this degree, and take a third of the time of Legendre
    polynomials.
    """
    x, w = leggauss(NODES_PER_PANEL)
    degree = np.arange(NODES_PER_PANEL)
    of_legendre = (degree[:, None] + 0.5) * legvander(x, NODES_PER_PANEL - 1).T * w
    made = np.zeros_like(of_legendre)
    for column, coefficients in enumerate(of_legendre.T):
        made[:, column] = leg2poly(coefficients)
    return made


def panel_nodes(panels: Floats, order: int) -> tuple[Floats, Floats]:
    """Gauss-Legendre nodes and weights of every panel, both of shape (panels × order,)."""
    x, w = gauss(order)
    width = np.diff(panels)[:, None]
    return (panels[:-1, None] + width * x).ravel(), (width * w).ravel()
