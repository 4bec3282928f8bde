"""The budget of a count's uncertainty: one row per cause, in counts.

Rows are effects of 1σ of each cause on the total, down and up. Within a row everything moves
together, rows are independent of one another. The choice of burst and of flavour conversion is
not in it: these are sets of possibilities without a probability, given as ranges elsewhere.
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING, NamedTuple

from tenkpc.forecast import compiled as columns
from tenkpc.forecast.evaluation import Evaluation
from tenkpc.forecast.uncertainty import in_quadrature

if TYPE_CHECKING:
    from pandas import DataFrame


# effects below this share of the total are rounding
NOTHING = 1e-9


class Effect(NamedTuple):
    """What 1σ of one cause does to the total, in counts: both numbers positive as a rule."""

    cause: str
    kind: str
    fall: float
    rise: float
    together: str
    origin: str


def effects(forecast: Evaluation) -> Iterator[Effect]:
    """Every row of the budget: chance, cross sections, detector, mixing angles."""
    total, chance = forecast.total, forecast.chance
    falls = total - chance.low, chance.high - total
    yield Effect("chance", "chance", *falls, "independent in every bin", "Poisson distribution")
    yield from cross_sections(forecast)
    yield from detector(forecast)
    yield from mixing(forecast)


def cross_sections(forecast: Evaluation) -> Iterator[Effect]:
    """One row per interaction that counts anything."""
    rows = zip(forecast.keys, forecast.counted, forecast.by_interaction, strict=True)
    for key, value, row in rows:
        if value > 0:
            fall, rise = value - row[columns.COUNTED_LOW], row[columns.COUNTED_HIGH] - value
            source = str(forecast.detector.reaction(key).references[0])
            yield Effect(key, "cross section", fall, rise, "over all energies", source)


def detector(forecast: Evaluation) -> Iterator[Effect]:
    """Mass, efficiency and energy scale, where the detector's file gives an error."""
    made, total = forecast.detector, forecast.total
    for name, error in (("mass", made.mass_error), ("efficiency", made.efficiency_error)):
        if error:
            effect = error * total
            yield Effect(name, "detector", effect, effect, "everything", made.origin)
    if made.scale_error:
        low = float(forecast.by_interaction[:, columns.SCALE_LOW].sum())
        high = float(forecast.by_interaction[:, columns.SCALE_HIGH].sum())
        words = "bins move together"
        yield Effect("energy scale", "detector", total - low, high - total, words, made.origin)


def mixing(forecast: Evaluation) -> Iterator[Effect]:
    """One row per mixing angle that the conversion depends on."""
    total = forecast.total
    for name, low, high in forecast.conversion.within_errors():
        ends = [forecast.converted(end).total for end in (low, high)]
        fall, rise = total - min(ends), max(ends) - total
        if max(fall, rise) < NOTHING * total:
            continue  # the neutral current knows no flavours
        origin = forecast.conversion.describe()
        yield Effect(name, "mixing angle", fall, rise, "everything", origin)


def combined(rows: Iterator[Effect]) -> tuple[float, float]:
    """Fall and rise of several rows together, in quadrature."""
    found = list(rows)
    return in_quadrature(row.fall for row in found), in_quadrature(row.rise for row in found)


def frame(forecast: Evaluation) -> DataFrame:
    """Lay the budget out as a table, with per cent of the total beside the counts."""
    from pandas import DataFrame

    table = DataFrame(effects(forecast), columns=list(Effect._fields)).set_index("cause")
    scale = 100 / (forecast.total or 1.0)
    table.insert(3, "fall_percent", table["fall"] * scale)
    table.insert(4, "rise_percent", table["rise"] * scale)
    return table.rename(columns={"together": "correlated"})
