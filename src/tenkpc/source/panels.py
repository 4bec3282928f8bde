"""Panels of time on which the emission of a burst is integrated."""

from __future__ import annotations

from collections.abc import Callable, Iterable

import numpy as np
from numpy.typing import NDArray

from tenkpc.quadrature import gauss

Floats = NDArray[np.float64]
OfTime = Callable[[Floats], Floats]

ORDER = 8
EARLY_S = 0.06
# each panel may miss this share of the whole; a handful of them at it stay below 3e-6
PANEL_ERROR = 3e-7
MOST_HALVINGS = 40


def time_panels(start_s: float, end_s: float, joints_s: Iterable[float], probe: OfTime) -> Floats:
    """Edges of time panels for 8 Gauss-Legendre points each, good to 3e-6.

    Panels break at the joints and at 60 ms after bounce, then wherever the time doubles. A panel
    whose 8 points miss what twice 8 points in its halves give is halved, as often as it takes.

    Parameters
    ----------
    start_s, end_s
        first and last edge, s.
    joints_s
        times in s at which the emission is not smooth.
    probe
        some positive functions of time, shape (functions, times), that stand for all that will
        be integrated.
    """
    doubled = EARLY_S * 2.0 ** np.arange(int(np.log2(max(end_s, EARLY_S) / EARLY_S)) + 1)
    # to the picosecond, lest two joints that differ by a rounding make a panel of their own
    inside = {round(float(t), 12) for t in (*joints_s, *doubled) if start_s < t < end_s}
    edges = np.array(sorted({start_s, end_s} | inside))
    for _ in range(MOST_HALVINGS):
        halved = np.sort(np.concatenate([edges, 0.5 * (edges[1:] + edges[:-1])]))
        coarse, fine = panel_integrals(probe, edges), panel_integrals(probe, halved)
        miss = np.abs(coarse - fine[:, ::2] - fine[:, 1::2])
        poor = np.any(miss > PANEL_ERROR * np.sum(fine, axis=1, keepdims=True), axis=0)
        if not poor.any():
            break
        edges = np.sort(np.concatenate([edges, halved[1::2][poor]]))
    return edges


def panel_integrals(function: OfTime, edges_s: Floats) -> Floats:
    """Integrals of functions of time, (functions, times) → (functions, panels)."""
    x, w = gauss(ORDER)
    low, width = edges_s[:-1, None], np.diff(edges_s)[:, None]
    times = (low + width * x).ravel()
    values = function(times).reshape(-1, len(edges_s) - 1, ORDER)
    integrals: Floats = np.sum(width * w * values, axis=-1)
    return integrals
