"""A detector and its interactions, compiled into one tensor that any flux can be folded with.

Rows are final states by volume and species; columns are the counts a row is asked for: all
reactions, those observed above threshold, the counted ones with the cross section 1σ low and
high and from outside its window, those with the energy scale 1σ off, the neutrons that a counter
registers, and the counted ones by bin of observed energy. The cross section and the response are
integrated here, once (see `tenkpc.forecast.deposits`); what is left for `tenkpc.forecast.fold` is
one sum over the nodes.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

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


class _CellsOf:
    """Cells of visible energy by kind, and what each response makes of them; made when needed.

    Responses share their cells, so that what they see alike is compiled once for all of them.
    """

    def __init__(self, exposures: Sequence[Exposure], edges_mev: Floats) -> None:
        self.exposures, self.edges_mev = exposures, edges_mev
        self.edges: dict[str, Floats] = {}
        self.shares: dict[tuple[int, str], _Shares] = {}
        self.lines: dict[tuple[int, float], _Shares] = {}

    def __call__(self, response: Response, state: FinalState) -> tuple[Floats, _Shares]:
        """Edges of the cells for a state's lead particle, and the shares of each."""
        cells = _kind_of_cells(state)
        if cells not in self.edges:
            self.edges[cells] = cell_edges([*self.edges_mev, *self._breaks(cells)], cells)
        edges, key = self.edges[cells], (id(response), cells)
        if key not in self.shares:
            self.shares[key] = _Shares.of(response, edges[:-1], edges[1:], self.edges_mev)
        return edges, self.shares[key]

    def line(self, response: Response, state: FinalState, start_mev: float) -> _Shares:
        """Shares of the single energy that a state with a fixed deposit is observed with."""
        kinetic = state.deposit.kinetic_mev if isinstance(state.deposit, Fixed) else 0.0
        low = start_mev + (response.visible(state.lead, kinetic) or 0.0) - 0.5 * LINE_WIDTH_MEV
        key = id(response), low
        if key not in self.lines:
            ends = np.array([low]), np.array([low + LINE_WIDTH_MEV])
            self.lines[key] = _Shares.of(response, *ends, self.edges_mev)
        return self.lines[key]

    def _breaks(self, cells: str) -> set[float]:
        """Knots of all responses, and the lowest visible energies of final states they see."""
        breaks: set[float] = set()
        for exposure, _, state in _states(self.exposures):
            response, offset = exposure.response, _offset(exposure.response, state)
            if offset is None or isinstance(state.deposit, Fixed) or response.counts_neutrons:
                continue
            if _kind_of_cells(state) == cells:
                breaks.add(offset + (response.visible(state.lead, 0.0) or 0.0))
                breaks.update(response.knots_mev)
        return breaks


def _kind_of_cells(state: FinalState) -> str:
    """Say which cells a lead particle needs: protons and nuclei recoil with less than a MeV."""
    return "plain" if state.lead in ("electron", "positron", "gamma") else "recoil"


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
    rows = _rows(exposures)
    # kinds that react alike share their final states, and volumes may: each is compiled once
    wanted: dict[int, dict[int, Response]] = {}
    for exposure, _, state in _states(exposures):
        wanted.setdefault(id(state), {})[id(exposure.response)] = exposure.response
    known: dict[int, dict[int, Floats]] = {}
    tensor = np.zeros((len(rows), grid.count, FIRST_BIN + len(edges_mev)))
    for place, members in enumerate(rows.values()):
        for exposure, state in members:
            if id(state) not in known:
                responses = list(wanted[id(state)].values())
                known[id(state)] = _blocks(state, responses, grid, cells, edges_mev)
            tensor[place] += known[id(state)][id(exposure.response)] * exposure.targets
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


def _blocks(
    state: FinalState,
    responses: Sequence[Response],
    grid: EnergyGrid,
    cells: _CellsOf,
    edges_mev: Floats,
) -> dict[int, Floats]:
    """Columns of a row for a single target, (nodes, columns), by the identity of each response."""
    totals = total_weights(state, grid)
    blocks: dict[int, Floats] = {}
    # responses that see the lead particle alike, by the cells' edges as its kinetic energies
    alike: dict[bytes, tuple[Floats, list[tuple[Floats, _Shares]]]] = {}
    for response in responses:
        block = np.zeros((grid.count, FIRST_BIN + len(edges_mev)))
        block[:, REACTIONS] = totals[CENTRAL]
        blocks[id(response)] = block
        start = _offset(response, state)
        if start is None:
            continue
        if response.counts_neutrons:
            _count_neutrons(block, totals, state, response)
        elif isinstance(state.deposit, Fixed):
            _count_line(block, totals, cells.line(response, state, start))
        else:
            shares, kinetic = _observed(state, response, cells, start)
            alike.setdefault(kinetic.tobytes(), (kinetic, []))[1].append((block, shares))
    for kinetic, members in alike.values():
        _count_spread(state, grid, kinetic, members)
    return blocks


def _count_spread(
    state: FinalState,
    grid: EnergyGrid,
    kinetic_mev: Floats,
    members: Sequence[tuple[Floats, _Shares]],
) -> None:
    """Fill the columns of several responses that share the cells of kinetic energy."""
    counted = np.stack([shares.bins.sum(axis=1) for _, shares in members], axis=1)
    also = (np.stack([s.above, s.scale_low, s.scale_high], axis=1) for _, s in members)
    bins = (shares.bins for _, shares in members)
    central = [np.concatenate(pair, axis=1) for pair in zip(also, bins, strict=True)]
    ends = {variant: counted for _, variant in ENDS}
    wanted = {CENTRAL: np.concatenate(central, axis=1), **ends}
    sums = weighted(state, grid, kinetic_mev, wanted)
    each = np.split(sums[CENTRAL], len(members), axis=1)
    for place, ((block, _), mine) in enumerate(zip(members, each, strict=True)):
        block[:, [ABOVE_THRESHOLD, SCALE_LOW, SCALE_HIGH]] = mine[:, :3]
        block[:, FIRST_BIN:] = mine[:, 3:]
        for column, variant in ENDS:
            block[:, column] = sums[variant][:, place]


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
    state: FinalState, response: Response, cells: _CellsOf, start: float
) -> tuple[_Shares, Floats]:
    """Shares of each cell, and the cells' edges as kinetic energies."""
    edges, shares = cells(response, state)
    kinetic = response.kinetic(state.lead, edges - start)
    if state.lead not in response.acceptance:
        return shares, kinetic
    accepted = response.accepted(state.lead, 0.5 * (kinetic[:-1] + kinetic[1:]))
    return shares.times(accepted), kinetic


def _kept(
    state: FinalState, response: Response, cells: _CellsOf, start: float
) -> tuple[Floats, Floats]:
    """Counted share of each cell, and the cells' kinetic edges."""
    if isinstance(state.deposit, Fixed):
        return cells.line(response, state, start).bins.sum(axis=1), np.zeros(2)
    shares, kinetic = _observed(state, response, cells, start)
    return shares.bins.sum(axis=1), kinetic
