"""A detector and its interactions, compiled into one tensor that any flux can be folded with.

Rows are final states by volume and species; columns are the counts a row is asked for: all
reactions, those observed above threshold, the counted ones with the cross section 1σ low and
high and from outside its window, those with the energy scale 1σ off, the neutrons that a counter
registers, and the counted ones by bin of observed energy. The cross section and the response are
integrated here, once (see `tenkpc.forecast.deposits`); what is left for `tenkpc.forecast.fold` is
one sum over the nodes.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
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
    Part,
    cell_edges,
    columns,
    lines,
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
SCALE_LOW, SCALE_HIGH, NEUTRONS, FIRST_BIN = range(5, 9)
# the counted events of each variant of the cross section, and their column
ENDS = ((COUNTED_LOW, LOW), (COUNTED_HIGH, HIGH), (COUNTED_OUTSIDE, OUTSIDE))
# what a counter of neutrons sees, by the number that is set free
NEUTRONS_SEEN = ("", "one neutron", "two neutrons")
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
    cells = _CellsOf(exposures, edges_mev)
    # neutrino kinds that react alike share their final states, so each is compiled once
    known: dict[tuple[int, int], Floats] = {}
    rows = _rows(exposures)
    tensor = np.zeros((len(rows), grid.count, FIRST_BIN + len(edges_mev)))
    for place, members in enumerate(rows.values()):
        for exposure, state in members:
            key = id(state), id(exposure.response)
            if key not in known:
                known[key] = _block(state, exposure.response, grid, cells, edges_mev)
            tensor[place] += known[key] * exposure.targets
    species = np.array([SPECIES.index(row.species) for row in rows], dtype=np.intp)
    return Compiled(tuple(rows), species, grid, edges_mev, tensor)


def by_neutrino_energy(
    exposures: Sequence[Exposure], grid: EnergyGrid, neutrino_edges_mev: Floats
) -> Floats:
    """Counted events by bin of true neutrino energy, shape (rows, nodes, bins + 1).

    The rows are those of `compile_rows`, the last column holds what lies above the last edge.
    """
    cells = _CellsOf(exposures, EVERYTHING)
    rows = _rows(exposures)
    tensor = np.zeros((len(rows), grid.count, len(neutrino_edges_mev)))
    for place, members in enumerate(rows.values()):
        for exposure, state in members:
            for part, counted in _counted(
                state, exposure.response, grid, cells, neutrino_edges_mev
            ):
                middle = 0.5 * (part.low_mev + part.high_mev)
                column = max(int(np.searchsorted(neutrino_edges_mev, middle)) - 1, 0)
                tensor[place, columns(part.panel), column] += counted * exposure.targets
    return tensor


def _counted(
    state: FinalState,
    response: Response,
    grid: EnergyGrid,
    cells: _CellsOf,
    neutrino_edges_mev: Floats,
) -> Iterator[tuple[Part, Floats]]:
    """Stretches of neutrino energy, and the counted events of each by node of its panel."""
    start = _offset(response, state)
    if start is None:
        return
    if response.counts_neutrons:
        kept = np.array([response.registered(state.neutrons)])
        found = lines(state, grid, neutrino_edges_mev, PER_NEUTRINO_BIN)
    else:
        kept, kinetic = _kept(state, response, cells, start)
        found = parts(state, grid, kinetic, neutrino_edges_mev, PER_NEUTRINO_BIN)
    for part in found:
        yield part, kept[part.cells] @ part.weights


def _rows(exposures: Sequence[Exposure]) -> dict[Row, list[tuple[Exposure, FinalState]]]:
    """Rows of the tensor with the final states that each adds up: those of one label."""
    rows: dict[Row, list[tuple[Exposure, FinalState]]] = {}
    for exposure, species, state in _states(exposures):
        words = _seen_as(exposure.response, state)
        row = Row(exposure.volume, exposure.interaction.key, state.label, species, words)
        rows.setdefault(row, []).append((exposure, state))
    return rows


def _states(exposures: Sequence[Exposure]) -> Iterator[tuple[Exposure, str, FinalState]]:
    for exposure in exposures:
        for species in SPECIES:
            for state in exposure.interaction.final_states(species):
                yield exposure, species, state


def _seen_as(response: Response, state: FinalState) -> str:
    """Say what a detector sees of a final state; nothing where it sees none."""
    if _offset(response, state) is None:
        return ""
    if response.counts_neutrons:
        return NEUTRONS_SEEN[state.neutrons]
    return state.seen_as(gammas="gamma" in response.light)


def _offset(response: Response, state: FinalState) -> float | None:
    """Visible energy of an event whose lead particle adds none; None if it is not seen."""
    if response.counts_neutrons:
        return 0.0 if state.neutrons else None
    if state.lead not in response.light:
        return None
    extras = (response.visible(particle, energy) for particle, energy in state.extras)
    return response.event_offset_mev + sum(energy for energy in extras if energy is not None)


def _starts(exposures: Sequence[Exposure], response: Response) -> set[float]:
    """Lowest visible energies of the final states that a response sees."""
    starts = set()
    for exposure, _, state in _states(exposures):
        offset = _offset(response, state) if exposure.response is response else None
        if offset is not None and not isinstance(state.deposit, Fixed):
            starts.add(offset + (response.visible(state.lead, 0.0) or 0.0))
    return starts


def _block(
    state: FinalState,
    response: Response,
    grid: EnergyGrid,
    cells: _CellsOf,
    edges_mev: Floats,
) -> Floats:
    """Columns of one row for a single target, shape (nodes, columns)."""
    block = np.zeros((grid.count, FIRST_BIN + len(edges_mev)))
    totals, start = total_weights(state, grid), _offset(response, state)
    block[:, REACTIONS] = totals[CENTRAL]
    if start is None:
        return block
    if response.counts_neutrons:
        _count_neutrons(block, totals, state, response)
        return block
    if isinstance(state.deposit, Fixed):
        _count_line(block, totals, _line_shares(state, response, edges_mev, start))
        return block
    shares, kinetic = _observed(state, response, cells(response, state), start)
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
    for column, variant in ENDS:
        block[:, column] = sums[variant][:, 0]
    return block


def _count_line(block: Floats, totals: Floats, shares: _Shares) -> None:
    """Fill the columns of a line, which is observed alike whatever the neutrino's energy."""
    also = np.stack([shares.above, shares.scale_low, shares.scale_high], axis=1)
    block[:, [ABOVE_THRESHOLD, SCALE_LOW, SCALE_HIGH]] = totals[CENTRAL][:, None] * also
    block[:, FIRST_BIN:] = totals[CENTRAL][:, None] * shares.bins
    for column, variant in ENDS:
        block[:, column] = totals[variant] * shares.bins.sum()


