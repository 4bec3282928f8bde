"""Tables of a forecast as pandas frames, which only those who ask for one have to load."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from tenkpc.forecast import compiled as columns

if TYPE_CHECKING:
    from pandas import DataFrame

    from tenkpc.detector.background import Background

Floats = NDArray[np.float64]
Keys = Sequence[str]


def named(values: Floats, *, neutrons: bool = False) -> dict[str, Floats]:
    """Columns of the tensor under the names that users see; values are (rows, columns)."""
    counted = values[:, columns.FIRST_BIN :].sum(axis=1)
    outside = values[:, columns.COUNTED_OUTSIDE]
    share = np.divide(outside, counted, out=np.zeros_like(counted), where=counted > 0)
    registered = {"neutrons": values[:, columns.NEUTRONS]} if neutrons else {}
    return {
        "reactions": values[:, columns.REACTIONS],
        "above_threshold": values[:, columns.ABOVE_THRESHOLD],
        "counted": counted,
        **registered,
        "cross_section_low": values[:, columns.COUNTED_LOW],
        "cross_section_high": values[:, columns.COUNTED_HIGH],
        "outside_window": share,
    }


def counts(keys: Keys, values: Floats, *, neutrons: bool) -> DataFrame:
    """Events by interaction, from (interactions, columns)."""
    from pandas import DataFrame, Index

    return DataFrame(named(values, neutrons=neutrons), index=Index(keys, name="interaction"))


def breakdown(rows: Sequence[columns.Row], values: Floats, *, neutrons: bool) -> DataFrame:
    """Events by volume, interaction, final state and species, from (rows, columns)."""
    from pandas import DataFrame, MultiIndex

    names = ("volume", "interaction", "final_state", "species")
    index = [tuple(getattr(row, name) for name in names) for row in rows]
    seen_as = [row.seen_as or "not seen" for row in rows]
    table = {"seen_as": seen_as, **named(values, neutrons=neutrons)}
    return DataFrame(table, index=MultiIndex.from_tuples(index, names=names))


def spectrum(
    keys: Keys, values: Floats, edges_mev: Floats, kind: str, background: Floats | None
) -> DataFrame:
    """Events by bin of energy, from (interactions, bins + 1), the last bin open."""
    widths = np.append(np.diff(edges_mev), np.inf)
    frame = _binned(keys, values, edges_mev, widths, ("energy_mev", "width_mev"), background)
    frame.attrs["energy"] = kind
    return frame


def light_curve(
    keys: Keys, values: Floats, edges_s: Floats, background_hz: float | None
) -> DataFrame:
    """Events by bin of time, from (interactions, bins)."""
    widths = np.diff(edges_s)
    background = None if background_hz is None else background_hz * widths
    return _binned(keys, values, edges_s[:-1], widths, ("time_s", "width_s"), background)


def background(sources: Sequence[Background], rates_hz: Floats, live_s: float) -> DataFrame:
    """Rates and events of each background."""
    from pandas import DataFrame, Index

    index = Index([source.name for source in sources], name="background")
    table = {"rate_hz": rates_hz, "live_s": live_s, "counted": rates_hz * live_s}
    return DataFrame(table, index=index)


def versus_distance(keys: Keys, values: Floats, distances_kpc: Floats) -> DataFrame:
    """Events by distance, from (interactions, distances), with their total."""
    from pandas import DataFrame, Index

    index = Index(distances_kpc, name="distance_kpc")
    table = dict(zip(keys, values, strict=True))
    return DataFrame({**table, "total": values.sum(axis=0)}, index=index)


def _binned(
    keys: Keys,
    values: Floats,
    left: Floats,
    widths: Floats,
    names: tuple[str, str],
    background: Floats | None,
) -> DataFrame:
    from pandas import DataFrame, Index

    table = {names[1]: widths, **dict(zip(keys, values, strict=True))}
    if background is not None:
        table["background"] = background
    return DataFrame(table, index=Index(left, name=names[0]))
