"""The same detector for a set of bursts: the least, the middle and the most that it counts."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from statistics import median
from typing import TYPE_CHECKING

from tenkpc import rendering
from tenkpc.forecast import words
from tenkpc.forecast.evaluation import Evaluation
from tenkpc.rendering import Page, Paragraph, Row, Table, decimals_for, number

if TYPE_CHECKING:
    from pandas import DataFrame


@dataclass(frozen=True)
class BurstRange:
    """Counts of one detector for several bursts, which have no probabilities.

    Attributes
    ----------
    forecasts
        one for each burst, in the order they were given.
    """

    forecasts: tuple[Evaluation, ...]

    @property
    def minimum(self) -> float:
        """The least of the totals."""
        return min(forecast.total for forecast in self.forecasts)

    @property
    def median(self) -> float:
        """The middle one of the totals."""
        return median(forecast.total for forecast in self.forecasts)

    @property
    def maximum(self) -> float:
        """The most of the totals."""
        return max(forecast.total for forecast in self.forecasts)

    @property
    def table(self) -> DataFrame:
        """Totals by burst, with the factor to the middle one."""
        from pandas import DataFrame, Index

        totals = [forecast.total for forecast in self.forecasts]
        index = Index([forecast.burst.title for forecast in self.forecasts], name="burst")
        factors = [total / (self.median or 1.0) for total in totals]
        return DataFrame({"counted": totals, "factor_to_median": factors}, index=index)

    def __repr__(self) -> str:
        return rendering.text(self._page())

    def _repr_html_(self) -> str:
        return rendering.html(self._page())

    def _page(self) -> Page:
        first = self.forecasts[0]
        decimals = decimals_for(self.median)
        least, middle, most = (
            number(value, decimals) for value in (self.minimum, self.median, self.maximum)
        )
        ranked: Sequence[Evaluation] = sorted(self.forecasts, key=lambda f: f.total)
        rows = tuple(Row((f.burst.title, number(f.total, decimals))) for f in ranked)
        return [
            Paragraph(
                f"{first.detector.title} counts {least} to {most} events, {middle} in the middle, "
                f"over {len(ranked)} {'bursts' if len(ranked) > 1 else 'burst'} at "
                f"{words.distance(first.distance_kpc)}, with "
                f"{first.conversion.describe()}. Bursts are possibilities without a probability: "
                "this is a range and no standard deviation."
            ),
            Table(rows, ("burst", "counted")),
        ]
