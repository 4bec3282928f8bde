"""What spectrum and light curve share: columns ranked by counts, and the panel of factors."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from tenkpc.forecast.forecast import Forecast
from tenkpc.show.marks import FOOT_SIZE, MOST_NAMES, colour, names_at_right

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from pandas import DataFrame

Floats = NDArray[np.float64]

# factors are drawn where a bin holds at least this share of the counts
MATTERS = 1e-3


def signal(frame: DataFrame, forecast: Forecast) -> Floats:
    """All counted events of each bin, background left out."""
    total: Floats = frame[list(forecast.keys)].sum(axis=1).to_numpy()
    return total


def background_of(frame: DataFrame) -> Floats:
    """Background of each bin; zeros where there is none."""
    if "background" in frame.columns:
        return np.asarray(frame["background"].to_numpy())
    return np.zeros(len(frame))


def ranked(frame: DataFrame) -> tuple[list[str], Floats]:
    """Names of what is seen and its counts by bin, the largest first, the smallest as one."""
    columns = [name for name in frame.columns[1:] if name != "background"]
    sums = frame[columns].sum().sort_values(ascending=False)
    largest = [str(name) for name in sums[sums > 0].index]
    if not largest:
        return ["nothing is counted"], np.zeros((1, len(frame)))
    names, rest = largest[:MOST_NAMES], largest[MOST_NAMES:]
    parts = [frame[name].to_numpy() for name in names]
    if rest:
        parts.append(frame[rest].sum(axis=1).to_numpy())
        names.append(f"{len(rest)} smaller")
    return names, np.array(parts)


def factors(ax: Axes, totals: Sequence[tuple[str, Floats]], own: Floats, edges: Floats) -> None:
    """Draw other conversions relative to this one where counts are, each line named at its end."""
    enough = own > own.sum() * MATTERS
    if not enough.any():
        return
    curves = np.array(
        [np.where(enough, other / np.where(enough, own, 1.0), np.nan) for _, other in totals]
    )
    low, high = min(np.nanmin(curves), 1.0), max(np.nanmax(curves), 1.0)
    margin = 0.08 * (high - low + 0.1)
    for rank, curve in enumerate(curves):
        ax.stairs(curve, edges, color=colour(rank + 2), linewidth=1.2, baseline=None)
    ax.axhline(1.0, color="0.3", linewidth=0.6)
    ax.set_ylim(low - margin, high + margin)
    ax.set_ylabel("factor")
    last = int(np.flatnonzero(enough)[-1])
    ends = [(float(edges[last + 1]), float(curve[last])) for curve in curves]
    names_at_right(ax, [name for name, _ in totals], ends, FOOT_SIZE)
