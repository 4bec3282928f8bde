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
from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence
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
# edges of the cells of recoils grow by this factor, from the energy beside it in MeV
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
        ∫ dE ℓ_node(E) dσ of the central cross section, (deposits, nodes of the panel), cm² MeV.
    variants
        the same of the others, (deposits, variants, nodes); or, where each deposit belongs to one
        neutrino energy, their ratios to the central one, (deposits, variants, 1).
    """

    panel: int
    low_mev: float
    high_mev: float
    cells: NDArray[np.intp]
    weights: Floats
    variants: Floats

    def onto(self, variant: int, share: Floats) -> Floats:
        """Σ_deposits weight × share of its cell, from (cells, columns) to (nodes, columns)."""
        if variant == CENTRAL:
            first = np.flatnonzero(np.diff(self.cells, prepend=-1))
            return np.add.reduceat(self.weights, first, axis=0).T @ share[self.cells[first]]
        if self.variants.shape[2] == 1:
            return self.weights.T @ (share[self.cells] * self.variants[:, variant])
        return self.variants[:, variant].T @ share[self.cells]


def cell_edges(breaks_mev: Iterable[float], cells: str = "plain") -> Floats:
    """Edges of the cells of visible energy in MeV, with every given break among them.

    ``cells`` says for what: ``"plain"``, or ``"recoil"`` for protons and nuclei.
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
        "recoil": _growing,
    }
)


def lines(
    state: FinalState, grid: EnergyGrid, breaks_mev: Iterable[float] = (), order: int = PER_PIECE
) -> Iterator[Part]:
    """Everything of a final state as if it deposited nothing: one cell, stretch by stretch."""
    pieces = _pieces(state, grid, breaks_mev)
    cell = np.zeros(1, dtype=np.intp)
    for (panel, low, high), weights in zip(
        pieces, _piece_weights(state, grid, pieces, order), strict=True
    ):
        yield Part(panel, low, high, cell, weights[None, CENTRAL], weights[None])


def _piece_weights(
    state: FinalState, grid: EnergyGrid, pieces: Sequence[tuple[int, float, float]], order: int
) -> Floats:
    """∫ ℓ_node σ dE over each piece and variant, all at once, (pieces, variants, nodes)."""
    x, w = gauss(order)
    panel = np.array([piece[0] for piece in pieces], dtype=np.intp)
    low, width = (np.array(column)[:, None] for column in zip(*_spans(pieces), strict=True))
    energy = low + width * x
    values = _variants(state, energy) * state.sigma_cm2(energy) * width * w
    weights: Floats = np.moveaxis(values, 0, 1) @ grid.basis(panel[:, None], energy)
    return weights


def _spans(pieces: Sequence[tuple[int, float, float]]) -> list[tuple[float, float]]:
    return [(low, high - low) for _, low, high in pieces]


def total_weights(state: FinalState, grid: EnergyGrid) -> Floats:
    """∫ dE ℓ_node(E) σ(E) and its variants, shape (variants, nodes), cm² MeV."""
    weights = np.zeros((4, grid.count))
    for part in lines(state, grid):
        weights[:, columns(part.panel)] += part.variants[0]
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
        for variant, share in shares.items():
            sums[variant][columns(part.panel)] += part.onto(variant, share)
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
            yield from lines(state, grid, breaks_mev, order)
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
) -> list[tuple[int, float, float]]:
    """Panels and ends of stretches of neutrino energy, none across a border of any kind."""
    wanted = _own_breaks(state).union(grid.panels_mev, breaks)
    inside = sorted(e for e in wanted if 0 <= e <= HIGHEST_ENERGY_MEV)
    panels = grid.panels_of(0.5 * (np.array(inside[:-1]) + np.array(inside[1:])))
    return [
        (int(panel), low, high)
        for panel, (low, high) in zip(panels, pairwise(inside), strict=True)
        if high > state.window_mev[0]
    ]


def _own_breaks(state: FinalState) -> set[float]:
    """Neutrino energies at which a cross section is not smooth."""
    threshold, end = state.window_mev
    return {threshold + step for step in (0.0, *ONSET_MEV)}.union({end}, state.breaks_mev)


def _cell_nodes(edges: Floats) -> tuple[Floats, Floats]:
    """Nodes and weights inside each cell, shape (cells × PER_CELL,)."""
    x, w = gauss(PER_CELL)
    width = np.diff(edges)[:, None]
    return (edges[:-1, None] + width * x).ravel(), (width * w).ravel()


def _shifted(
    state: FinalState, offset: float, grid: EnergyGrid, edges: Floats, breaks: Iterable[float]
) -> Iterator[Part]:
    # all borders are borders of cells as well, so that every cell is smooth
    wanted = {*grid.panels_mev, *breaks}
    stretches = np.array(sorted(e for e in wanted if 0 <= e <= HIGHEST_ENERGY_MEV))
    borders = np.concatenate([stretches, sorted(_own_breaks(state))]) - offset
    inside = borders[(borders > edges[0]) & (borders < edges[-1])]
    kinetic, width = _cell_nodes(np.union1d(edges, inside))
    energy = kinetic + offset
    open_ = np.searchsorted(energy, stretches[[0, -1]])
    kinetic, width, energy = (array[slice(*open_)] for array in (kinetic, width, energy))
    panel = grid.panels_of(energy)
    variants = _variants(state, energy).T[:, :, None]
    weights = (state.sigma_cm2(energy) * width)[:, None] * grid.basis(panel, energy)
    cells = np.searchsorted(edges, kinetic, "right") - 1
    ends = np.searchsorted(energy, stretches)
    for (low, high), (first, last) in zip(pairwise(stretches), pairwise(ends), strict=True):
        if last > first:
            some = slice(first, last)
            own = cells[some], weights[some], variants[some]
            yield Part(int(panel[first]), float(low), float(high), *own)


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
    after = np.minimum(lowest + deposit.steep_mev, highest)
    for panel, low, high in _pieces(state, grid, breaks):
        for bottom, top in ((lowest, after), (after, highest)):
            start, end = np.maximum(bottom, low), np.minimum(top, high)
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
                weights *= kinetic_weight[at, None, None]
                yield Part(panel, low, high, at // PER_CELL, weights[:, CENTRAL], weights)


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
