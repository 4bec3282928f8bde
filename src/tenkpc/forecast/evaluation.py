"""The numbers of a forecast: inputs that never change, and arrays worked out when asked for."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from functools import cached_property
from typing import Any, Self

import numpy as np
from numpy.typing import ArrayLike, NDArray

from tenkpc.detector.detector import Detector
from tenkpc.errors import InputError
from tenkpc.forecast import arguments, exposures, flux
from tenkpc.forecast import compiled as columns
from tenkpc.forecast.fold import fold
from tenkpc.forecast.grid import EnergyGrid
from tenkpc.forecast.uncertainty import (
    Interval,
    in_quadrature,
    poisson_interval,
    predictive_interval,
)
from tenkpc.propagation.conversion import Conversion, Unconverted
from tenkpc.source.burst import Burst

Floats = NDArray[np.float64]

# background is counted for so long at the most, unless another time is given
BACKGROUND_AT_MOST_S = 20.0
# everything that a forecast is made of
INPUTS = (
    "detector",
    "burst",
    "distance_kpc",
    "conversion",
    "interactions",
    "window_s",
    "energy_above_mev",
    "background_time_s",
)


class Evaluation:
    """What a forecast is made of, and its counts as arrays.

    Rows are those of the compiled tensor, final states by volume and species; the columns of
    `row_values` and `by_interaction` are named in `tenkpc.forecast.compiled`.
    """

    detector: Detector
    burst: Burst
    distance_kpc: float
    conversion: Conversion
    interactions: Mapping[str, bool | float | str]
    window_s: tuple[float, float] | None
    energy_above_mev: float | None
    background_time_s: float | None

    @classmethod
    def of_inputs(cls, **inputs: Any) -> Self:
        """Make a forecast of inputs that were checked before, by the names of `INPUTS`."""
        made = object.__new__(cls)
        for name in INPUTS:
            setattr(made, name, inputs[name])
        return made

    def changed(self, **inputs: Any) -> Self:
        """Make a forecast that differs in some inputs and shares no results."""
        return self.of_inputs(**{name: inputs.get(name, getattr(self, name)) for name in INPUTS})

    def converted(self, conversion: Conversion) -> Self:
        """Forecast the same burst with another flavour conversion."""
        return self.changed(conversion=conversion)

    def of(self, burst: Burst) -> Self:
        """Forecast another burst in the same detector.

        Raises
        ------
        InputError
            where no part of the window of time lies within it.
        """
        if self.window_s is not None:
            arguments.window_of(*self.window_s, (burst.start_s, burst.end_s))
        return self.changed(burst=burst)

    @property
    def total(self) -> float:
        """Expected number of counted events."""
        return float(self.counted.sum())

    @property
    def chain(self) -> tuple[float, float, float]:
        """Reactions, those above threshold, those counted: rows that the medium sees."""
        seen = [i for i, row in enumerate(self.rows) if row.seen_as]
        sums = self.row_values[seen].sum(axis=0)
        reactions, above = sums[columns.REACTIONS], sums[columns.ABOVE_THRESHOLD]
        return float(reactions), float(above), float(sums[columns.FIRST_BIN :].sum())

    @property
    def chance(self) -> Interval:
        """Counts between which 68 % of repetitions of this very burst would fall."""
        return poisson_interval(self.total)

    @property
    def cross_section_error(self) -> tuple[float, float]:
        """How much the total falls and rises when cross sections are 1σ off.

        Correlated over energies and final states within an interaction, independent between
        interactions; log-normal, so that no error however large takes more than all.
        """
        low, high = (self.by_interaction[:, c] for c in (columns.COUNTED_LOW, columns.COUNTED_HIGH))
        return in_quadrature(self.counted - low), in_quadrature(high - self.counted)

    @property
    def predictive(self) -> Interval:
        """Counts between which 68 % fall with chance and the cross sections' error together."""
        error = 0.5 * sum(self.cross_section_error) / (self.total or 1.0)
        return predictive_interval(self.total, error)

    @property
    def live_s(self) -> float:
        """Time in s for which background is counted."""
        if self.background_time_s is not None:
            return self.background_time_s
        return min(self.span_s[1] - self.span_s[0], BACKGROUND_AT_MOST_S)

    @property
    def background_events(self) -> float:
        """Expected number of background events in that time."""
        return float(self._background_hz().sum()) * self.live_s

    def fluence(self, energy_mev: ArrayLike, *, converted: bool = True) -> Floats:
        """Fluence of ONE kind of each species at the detector, (4, energies), cm⁻² MeV⁻¹.

        Parameters
        ----------
        energy_mev
            neutrino energies in MeV.
        converted
            after flavour conversion; otherwise as emitted, over the same sphere.
        """
        energy = np.atleast_1d(np.asarray(energy_mev, dtype=float))
        spectra, times = flux.emission(self.burst, energy, self.span_s)
        case: Conversion = self.conversion if converted else Unconverted()
        arriving = flux.at_detector(spectra, case, self.distance_kpc, energy, times)
        total: Floats = arriving.sum(axis=1)
        return total

    @cached_property
    def keys(self) -> tuple[str, ...]:
        """Interactions that take part, alphabetically."""
        return tuple(sorted({row.interaction for row in self.rows}))

    @property
    def counted(self) -> Floats:
        """Counted events by interaction, in the order of `keys`."""
        counted: Floats = self.by_interaction[:, columns.FIRST_BIN :].sum(axis=1)
        return counted

    @cached_property
    def by_interaction(self) -> Floats:
        """Events by interaction and column of the compiled tensor."""
        return _summed(self.row_values, self._columns_by("interaction")[1], len(self.keys))

    @property
    def counts_neutrons(self) -> bool:
        """Whether some volume of the detector registers neutrons and nothing else."""
        return any(volume.response.counts_neutrons for volume in self.detector.volumes)

    @property
    def rows(self) -> tuple[columns.Row, ...]:
        """What each row of the compiled tensor counts: a final state of a species in a volume."""
        return self._compiled.rows

    @cached_property
    def row_values(self) -> Floats:
        """Events by row and column of the compiled tensor."""
        return _counts(self._fluence, self._compiled.species, self._compiled.tensor)[:, 0]

    def _columns_by(self, by: str) -> tuple[tuple[str, ...], list[int]]:
        """Names of the columns of a table, and which of them each row belongs to."""
        if by not in ("interaction", "seen"):
            message = f"by: expected 'interaction' or 'seen', found {by!r}"
            raise InputError(message)
        mine = [row.interaction if by == "interaction" else row.seen_as for row in self.rows]
        names = tuple(sorted(set(filter(None, mine))))
        # rows that are not seen count nothing, so they may stand anywhere
        return names, [names.index(name) if name else 0 for name in mine]

    @cached_property
    def _grid(self) -> EnergyGrid:
        return EnergyGrid.with_joints(self.burst.joints_mev)

    @property
    def _inputs(self) -> tuple[Detector, exposures.Choices, float | None, EnergyGrid]:
        chosen = exposures.choices(self.detector, self.interactions)
        return self.detector, chosen, self.energy_above_mev, self._grid

    def _compile(self, edges_mev: tuple[float, ...]) -> columns.Compiled:
        return exposures.compiled(*self._inputs, edges_mev)

    @cached_property
    def _compiled(self) -> columns.Compiled:
        return self._compile(arguments.energy_edges_mev(None, self.detector.response.scale))

    @cached_property
    def _fluence(self) -> Floats:
        """Fluence of one kind of each species at the nodes, (species, 1, nodes), cm⁻² MeV⁻¹."""
        emitted = flux.emission(self.burst, self._grid.nodes_mev, self.span_s)
        fluence: Floats = self._at_detector(*emitted).sum(axis=1, keepdims=True)
        return fluence

    def _at_detector(self, spectra: Floats, times: Floats) -> Floats:
        nodes = self._grid.nodes_mev
        return flux.at_detector(spectra, self.conversion, self.distance_kpc, nodes, times)

    def _background_hz(self) -> Floats:
        """Rate of each background above the lowest energy that is counted, (backgrounds,)."""
        threshold, lowest = self.detector.response.threshold_mev, self.energy_above_mev or 0.0
        sources = self.detector.backgrounds
        return np.array([source.above_hz(lowest, threshold) for source in sources])

    def _background_spectrum(self, edges_mev: Floats) -> Floats | None:
        """Background events by bin of observed energy, then above the last edge."""
        threshold, lowest = self.detector.response.threshold_mev, self.energy_above_mev or 0.0
        rates = [
            source.spectrum_hz(edges_mev, lowest, threshold) for source in self.detector.backgrounds
        ]
        return np.sum(rates, axis=0) * self.live_s if rates else None

    @property
    def span_s(self) -> tuple[float, float]:
        """First and last time after bounce that is counted, s."""
        return self.window_s or (self.burst.start_s, self.burst.end_s)

    def _spectrum(
        self, edges_mev: tuple[float, ...], by: str, *, observed: bool
    ) -> tuple[tuple[str, ...], Floats]:
        """Names of columns, and counts by column and bin, then above the last edge."""
        names, owner = self._columns_by(by)
        if observed:
            tensor = self._compile(edges_mev).tensor[:, :, columns.FIRST_BIN :]
        else:
            tensor = exposures.compiled_by_neutrino_energy(*self._inputs, edges_mev)
        folded = _counts(self._fluence, self._compiled.species, tensor)[:, 0]
        return names, _summed(folded, owner, len(names))

    def _light_curve(self, edges: Floats, by: str) -> tuple[tuple[str, ...], Floats]:
        """Names of columns, and counts by column and bin of time."""
        names, owner = self._columns_by(by)
        values = np.zeros((len(edges) - 1, len(names)))
        for times, weights, places in flux.binned_time_nodes(self.burst, edges, self.span_s):
            emitted = self.burst.rate(times, self._grid.nodes_mev) * weights[:, None]
            arriving = self._at_detector(emitted, times)
            counted = _counts(arriving, self._compiled.species, self._compiled.counted)[:, :, 0]
            np.add.at(values, places, _summed(counted, owner, len(names)).T)
        return names, values.T


def _counts(flux: Floats, species: NDArray[np.intp], tensor: Floats) -> Floats:
    """Fold, and take as zero what a polynomial leaves below it where there is next to nothing."""
    return np.maximum(fold(flux, species, tensor), 0.0)


def _summed(values: Floats, owner: Sequence[int], count: int) -> Floats:
    """Add up the rows that belong together: (rows, ...) -> (columns, ...)."""
    summed = np.zeros((max(count, 1), *values.shape[1:]))
    np.add.at(summed, list(owner), values)
    return summed[:count]
