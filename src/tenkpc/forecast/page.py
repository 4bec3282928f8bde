"""The page of results: one sentence, the chain of losses, what is seen, how sure it is."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from tenkpc.forecast import budget, words
from tenkpc.forecast import compiled as columns
from tenkpc.forecast.evaluation import Evaluation
from tenkpc.forecast.others import (
    OtherOption,
    other_bursts,
    other_conversions,
    other_options,
)
from tenkpc.rendering import (
    GROUPS,
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

Floats = NDArray[np.float64]

# rows below this share of the total are collapsed into one line
SMALL_SHARE = 0.002
# a share of counts from outside a window that is worth a warning
MUCH_OUTSIDE = 0.05
# below this count the chance of seeing none is worth a word
FEW = 10
# how many interactions have their sources named at the foot of the page
SOURCES_FOR = 3


def results(forecast: Evaluation) -> Page:
    """Lay out the results of a forecast."""
    return [
        Paragraph(words.opening(forecast)),
        Paragraph(""),
        _chain(forecast),
        *_volumes(forecast),
        Paragraph(""),
        *_seen(forecast),
        Rule(),
        _uncertainty(forecast),
        *(Paragraph(line) for line in _warnings(forecast)),
        Rule(),
        *(Paragraph(line, small=True) for line in _foot(forecast)),
    ]


def assumptions(forecast: Evaluation) -> Page:
    """Lay out what went into a forecast, with the origin of every value."""
    facts = tuple(
        (name, f"{value} ({origin})") for name, value, origin in words.assumptions(forecast)
    )
    reactions = ((key, forecast.detector.reaction(key)) for key in forecast.keys)
    sources = tuple(
        (key, "; ".join(f"{r}, for {r.used_for}" for r in made.references))
        for key, made in reactions
    )
    return [
        Paragraph(words.opening(forecast)),
        Paragraph(""),
        Facts(facts),
        Rule(),
        Facts(sources),
    ]


def _chain(forecast: Evaluation) -> Block:
    decimals = decimals_for(forecast.total)
    names = ("reactions", "above threshold", "counted")
    steps = zip(names, forecast.chain, strict=True)
    return Paragraph("  →  ".join(f"{name} {number(value, decimals)}" for name, value in steps))


def _volumes(forecast: Evaluation) -> list[Block]:
    """Say what each volume counts, where there are several."""
    names = [volume.name for volume in forecast.detector.volumes]
    if len(names) == 1:
        return []
    counted = forecast.row_values[:, columns.FIRST_BIN :].sum(axis=1)
    sums = [
        sum(value for row, value in zip(forecast.rows, counted, strict=True) if row.volume == name)
        for name in names
    ]
    decimals = decimals_for(forecast.total)
    parts = (
        f"{number(value, decimals)} in {name}" for name, value in zip(names, sums, strict=True)
    )
    return [Paragraph(f"of these {', '.join(parts)}")]


def _seen(forecast: Evaluation) -> list[Block]:
    """Rows grouped by what the detector sees, the largest first, with small ones collapsed."""
    decimals, total = decimals_for(forecast.total), forecast.total or 1.0
    rows, small = [], []
    for seen_as, entries in _groups(forecast):
        counted = sum(entry.counted for entry in entries)
        if not seen_as or counted < SMALL_SHARE * total:
            small += entries
            continue
        rows.append(Row((seen_as, number(counted, decimals), percent(counted / total))))
        for entry in entries:
            share = entry.counted / total
            if share < SMALL_SHARE:
                small.append(entry)
                continue
            equation = forecast.detector.reaction(entry.key).equation
            cells = (equation, number(entry.counted, decimals))
            error = words.factor_or_percent(entry.error)
            rows.append(Row((*cells, percent(share), error), level=1, bar=share))
    table = Table(tuple(rows), ("seen as", "counted", "share", "cross section"))
    return [table, *_smaller(small, decimals, total), *_unseen(forecast)]


class _Entry(NamedTuple):
    """What one interaction gives to one way of being seen."""

    key: str
    counted: float
    error: float  # 1σ of the logarithm


def _groups(forecast: Evaluation) -> list[tuple[str, list[_Entry]]]:
    """Entries by what is seen, the largest group and the largest entry first."""
    sums: dict[tuple[str, str], Floats] = {}
    wanted = [columns.COUNTED_LOW, columns.COUNTED_HIGH]
    counted = forecast.row_values[:, columns.FIRST_BIN :].sum(axis=1)
    for row, value, ends in zip(
        forecast.rows, counted, forecast.row_values[:, wanted], strict=True
    ):
        place = row.seen_as, row.interaction
        sums[place] = sums.get(place, np.zeros(3)) + np.array([value, *ends])
    groups: dict[str, list[_Entry]] = {}
    for (seen_as, key), (value, low, high) in sums.items():
        error = 0.5 * math.log(high / low) if low > 0 else 0.0
        groups.setdefault(seen_as, []).append(_Entry(key, float(value), float(error)))
    for entries in groups.values():
        entries.sort(key=lambda entry: -entry.counted)
    return sorted(groups.items(), key=lambda group: -sum(e.counted for e in group[1]))


def _smaller(small: Sequence[_Entry], decimals: int, total: float) -> list[Block]:
    """Name what is too small for a row, with what it counts together."""
    few = sorted({entry.key for entry in small if entry.counted > 0})
    counted = sum(entry.counted for entry in small)
    together = f"{number(counted, decimals)}, {percent(counted / total)}"
    return [Paragraph(f"smaller, together {together}: {', '.join(few)}")] if few else []


def _unseen(forecast: Evaluation) -> list[Block]:
    """Name what the medium does not see at all."""
    seen = {row.interaction for row in forecast.rows if row.seen_as}
    unseen = sorted({row.interaction for row in forecast.rows if not row.seen_as})
    names = (f"part of {key}" if key in seen else key for key in unseen)
    return [Paragraph(f"not seen: {', '.join(names)}")] if unseen else []


def _uncertainty(forecast: Evaluation) -> Block:
    """Lines of uncertainty, each in counts and per cent; then ranges and background."""
    rows = [("chance", _chance(forecast))]
    for name, effects in (
        ("cross sections", budget.cross_sections(forecast)),
        ("detector", budget.detector(forecast)),
        ("mixing angles", budget.mixing(forecast)),
    ):
        fall, rise = budget.combined(effects)
        if fall or rise:
            rows.append((name, _error(fall, rise, forecast.total)))
        if name == "cross sections" and forecast.total > 0:
            rows.append(("both", _both(forecast)))
    if forecast.total > 0:
        for other in other_options(forecast):
            rows.append(("disputed" if other.option else "replaced", _otherwise(other)))
        rows.append(("other conversions", _factors(forecast, other_conversions(forecast))))
        rows.append(("other bursts", _factors(forecast, other_bursts(forecast))))
    if forecast.detector.backgrounds:
        rows.append(("background", _background(forecast)))
    return Facts(tuple(rows))


def _error(fall: float, rise: float, total: float) -> str:
    decimals, scale = decimals_for(max(fall, rise)), total or 1.0
    counts = f"− {number(fall, decimals)} + {number(rise, decimals)} in 68 % of cases"
    return f"{counts}, − {percent(fall / scale)} + {percent(rise / scale)}"


def _both(forecast: Evaluation) -> str:
    span = forecast.predictive
    return f"{number(span.low)} to {number(span.high)} in 68 % of bursts"


def _otherwise(other: OtherOption) -> str:
    counted = number(other.counted, decimals_for(other.counted))
    how = f"if {other.option.replace('-', ' ')}" if other.option else "of the package"
    return f"{counted} of {other.key} {how}"


def _factors(forecast: Evaluation, cases: Sequence[tuple[str, Evaluation]]) -> str:
    ratios = ((other.total / forecast.total, name) for name, other in cases)
    return ", ".join(f"×{GROUPS}{ratio:.2f}{GROUPS}{name}" for ratio, name in ratios)


def _background(forecast: Evaluation) -> str:
    events = forecast.background_events
    span = f"{forecast.live_s:.3g} s"
    return f"{number(events, decimals_for(events))} events in {span}, in no total"


def _chance(forecast: Evaluation) -> str:
    """Say how far chance alone scatters the count; for a few events, how often none is seen."""
    total, chance = forecast.total, forecast.chance
    span = f"{number(chance.low)} to {number(chance.high)} in 68 % of bursts"
    if total < FEW:
        return f"{span}, none at all in {percent(math.exp(-total))}"
    return f"{span}, ± {percent(0.5 * (chance.high - chance.low) / total)}"


def _warnings(forecast: Evaluation) -> list[str]:
    outside = forecast.by_interaction[:, columns.COUNTED_OUTSIDE]
    share = outside / np.maximum(forecast.counted, 1e-300)
    lines = [
        f"Beware: {percent(part)} of {key} comes from energies beyond its cross section's window."
        for key, part in zip(forecast.keys, share, strict=True)
        if part > MUCH_OUTSIDE
    ]
    if outside.sum() > MUCH_OUTSIDE * forecast.total > 0:
        part = percent(outside.sum() / forecast.total)
        lines.append(f"Beware: {part} of the total comes from beyond such windows.")
    return lines


def _foot(forecast: Evaluation) -> list[str]:
    outside = forecast.by_interaction[:, columns.COUNTED_OUTSIDE].sum() / (forecast.total or 1.0)
    sources = [
        f"{key}: {'; '.join(map(str, references))}."
        for key, references in words.largest_sources(forecast, SOURCES_FOR)
    ]
    return [
        *(f"Note: {note}" for note in forecast.burst.notes),
        *sources,
        f"From neutrino energies outside the cross sections' windows: {percent(outside)}.",
        f"Again: {words.command(forecast)}",
    ]
