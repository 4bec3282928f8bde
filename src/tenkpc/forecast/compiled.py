"""A detector and its interactions, compiled into one tensor that any flux can be folded with.

Rows are final states by volume and species; columns are the counts a row is asked for: all
reactions, those observed above threshold, the counted ones with the cross section 1σ low and
high, those from outside the cross section's window, and the counted ones by bin of observed
energy. The cross section and the response are integrated here, once (see
`tenkpc.forecast.deposits`); what is left for `tenkpc.forecast.fold` is one sum over the nodes.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from tenkpc.detector.quenching import Quenched
from tenkpc.detector.response import Response
from tenkpc.forecast.deposits import (
    CENTRAL,
    HIGH,
    LINE_WIDTH_MEV,
    LOW,
    OUTSIDE,
    cell_edges,
    columns,
    parts,
    total_weights,
    weighted,
)
from tenkpc.forecast.grid import EnergyGrid
from tenkpc.interactions.base import HIGHEST_ENERGY_MEV, FinalState, Fixed, Interaction
from tenkpc.species import SPECIES

Floats = NDArray[np.float64]

# columns of the tensor; the bins of observed energy follow, then everything above the last edge
REACTIONS, ABOVE_THRESHOLD, COUNTED_LOW, COUNTED_HIGH, COUNTED_OUTSIDE = range(5)
SCALE_LOW, SCALE_HIGH, FIRST_BIN = range(5, 8)
# nodes in each bin of neutrino energy, which are short
PER_NEUTRINO_BIN = 8
# a single bin, for where the observed energy does not matter
EVERYTHING = np.array([0.0, HIGHEST_ENERGY_MEV])


@dataclass(frozen=True)
class Exposure:
    """Some targets in a volume, exposed to one interaction and watched by one response."""

    volume: str
    targets: float
    interaction: Interaction
    response: Response


@dataclass(frozen=True)
class Row:
    """Which events a row of the tensor counts; ``seen_as`` is empty where none are seen."""

    volume: str
    interaction: str
    final_state: str
    species: str
    seen_as: str


@dataclass(frozen=True, eq=False)
class Compiled:
    """The tensor of a detector.

    Attributes
    ----------
    rows
        what each row counts.
    species
        index of each row's species, shape (rows,).
    grid
        neutrino energies at which a flux must be given.
    edges_mev
        edges of the bins of observed energy.
    tensor
        events per fluence, shape (rows, nodes, columns), cm² MeV.
    """

    rows: tuple[Row, ...]
    species: NDArray[np.intp]
    grid: EnergyGrid
    edges_mev: Floats
    tensor: Floats

    @property
    def counted(self) -> Floats:
        """Give the counted events alone, (rows, nodes, 1)."""
        total: Floats = self.tensor[:, :, FIRST_BIN:].sum(axis=2, keepdims=True)
        return total


@dataclass(frozen=True, eq=False)
class _Shares:
    """What a response makes of deposits: shares of each, all of shape (deposits, …)."""

    bins: Floats
    above: Floats
    scale_low: Floats
    scale_high: Floats

    @classmethod
    def of(cls, response: Response, low: Floats, high: Floats, edges_mev: Floats) -> _Shares:
        bins = response.share(low, high, edges_mev)
        ends = [bins.sum(axis=1)] * 2
        if response.scale_error:
            factors = (1 - response.scale_error, 1 + response.scale_error)
            moved = (response.scaled(factor) for factor in factors)
            ends = [other.share(low, high, EVERYTHING).sum(axis=1) for other in moved]
        return cls(bins, response.above_threshold(low, high), *ends)

    def times(self, accepted: Floats) -> _Shares:
        """Keep only so much of each deposit."""
        each = (self.above, self.scale_low, self.scale_high)
        return _Shares(self.bins * accepted[:, None], *(share * accepted for share in each))


@dataclass(frozen=True, eq=False)
class _Cells:
    """Cells of visible energy and what a response makes of each."""

    edges: Floats
    shares: _Shares

    @classmethod
    def of(
        cls, response: Response, edges_mev: Floats, starts_mev: Iterable[float], cells: str
    ) -> _Cells:
        edges = cell_edges([*edges_mev, *response.knots_mev, *starts_mev], cells)
        return cls(edges, _Shares.of(response, edges[:-1], edges[1:], edges_mev))


class _CellsOf:
    """Cells for every response and kind of particle, each made when it is first needed."""

    def __init__(self, exposures: Sequence[Exposure], edges_mev: Floats) -> None:
        self.exposures, self.edges_mev = exposures, edges_mev
        self.known: dict[tuple[int, str], _Cells] = {}

    def __call__(self, response: Response, state: FinalState) -> _Cells:
        quenched = isinstance(response.light.get(state.lead), Quenched)
        cells = "recoil" if response.scale.label else "quenched" if quenched else "plain"
        key = id(response), cells
        if key not in self.known:
            starts = _starts(self.exposures, response)
            self.known[key] = _Cells.of(response, self.edges_mev, starts, cells)
        return self.known[key]


def compile_rows(exposures: Sequence[Exposure], grid: EnergyGrid, edges_mev: Floats) -> Compiled:
    """Compile every final state of every exposure for each species.

    Parameters
    ----------
    exposures
        targets, interactions and responses.
    grid
        grid of neutrino energies; the flux must be smooth inside its panels.
    edges_mev
        edges of the bins of observed energy, MeV, ascending.
    """
    rows, blocks = [], []
    cells = _CellsOf(exposures, edges_mev)
    # neutrino kinds that react alike share their final states, so each is compiled once
    known: dict[tuple[int, int], Floats] = {}
    for exposure, species, state in _states(exposures):
        start = _offset(exposure.response, state)
        seen_as = "" if start is None else state.seen_as
        reaction = exposure.interaction.key
        rows.append(Row(exposure.volume, reaction, state.label, species, seen_as))
        key = id(state), id(exposure.response)
        if key not in known:
            made = cells(exposure.response, state)
            known[key] = _block(state, exposure.response, grid, made, edges_mev, start)
        blocks.append(known[key] * exposure.targets)
    species_index = np.array([SPECIES.index(row.species) for row in rows], dtype=np.intp)
    empty = np.zeros((0, grid.count, FIRST_BIN + len(edges_mev)))
    tensor = np.stack(blocks) if blocks else empty
    return Compiled(tuple(rows), species_index, grid, edges_mev, tensor)


def by_neutrino_energy(
    exposures: Sequence[Exposure], grid: EnergyGrid, neutrino_edges_mev: Floats
) -> Floats:
    """Counted events by bin of true neutrino energy, shape (rows, nodes, bins + 1).

    The rows are those of `compile_rows`, the last column holds what lies above the last edge.
    """
    blocks = []
    cells = _CellsOf(exposures, EVERYTHING)
    for exposure, _, state in _states(exposures):
        start = _offset(exposure.response, state)
        block = np.zeros((grid.count, len(neutrino_edges_mev)))
        if start is not None:
            made = cells(exposure.response, state)
            kept, kinetic = _kept(state, exposure.response, made, start)
            for part in parts(state, grid, kinetic, neutrino_edges_mev, PER_NEUTRINO_BIN):
                middle = 0.5 * (part.low_mev + part.high_mev)
                column = max(int(np.searchsorted(neutrino_edges_mev, middle)) - 1, 0)
                counted = kept[part.cells] @ part.weights[:, CENTRAL]
                block[columns(part.panel), column] += counted
        blocks.append(block * exposure.targets)
    return np.stack(blocks)


def _states(exposures: Sequence[Exposure]) -> list[tuple[Exposure, str, FinalState]]:
    return [
        (exposure, species, state)
        for exposure in exposures
        for species in SPECIES
        for state in exposure.interaction.final_states(species)
    ]


def _offset(response: Response, state: FinalState) -> float | None:
    """Visible energy of an event whose lead particle adds none; None if it is not seen."""
    if state.lead not in response.light:
        return None
    extras = (response.visible(particle, energy) for particle, energy in state.extras)
    return response.event_offset_mev + sum(energy for energy in extras if energy is not None)


def _starts(exposures: Sequence[Exposure], response: Response) -> set[float]:
    """Lowest visible energies of the final states that a response sees."""
    starts = set()
    for exposure, _, state in _states(exposures):
        offset = _offset(response, state) if exposure.response is response else None
        if offset is not None:
            starts.add(offset + (response.visible(state.lead, 0.0) or 0.0))
    return starts


def _block(
    state: FinalState,
    response: Response,
    grid: EnergyGrid,
    cells: _Cells,
    edges_mev: Floats,
    start: float | None,
) -> Floats:
    """Columns of one row for a single target, shape (nodes, columns)."""
    block = np.zeros((grid.count, FIRST_BIN + len(edges_mev)))
    block[:, REACTIONS] = total_weights(state, grid)[CENTRAL]
    if start is None:
        return block
    shares, kinetic = _observed(state, response, cells, edges_mev, start)
    counted = shares.bins.sum(axis=1, keepdims=True)
    also = np.stack([shares.above, shares.scale_low, shares.scale_high], axis=1)
    wanted = {
        CENTRAL: np.concatenate([also, shares.bins], axis=1),
        LOW: counted,
        HIGH: counted,
        OUTSIDE: counted,
    }
    sums = weighted(state, grid, kinetic, wanted)
    block[:, [ABOVE_THRESHOLD, SCALE_LOW, SCALE_HIGH]] = sums[CENTRAL][:, :3]
    block[:, FIRST_BIN:] = sums[CENTRAL][:, 3:]
    for column, variant in ((COUNTED_LOW, LOW), (COUNTED_HIGH, HIGH), (COUNTED_OUTSIDE, OUTSIDE)):
        block[:, column] = sums[variant][:, 0]
    return block


def _observed(
    state: FinalState, response: Response, cells: _Cells, edges_mev: Floats, start: float
) -> tuple[_Shares, Floats]:
    """Shares of each cell, and the cells' edges as kinetic energies."""
    if isinstance(state.deposit, Fixed):
        line = start + (response.visible(state.lead, state.deposit.kinetic_mev) or 0.0)
        low = np.array([line - 0.5 * LINE_WIDTH_MEV])
        return _Shares.of(response, low, low + LINE_WIDTH_MEV, edges_mev), np.zeros(2)
    kinetic = response.kinetic(state.lead, cells.edges - start)
    if state.lead not in response.acceptance:
        return cells.shares, kinetic
    accepted = response.accepted(state.lead, 0.5 * (kinetic[:-1] + kinetic[1:]))
    return cells.shares.times(accepted), kinetic


def _kept(
    state: FinalState, response: Response, cells: _Cells, start: float
) -> tuple[Floats, Floats]:
    """Counted share of each cell, and the cells' kinetic edges."""
    shares, kinetic = _observed(state, response, cells, EVERYTHING, start)
    return shares.bins.sum(axis=1), kinetic
