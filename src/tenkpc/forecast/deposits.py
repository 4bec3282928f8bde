"""A final state's cross section, sorted by neutrino node and by what it deposits.

For every node of the energy grid and every cell of kinetic energy of the lead particle,

    W[node, cell] = ∫ dE ℓ_node(E) σ(E) · P(T in cell | E),

with ℓ the Lagrange polynomials of the grid: product-integration weights, so that the kernel is
integrated exactly as it is, however narrow, and only the flux is taken to be smooth. The order
of integration is chosen for each form of deposit so that no kink is stepped over: a spread is
integrated over E between the bounds that belong to each T, a shifted state over T inside each
cell, a line over E alone.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Iterator, Mapping
from dataclasses import dataclass
from functools import partial
from itertools import pairwise
from types import MappingProxyType

import numpy as np
from numpy.typing import NDArray

from tenkpc.forecast.grid import NODES_PER_PANEL, EnergyGrid
from tenkpc.interactions.base import HIGHEST_ENERGY_MEV, FinalState, Fixed, Shifted, Spread
from tenkpc.quadrature import gauss

Floats = NDArray[np.float64]

# widest cells of visible energy, MeV, each up to the energy beside it: twice as wide misses
# 1e-3 in 1 MeV bins
CELL_WIDTHS_MEV = ((0.05, 30.0), (0.125, 60.0), (0.25, 100.0), (0.5, HIGHEST_ENERGY_MEV + 2.0))
# the same for quenched protons, whose spectrum falls by half within 0.3 MeV of visible energy
QUENCHED_WIDTHS_MEV = ((0.0025, 1.0), (0.01, 4.0), (0.05, 20.0), (0.5, HIGHEST_ENERGY_MEV + 2.0))
# edges of the cells of nuclear recoils grow by this factor, from the energy beside it in MeV
RECOIL_RATIO, LOWEST_RECOIL_MEV = 1.02, 1e-6
# a line is a deposit this wide: narrow against any resolution, wide against rounding
LINE_WIDTH_MEV = 1e-4
# edges closer than this share of themselves are one: they differ by rounding
NARROWEST = 1e-9
# nodes inside a cell, where the integrand is smooth
PER_CELL = 2
# nodes inside an incomplete panel, where it may begin with a logarithm or a square root
PER_PIECE = 24
# pieces start anew this far above a threshold, for cross sections that open like a root
ONSET_MEV = (0.01, 0.05, 0.2, 0.7)
# a cross section as it is, 1σ low, 1σ high, and only outside its window
CENTRAL, LOW, HIGH, OUTSIDE = range(4)


@dataclass(frozen=True)
class Part:
    """What one stretch of neutrino energies gives to some deposits.

    Attributes
    ----------
    panel
        index of the grid's panel.
    low_mev, high_mev
        the stretch, inside the panel.
    cells
        index of the cell of each deposit, ascending, shape (deposits,).
    weights
        ∫ dE ℓ_node(E) dσ, shape (deposits, variants, nodes of the panel), cm² MeV.
    """

    panel: int
    low_mev: float
    high_mev: float
    cells: NDArray[np.intp]
    weights: Floats


def cell_edges(breaks_mev: Iterable[float], cells: str = "plain") -> Floats:
    """Edges of the cells of visible energy in MeV, with every given break among them.

    ``cells`` says for what: ``"plain"``, ``"quenched"`` for protons, ``"recoil"`` for nuclei.
    """
    edges = _CELLS[cells]()
    inside = [edge for edge in breaks_mev if 0 < edge < edges[-1]]
    edges = np.unique(np.concatenate([edges, inside]))
    kept: Floats = edges[np.concatenate([[True], np.diff(edges) > NARROWEST * edges[1:]])]
    return kept


def _steps(widths_mev: Iterable[tuple[float, float]]) -> Floats:
    """Edges that are so far apart up to the energy beside it."""
    parts, start = [], 0.0
    for width, end in widths_mev:
        parts.append(np.linspace(start, end, round((end - start) / width) + 1))
        start = end
    return np.concatenate(parts)


def _growing() -> Floats:
    """Edges that grow in proportion to the energy."""
    end = CELL_WIDTHS_MEV[-1][1]
    count = math.ceil(math.log(end / LOWEST_RECOIL_MEV) / math.log(RECOIL_RATIO))
    return np.concatenate([[0.0], np.geomspace(LOWEST_RECOIL_MEV, end, count + 1)])


_CELLS: Mapping[str, Callable[[], Floats]] = MappingProxyType(
    {
        "plain": partial(_steps, CELL_WIDTHS_MEV),
        "quenched": partial(_steps, QUENCHED_WIDTHS_MEV),
        "recoil": _growing,
    }
)


def total_weights(state: FinalState, grid: EnergyGrid) -> Floats:
    """∫ dE ℓ_node(E) σ(E) and its variants, shape (variants, nodes), cm² MeV."""
    weights = np.zeros((4, grid.count))
    for part in _line(state, grid, (), PER_PIECE):
        weights[:, columns(part.panel)] += part.weights[0]
    return weights


def weighted(
    state: FinalState,
    grid: EnergyGrid,
    kinetic_edges_mev: Floats,
    shares: Mapping[int, Floats],
) -> dict[int, Floats]:
    """Σ_cells W[node, cell] × share[cell, column], the module's W times what is made of a cell.

    Parameters
    ----------
    state
        a final state; one with a `Fixed` deposit has a single cell.
    grid
        the grid of the flux.
    kinetic_edges_mev
        edges of the cells as kinetic energies of the lead particle, MeV, ascending.
    shares
        for some variants of the cross section, shares of shape (cells, columns).

    Returns
    -------
    dict
        for each variant, (nodes, columns), cm² MeV.
    """
    sums = {v: np.zeros((grid.count, share.shape[1])) for v, share in shares.items()}
    for part in parts(state, grid, kinetic_edges_mev):
        first = np.flatnonzero(np.diff(part.cells, prepend=-1))
        cells = part.cells[first]
        weights = np.add.reduceat(part.weights, first, axis=0)
        for variant, share in shares.items():
            sums[variant][columns(part.panel)] += weights[:, variant].T @ share[cells]
    return sums


def parts(
    state: FinalState,
    grid: EnergyGrid,
    kinetic_edges_mev: Floats,
    breaks_mev: Iterable[float] = (),
    order: int = PER_PIECE,
) -> Iterator[Part]:
    """Everything a final state deposits, stretch by stretch of neutrino energy.

    ``breaks_mev`` are further borders of the stretches and ``order`` is the number of nodes in
    each, less where the stretches are short.
    """
    match state.deposit:
        case Fixed():
            yield from _line(state, grid, breaks_mev, order)
        case Shifted(offset_mev=offset):
            yield from _shifted(state, offset, grid, kinetic_edges_mev, breaks_mev)
        case Spread():
            yield from _spread(state, state.deposit, grid, kinetic_edges_mev, breaks_mev, order)


def columns(panel: int) -> slice:
    """Place of a panel's nodes in an array over all nodes."""
    return slice(panel * NODES_PER_PANEL, (panel + 1) * NODES_PER_PANEL)


