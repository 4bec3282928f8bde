"""What all pictures share: colours, weights, names beside curves, the foot line, axes of time.

Colours go by rank in the result and come from a set published for colour-blind readers (M. Petroff
2021, arXiv:2107.02270, from memory), with line weights in the same order so that a grey print
still reads.
"""

from __future__ import annotations

import textwrap
from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from tenkpc.forecast import words
from tenkpc.forecast.forecast import Forecast
from tenkpc.source.burst import Burst

if TYPE_CHECKING:
    from matplotlib.axes import Axes

Floats = NDArray[np.float64]

COLOURS = ("#3f90da", "#ffa90e", "#bd1f01", "#94a4a2", "#832db6", "#a96b59", "#e76300")
WEIGHTS = (2.2, 1.8, 1.5, 1.2, 1.0, 0.8, 0.7)
FOOT_SIZE = 7
FOOT_COLUMNS = 104
LABEL_SIZE = 8
WIDTH_IN = 6.4
# names of curves are at least so far apart, as a share of the panel's height
APART = 0.065
# the axis of time is linear up to here, s
LINEAR_S = 0.1
TIME_TICKS_S = (0, 0.02, 0.04, 0.06, 0.08, 0.1, 0.3, 1, 3, 10, 30)


def colour(rank: int) -> str:
    """Colour of a rank, from the largest."""
    return COLOURS[rank % len(COLOURS)]


def weight(rank: int) -> float:
    """Line width of a rank, in points."""
    return WEIGHTS[min(rank, len(WEIGHTS) - 1)]


def panels(
    ax: Axes | None, heights: Sequence[float] = (1,), *, share: bool = True, tall: float = 5.2
) -> list[Axes]:
    """Give the axes to draw on: the given ones alone, or the panels of a new figure."""
    if ax is not None:
        return [ax]
    from matplotlib import pyplot as plt

    _, axes = plt.subplots(
        len(heights),
        1,
        sharex=share,
        squeeze=False,
        figsize=(WIDTH_IN, tall),
        gridspec_kw={"height_ratios": heights},
        layout="constrained",
    )
    return list(axes[:, 0])


def halo() -> list[Any]:
    """Give a white rim that keeps a name readable on top of lines."""
    from matplotlib import patheffects

    return [patheffects.withStroke(linewidth=2, foreground="white", alpha=0.8)]


def wrapped(line: str) -> str:
    """Break a foot line that is too long for a picture."""
    return textwrap.fill(line, FOOT_COLUMNS)


def foot(ax: Axes, line: str, down: float = -38) -> None:
    """Write what was assumed as a small line below the axis, or two where it is long."""
    offset: dict[str, Any] = {"xytext": (0, down), "textcoords": "offset points", "va": "top"}
    ax.annotate(
        textwrap.fill(line, FOOT_COLUMNS),
        (0, 0),
        xycoords="axes fraction",
        fontsize=FOOT_SIZE,
        color="0.25",
        **offset,
    )


def assumed(forecast: Forecast) -> str:
    """Say detector, burst, distance and conversion in one line."""
    return (
        f"{forecast.detector.title}, “{forecast.burst.title}” at "
        f"{words.distance(forecast.distance_kpc)}, {forecast.conversion.describe()}"
    )


def in_all(burst: Burst) -> str:
    """Say how much energy all kinds carry."""
    return f"{burst.summary().total_energy_erg / 1e53:.3g} × 10⁵³ erg in all"


def apart(heights: Floats, least: float) -> Floats:
    """Move heights apart to at least a distance, in order, around where they were."""
    order = np.argsort(heights)
    moved = heights[order].astype(float)
    for place in range(1, len(moved)):
        moved[place] = max(moved[place], moved[place - 1] + least)
    if len(moved):
        moved -= np.mean(moved - heights[order])
        moved += max(0.0, -moved[0]) - max(0.0, moved[-1] - 1.0)
    result = np.empty_like(moved)
    result[order] = moved
    return result


def names_at_right(ax: Axes, names: Sequence[str], heights: Floats, size: float) -> None:
    """Name curves beside their right ends, at heights from 0 to 1 that do not collide."""
    offset: dict[str, Any] = {"xytext": (4, 0), "textcoords": "offset points", "va": "center"}
    for name, height in zip(names, apart(heights, APART * size / LABEL_SIZE), strict=True):
        ax.annotate(name, (1.0, height), xycoords="axes fraction", fontsize=size, **offset)


def names_in_column(
    ax: Axes, names: Sequence[str], points: Sequence[tuple[float, float]], left: float = 0.56
) -> None:
    """Write names in a column inside the axes, each with a thin line to its point.

    Of all ways to order the names the one with the shortest lines is taken: its lines do not
    cross.
    """
    if not names:
        return
    from scipy.optimize import linear_sum_assignment

    data, axes = ax.transData, ax.transAxes.inverted()
    ends = axes.transform(data.transform(np.array(points)))
    shape = np.array([1.0, ax.bbox.height / ax.bbox.width])
    starts = np.array([(left, 0.94 - 0.075 * place) for place in range(len(names))])
    lengths = np.linalg.norm((ends[:, None] - starts[None]) * shape, axis=2)
    _, order = linear_sum_assignment(lengths)
    line = {"arrowstyle": "-", "linewidth": 0.6, "color": "0.3", "relpos": (0, 0.5)}
    for name, point, place in zip(names, points, order, strict=True):
        ax.annotate(
            name,
            point,
            xytext=tuple(starts[place]),
            textcoords="axes fraction",
            fontsize=LABEL_SIZE,
            va="center",
            arrowprops={**line, "shrinkB": 0},
            path_effects=halo(),
        )
        ax.plot(*point, marker="o", markersize=1.8, color="0.2")


def stretched_time(axes: Sequence[Axes], first_s: float, last_s: float) -> None:
    """Stretch the axis of time around bounce: linear up to 0.1 s, logarithmic from there."""
    from matplotlib.ticker import FixedLocator, FuncFormatter, NullLocator

    for ax in axes:
        ax.set_xscale("symlog", linthresh=LINEAR_S, linscale=1.5)
        ax.set_xlim(first_s, last_s)
    lowest = axes[-1]
    lowest.xaxis.set_major_locator(FixedLocator(list(TIME_TICKS_S)))
    lowest.xaxis.set_minor_locator(NullLocator())
    lowest.xaxis.set_major_formatter(FuncFormatter(lambda value, _: f"{value:g}"))
    lowest.tick_params(axis="x", labelsize=LABEL_SIZE)
    lowest.set_xlabel("time after bounce [s], stretched before 0.1 s")


def bin_width(widths: Floats, unit: str) -> str:
    """Width of the bins in words, for the label of an axis."""
    if np.allclose(widths, widths[0]):
        return f"{widths[0]:g} {unit}"
    return f"bin of {widths.min():g} to {widths.max():g} {unit}"
