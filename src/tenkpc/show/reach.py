"""Pictures of what a detector can see: interaction probabilities, and counts against distance."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from tenkpc import data
from tenkpc.forecast import exposures
from tenkpc.forecast.forecast import Forecast
from tenkpc.forecast.uncertainty import poisson_interval
from tenkpc.interactions.base import Interaction
from tenkpc.show.marks import (
    FOOT_SIZE,
    LABEL_SIZE,
    MOST_NAMES,
    assumed,
    colour,
    foot,
    names_at_right,
    panels,
    weight,
)
from tenkpc.source.burst import Burst
from tenkpc.species import MULTIPLICITY, SPECIES

if TYPE_CHECKING:
    from matplotlib.axes import Axes

Floats = NDArray[np.float64]

ENERGY_MEV = np.geomspace(1.0, 100.0, 400)
KG_PER_KT = 1e6
# decades of the interaction probability that are drawn
DECADES = 7
NEAREST_KPC, FARTHEST_KPC = 0.1, 1000.0
# lowest expectation that is drawn against distance
LEAST_COUNTS = 0.1
# the band of chance has its name where so many counts are expected
BAND_NAMED_AT = 8.0


def interaction_probability(forecast: Forecast, *, ax: Axes | None = None) -> Axes:
    """Draw cross section times targets in a kiloton of the detector's filling.

    Each line is the mean over the kinds of neutrino that take part, with a band of 1σ as it
    enters the counts; it is dotted beyond the lowest window of its final states. Options and
    factors of the forecast apply. The six largest have their names, the others are grey lines.
    The grey area is the arriving fluence of all kinds, on a scale of its own.

    Parameters
    ----------
    forecast
        its detector is drawn, and the fluence of its burst.
    ax
        axes to draw on; without, a new figure.
    """
    (main,) = panels(ax, (1,), tall=4.6)
    _fluence_behind(main, forecast)
    curves = sorted(_curves(forecast), key=lambda curve: -curve.middle.max())
    highest = curves[0].middle.max() if curves else 1.0
    main.set_xscale("log")
    main.set_yscale("log")
    main.set_xlim(ENERGY_MEV[0], ENERGY_MEV[-1])
    main.set_ylim(highest * 10.0**-DECADES, highest * 3)
    for rank, curve in enumerate(curves):
        _draw(main, curve, colour(rank) if rank < MOST_NAMES else "0.55", weight(rank))
    names, ends = _names(curves)
    names_at_right(main, names, ends)
    main.set_xlabel("neutrino energy [MeV]")
    main.set_ylabel("σ × targets [cm²/kt]")
    words = "means of the kinds that take part; dotted: beyond the window; grey: fluence of all six"
    foot(main, f"{words}; {assumed(forecast)}")
    return main


def counts_versus_distance(
    forecast: Forecast, *, bursts: Sequence[Burst] = (), ax: Axes | None = None
) -> Axes:
    """Draw counts against distance, with what chance and other bursts make of them.

    Parameters
    ----------
    forecast
        the forecast at any distance.
    bursts
        further bursts: the lighter band reaches from the least to the most of all of them.
    ax
        axes to draw on; without, a new figure.
    """
    (main,) = panels(ax, (1,), tall=4.4)
    distances = np.geomspace(NEAREST_KPC, FARTHEST_KPC, 241)
    falling = (forecast.distance_kpc / distances) ** 2
    totals = forecast.total * falling
    main.set_xscale("log")
    main.set_yscale("log")
    main.set_xlim(NEAREST_KPC, FARTHEST_KPC)
    main.set_ylim(LEAST_COUNTS, max(totals[0] * 3, 10.0))
    further = [burst for burst in bursts if burst != forecast.burst]
    if further:
        all_totals = [forecast.total, *(forecast.of(burst).total for burst in further)]
        low, high = min(all_totals) * falling, max(all_totals) * falling
        main.fill_between(distances, low, high, color="0.85", linewidth=0)
        at = 2 * len(distances) // 5
        name = f"with {len(further)} other {'bursts' if len(further) > 1 else 'burst'}"
        _name_band(main, (distances[at], high[at]), name, above=True)
    _chance(main, distances, totals)
    main.plot(distances, totals, color="black", linewidth=weight(1))
    main.axhline(1.0, color="0.5", linewidth=0.5)
    _landmarks(main)
    main.xaxis.set_major_formatter("{x:g}")
    main.set_xlabel("distance [kpc]")
    main.set_ylabel("counted events")
    foot(main, assumed(forecast, distance=False))
    return main


@dataclass(frozen=True)
class Curve:
    """Interaction probability against `ENERGY_MEV`, cm²/kt, and what 1σ makes of it."""

    equation: str
    middle: Floats
    low: Floats
    high: Floats
    window_mev: float

    def plus(self, other: Curve) -> Curve:
        """Add the same interaction in other targets, whose errors go together with these."""
        return Curve(
            self.equation,
            self.middle + other.middle,
            self.low + other.low,
            self.high + other.high,
            min(self.window_mev, other.window_mev),
        )


def _curves(forecast: Forecast) -> list[Curve]:
    """Interactions of a forecast that are open below 100 MeV, volumes and nuclei together."""
    chosen = exposures.choices(forecast.detector, forecast.interactions)
    kilotons = forecast.detector.mass_kg / KG_PER_KT
    made: dict[str, Curve] = {}
    for exposure in exposures.exposures(forecast.detector, chosen, None):
        key = exposure.interaction.key
        curve = _curve(exposure.interaction, exposure.targets / kilotons)
        made[key] = curve if key not in made else made[key].plus(curve)
    return [curve for curve in made.values() if curve.middle.any()]


def _curve(interaction: Interaction, targets: float) -> Curve:
    """Mean over the kinds that take part of σ × targets; errors of one interaction go together."""
    kinds = {s: m for s, m in zip(SPECIES, MULTIPLICITY, strict=True) if s in interaction.branches}
    states = [(kinds[s], state) for s in kinds for state in interaction.final_states(s)]
    scale = targets / sum(kinds.values())
    sigmas = np.array([scale * m * state.sigma_cm2(ENERGY_MEV) for m, state in states])
    factors = np.exp([state.relative_error(ENERGY_MEV) for _, state in states])
    window = min(state.window_mev[1] for _, state in states)
    low, high = (sigmas / factors).sum(axis=0), (sigmas * factors).sum(axis=0)
    return Curve(interaction.equation, sigmas.sum(axis=0), low, high, window)


def _draw(ax: Axes, curve: Curve, shade: str, width: float) -> None:
    """Draw one curve with its band, dotted beyond its window."""
    inside = curve.window_mev >= ENERGY_MEV
    ax.fill_between(ENERGY_MEV, curve.low, curve.high, color=shade, alpha=0.3, linewidth=0)
    shown = np.where(curve.middle > 0, curve.middle, np.nan)
    ax.plot(ENERGY_MEV[inside], shown[inside], color=shade, linewidth=width)
    ax.plot(ENERGY_MEV[~inside], shown[~inside], color=shade, linewidth=width, linestyle=":")


def _names(curves: Sequence[Curve]) -> tuple[list[str], list[tuple[float, float]]]:
    """Name the largest curves and the others as one lot, with the points where they end."""
    named, rest = curves[:MOST_NAMES], curves[MOST_NAMES:]
    names = [curve.equation for curve in named]
    ends = [float(curve.middle[-1]) for curve in named]
    if rest:
        names.append(f"{len(rest)} smaller, thin grey")
        ends.append(float(rest[0].middle[-1]))
    return names, [(float(ENERGY_MEV[-1]), end) for end in ends]


def _fluence_behind(ax: Axes, forecast: Forecast) -> None:
    """Shade the arriving fluence of all kinds behind the curves, without an axis."""
    behind = ax.twinx()
    fluence = MULTIPLICITY @ forecast.fluence(ENERGY_MEV)
    behind.fill_between(ENERGY_MEV, fluence, color="0.9", linewidth=0)
    behind.set_ylim(0, max(float(fluence.max()), 1e-300) * 1.4)
    behind.axis("off")
    ax.set_zorder(behind.get_zorder() + 1)
    ax.patch.set_visible(False)


def _chance(ax: Axes, distances: Floats, totals: Floats) -> None:
    """Shade the counts that 68 % of repetitions give, named where the band is to be seen."""
    intervals = [poisson_interval(total) for total in totals]
    low = np.maximum([interval.low for interval in intervals], 0.01 * LEAST_COUNTS)
    high = np.array([interval.high for interval in intervals])
    ax.fill_between(distances, low, high, color=colour(0), alpha=0.5, linewidth=0)
    if totals[-1] < BAND_NAMED_AT < totals[0]:
        at = int(np.argmin(np.abs(totals - BAND_NAMED_AT)))
        _name_band(ax, (distances[at], low[at]), "68 % of chance", above=False)


def _name_band(ax: Axes, point: tuple[float, float], name: str, *, above: bool) -> None:
    """Name a falling band, right above its upper edge or left below its lower one."""
    ax.annotate(
        name,
        point,
        xytext=(4, 4) if above else (-4, -4),
        textcoords="offset points",
        fontsize=LABEL_SIZE,
        ha="left" if above else "right",
        va="bottom" if above else "top",
    )


def _landmarks(ax: Axes) -> None:
    """Mark distances worth knowing, their names along the lines."""
    for place in data.document("galaxy/landmarks.toml")["place"]:
        ax.axvline(place["distance_kpc"], color="0.5", linewidth=0.6, linestyle=(0, (2, 2)))
        near = place["distance_kpc"] < np.sqrt(NEAREST_KPC * FARTHEST_KPC)
        ax.annotate(
            place["name"],
            (place["distance_kpc"], 0.03 if near else 0.97),
            xycoords=("data", "axes fraction"),
            xytext=(-3, 0),
            textcoords="offset points",
            rotation=90,
            ha="right",
            va="bottom" if near else "top",
            fontsize=FOOT_SIZE,
        )
