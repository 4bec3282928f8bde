"""A forecast in one sentence that can be quoted: number, errors, assumptions, sources."""

from __future__ import annotations

import math

from tenkpc import __version__
from tenkpc.forecast import budget, words
from tenkpc.forecast.evaluation import Evaluation
from tenkpc.rendering import number

# digits of the largest error that are kept; the value and the other errors go as far
ERROR_DIGITS = 2
# interactions whose sources are named
SOURCES_FOR = 3


def sentence(forecast: Evaluation) -> str:
    """Say the result with everything that it depends on, rounded as its errors allow."""
    errors = _errors(forecast)
    place = _decimals(max(max(pair) for pair in errors.values()))
    said = (_error(fall, rise, cause, place) for cause, (fall, rise) in errors.items())
    count = " ".join(filter(None, (_rounded(forecast.total, place), *said)))
    return (
        f"{forecast.detector.title} ({words.filling(forecast)}) is expected to count "
        f"{count} events {words.threshold(forecast)} from the burst “{forecast.burst.title}” at "
        f"{words.distance(forecast.distance_kpc)}{words.window_clause(forecast)} with "
        f"{forecast.conversion.describe()} (tenkpc {__version__}; {_sources(forecast)})."
    )


def _errors(forecast: Evaluation) -> dict[str, tuple[float, float]]:
    """Fall and rise of the total by cause."""
    chance = forecast.chance
    return {
        "chance": (forecast.total - chance.low, chance.high - forecast.total),
        "cross sections": budget.combined(budget.cross_sections(forecast)),
        "detector": budget.combined(budget.detector(forecast)),
        "mixing angles": budget.combined(budget.mixing(forecast)),
    }


def _error(fall: float, rise: float, cause: str, decimals: int) -> str:
    """Say an error, as one number where both sides round to the same; nothing where to zero."""
    low, high = _rounded(fall, decimals), _rounded(rise, decimals)
    if not round(fall, decimals) and not round(rise, decimals):
        return ""
    return f"± {low} ({cause})" if low == high else f"+ {high} − {low} ({cause})"


def _decimals(largest_error: float) -> int:
    """Decimals that leave two digits of the largest error; negative for tens and hundreds."""
    if largest_error <= 0:
        return 0
    return ERROR_DIGITS - 1 - math.floor(math.log10(largest_error))


def _rounded(value: float, decimals: int) -> str:
    return number(round(value, decimals), max(decimals, 0))


def _sources(forecast: Evaluation) -> str:
    """Name the sources of the largest contributions."""
    return "; ".join(
        f"{key}: {', '.join(str(source) for source in sources)}"
        for key, sources in words.largest_sources(forecast, SOURCES_FOR)
    )
