"""Pictures of what a detector can see: interaction probabilities, and counts against distance."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from tenkpc import data, interactions
from tenkpc.forecast.forecast import Forecast
from tenkpc.forecast.uncertainty import poisson_interval
from tenkpc.interactions.base import Interaction
from tenkpc.show.marks import (
    FOOT_SIZE,
    LABEL_SIZE,
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


def interaction_probability(forecast: Forecast, *, ax: Axes | None = None) -> Axes:
    """Draw cross section times targets in a kiloton of the detector's filling.

    Each line is the mean over the kinds of neutrino that take part, with a band of 1σ; it is
    dotted beyond the window of the cross section. The grey area is the arriving fluence of all
    kinds, on a scale of its own.

    Parameters
    ----------
    forecast
        its detector is drawn, and the fluence of its burst.
    ax
        axes to draw on; without, a new figure.
    """
    (main,) = panels(ax, (1,), tall=4.6)
    _fluence_behind(main, forecast)
    curves = [(key, curve) for key in forecast.keys if (curve := _per_kiloton(forecast, key)).any()]
    curves.sort(key=lambda pair: -pair[1].max())
    highest = max(curve.max() for _, curve in curves)
    for rank, (key, curve) in enumerate(curves):
        _probability(main, interactions.by_key(key), curve, rank)
    main.set_xscale("log")
    main.set_yscale("log")
    main.set_xlim(ENERGY_MEV[0], ENERGY_MEV[-1])
    low, high = np.log(highest * 10.0**-DECADES), np.log(highest * 3)
    main.set_ylim(np.exp(low), np.exp(high))
    ends = [(np.log(max(curve[-1], np.exp(low))) - low) / (high - low) for _, curve in curves]
    names = [interactions.by_key(key).equation for key, _ in curves]
    names_at_right(main, names, np.array(ends), LABEL_SIZE)
    main.set_xlabel("neutrino energy [MeV]")
    main.set_ylabel("σ × targets per kt [cm²]")
    words = "means of the kinds that take part; grey: fluence of all kinds"
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
    distances = np.geomspace(NEAREST_KPC, FARTHEST_KPC, 121)
    totals = forecast.total * (forecast.distance_kpc / distances) ** 2
    further = [burst for burst in bursts if burst != forecast.burst]
    if further:
        others = np.array([forecast.of(burst).total for burst in further])
        scale = (forecast.distance_kpc / distances) ** 2
        low, high = min(others.min(), forecast.total), max(others.max(), forecast.total)
        main.fill_between(distances, low * scale, high * scale, color="0.85", linewidth=0)
        _name_band(main, distances, high * scale, f"{len(further)} other bursts")
    chances = [poisson_interval(total) for total in totals]
    ends = np.array([(c.low, c.high) for c in chances]).T
    main.fill_between(
        distances, np.maximum(ends[0], 1e-3), ends[1], color=colour(0), alpha=0.5, linewidth=0
    )
    main.plot(distances, totals, color="black", linewidth=weight(1))
    main.set_xscale("log")
    main.set_yscale("log")
    main.set_xlim(NEAREST_KPC, FARTHEST_KPC)
    main.set_ylim(0.1, totals[0] * 3)
    main.axhline(1.0, color="0.5", linewidth=0.5)
    _landmarks(main)
    main.set_xlabel("distance [kpc]")
    main.set_ylabel("counted events")
    foot(main, f"{assumed(forecast)}; blue: 68 % of chance")
    return main


def _per_kiloton(forecast: Forecast, key: str) -> Floats:
    """Mean over the kinds that take part of σ × targets in a kiloton, cm²."""
    interaction = interactions.by_key(key)
    detector = forecast.detector
    targets = detector.targets(interaction.target) / detector.mass_kg * KG_PER_KT
    kinds = {s: m for s, m in zip(SPECIES, MULTIPLICITY, strict=True) if s in interaction.branches}
    total = sum(m * interaction.sigma(s, ENERGY_MEV) for s, m in kinds.items())
    return np.asarray(targets * total / sum(kinds.values()))


def _probability(ax: Axes, interaction: Interaction, curve: Floats, rank: int) -> None:
    """Draw one curve with its band, dotted beyond the window of its first final state."""
    states = [state for branch in interaction.branches.values() for state in branch]
    error = np.max([state.relative_error(ENERGY_MEV) for state in states], axis=0)
    inside = np.min([state.window_mev[1] for state in states]) >= ENERGY_MEV
    band: dict[str, Any] = {"color": colour(rank), "alpha": 0.3, "linewidth": 0}
    ax.fill_between(ENERGY_MEV, curve * np.exp(-error), curve * np.exp(error), **band)
    line: dict[str, Any] = {"color": colour(rank), "linewidth": weight(rank)}
    shown = np.where(curve > 0, curve, np.nan)
    ax.plot(ENERGY_MEV[inside], shown[inside], **line)
    ax.plot(ENERGY_MEV[~inside], shown[~inside], linestyle=":", **line)


def _fluence_behind(ax: Axes, forecast: Forecast) -> None:
    """Shade the arriving fluence of all kinds behind the curves, without an axis."""
    behind = ax.twinx()
    fluence = MULTIPLICITY @ forecast.fluence(ENERGY_MEV)
    behind.fill_between(ENERGY_MEV, fluence, color="0.9", linewidth=0)
    behind.set_ylim(0, fluence.max() * 1.4)
    behind.axis("off")
    ax.set_zorder(behind.get_zorder() + 1)
    ax.patch.set_visible(False)


def _name_band(ax: Axes, distances: Floats, upper: Floats, name: str) -> None:
    at = 2 * len(distances) // 5
    ax.annotate(
        name,
        (distances[at], upper[at]),
        xytext=(4, 4),
        textcoords="offset points",
        fontsize=LABEL_SIZE,
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
