"""The energy grid: its quadrature, its polynomials, its joints."""

from __future__ import annotations

import numpy as np
import pytest

from tenkpc.forecast.grid import PANELS_MEV, EnergyGrid, panel_nodes


def test_the_plain_grid_has_108_nodes():
    """Nine panels of twelve nodes cover 0 to 200 MeV."""
    grid = EnergyGrid()
    assert grid.count == len(grid.nodes_mev) == 108
    assert grid.weights_mev.sum() == pytest.approx(200)


def test_polynomials_of_a_panel_are_one_at_their_own_node():
    """Lagrange polynomials form a unit matrix at the nodes, to rounding."""
    grid = EnergyGrid()
    for panel in range(len(PANELS_MEV) - 1):
        nodes = grid.nodes_mev[12 * panel : 12 * panel + 12]
        assert grid.basis(panel, nodes) == pytest.approx(np.eye(12), abs=1e-12)


def test_a_polynomial_is_interpolated_exactly():
    """Degree 11 is the degree of the panels, so a power of 11 is reproduced to rounding."""
    grid = EnergyGrid()
    energy = np.linspace(24.0, 36.0, 17)
    found = grid.basis(5, energy) @ (grid.nodes_mev[60:72] / 36) ** 11
    assert found == pytest.approx((energy / 36) ** 11, rel=1e-11)


def test_joints_become_borders_of_panels():
    """A joint inside the range is a border, one outside is no business of the grid."""
    grid = EnergyGrid.with_joints([7.5, 5.0, 0.0, 300.0])
    assert grid.panels_mev == tuple(sorted({*PANELS_MEV, 7.5}))
    assert grid.panels_of(np.array(7.6)) == grid.panels_mev.index(7.5)


def test_panels_of_unequal_width_share_one_rule():
    """Gauss-Legendre on panels integrates a cubic exactly with two nodes each."""
    nodes, weights = panel_nodes(np.array([0.0, 1.0, 5.0]), 2)
    assert weights @ nodes**3 == pytest.approx(5**4 / 4)
