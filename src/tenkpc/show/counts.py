"""Pictures of what is counted: the observed spectrum and the light curve."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from tenkpc.forecast.forecast import Forecast
from tenkpc.forecast.others import other_conversions
from tenkpc.forecast.uncertainty import garwood_interval
from tenkpc.show.marks import (
    FOOT_SIZE,
    LABEL_SIZE,
    assumed,
    bin_width,
    colour,
    foot,
    halo,
    names_at_right,
    names_in_column,
    panels,
    stretched_time,
    weight,
)

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from pandas import DataFrame

Floats = NDArray[np.float64]

# so many ways of being seen are named, the others are drawn as one
MOST_NAMES = 6
# what is drawn of a spectrum: up to where this share of the counts is left
TAIL = 1e-4
# depth of logarithmic pictures, as a share of the peak: the rarest kinds are to be seen
DEPTH = 3e-4
# factors are drawn where a bin holds at least this share of the counts
MATTERS = 1e-3
# where curves are named in turn, s after bounce: on the plateau of accretion
NAMES_AT_S = (0.12, 0.04)
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


def spectrum(
    forecast: Forecast, *, ax: Axes | None = None, bins: Any = None, log: bool = False
) -> Axes:
    """Draw the observed spectrum as areas stacked by what is seen, the largest at the bottom.

    Parameters
    ----------
    forecast
        the forecast.
    ax
        axes to draw on; without, a new figure also gets a narrow panel below, with the factors
        that other flavour conversions would bring.
    bins
        width of the bins, such as ``"2 MeV"``, or their edges.
    log
        logarithmic counts; what is seen is drawn as lines then, since areas would mislead.

    Returns
    -------
    Axes
        the main panel. Background, where the detector's file has some, is hatched on top.
    """
    main, *below = panels(ax, (4, 1))
    frame = forecast.spectrum(bins=bins, by="seen").iloc[:-1]
    widths = frame["width_mev"].to_numpy()
    edges = np.append(frame.index.to_numpy(), frame.index[-1] + widths[-1])
    names, parts = _ranked(frame)
    total = parts.sum(axis=0)
    last = _last_bin(total)
    main.set_xlim(0, edges[last])
    main.set_ylabel(f"events / {bin_width(widths, 'MeV')}")
    if log:
        _lines(main, names, parts, edges)
    else:
        main.set_ylim(0, max(total.max(), 1e-300) * 1.1)
        _areas(main, names, parts, edges, last)
        _background_on_top(main, frame, total, edges)
    _shade_below_threshold(main, forecast)
    for panel in below:
        totals = [
            (name, _signal(other.spectrum(bins=bins).iloc[:-1], other))
            for name, other in other_conversions(forecast)
        ]
        _factors(panel, totals, total, edges)
    lowest = (below or [main])[-1]
    lowest.set_xlabel(f"observed {forecast.detector.response.kind} energy [MeV]")
    foot(lowest, assumed(forecast))
    return main


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
    main, *below = panels(ax, (4, 1))
    edges = np.asarray(TIME_EDGES_S if edges_s is None else edges_s, dtype=float)
    quantities = [f"{edge!r} s" for edge in edges.tolist()]
    frame = forecast.light_curve(quantities, by="seen")
    widths = frame["width_s"].to_numpy()
    names, parts = _ranked(frame)
    total = np.sum(parts, axis=0)
    curves = [total, *parts] if len(names) > 1 else [total]
    labels = ["all", *names] if len(names) > 1 else names
    for rank, counts in enumerate(curves):
        shade = "black" if rank == 0 else colour(rank - 1)
        main.stairs(counts / widths, edges, color=shade, linewidth=weight(rank), baseline=None)
    main.set_yscale("log")
    low, high = (total / widths).max() * DEPTH, (total / widths).max() * 3
    main.set_ylim(low, high)
    main.set_ylabel("events / s, in bins of their own width")
    _background_level(main, frame, widths, edges)
    if seed is not None:
        _pseudo_burst(main, total + _background_of(frame), edges, seed)
    for panel in below:
        totals = [
            (name, _signal(other.light_curve(quantities), other))
            for name, other in other_conversions(forecast)
        ]
        _factors(panel, totals, total, edges)
    stretched_time([main, *below], edges[0], edges[-1])
    _name_curves(main, labels, [counts / widths for counts in curves], edges)
    foot((below or [main])[-1], assumed(forecast))
    return main


def _signal(frame: DataFrame, forecast: Forecast) -> Floats:
    """All counted events of each bin, background left out."""
    total: Floats = frame[list(forecast.keys)].sum(axis=1).to_numpy()
    return total


def _background_of(frame: DataFrame) -> Floats:
    """Background of each bin; zeros where there is none."""
    if "background" in frame.columns:
        return np.asarray(frame["background"].to_numpy())
    return np.zeros(len(frame))


def _ranked(frame: DataFrame) -> tuple[list[str], Floats]:
    """Names of what is seen and its counts by bin, the largest first, the smallest as one."""
    columns = [name for name in frame.columns[1:] if name != "background"]
    sums = frame[columns].sum().sort_values(ascending=False)
    ranked = [str(name) for name in sums[sums > 0].index]
    if not ranked:
        return ["nothing is counted"], np.zeros((1, len(frame)))
    most = MOST_NAMES if len(ranked) > MOST_NAMES else len(ranked)
    parts = [frame[name].to_numpy() for name in ranked[:most]]
    names = ranked[:most]
    if ranked[most:]:
        parts.append(frame[ranked[most:]].sum(axis=1).to_numpy())
        names.append(f"{len(ranked) - most} smaller")
    return names, np.array(parts)


def _last_bin(total: Floats) -> int:
    """Index of the edge above which only a sliver of the counts is left."""
    above = np.cumsum(total[::-1])[::-1] / max(total.sum(), 1e-300)
    return max(int(np.count_nonzero(above > TAIL)), 1)


def _areas(ax: Axes, names: Sequence[str], parts: Floats, edges: Floats, last: int) -> None:
    """Stack areas, the largest name written into its own, the others with a line to theirs."""
    base, points = np.zeros(parts.shape[1]), []
    middle = 0.5 * (edges[:-1] + edges[1:])
    for rank, part in enumerate(parts):
        top = base + part
        ax.stairs(top, edges, baseline=base, fill=True, color=colour(rank), alpha=0.8)
        ax.stairs(top, edges, color="0.15", linewidth=weight(rank) / 2)
        at = int(np.argmax(part[:last]))
        points.append((middle[at], base[at] + 0.5 * part[at]))
        base = top
    mean = float(parts[0] @ middle / max(parts[0].sum(), 1e-300))
    style: dict[str, Any] = {"fontsize": LABEL_SIZE, "ha": "center", "path_effects": halo()}
    ax.text(mean, 0.3 * parts[0].max(), names[0], **style)
    names_in_column(ax, names[1:], points[1:])


def _lines(ax: Axes, names: Sequence[str], parts: Floats, edges: Floats) -> None:
    """Draw each part and their sum as a line of its own on a logarithmic axis."""
    total, middle = parts.sum(axis=0), 0.5 * (edges[:-1] + edges[1:])
    ax.set_yscale("log")
    ax.set_ylim(max(total.max(), 1e-300) * DEPTH, max(total.max(), 1e-300) * 30)
    ax.stairs(total, edges, color="black", linewidth=weight(0), baseline=None)
    for rank, part in enumerate(parts):
        ax.stairs(part, edges, color=colour(rank), linewidth=weight(rank + 1), baseline=None)
    peaks = [int(np.argmax(part)) for part in parts]
    points = [(middle[at], float(part[at])) for at, part in zip(peaks, parts, strict=True)]
    names_in_column(ax, names, points)


def _background_on_top(ax: Axes, frame: DataFrame, total: Floats, edges: Floats) -> None:
    background = _background_of(frame)
    if background.any():
        hatch: dict[str, Any] = {"hatch": "////", "facecolor": "none", "edgecolor": "0.2"}
        ax.stairs(total + background, edges, baseline=total, fill=True, linewidth=0, **hatch)
        words = f"background, hatched: {background.sum():.2g}"
        ax.annotate(
            words,
            (0.99, 0.03),
            xycoords="axes fraction",
            ha="right",
            fontsize=FOOT_SIZE,
        )


def _background_level(ax: Axes, frame: DataFrame, widths: Floats, edges: Floats) -> None:
    """Draw the level of background, or say that it lies below the picture."""
    rates = _background_of(frame) / widths
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


def _factors(ax: Axes, totals: Sequence[tuple[str, Floats]], own: Floats, edges: Floats) -> None:
    """Draw other conversions relative to this one where counts are, each line named at its end."""
    enough = own > own.sum() * MATTERS
    if not enough.any():
        return
    curves = np.array(
        [np.where(enough, other / np.where(enough, own, 1.0), np.nan) for _, other in totals]
    )
    low, high = min(np.nanmin(curves), 1.0), max(np.nanmax(curves), 1.0)
    margin = 0.08 * (high - low + 0.1)
    low, high = low - margin, high + margin
    for rank, curve in enumerate(curves):
        ax.stairs(curve, edges, color=colour(rank + 2), linewidth=1.2, baseline=None)
    last = np.array([curve[np.flatnonzero(enough)[-1]] for curve in curves])
    ax.axhline(1.0, color="0.3", linewidth=0.6)
    ax.set_ylim(low, high)
    ax.set_ylabel("factor")
    names = [name for name, _ in totals]
    # the panel is a quarter as high as the one above it, so its names are further apart
    names_at_right(ax, names, (last - low) / (high - low), 4 * FOOT_SIZE)
    for text in ax.texts:
        text.set_fontsize(FOOT_SIZE)


def _shade_below_threshold(ax: Axes, forecast: Forecast) -> None:
    threshold = max(forecast.detector.response.threshold_mev, forecast.energy_above_mev or 0.0)
    if threshold <= 0:
        return
    ax.axvspan(0, threshold, color="0.85", zorder=0, linewidth=0)
    narrow = threshold < 0.03 * ax.get_xlim()[1]
    if not narrow:
        ax.annotate(
            "below threshold",
            (threshold, 0.5),
            xycoords=("data", "axes fraction"),
            xytext=(-4, 0),
            textcoords="offset points",
            rotation=90,
            ha="right",
            va="center",
            fontsize=FOOT_SIZE,
        )
