"""Flux of a burst at the detector: emission, flavour conversion, and distance."""

from __future__ import annotations

import math
from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from tenkpc.constants import CM_PER_KPC
from tenkpc.forecast.fold import BLOCK
from tenkpc.forecast.grid import panel_nodes
from tenkpc.propagation.conversion import Conversion
from tenkpc.quadrature import gauss
from tenkpc.source.burst import Burst

Floats = NDArray[np.float64]
Window = tuple[float, float]

# nodes in each panel of time: 3e-6 on every preset
PER_TIME_PANEL = 8
# nodes in short panels, against the length of the burst's own panel they lie in
SHORT_PANELS = ((0.1, 3), (0.3, 5))


def time_nodes(burst: Burst, window: Window) -> tuple[Floats, Floats]:
    """Times and weights that integrate a burst over a window, both (times,), s."""
    panels = burst.time_panels()
    inside = panels[(panels > window[0]) & (panels < window[1])]
    return panel_nodes(np.array([window[0], *inside, window[1]]), PER_TIME_PANEL)


def binned_time_nodes(
    burst: Burst, edges_s: Floats, window: Window
) -> Iterator[tuple[Floats, Floats, NDArray[np.intp]]]:
    """Times, weights and bin of each time that integrate a burst over every bin, in blocks.

    Bins are cut at the panels of the burst and at the window; a cut much shorter than its panel
    needs fewer nodes.
    """
    panels = burst.time_panels()
    borders = np.unique(np.concatenate([edges_s, panels, window]))
    inside = (borders >= max(edges_s[0], window[0])) & (borders <= min(edges_s[-1], window[1]))
    low, high = borders[inside][:-1], borders[inside][1:]
    own = np.clip(np.searchsorted(panels, 0.5 * (low + high)) - 1, 0, len(panels) - 2)
    share = (high - low) / np.diff(panels)[own]
    most, order = zip(*SHORT_PANELS, strict=True)
    orders = np.select([share <= limit for limit in most], order, PER_TIME_PANEL)
    for n in np.unique(orders):
        times, weights = _nodes_of(low[orders == n], high[orders == n], int(n))
        places = np.searchsorted(edges_s, times, "right") - 1
        for start in range(0, len(times), BLOCK):
            block = slice(start, start + BLOCK)
            yield times[block], weights[block], places[block]


def _nodes_of(low: Floats, high: Floats, order: int) -> tuple[Floats, Floats]:
    """Nodes and weights of stretches that need not touch, both (stretches × order,)."""
    x, w = gauss(order)
    length = (high - low)[:, None]
    return (low[:, None] + length * x).ravel(), (length * w).ravel()


def emission(burst: Burst, energy_mev: Floats, window: Window) -> tuple[Floats, Floats]:
    """Emitted spectra of one kind each, already times their weights, and the times they are for.

    Returns
    -------
    spectra
        shape (species, times, energies), MeV⁻¹: summed over times it is the emitted number.
    times
        shape (times,), s; a single zero for a burst without a time profile.
    """
    if burst.time_integrated:
        return burst.emitted(energy_mev)[:, None, :], np.zeros(1)
    times, weights = time_nodes(burst, window)
    return burst.rate(times, energy_mev) * weights[:, None], times


def at_detector(
    spectra: Floats, conversion: Conversion, distance_kpc: float, energy_mev: Floats, time_s: Floats
) -> Floats:
    """Convert flavours and spread over a sphere: Φ = F/(4πD²), same shape, cm⁻² per unit."""
    area = 4 * math.pi * (distance_kpc * CM_PER_KPC) ** 2
    return conversion.arriving(spectra, energy_mev, time_s) / area