def _variants(state: FinalState, energy_mev: Floats) -> Floats:
    """Factors on the cross section against energy, shape (4, ...)."""
    error = state.relative_error(energy_mev)
    outside = (energy_mev > state.window_mev[1]) * 1.0
    return np.stack([np.ones_like(outside), np.exp(-error), np.exp(error), outside])


def _pieces(
    state: FinalState, grid: EnergyGrid, breaks: Iterable[float]
) -> Iterator[tuple[int, float, float]]:
    """Stretches of neutrino energy, none across a panel's edge or a break of any kind."""
    threshold, end = state.window_mev
    onset = {threshold + step for step in (0.0, *ONSET_MEV)}
    wanted = onset.union({end}, state.breaks_mev, breaks)
    inside = {e for e in wanted if 0 < e < HIGHEST_ENERGY_MEV}
    for low, high in pairwise(sorted(inside.union(grid.panels_mev))):
        yield grid.panel_of(0.5 * (low + high)), low, high


def _cell_nodes(edges: Floats) -> tuple[Floats, Floats]:
    """Nodes and weights inside each cell, shape (cells × PER_CELL,)."""
    x, w = gauss(PER_CELL)
    width = np.diff(edges)[:, None]
    return (edges[:-1, None] + width * x).ravel(), (width * w).ravel()


