"""The page of results: one sentence, the chain of losses, what is seen, how sure it is."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from tenkpc import interactions
from tenkpc.forecast import compiled as columns
from tenkpc.forecast import words
from tenkpc.forecast.conversions import others
from tenkpc.rendering import (
    Block,
    Facts,
    Page,
    Paragraph,
    Row,
    Rule,
    Table,
    decimals_for,
    number,
    percent,
)

if TYPE_CHECKING:
    from tenkpc.forecast.forecast import Forecast

Floats = NDArray[np.float64]

# rows below this share of the total are collapsed into one line
SMALL_SHARE = 0.002
# a share of counts from outside a window that is worth a warning
MUCH_OUTSIDE = 0.05
# below this count the chance of seeing none is worth a word
FEW = 10
# how many interactions have their sources named at the foot of the page
SOURCES_FOR = 3


def results(forecast: Forecast) -> Page:
    """Lay out the results of a forecast."""
    return [
        Paragraph(words.opening(forecast)),
        Paragraph(""),
        _chain(forecast),
        Paragraph(""),
        _seen(forecast),
        Rule(),
        _uncertainty(forecast),
        *(Paragraph(line) for line in _warnings(forecast)),
        Rule(),
        *(Paragraph(line, small=True) for line in _foot(forecast)),
    ]


def assumptions(forecast: Forecast) -> Page:
    """Lay out what went into a forecast, with the origin of every value."""
    facts = tuple(
        (name, f"{value} ({origin})") for name, value, origin in words.assumptions(forecast)
    )
    sources = tuple(
        (key, "; ".join(f"{r}, for {r.used_for}" for r in interactions.by_key(key).references))
        for key in forecast.keys
    )
    return [
        Paragraph(words.opening(forecast)),
        Paragraph(""),
        Facts(facts),
        Rule(),
        Facts(sources),
    ]


def _chain(forecast: Forecast) -> Block:
    decimals = decimals_for(forecast.total)
    names = ("reactions", "above threshold", "counted")
    steps = zip(names, forecast.chain, strict=True)
    return Paragraph("  →  ".join(f"{name} {number(value, decimals)}" for name, value in steps))


def _seen(forecast: Forecast) -> Block:
    """Rows grouped by what the detector sees, the largest first, with small ones collapsed."""
    counted, error = _counted(forecast), _relative_error(forecast)
    decimals = decimals_for(forecast.total)
    total = forecast.total or 1.0
    groups: dict[str, list[int]] = {}
    for place in np.argsort(-counted, kind="stable"):
        groups.setdefault(interactions.by_key(forecast.keys[place]).seen_as, []).append(place)
    rows, small = [], []
    for seen_as, members in sorted(groups.items(), key=lambda g: -counted[g[1]].sum()):
        sum_ = counted[members].sum()
        if sum_ < SMALL_SHARE * total:
            small += members
            continue
        rows.append(Row((seen_as, number(sum_, decimals), percent(sum_ / total))))
        for place in members:
            share = counted[place] / total
            cells = (_equation(forecast, place), number(counted[place], decimals), percent(share))
            rows.append(Row((*cells, f"± {percent(error[place])}"), level=1, bar=share))
    if small:
        sum_ = counted[small].sum()
        name = f"{len(small)} smaller: {', '.join(forecast.keys[place] for place in small)}"
        rows.append(Row((name, number(sum_, decimals), percent(sum_ / total))))
    return Table(tuple(rows), ("seen as", "counted", "share", "cross section"))


def _uncertainty(forecast: Forecast) -> Block:
    scale = forecast.total or 1.0
    fall, rise = forecast.cross_section_error
    decimals = decimals_for(max(fall, rise))
    rows = [
        ("chance", _chance(forecast)),
        (
            "cross sections",
            f"− {number(fall, decimals)} + {number(rise, decimals)} in 68 % of cases,"
            f" − {percent(fall / scale)} + {percent(rise / scale)}",
        ),
    ]
    if forecast.total > 0:
        factors = [f"× {other.total / scale:.2f} {name}" for name, other in others(forecast)]
        rows.append(("other conversions", ", ".join(factors)))
    return Facts(tuple(rows))


def _chance(forecast: Forecast) -> str:
    """Say how far chance alone scatters the count; for a few events, how often none is seen."""
    total, chance = forecast.total, forecast.chance
    span = f"{number(chance.low)} to {number(chance.high)} in 68 % of bursts"
    if total < FEW:
        return f"{span}, none at all in {percent(math.exp(-total))}"
    return f"{span}, ± {percent(0.5 * (chance.high - chance.low) / total)}"


def _warnings(forecast: Forecast) -> list[str]:
    outside = forecast.values[:, columns.COUNTED_OUTSIDE]
    share = outside / np.maximum(_counted(forecast), 1e-300)
    lines = [
        f"Beware: {percent(part)} of {key} comes from energies beyond its cross section's window."
        for key, part in zip(forecast.keys, share, strict=True)
        if part > MUCH_OUTSIDE
    ]
    if outside.sum() > MUCH_OUTSIDE * forecast.total > 0:
        part = percent(outside.sum() / forecast.total)
        lines.append(f"Beware: {part} of the total comes from beyond such windows.")
    return lines


def _foot(forecast: Forecast) -> list[str]:
    largest = np.argsort(-_counted(forecast), kind="stable")[:SOURCES_FOR]
    outside = forecast.values[:, columns.COUNTED_OUTSIDE].sum() / (forecast.total or 1.0)
    sources = [
        f"{forecast.keys[place]}: {'; '.join(map(str, _references(forecast, place)))}."
        for place in largest
    ]
    return [
        *(f"Note: {note}" for note in forecast.burst.notes),
        *sources,
        f"From neutrino energies outside the cross sections' windows: {percent(outside)}.",
        f"Again: {words.command(forecast)}",
    ]


def _counted(forecast: Forecast) -> Floats:
    counted: Floats = forecast.values[:, columns.FIRST_BIN :].sum(axis=1)
    return counted


def _relative_error(forecast: Forecast) -> Floats:
    """Half the distance between 1σ low and high, relative to the count."""
    low, high = (forecast.values[:, c] for c in (columns.COUNTED_LOW, columns.COUNTED_HIGH))
    relative: Floats = 0.5 * (high - low) / np.maximum(_counted(forecast), 1e-300)
    return relative


def _equation(forecast: Forecast, place: int) -> str:
    return interactions.by_key(forecast.keys[place]).equation


def _references(forecast: Forecast, place: int) -> tuple[object, ...]:
    return interactions.by_key(forecast.keys[place]).references
