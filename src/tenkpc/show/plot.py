"""Pictures of a forecast: the observed spectrum and the light curve.

Every function takes ``ax=None``, draws on those axes or on new ones, and returns them; none
shows a window. Colours go by rank in the result and come from a set published for colour-blind
readers (M. Petroff 2021, arXiv:2107.02270, from memory), with line weights in the same order so
that a grey print still reads.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from tenkpc import interactions
from tenkpc.forecast import words
from tenkpc.forecast.forecast import Forecast
from tenkpc.forecast.others import other_conversions

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from pandas import DataFrame

Floats = NDArray[np.float64]

COLOURS = ("#3f90da", "#ffa90e", "#bd1f01", "#94a4a2", "#832db6", "#a96b59")
WEIGHTS = (2.2, 1.8, 1.5, 1.2, 1.0, 0.8)
FOOT_SIZE = 7
LABEL_SIZE = 9
# what is drawn of a spectrum: up to where this share of the counts is left
TAIL = 1e-4
# depth of a light curve, as a share of its peak: the rarest interactions are to be seen
DEPTH = 3e-4
# bins with less than this share of the counts do not set the scale of the factors
MATTERS = 1e-3
# where curves are named, in turn, s
LABEL_TIMES_S = (0.07, 1.0, 0.1, 0.3)
# labels at the end of a line are at least so far apart, as a share of the panel's height
LABELS_APART = 0.24
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
    """Draw the observed spectrum as areas stacked by interaction, the largest at the bottom.

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
        logarithmic counts.
    """
    main, below = _axes(ax)
    frame = forecast.spectrum(bins=bins).iloc[:-1]
    widths = frame["width_mev"].to_numpy()
    edges = np.append(frame.index.to_numpy(), frame.index[-1] + widths[-1])
    ranked = _ranked(frame)
    heights = np.cumsum([frame[key].to_numpy() for key in ranked], axis=0)
    last = _last_bin(heights[-1])
    _areas(main, heights, edges)
    _shade_below_threshold(main, forecast)
    if log:
        main.set_yscale("log")
        main.set_ylim(heights[-1].max() * TAIL, heights[-1].max() * 3)
    else:
        main.set_ylim(0, heights[-1].max() * 1.1)
    main.set_ylabel(f"events / {_width(widths, 'MeV')}")
    _name_areas(main, ranked, heights, edges, last)
    lowest = below or main
    if below is not None:
        totals = [
            (name, other.spectrum(bins=bins).iloc[:-1][ranked].sum(axis=1).to_numpy())
            for name, other in other_conversions(forecast)
        ]
        _factors(below, totals, heights[-1], edges)
    lowest.set_xlabel(f"observed {forecast.detector.response.kind} energy [MeV]")
    lowest.set_xlim(0, edges[last])
    _foot(below or main, forecast)
    return main


def light_curve(
    forecast: Forecast, *, ax: Axes | None = None, edges_s: Sequence[float] | None = None
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
    """
    main, below = _axes(ax)
    edges = np.asarray(TIME_EDGES_S if edges_s is None else edges_s, dtype=float)
    quantities = [f"{edge!r} s" for edge in edges.tolist()]
    frame = forecast.light_curve(quantities)
    widths = frame["width_s"].to_numpy()
    ranked = _ranked(frame)
    rates = [frame[key].to_numpy() / widths for key in ranked]
    total = np.sum(rates, axis=0)
    curves = [total, *rates] if len(ranked) > 1 else [total]
    names = ["all", *ranked] if len(ranked) > 1 else ranked
    for rank, rate in enumerate(curves):
        colour = "black" if names[rank] == "all" else _colour(ranked.index(names[rank]))
        main.stairs(rate, edges, color=colour, linewidth=_weight(rank), baseline=None)
    main.set_yscale("log")
    main.set_ylim(total.max() * DEPTH, total.max() * 3)
    main.set_ylabel("events / s, in bins of their own width")
    _name_curves(main, names, curves, edges)
    if below is not None:
        totals = []
        for name, other in other_conversions(forecast):
            counted = other.light_curve(quantities)[ranked].sum(axis=1).to_numpy()
            totals.append((name, counted))
        _factors(below, totals, total * widths, edges)
    for axes in filter(None, (main, below)):
        axes.set_xscale("symlog", linthresh=0.1, linscale=1.5)
        axes.set_xlim(edges[0], edges[-1])
    _time_ticks(below or main)
    _foot(below or main, forecast)
    return main


def _axes(ax: Axes | None) -> tuple[Axes, Axes | None]:
    """Give the axes to draw on, and a narrow panel below where the figure is our own."""
    if ax is not None:
        return ax, None
    from matplotlib import pyplot as plt

    _, (main, below) = plt.subplots(
        2,
        1,
        sharex=True,
        figsize=(6.4, 5.2),
        gridspec_kw={"height_ratios": (4, 1)},
        layout="constrained",
    )
    return main, below


def _ranked(frame: DataFrame) -> list[str]:
    """Interactions that count anything, the largest first."""
    sums = frame.drop(columns=frame.columns[0]).sum().sort_values(ascending=False)
    return [str(key) for key in sums[sums > 0].index]


def _colour(rank: int) -> str:
    return COLOURS[rank % len(COLOURS)]


def _weight(rank: int) -> float:
    return WEIGHTS[min(rank, len(WEIGHTS) - 1)]


def _last_bin(total: Floats) -> int:
    """Index of the edge above which only a sliver of the counts is left."""
    above = np.cumsum(total[::-1])[::-1] / max(total.sum(), 1e-300)
    return int(np.count_nonzero(above > TAIL))