def _line(
    state: FinalState, grid: EnergyGrid, breaks: Iterable[float], order: int
) -> Iterator[Part]:
    x, w = gauss(order)
    for panel, low, high in _pieces(state, grid, breaks):
        energy = low + (high - low) * x
        values = _variants(state, energy) * state.sigma_cm2(energy) * (high - low) * w
        weights = (values @ grid.basis(panel, energy))[None]
        yield Part(panel, low, high, np.zeros(1, dtype=np.intp), weights)


def _shifted(
    state: FinalState, offset: float, grid: EnergyGrid, edges: Floats, breaks: Iterable[float]
) -> Iterator[Part]:
    for panel, low, high in _pieces(state, grid, breaks):
        start, end = max(low - offset, edges[0]), min(high - offset, edges[-1])
        if end <= start:
            continue
        inner = edges[(edges > start) & (edges < end)]
        kinetic, width = _cell_nodes(np.concatenate([[start], inner, [end]]))
        energy = kinetic + offset
        values = _variants(state, energy) * state.sigma_cm2(energy) * width
        weights = values.T[:, :, None] * grid.basis(panel, energy)[:, None, :]
        yield Part(panel, low, high, np.searchsorted(edges, kinetic, "right") - 1, weights)


def _spread(
    state: FinalState,
    deposit: Spread,
    grid: EnergyGrid,
    edges: Floats,
    breaks: Iterable[float],
    order: int,
) -> Iterator[Part]:
    kinetic, kinetic_weight = _cell_nodes(edges)
    lowest, highest = deposit.lowest_mev(kinetic), deposit.highest_mev(kinetic)
    for panel, low, high in _pieces(state, grid, breaks):
        start, end = np.maximum(lowest, low), np.minimum(highest, high)
        some = (end > start) & (kinetic_weight > 0)
        whole = some & (end - start == grid.panels_mev[panel + 1] - grid.panels_mev[panel])
        for at in (np.flatnonzero(whole), np.flatnonzero(some & ~whole)):
            if at.size == 0:
                continue
            if whole[at[0]]:
                weights = _whole_panel(state, deposit, grid, panel, kinetic[at])
            else:
                stretch = (start[at, None], end[at, None], kinetic[at, None])
                weights = _part_of_panel(state, deposit, grid, panel, stretch, order)
            yield Part(panel, low, high, at // PER_CELL, weights * kinetic_weight[at, None, None])


def _whole_panel(
    state: FinalState, deposit: Spread, grid: EnergyGrid, panel: int, kinetic: Floats
) -> Floats:
    """∫ ℓ dσ/dT dE over a panel: its own nodes, at which each ℓ is 1 or 0; (kinetic, 4, 12)."""
    energy = grid.nodes_mev[columns(panel)]
    values = deposit.differential(energy, kinetic[:, None]) * grid.weights_mev[columns(panel)]
    return values[:, None, :] * _variants(state, energy)


def _part_of_panel(
    state: FinalState,
    deposit: Spread,
    grid: EnergyGrid,
    panel: int,
    stretch: tuple[Floats, Floats, Floats],
    order: int,
) -> Floats:
    """∫ ℓ dσ/dT dE from start to end, for every kinetic energy; (kinetic, 4, 12)."""
    start, end, kinetic = stretch
    t, w = gauss(order)
    # crowded towards the lowest energy, where radiative corrections have a logarithm
    energy = start + (end - start) * t**2
    values = deposit.differential(energy, kinetic) * (end - start) * 2 * t * w
    weighted = np.moveaxis(_variants(state, energy) * values, 0, 1)
    integrals: Floats = np.matmul(weighted, grid.basis(panel, energy))
    return integrals
