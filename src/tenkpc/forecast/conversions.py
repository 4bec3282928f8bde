"""The same forecast with the other flavour conversions."""

from __future__ import annotations

from typing import TYPE_CHECKING

from tenkpc.propagation.conversion import Adiabatic, Conversion, Equilibrated, Unconverted

if TYPE_CHECKING:
    from tenkpc.forecast.forecast import Forecast

CASES: tuple[tuple[str, Conversion], ...] = (
    ("unconverted", Unconverted()),
    ("normal ordering", Adiabatic("normal")),
    ("inverted ordering", Adiabatic("inverted")),
    ("equilibrated", Equilibrated()),
)


def others(forecast: Forecast) -> list[tuple[str, Forecast]]:
    """Name every other conversion, with the same forecast under it."""
    return [(name, forecast.converted(case)) for name, case in CASES if case != forecast.conversion]
