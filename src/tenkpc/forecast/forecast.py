"""The forecast: what a detector counts of a burst."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from functools import cached_property
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from tenkpc import rendering
from tenkpc.detector.detector import Detector
from tenkpc.detector.detector_file import check_choice
from tenkpc.errors import InputError
from tenkpc.forecast import arguments, exposures, flux, frames, page, record
from tenkpc.forecast import compiled as columns
from tenkpc.forecast.arguments import Quantity
from tenkpc.forecast.fold import fold
from tenkpc.forecast.grid import EnergyGrid
from tenkpc.forecast.uncertainty import Interval, in_quadrature, poisson_interval
from tenkpc.propagation.conversion import Adiabatic, Conversion
from tenkpc.source.burst import Burst

if TYPE_CHECKING:
    from pandas import DataFrame

Floats = NDArray[np.float64]

# points of a scan over distance
SCAN_POINTS = 61


class Forecast:
    """Expected counts of a detector for a burst at a distance.

    The inputs are kept and never change; a result is computed when it is first asked for.

    Parameters
    ----------
    detector
        the detector.
    burst
        the burst.
    distance
        distance of the burst, with its unit: ``"10 kpc"``.
    conversion
        what happens to the flavours on the way; adiabatic with normal ordering unless given.
    interactions
        switches, factors and options on top of the detector file's own, by interaction key.

    Raises
    ------
    InputError
        where an argument cannot be used; the message names it and says what is allowed.
    """

    def __init__(
        self,
        detector: Detector,
        burst: Burst,
        *,
        distance: Quantity,
        conversion: Conversion | None = None,
        interactions: Mapping[str, bool | float | str] | None = None,
    ) -> None:
        self.detector = detector
        self.burst = burst
        self.distance_kpc = arguments.distance_kpc(distance)
        self.conversion: Conversion = conversion or Adiabatic("normal")
        self.interactions = dict(interactions or {})
        self.window_s: tuple[float, float] | None = None
        self.energy_above_mev: float | None = None
        for key, value in self.interactions.items():
            check_choice(key, value)

    def at(self, distance: Quantity) -> Forecast:
        """Forecast the same burst at another distance."""
        return self._with(distance_kpc=arguments.distance_kpc(distance))

    def converted(self, conversion: Conversion) -> Forecast:
        """Forecast the same burst with another flavour conversion."""
        return self._with(conversion=conversion)

    def within(
        self,
        *,
        time: tuple[Quantity, Quantity] | None = None,
        energy_above: Quantity | None = None,
    ) -> Forecast:
        """Count only a window of time after bounce, or only above an observed energy.

        Parameters
        ----------
        time
            first and last time, ``("0 s", "1 s")``.
        energy_above
            lowest observed energy, of the detector's own kind; it can only raise the threshold.
        """
        changed: dict[str, Any] = {}
        if time is not None:
            self._needs_time("within(time=...)")
            changed["window_s"] = arguments.window_s(time, self._span)
        if energy_above is not None:
            changed["energy_above_mev"] = arguments.energy_above_mev(energy_above)
        return self._with(**changed)

    def replace(self, changes: Mapping[str, object]) -> Forecast:
        """Forecast with other values at some key paths of the detector or burst file.

        ``{"response.threshold": "8 MeV", "burst.core.rise_time": "40 ms"}``: paths that begin
        with ``burst.`` belong to the burst, all others to the detector.
        """
        mine = {key: key.startswith("burst.") for key in changes}
        of_burst = {k.removeprefix("burst."): v for k, v in changes.items() if mine[k]}
        of_detector = {k: v for k, v in changes.items() if not mine[k]}
        return self._with(
            burst=self.burst.replace(of_burst) if of_burst else self.burst,
            detector=self.detector.replace(of_detector) if of_detector else self.detector,
        )

    def _with(self, **changed: Any) -> Forecast:
        """Make a forecast that differs in some inputs and shares no results."""
        other = object.__new__(Forecast)
        inputs = ("detector", "burst", "distance_kpc", "conversion", "interactions")
        for name in (*inputs, "window_s", "energy_above_mev"):
            setattr(other, name, changed.get(name, getattr(self, name)))
        return other

    @property
    def total(self) -> float:
        """Expected number of counted events."""
        return float(self.values[:, columns.FIRST_BIN :].sum())

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
        interactions.
        """
        counted = self.values[:, columns.FIRST_BIN :].sum(axis=1)
        fall = in_quadrature(counted - self.values[:, columns.COUNTED_LOW])
        rise = in_quadrature(self.values[:, columns.COUNTED_HIGH] - counted)
        return fall, rise

    @property
    def counts(self) -> DataFrame:
        """Events by interaction key.

        Columns: ``reactions``; ``above_threshold``, observed above the threshold; ``counted``,
        kept by efficiency and live time; ``cross_section_low`` and ``cross_section_high``, the
        counted events with the cross section 1σ down and up; ``outside_window``, the share of
        the counted events that comes from neutrino energies beyond what the cross section is
        meant for.
        """
        return frames.counts(self.keys, self.values)

    @property
    def breakdown(self) -> DataFrame:
        """Give the columns of `counts` by final state and species, and as what each is seen."""
        return frames.breakdown(self.rows, self.row_values)

    def spectrum(
        self, *, of: str = "observed", bins: Quantity | Sequence[Quantity] | None = None
    ) -> DataFrame:
        """Counted events by bin of energy, one column per interaction.

        Parameters
        ----------
        of
            ``"observed"``, the energy that the detector reports, or ``"neutrino"``, the true
            neutrino energy of the counted events.
        bins
            width of the bins, or their edges; 2 MeV up to 100 MeV unless given.

        Returns
        -------
        DataFrame
            index ``energy_mev``, the left edge, with ``width_mev`` beside it; the last row
            holds everything above the last edge. ``attrs["energy"]`` names the kind of energy.
        """
        edges = arguments.energy_edges_mev(bins)
        if of == "observed":
            tensor = self._compile(edges).tensor[:, :, columns.FIRST_BIN :]
        elif of == "neutrino":
            tensor = exposures.compiled_by_neutrino_energy(*self._inputs, edges)
        else:
            message = f"of: expected 'observed' or 'neutrino', found {of!r}"
            raise InputError(message)
        values = self._by_key(fold(self._fluence, self._compiled.species, tensor)[:, 0])
        kind = self.detector.response.kind if of == "observed" else of
        return frames.spectrum(self.keys, values, np.array(edges), kind)

    def light_curve(self, bins: Quantity | Sequence[Quantity]) -> DataFrame:
        """Counted events by bin of time after bounce, one column per interaction.

        Parameters
        ----------
        bins
            width of the bins, ``"20 ms"``, or their edges.

        Returns
        -------
        DataFrame
            index ``time_s``, the left edge (0 is one), with ``width_s`` beside it.
        """
        self._needs_time("light_curve")
        edges = arguments.time_edges_s(bins, self._span)
        values = np.zeros((len(edges) - 1, len(self.keys)))
        for times, weights, places in flux.binned_time_nodes(self.burst, edges, self._span):
            emitted = self.burst.rate(times, self._grid.nodes_mev) * weights[:, None]
            arriving = self._at_detector(emitted, times)
            counted = fold(arriving, self._compiled.species, self._compiled.counted)[:, :, 0]
            np.add.at(values, places, self._by_key(counted).T)
        return frames.light_curve(self.keys, values.T, edges)

    def versus_distance(self, nearest: Quantity, farthest: Quantity) -> DataFrame:
        """Counted events by interaction at distances between two, evenly spaced in ratio."""
        first = arguments.distance_kpc(nearest, "nearest")
        last = arguments.distance_kpc(farthest, "farthest")
        if first >= last:
            message = f"farthest: expected more than {nearest}, found {farthest}"
            raise InputError(message)
        distances = np.geomspace(first, last, SCAN_POINTS)
        counted = self.values[:, columns.FIRST_BIN :].sum(axis=1)
        values = counted[:, None] * (self.distance_kpc / distances) ** 2
        return frames.versus_distance(self.keys, values, distances)

    def explain(self) -> str:
        """Say what went into the number: every assumption, where it is from, and the sources."""
        return rendering.text(page.assumptions(self))

    def to_json(self) -> str:
        """Write the numbers and all that is needed to compute them again as JSON."""
        return record.to_json(self)

    def __repr__(self) -> str:
        return rendering.text(page.results(self))

    def _repr_html_(self) -> str:
        return rendering.html(page.results(self))

    @cached_property
    def keys(self) -> tuple[str, ...]:
        """Interactions that take part, alphabetically."""
        return tuple(sorted({row.interaction for row in self.rows}))

    @cached_property
    def values(self) -> Floats:
        """Events by interaction and column of the compiled tensor."""
        return self._by_key(self.row_values)

    @property
    def rows(self) -> tuple[columns.Row, ...]:
        """What each row of the compiled tensor counts: a final state of a species in a volume."""
        return self._compiled.rows

    @cached_property
    def row_values(self) -> Floats:
        """Events by row and column of the compiled tensor."""
        return fold(self._fluence, self._compiled.species, self._compiled.tensor)[:, 0]

    def _by_key(self, values: Floats) -> Floats:
        """Add up the rows of each interaction: (rows, ...) -> (interactions, ...)."""
        owner = [self.keys.index(row.interaction) for row in self.rows]
        summed = np.zeros((len(self.keys), *values.shape[1:]))
        np.add.at(summed, owner, values)
        return summed

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
        return self._compile(arguments.energy_edges_mev(None))

    @cached_property
    def _fluence(self) -> Floats:
        """Fluence of one kind of each species at the nodes, (species, 1, nodes), cm⁻² MeV⁻¹."""
        emitted = flux.emission(self.burst, self._grid.nodes_mev, self._span)
        fluence: Floats = self._at_detector(*emitted).sum(axis=1, keepdims=True)
        return fluence

    def _at_detector(self, spectra: Floats, times: Floats) -> Floats:
        nodes = self._grid.nodes_mev
        return flux.at_detector(spectra, self.conversion, self.distance_kpc, nodes, times)

    @property
    def _span(self) -> tuple[float, float]:
        return self.window_s or (self.burst.start_s, self.burst.end_s)

    def _needs_time(self, what: str) -> None:
        if self.burst.time_integrated:
            title = self.burst.title
            message = f"{what}: {title!r} is integrated over time and has no time profile"
            raise InputError(message)
