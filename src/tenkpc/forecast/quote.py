"""A forecast in one sentence that can be quoted: number, errors, assumptions, sources."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from tenkpc import __version__
from tenkpc.forecast import budget, words
from tenkpc.rendering import number

if TYPE_CHECKING:
    from tenkpc.forecast.forecast import Forecast

# digits of the smallest error that are kept; the value gets as many decimals
ERROR_DIGITS = 2
# interactions whose sources are named
SOURCES_FOR = 3


def sentence(forecast: Forecast) -> str:
    """Say the result with everything that it depends on, rounded as its errors allow."""
    chance = 0.5 * (forecast.chance.high - forecast.chance.low)
    fall, rise = forecast.cross_section_error
    detector = [0.5 * sum(budget.combined(budget.detector(forecast)))]
    mixing = [0.5 * sum(budget.combined(budget.mixing(forecast)))]
    errors = [error for error in (chance, fall, rise, *detector, *mixing) if error > 0]
    place = _decimals(min(errors, default=1.0))
    words_of = [f"± {_rounded(chance, place)} (chance)"]
    words_of.append(f"+ {_rounded(rise, place)} − {_rounded(fall, place)} (cross sections)")
    if detector[0] > 0:
        words_of.append(f"± {_rounded(detector[0], place)} (detector)")
    if mixing[0] > 0:
        words_of.append(f"± {_rounded(mixing[0], place)} (mixing angles)")
    return (
        f"{forecast.detector.title} ({words.filling(forecast)}) is expected to count "
        f"{_rounded(forecast.total, place)} {' '.join(words_of)} events, "
        f"{words.threshold(forecast)}, from the burst “{forecast.burst.title}” at "
        f"{words.distance(forecast.distance_kpc)}{words.window_clause(forecast)} with "
        f"{forecast.conversion.describe()} (tenkpc {__version__}; {_sources(forecast)})."
    )


def _decimals(smallest_error: float) -> int:
    """Decimals that leave two digits of the smallest error; negative for tens and hundreds."""
    return ERROR_DIGITS - 1 - math.floor(math.log10(smallest_error))


def _rounded(value: float, decimals: int) -> str:
    return number(round(value, decimals), max(decimals, 0))


def _sources(forecast: Forecast) -> str:
    """Name the sources of the largest contributions."""
    return "; ".join(
        f"{key}: {', '.join(str(source) for source in sources)}"
        for key, sources in words.largest_sources(forecast, SOURCES_FOR)
    )
