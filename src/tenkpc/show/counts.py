"""Picture of the observed spectrum."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from tenkpc.forecast.forecast import Forecast
from tenkpc.forecast.others import other_conversions
from tenkpc.show.marks import (
    DEPTH,
    FOOT_SIZE,
    LABEL_SIZE,
    assumed,
    bin_width,
    colour,
    foot,
    halo,
    names_in_column,
    panels,
    weight,
)
from tenkpc.show.ranking import background_of, factors, ranked, signal

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from pandas import DataFrame

Floats = NDArray[np.float64]

# what is drawn of a spectrum: up to where this share of the counts is left
TAIL = 1e-4


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
    frame, scale = (
        forecast.spectrum(bins=bins, by="seen").iloc[:-1],
        forecast.detector.response.scale,
    )
    widths = frame["width_mev"].to_numpy() / scale.mev
    edges = np.append(frame.index.to_numpy() / scale.mev, frame.index[-1] / scale.mev + widths[-1])
    names, parts = ranked(frame)
    total = parts.sum(axis=0)
    last = _last_bin(total)
    main.set_xlim(0, edges[last])
    main.set_ylabel(f"events / {bin_width(widths, scale.unit)}")
    if log:
        _lines(main, names, parts, edges)
    else:
        main.set_ylim(0, max(total.max(), 1e-300) * 1.1)
        _areas(main, names, parts, edges, last)
        _background_on_top(main, frame, total, edges)
    _shade_below_threshold(main, forecast)
    for panel in below:
        totals = [
            (name, signal(other.spectrum(bins=bins).iloc[:-1], other))
            for name, other in other_conversions(forecast)
        ]
        factors(panel, totals, total, edges)
    lowest = (below or [main])[-1]
    lowest.set_xlabel(f"observed {forecast.detector.response.kind} energy [{scale.unit}]")
    foot(lowest, assumed(forecast))
    return main


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
    background = background_of(frame)
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


def _shade_below_threshold(ax: Axes, forecast: Forecast) -> None:
    cuts = [volume.response.threshold_mev for volume in forecast.detector.volumes]
    lowest = max(min(cuts), forecast.energy_above_mev or 0.0)
    threshold = lowest / forecast.detector.response.scale.mev
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