def _count_neutrons(block: Floats, totals: Floats, state: FinalState, response: Response) -> None:
    """Fill the columns of events with at least one registered neutron; no energy is observed."""
    registered = response.registered(state.neutrons)
    block[:, ABOVE_THRESHOLD] = totals[CENTRAL]
    block[:, [SCALE_LOW, SCALE_HIGH, FIRST_BIN]] = registered * totals[CENTRAL][:, None]
    for column, variant in ENDS:
        block[:, column] = registered * totals[variant]
    block[:, NEUTRONS] = response.mean_registered(state.neutrons) * totals[CENTRAL]


def _observed(
    state: FinalState, response: Response, cells: _Cells, start: float
) -> tuple[_Shares, Floats]:
    """Shares of each cell, and the cells' edges as kinetic energies."""
    kinetic = response.kinetic(state.lead, cells.edges - start)
    if state.lead not in response.acceptance:
        return cells.shares, kinetic
    accepted = response.accepted(state.lead, 0.5 * (kinetic[:-1] + kinetic[1:]))
    return cells.shares.times(accepted), kinetic


def _line_shares(state: FinalState, response: Response, edges_mev: Floats, start: float) -> _Shares:
    """Shares of the single energy that a state with a fixed deposit is observed with."""
    kinetic = state.deposit.kinetic_mev if isinstance(state.deposit, Fixed) else 0.0
    low = start + (response.visible(state.lead, kinetic) or 0.0) - 0.5 * LINE_WIDTH_MEV
    return _Shares.of(response, np.array([low]), np.array([low + LINE_WIDTH_MEV]), edges_mev)


def _kept(
    state: FinalState, response: Response, cells: _CellsOf, start: float
) -> tuple[Floats, Floats]:
    """Counted share of each cell, and the cells' kinetic edges."""
    if isinstance(state.deposit, Fixed):
        return _line_shares(state, response, EVERYTHING, start).bins.sum(axis=1), np.zeros(2)
    shares, kinetic = _observed(state, response, cells(response, state), start)
    return shares.bins.sum(axis=1), kinetic
