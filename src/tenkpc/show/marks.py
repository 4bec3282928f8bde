"""What all pictures share: colours, weights, names beside curves, the foot line, axes of time.

Colours go by rank in the result and come from a set published for colour-blind readers (M. Petroff
2021, arXiv:2107.02270, from memory), with line weights in the same order so that a grey print
still reads.
"""

from __future__ import annotations

import math
import textwrap
from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from tenkpc.errors import InputError
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
# names below each other are at least so far apart, in units of their size
APART = 1.6
# so many curves or areas are named, the others are drawn and named as one lot
MOST_NAMES = 6
# from the right edge of the axes to the names there, points
TO_NAMES = 12
# depth of logarithmic pictures, as a share of the peak: the rarest kinds are to be seen
DEPTH = 3e-4
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
    if ax is not None and not hasattr(ax, "stairs"):
        message = f"ax: expected axes to draw on, found {type(ax).__name__}"
        raise InputError(message)
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


def given_axes(ax: Any, count: int, name: str) -> list[Axes]:
    """Give the axes that a picture of several panels was given, as a list.

    Raises
    ------
    InputError
        where there are more or fewer of them than panels.
    """
    axes = list(np.ravel(ax))
    if len(axes) != count:
        message = f"ax: {name} draws on {count} axes, found {len(axes)}"
        raise InputError(message)
    return axes


def halo() -> list[Any]:
    """Give a white rim that keeps a name readable on top of lines."""
    from matplotlib import patheffects

    return [patheffects.withStroke(linewidth=2, foreground="white", alpha=0.8)]


def wrapped(line: str) -> str:
    """Break a foot line that is too long for a picture into lines of about one length."""
    lines = math.ceil(len(line) / FOOT_COLUMNS)
    even = len(line) / lines + 12 if lines > 1 else FOOT_COLUMNS
    return textwrap.fill(line, min(int(even), FOOT_COLUMNS))


def foot(ax: Axes, line: str, down: float = -38) -> None:
    """Write what was assumed as a small line below the axis, or more where it is long."""
    offset: dict[str, Any] = {"xytext": (0, down), "textcoords": "offset points", "va": "top"}
    ax.annotate(
        wrapped(line),
        (0, 0),
        xycoords="axes fraction",
        fontsize=FOOT_SIZE,
        color="0.25",
        **offset,
    )


def assumed(forecast: Forecast, *, distance: bool = True) -> str:
    """Say detector, burst, distance, conversion and window in one line."""
    where = f" at {words.distance(forecast.distance_kpc)}" if distance else ""
    part = words.window_clause(forecast).rstrip(",")
    return (
        f"{forecast.detector.title}, “{forecast.burst.title}”{where}, "
        f"{forecast.conversion.describe()}{part}"
    )


def in_all(burst: Burst) -> str:
    """Say how much energy all kinds carry."""
    return f"{burst.summary().total_energy_erg / 1e53:.3g} × 10⁵³ erg in all"


def apart(heights: Floats, least: float) -> Floats:
    """Move heights apart to at least a distance, in order, as little as can be, and into [0, 1].

    The moves are least in the sum of their squares: less the distance times its rank, a height
    may not fall behind the one below it, which is isotonic regression in its min-max form.
    """
    order = np.argsort(heights, kind="stable")
    steps = least * np.arange(len(order))
    wanted = np.asarray(heights, dtype=float)[order] - steps
    n = len(wanted)
    settled = [
        max(min(wanted[j : k + 1].mean() for k in range(i, n)) for j in range(i + 1))
        for i in range(n)
    ]
    result = np.empty(n)
    result[order] = np.clip(settled, 0.0, max(0.0, 1.0 - least * (n - 1))) + steps
    return result


def spacing(ax: Axes, size: float) -> float:
    """Distance of names of a size below each other, as a share of the height of the axes."""
    return float(APART * size * ax.figure.dpi / 72 / ax.bbox.height)


def names_at_right(
    ax: Axes, names: Sequence[str], ends: Sequence[tuple[float, float]], size: float = LABEL_SIZE
) -> None:
    """Name curves at the right of the axes, each with a thin line to where its curve ends.

    Ends are in units of the data; the vertical scale must have been set before.
    """
    if not names:
        return
    from matplotlib.transforms import ScaledTranslation

    low, high = ax.get_ylim()
    inside = [(x, float(np.clip(y, low, high))) for x, y in ends]
    shares = ax.transAxes.inverted().transform(ax.transData.transform(inside))[:, 1]
    beside = ax.transAxes + ScaledTranslation(TO_NAMES / 72, 0, ax.figure.dpi_scale_trans)
    line = {"arrowstyle": "-", "linewidth": 0.7, "linestyle": ":", "color": "0.3"}
    for name, end, height in zip(names, inside, apart(shares, spacing(ax, size)), strict=True):
        ax.annotate(
            name,
            end,
            xytext=(1.0, height),
            textcoords=beside,
            fontsize=size,
            va="center",
            arrowprops={**line, "relpos": (0, 0.5), "patchA": None, "shrinkA": 1, "shrinkB": 0},
            annotation_clip=False,
        )


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
            arrowprops={**line, "patchA": None, "shrinkB": 0},
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
