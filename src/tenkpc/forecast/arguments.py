"""What users hand to a forecast, checked and turned into floats."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np
from numpy.typing import NDArray

from tenkpc import units
from tenkpc.detector.scales import MEV, Scale
from tenkpc.errors import InputError
from tenkpc.fields import labelled

Floats = NDArray[np.float64]
Quantity = Any  # a text such as "10 kpc" or a pint quantity
Window = tuple[float, float]

# bins at the most: 0.1 ms steps over 80 s
MOST_BINS = 1_000_000
# distances that a forecast can be of: outside of them nothing of it means anything
NEAREST_KPC, FARTHEST_KPC = 1e-9, 1e9
# bins of energy at the most
MOST_ENERGY_BINS = 10_000


def distance_kpc(distance: Quantity, argument: str = "distance") -> float:
    """Give a distance in kpc; it must be more than zero."""
    value = units.to_float(distance, "kpc", argument, "10 kpc")
    if not NEAREST_KPC <= value <= FARTHEST_KPC:
        span = f"{NEAREST_KPC:g} kpc and at most {FARTHEST_KPC:g} kpc"
        what = "more than zero" if value <= 0 else f"at least {span}"
        message = f"{argument}: expected {what}, found {distance}"
        raise InputError(message)
    return value


def check_kind(value: object, kind: type, argument: str, example: str) -> None:
    """Check that an argument is of the kind that it has to be.

    Raises
    ------
    InputError
        where it is another, with a good value.
    """
    if not isinstance(value, kind):
        message = f"{argument}: expected something like {example}, found {value!r}"
        raise InputError(message)


def energy_above_mev(energy: Quantity, scale: Scale) -> float:
    """Give a cut in observed energy in MeV; it must not be negative."""
    value = _energy_mev(energy, scale, "energy_above", strict=True)
    if value < 0:
        message = f"energy_above: expected zero or more, found {energy}"
        raise InputError(message)
    return value


def _energy_mev(energy: Quantity, scale: Scale, argument: str, *, strict: bool) -> float:
    """Give an energy in MeV whose unit says whose it is, where the detector has two kinds."""
    plain, label = labelled(energy)
    if label != scale.label and (label or strict):
        message = f"{argument}: this detector reports energies in {scale.unit}, found {energy!r}"
        raise InputError(message)
    return units.to_float(plain, "MeV", argument, f"10 {scale.unit}")


def background_time_s(time: Quantity | None) -> float | None:
    """Give the time for which background is counted in s; None leaves it to the burst."""
    if time is None:
        return None
    value = units.to_float(time, "s", "background_time", "20 s")
    if value < 0:
        message = f"background_time: expected zero or more, found {time}"
        raise InputError(message)
    return value


def window_s(time: tuple[Quantity, Quantity], burst: Window) -> Window:
    """Give the part of a window of time that lies within the burst, s."""
    if not _is_sequence(time) or len(time) != 2:
        message = f'time: expected a first and a last time, ("0 s", "1 s"), found {time!r}'
        raise InputError(message)
    start, end = (units.to_float(t, "s", "time", "1 s") for t in time)
    return window_of(start, end, burst)


def window_of(start: float, end: float, burst: Window) -> Window:
    """Give the part of a window in s that lies within the burst."""
    low, high = max(start, burst[0]), min(end, burst[1])
    if not low < high:
        message = (
            f"time: no part of {start:g} s to {end:g} s lies within the burst, "
            f"which runs from {burst[0]:g} s to {burst[1]:g} s"
        )
        raise InputError(message)
    return low, high


def time_edges_s(bins: Quantity | Sequence[Quantity], span: Window) -> Floats:
    """Edges of bins of time in s: as given, or multiples of a width that cover the span."""
    if _is_sequence(bins):
        return _ascending([units.to_float(t, "s", "bins", "20 ms") for t in bins])
    width = units.to_float(bins, "s", "bins", "20 ms")
    if not 0 < (span[1] - span[0]) <= MOST_BINS * width:
        message = f"bins: expected a width that makes at most {MOST_BINS} bins, found {bins}"
        raise InputError(message)
    first, last = np.floor(span[0] / width + 1e-9), np.ceil(span[1] / width - 1e-9)
    return np.arange(first, last + 1) * width


def energy_edges_mev(
    bins: Quantity | Sequence[Quantity] | None, scale: Scale = MEV
) -> tuple[float, ...]:
    """Edges of bins of energy in MeV, from zero: as given, or multiples of a width."""
    if bins is None:
        width = scale.bin_width_mev
    elif _is_sequence(bins):
        edges = _ascending([_energy_mev(e, scale, "bins", strict=False) for e in bins])
        if edges[0] < 0:
            message = "bins: an energy cannot be negative"
            raise InputError(message)
        return tuple(edges.tolist()) if edges[0] == 0 else (0.0, *edges.tolist())
    else:
        width = _energy_mev(bins, scale, "bins", strict=False)
    last = scale.last_edge_mev
    if not last / MOST_ENERGY_BINS <= width <= last:
        span = f"{scale.words(last / MOST_ENERGY_BINS)} and {scale.words(last)}"
        message = f"bins: expected a width between {span}, found {bins}"
        raise InputError(message)
    count = int(np.floor(last / width + 1e-9))
    return tuple((np.arange(count + 1) * width).tolist())


def _is_sequence(value: object) -> bool:
    return isinstance(value, Sequence | np.ndarray) and not isinstance(value, str)


def _ascending(edges: Sequence[float]) -> Floats:
    array = np.array(edges, dtype=float)
    if len(array) < 2 or np.any(np.diff(array) <= 0):
        message = "bins: expected at least two edges in ascending order"
        raise InputError(message)
    return array