def _areas(ax: Axes, heights: Floats, edges: Floats) -> None:
    base = np.zeros(heights.shape[1])
    for rank, top in enumerate(heights):
        ax.stairs(top, edges, baseline=base, fill=True, color=_colour(rank), alpha=0.8)
        ax.stairs(top, edges, color="0.15", linewidth=_weight(rank) / 2)
        base = top


def _equation(key: str) -> str:
    return "all" if key == "all" else interactions.by_key(key).equation


def _name_areas(ax: Axes, ranked: Sequence[str], heights: Floats, edges: Floats, last: int) -> None:
    """Write the largest reaction into its area, the others beside theirs with a thin line."""
    middle = 0.5 * (edges[:-1] + edges[1:])
    parts = np.diff(heights, axis=0, prepend=np.zeros((1, heights.shape[1])))
    mean = float(parts[0] @ middle / parts[0].sum())
    inside = {"fontsize": LABEL_SIZE, "ha": "center"}
    ax.text(mean, 0.3 * parts[0].max(), _equation(ranked[0]), fontdict=inside)
    top = int(np.argmax(heights[-1][:last]))
    for rank, (key, part) in enumerate(zip(ranked[1:], parts[1:], strict=True), 1):
        at = top + int(np.argmax(part[top:last]))
        ax.annotate(
            _equation(key),
            (middle[at], heights[rank, at] - part[at] / 2),
            xytext=(0.5, 1.02 - 0.09 * rank),
            textcoords="axes fraction",
            fontsize=LABEL_SIZE,
            va="center",
            arrowprops={"arrowstyle": "-", "linewidth": 0.6, "color": "0.3", "relpos": (0, 0.5)},
        )


def _name_curves(ax: Axes, names: Sequence[str], curves: Sequence[Floats], edges: Floats) -> None:
    """Write each curve's reaction just above it, neighbours at different times."""
    for rank, (name, curve) in enumerate(zip(names, curves, strict=True)):
        place = LABEL_TIMES_S[rank % len(LABEL_TIMES_S)]
        at = min(max(int(np.searchsorted(edges, place)) - 1, 0), len(curve) - 1)
        ax.annotate(
            _equation(name),
            (0.5 * (edges[at] + edges[at + 1]), curve[at]),
            xytext=(0, 5),
            textcoords="offset points",
            fontsize=LABEL_SIZE,
            weight="bold" if name == "all" else "normal",
        )


def _factors(ax: Axes, totals: Sequence[tuple[str, Floats]], own: Floats, edges: Floats) -> None:
    """Draw other conversions relative to this one, each line named at its right end.

    The axis spans the bins that hold more than a sliver of the counts.
    """
    curves = [
        np.divide(other, own, out=np.full_like(own, np.nan), where=own > own.sum() * TAIL**2)
        for _, other in totals
    ]
    known = np.array([curve[own > own.sum() * MATTERS] for curve in curves])
    margin = 0.08 * (known.max() - known.min() + 0.1)
    low, high = known.min() - margin, known.max() + margin
    for rank, curve in enumerate(curves):
        ax.stairs(curve, edges, color=_colour(rank + 2), linewidth=1.2, baseline=None)
    heights = _apart((known[:, -1] - low) / (high - low), LABELS_APART)
    for (name, _), height in zip(totals, heights, strict=True):
        offset: dict[str, Any] = {"xytext": (4, 0), "textcoords": "offset points", "va": "center"}
        ax.annotate(name, (1.0, height), xycoords="axes fraction", fontsize=FOOT_SIZE, **offset)
    ax.axhline(1.0, color="0.3", linewidth=0.6)
    ax.set_ylim(low, high)
    ax.set_ylabel("factor")


def _apart(heights: Floats, least: float) -> Floats:
    """Move heights apart to at least a distance, in order, around where they were."""
    order = np.argsort(heights)
    moved = heights[order]
    for place in range(1, len(moved)):
        moved[place] = max(moved[place], moved[place - 1] + least)
    moved -= np.mean(moved - heights[order])
    result = np.empty_like(moved)
    result[order] = moved
    return result


def _shade_below_threshold(ax: Axes, forecast: Forecast) -> None:
    threshold = max(forecast.detector.response.threshold_mev, forecast.energy_above_mev or 0.0)
    if threshold > 0:
        ax.axvspan(0, threshold, color="0.85", zorder=0, linewidth=0)
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


def _time_ticks(ax: Axes) -> None:
    from matplotlib.ticker import FixedLocator, FuncFormatter, NullLocator

    ax.xaxis.set_major_locator(FixedLocator([0, 0.02, 0.04, 0.06, 0.08, 0.1, 0.3, 1, 3, 10, 30]))
    ax.xaxis.set_minor_locator(NullLocator())
    ax.xaxis.set_major_formatter(FuncFormatter(lambda value, _: f"{value:g}"))
    ax.tick_params(axis="x", labelsize=LABEL_SIZE)
    ax.set_xlabel("time after bounce [s], stretched before 0.1 s")


def _width(widths: Floats, unit: str) -> str:
    """Width of the bins in words, for the label of an axis."""
    if np.allclose(widths, widths[0]):
        return f"{widths[0]:g} {unit}"
    return f"bin of {widths.min():g} to {widths.max():g} {unit}"


def _foot(ax: Axes, forecast: Forecast) -> None:
    """Write what was assumed as a small line below the axis."""
    line = (
        f"{forecast.detector.title}, “{forecast.burst.title}” at "
        f"{words.distance(forecast.distance_kpc)}, {forecast.conversion.describe()}"
    )
    offset: dict[str, Any] = {"xytext": (0, -38), "textcoords": "offset points", "va": "top"}
    ax.annotate(line, (0, 0), xycoords="axes fraction", fontsize=FOOT_SIZE, color="0.25", **offset)
