"""Background events: how often, and how their observed energies are distributed.

A rate is what is recorded above the detector's threshold, so a shape is normalised there:

    share(a, b) = [C(b) − C(a)] / [C(∞) − C(threshold)],   threshold ≤ a < b

with C the running integral of the shape, in closed form.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from types import MappingProxyType
from typing import Any

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtr

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class Background:
    """One source of background.

    Attributes
    ----------
    name
        what it is called.
    rate_hz
        events recorded per second above the detector's threshold.
    cumulative
        running integral C of the shape against observed energy in MeV, up to a factor.
    """

    name: str
    rate_hz: float
    cumulative: Callable[[Floats], Floats]

    def above_hz(self, lowest_mev: float, threshold_mev: float) -> float:
        """Events per second above an energy, which counts where it is above the threshold."""
        start = np.array([max(lowest_mev, threshold_mev), np.inf])
        return self.rate_hz * float(self._share(start, threshold_mev)[0])

    def spectrum_hz(self, edges_mev: Floats, lowest_mev: float, threshold_mev: float) -> Floats:
        """Events per second by bin, then above the last edge, shape (bins + 1,).

        Parameters
        ----------
        edges_mev
            edges of the bins in observed energy, MeV.
        lowest_mev
            nothing below this energy is counted.
        threshold_mev
            the energy above which the rate is recorded.
        """
        cut = max(lowest_mev, threshold_mev)
        return self.rate_hz * self._share(
            np.append(np.maximum(edges_mev, cut), np.inf), threshold_mev
        )

    def _share(self, edges_mev: Floats, threshold_mev: float) -> Floats:
        threshold, end = self.cumulative(np.array([threshold_mev, np.inf]))
        share: Floats = np.diff(self.cumulative(edges_mev)) / (end - threshold)
        return share


def constant(energy_mev: Floats, start: float, end: float) -> Floats:
    """Flat from start to end, zero elsewhere."""
    return np.clip(energy_mev, start, end)


def exponential(energy_mev: Floats, mean: float) -> Floats:
    """Fall as exp(−E/mean)."""
    return np.asarray(-np.exp(-energy_mev / mean))


def gaussian(energy_mev: Floats, mean: float, width: float) -> Floats:
    """Peak at a mean, of a standard deviation."""
    return np.asarray(ndtr((energy_mev - mean) / width))


def power(energy_mev: Floats, index: float, start: float, end: float) -> Floats:
    """Follow E^index from start to end, zero elsewhere."""
    x = np.clip(energy_mev, start, end) / start
    return np.asarray(np.log(x) if index == -1 else x ** (index + 1) / (index + 1))


def table(energy_mev: Floats, energies: tuple[float, ...], densities: tuple[float, ...]) -> Floats:
    """Piecewise-linear density through points, zero outside them."""
    knots, density = np.array(energies), np.array(densities)
    steps = np.append(0.0, np.cumsum(0.5 * np.diff(knots) * (density[1:] + density[:-1])))
    x = np.clip(energy_mev, knots[0], knots[-1])
    at = np.clip(np.searchsorted(knots, x, "right") - 1, 0, len(knots) - 2)
    since = x - knots[at]
    slope = (density[at + 1] - density[at]) / (knots[at + 1] - knots[at])
    return np.asarray(steps[at] + since * (density[at] + 0.5 * slope * since))


# running integral of each shape, and the keys of a file that give its parameters
SHAPES: Mapping[str, tuple[Callable[..., Floats], tuple[str, ...]]] = MappingProxyType(
    {
        "constant": (constant, ("from", "to")),
        "exponential": (exponential, ("mean",)),
        "gaussian": (gaussian, ("mean", "width")),
        "power": (power, ("index", "from", "to")),
        "table": (table, ("file",)),
    }
)


def lies_above(cumulative: Callable[[Floats], Floats], threshold_mev: float) -> bool:
    """Say whether any of a shape lies above a threshold."""
    ends: Any = cumulative(np.array([threshold_mev, np.inf]))
    return bool(ends[1] > ends[0])
