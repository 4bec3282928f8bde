"""Picture of the light curve: counted events against time after bounce."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from tenkpc.errors import InputError
from tenkpc.forecast.forecast import Forecast
from tenkpc.forecast.others import other_conversions
from tenkpc.forecast.uncertainty import garwood_interval
from tenkpc.show.marks import (
    DEPTH,
    FOOT_SIZE,
    LABEL_SIZE,
    assumed,
    colour,
    foot,
    halo,
    panels,
    stretched_time,
    weight,
)
from tenkpc.show.ranking import background_of, factors, ranked, signal

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from pandas import DataFrame

Floats = NDArray[np.float64]

# where curves are named in turn, s after bounce: on the plateau of accretion
NAMES_AT_S = (0.2, 0.06)
# edges of the light curve, s: fine at the peak of the electron neutrinos, coarse in the tail
TIME_EDGES_S = np.unique(
    np.round(
        np.concatenate(
            [
                np.arange(-0.02, 0.06, 0.004),
                np.arange(0.06, 1.0, 0.02),
                np.geomspace(1.0, 20.0, 26),
            ]
        ),
        6,
    )
)


def light_curve(
    forecast: Forecast,
    *,
    ax: Axes | None = None,
    edges_s: Sequence[float] | None = None,
    seed: int | None = 1,
) -> Axes:
    """Draw the counted rate against time after bounce, stretched around the bounce.

    The axis is linear up to 0.1 s and logarithmic from there, so that the first peak and the
    tail are both to be seen; heights are events per second, each bin over its own width.

    Parameters
    ----------
    forecast
        the forecast, of a burst with a time profile.
    ax
        axes to draw on; without, a new figure also gets a narrow panel below, with the factors
        that other flavour conversions would bring.
    edges_s
        edges of the bins in s.
    seed
        of one pseudo-burst, drawn as points with the interval that each count allows for its
        mean; None draws none.
    """
    if seed is not None and seed < 0:
        message = f"seed: expected a whole number of zero or more, or None, found {seed!r}"
        raise InputError(message)
    main, *below = panels(ax, (4, 1))
    edges = np.asarray(TIME_EDGES_S if edges_s is None else edges_s, dtype=float)
    quantities = [f"{edge!r} s" for edge in edges.tolist()]
    frame = forecast.light_curve(quantities, by="seen")
    widths = frame["width_s"].to_numpy()
    names, parts = ranked(frame)
    total = np.sum(parts, axis=0)
    curves = [total, *parts] if len(names) > 1 else [total]
    labels = ["all", *names] if len(names) > 1 else names
    for rank, counts in enumerate(curves):
        shade = "black" if rank == 0 else colour(rank - 1)
        main.stairs(counts / widths, edges, color=shade, linewidth=weight(rank), baseline=None)
    main.set_yscale("log")
    highest = max(float((total / widths).max()), 1e-300)
    low, high = highest * DEPTH, highest * 3
    main.set_ylim(low, high)
    main.set_ylabel("events / s, in bins of their own width")
    _background_level(main, frame, widths, edges)
    if seed is not None:
        _pseudo_burst(main, total + background_of(frame), edges, seed)
    for panel in below:
        totals = [
            (name, signal(other.light_curve(quantities), other))
            for name, other in other_conversions(forecast)
        ]
        factors(panel, totals, total, edges)
    stretched_time([main, *below], edges[0], edges[-1])
    _name_curves(main, labels, [counts / widths for counts in curves], edges)
    foot((below or [main])[-1], assumed(forecast))
    return main


def _background_level(ax: Axes, frame: DataFrame, widths: Floats, edges: Floats) -> None:
    """Draw the level of background, or say that it lies below the picture."""
    rates = background_of(frame) / widths
    if not rates.any():
        return
    level = float(rates.mean())
    style: dict[str, Any] = {"color": "0.3", "linestyle": (0, (1, 1))}
    ax.stairs(rates, edges, baseline=None, linewidth=1.2, **style)
    inside = level > ax.get_ylim()[0]
    words = "background" if inside else f"background {level:.2g} per s, below this picture"
    place = (edges[-1], level) if inside else (0.99, 0.02)
    kind = "data" if inside else "axes fraction"
    ax.annotate(words, place, xycoords=kind, ha="right", va="bottom", fontsize=FOOT_SIZE)


def _pseudo_burst(ax: Axes, expected: Floats, edges: Floats, seed: int) -> None:
    """Draw one burst as it may come, each bin with the interval its count allows."""
    counts = np.random.default_rng(seed).poisson(np.maximum(expected, 0.0))
    low, high = garwood_interval(counts)
    widths, middle = np.diff(edges), 0.5 * (edges[1:] + edges[:-1])
    some = counts > 0
    bars = np.array([counts - low, high - counts])[:, some] / widths[some]
    style: dict[str, Any] = {"fmt": "o", "markersize": 2, "color": "0.35", "elinewidth": 0.6}
    ax.errorbar(
        middle[some], counts[some] / widths[some], yerr=bars, label="one pseudo-burst", **style
    )
    ax.annotate(
        "points: one pseudo-burst",
        (0.01, 0.97),
        xycoords="axes fraction",
        va="top",
        fontsize=FOOT_SIZE,
    )


def _name_curves(ax: Axes, names: Sequence[str], curves: Sequence[Floats], edges: Floats) -> None:
    """Name each curve on the side where there is more room, neighbours at different times."""
    middle = 0.5 * (edges[:-1] + edges[1:])
    low, high = ax.get_ylim()
    places = [int(np.argmin(np.abs(middle - time))) for time in NAMES_AT_S]
    ranks = np.argsort(np.argsort([-curve[places[0]] for curve in curves]))
    for name, curve, rank in zip(names, curves, ranks, strict=True):
        at = places[rank % len(places)]
        if curve[at] <= low:
            at = int(np.argmax(curve))
        if not curve[at] > low:
            continue
        others = np.log([max(other[at], low) for other in curves if other is not curve])
        height = np.log(curve[at])
        above = np.min([*others[others > height], np.log(high)]) - height
        below = height - np.max([*others[others < height], np.log(low)])
        up = above >= below
        ax.annotate(
            name,
            (middle[at], curve[at]),
            xytext=(0, 3 if up else -4),
            textcoords="offset points",
            fontsize=LABEL_SIZE,
            ha="center",
            va="bottom" if up else "top",
            weight="bold" if name == "all" else "normal",
            path_effects=halo(),
        )
