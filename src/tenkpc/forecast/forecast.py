"""The forecast: what a detector counts of a burst."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from tenkpc import rendering
from tenkpc.detector.detector import Detector
from tenkpc.detector.detector_file import check_choice
from tenkpc.detector.scales import MEV
from tenkpc.errors import InputError
from tenkpc.forecast import (
    arguments,
    budget,
    compare,
    frames,
    page,
    quote,
    record,
)
from tenkpc.forecast.arguments import Quantity
from tenkpc.forecast.bursts import BurstRange
from tenkpc.forecast.evaluation import Evaluation
from tenkpc.propagation.conversion import Adiabatic, Conversion
from tenkpc.rendering import markup
from tenkpc.source.burst import Burst

if TYPE_CHECKING:
    from pandas import DataFrame

Floats = NDArray[np.float64]

# points of a scan over distance
SCAN_POINTS = 61


class Forecast(Evaluation):
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
    background_time
        how long background is counted; without it as long as the burst or the window of time
        lasts, 20 s at most.

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
        background_time: Quantity | None = None,
    ) -> None:
        arguments.check_kind(detector, Detector, "detector", 'Detector.gallery("brine-hall")')
        arguments.check_kind(burst, Burst, "burst", 'Burst.preset("ordinary-collapse")')
        if conversion is not None and not hasattr(conversion, "arriving"):
            message = f'conversion: expected one such as Adiabatic("normal"), found {conversion!r}'
            raise InputError(message)
        if interactions is not None:
            arguments.check_kind(
                interactions, Mapping, "interactions", '{"proton-scattering": 1.1}'
            )
        self.detector = detector
        self.burst = burst
        self.distance_kpc = arguments.distance_kpc(distance)
        self.conversion: Conversion = conversion or Adiabatic("normal")
        self.interactions = dict(interactions or {})
        self.window_s: tuple[float, float] | None = None
        self.energy_above_mev: float | None = None
        self.background_time_s = arguments.background_time_s(background_time)
        options = {own.key: own.options for own in detector.own}
        for key, value in self.interactions.items():
            check_choice(key, value, options)

    def at(self, distance: Quantity) -> Forecast:
        """Forecast the same burst at another distance."""
        return self.changed(distance_kpc=arguments.distance_kpc(distance))

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
            changed["window_s"] = arguments.window_s(time, self.span_s)
        if energy_above is not None:
            self._needs_energy("within(energy_above=...)")
            scale = self.detector.response.scale
            changed["energy_above_mev"] = arguments.energy_above_mev(energy_above, scale)
        return self.changed(**changed)

    def replace(self, changes: Mapping[str, object]) -> Forecast:
        """Forecast with other values at some key paths of the detector or burst file.

        ``{"response.threshold": "8 MeV", "burst.core.rise_time": "40 ms"}``: paths that begin
        with ``burst.`` belong to the burst, all others to the detector.
        """
        arguments.check_kind(changes, Mapping, "changes", '{"response.threshold": "8 MeV"}')
        for key in changes:
            arguments.check_kind(key, str, "changes", '{"response.threshold": "8 MeV"}')
        mine = {key: key.startswith("burst.") for key in changes}
        of_burst = {k.removeprefix("burst."): v for k, v in changes.items() if mine[k]}
        of_detector = {k: v for k, v in changes.items() if not mine[k]}
        return self.changed(
            burst=self.burst.replace(of_burst) if of_burst else self.burst,
            detector=self.detector.replace(of_detector) if of_detector else self.detector,
        )

    @property
    def background(self) -> DataFrame:
        """Background by its name: rate above the threshold, time it is counted, and events.

        It is part of no total, and no conversion or distance changes it.
        """
        return frames.background(self.detector.backgrounds, self._background_hz(), self.live_s)

    @property
    def budget(self) -> DataFrame:
        """What 1σ of each cause does to the total.

        Rows: chance, each interaction's cross section, mass, efficiency and energy scale of the
        detector where its file gives an error, and mixing angles. Columns: ``kind``; ``fall``
        and ``rise`` in counts and in per cent; ``correlated``, what moves together; ``origin``.
        Other bursts and conversions are possibilities, not errors: see `Forecast.range`.
        """
        return budget.frame(self)

    @classmethod
    def range(
        cls, detector: Detector, bursts: Sequence[Burst], *, distance: Quantity, **inputs: Any
    ) -> BurstRange:
        """Forecast several bursts; the result has ``minimum``, ``median`` and ``maximum``.

        Takes the arguments of a forecast, with a sequence of bursts in place of one.
        """
        arguments.check_kind(bursts, Sequence, "bursts", "[first, second]")
        if not bursts:
            message = "bursts: expected at least one burst"
            raise InputError(message)
        return BurstRange(
            tuple(cls(detector, burst, distance=distance, **inputs) for burst in bursts)
        )

    def compare(self, other: Forecast) -> DataFrame:
        """Explain the difference to another forecast as a table of factors.

        One change after another is made to this forecast until it has become the other; the
        product of the column ``factor`` is the ratio of the totals, ``attrs["ratio"]``.
        """
        return compare.frame(self, other)

    @property
    def counts(self) -> DataFrame:
        """Events by interaction key.

        Columns: ``reactions``; ``above_threshold``, observed above the threshold; ``counted``,
        kept by efficiency and live time; ``cross_section_low`` and ``cross_section_high``, the
        counted events with the cross section 1σ down and up; ``outside_window``, the share of
        the counted events that comes from neutrino energies beyond what the cross section is
        meant for. A detector that counts neutrons has one column more, ``neutrons``, the number
        of neutrons registered, where ``counted`` is of events with at least one.
        """
        return frames.counts(self.keys, self.by_interaction, neutrons=self.counts_neutrons)

    @property
    def breakdown(self) -> DataFrame:
        """Give the columns of `counts` by final state and species, and as what each is seen."""
        return frames.breakdown(self.rows, self.row_values, neutrons=self.counts_neutrons)

    def spectrum(
        self,
        *,
        of: str = "observed",
        bins: Quantity | Sequence[Quantity] | None = None,
        by: str = "interaction",
    ) -> DataFrame:
        """Counted events by bin of energy, one column per interaction.

        Parameters
        ----------
        of
            ``"observed"``, the energy that the detector reports, or ``"neutrino"``, the true
            neutrino energy of the counted events.
        bins
            width of the bins, or their edges; unless given, 2 MeV up to 100 MeV, and for nuclear
            recoils 1 keVnr up to 100 keVnr or 0.25 keVee up to 25 keVee.
        by
            what the columns are: ``"interaction"``, or ``"seen"`` for what the detector sees.

        Returns
        -------
        DataFrame
            index ``energy_mev``, the left edge, with ``width_mev`` beside it; the last row
            holds everything above the last edge. ``attrs["energy"]`` names the kind of energy.
            A detector with backgrounds has one column more, ``background``, for ``live_s``.
        """
        if of not in ("observed", "neutrino"):
            message = f"of: expected 'observed' or 'neutrino', found {of!r}"
            raise InputError(message)
        observed = of == "observed"
        if observed:
            self._needs_energy("spectrum")
        edges = arguments.energy_edges_mev(bins, self.detector.response.scale if observed else MEV)
        names, values = self._spectrum(edges, by, observed=observed)
        kind = self.detector.response.kind if observed else of
        noise = self._background_spectrum(np.array(edges)) if observed else None
        return frames.spectrum(names, values, np.array(edges), kind, noise)

    def light_curve(
        self, bins: Quantity | Sequence[Quantity], *, by: str = "interaction"
    ) -> DataFrame:
        """Counted events by bin of time after bounce, one column per interaction.

        Parameters
        ----------
        bins
            width of the bins, ``"20 ms"``, or their edges.
        by
            what the columns are: ``"interaction"``, or ``"seen"`` for what the detector sees.

        Returns
        -------
        DataFrame
            index ``time_s``, the left edge (0 is one), with ``width_s`` beside it. A detector
            with backgrounds has one column more, ``background``.
        """
        self._needs_time("light_curve")
        edges = arguments.time_edges_s(bins, self.span_s)
        names, values = self._light_curve(edges, by)
        noise = self._background_hz().sum() if self.detector.backgrounds else None
        return frames.light_curve(names, values, edges, noise)

    def versus_distance(self, nearest: Quantity, farthest: Quantity) -> DataFrame:
        """Counted events by interaction at distances between two, evenly spaced in ratio."""
        first = arguments.distance_kpc(nearest, "nearest")
        last = arguments.distance_kpc(farthest, "farthest")
        if first >= last:
            message = f"farthest: expected more than {nearest}, found {farthest}"
            raise InputError(message)
        distances = np.geomspace(first, last, SCAN_POINTS)
        values = self.counted[:, None] * (self.distance_kpc / distances) ** 2
        return frames.versus_distance(self.keys, values, distances)

    def explain(self) -> str:
        """Say what went into the number: every assumption, where it is from, and the sources."""
        return rendering.text(page.assumptions(self))

    def sentence(self) -> str:
        """Say the result in one sentence to be quoted, rounded as its errors allow."""
        return quote.sentence(self)

    def to_markdown(self) -> str:
        """Give the page of results as Markdown."""
        return markup.markdown(page.results(self))

    def to_latex(self) -> str:
        """Give the page of results as LaTeX, its tables as ``tabular``."""
        return markup.latex(page.results(self))

    @classmethod
    def from_json(cls, text: str) -> Forecast:
        """Make a forecast again from what `to_json` wrote.

        On one version the total comes out to 1e-10. Where version or data differ, or the total
        does, a `UserWarning` says what differs and by how much.

        Raises
        ------
        InputError
            where the text is no such record.
        """
        return record.from_json(text, cls)

    def to_json(self) -> str:
        """Write the numbers and all that is needed to compute them again as JSON."""
        return record.to_json(self)

    def __repr__(self) -> str:
        return rendering.text(page.results(self))

    def _repr_html_(self) -> str:
        return rendering.html(page.results(self))

    def _needs_energy(self, what: str) -> None:
        if self.detector.response.kind == "none":
            message = f"{what}: {self.detector.title!r} counts neutrons and observes no energy"
            raise InputError(message)

    def _needs_time(self, what: str) -> None:
        if self.burst.time_integrated:
            title = self.burst.title
            message = f"{what}: {title!r} is integrated over time and has no time profile"
            raise InputError(message)
