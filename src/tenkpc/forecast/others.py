"""The same forecast with the other flavour conversions, and with the other bursts."""

from __future__ import annotations

from typing import TYPE_CHECKING

from tenkpc.propagation.conversion import Adiabatic, Conversion, Equilibrated, Unconverted
from tenkpc.source.burst import Burst

if TYPE_CHECKING:
    from tenkpc.forecast.forecast import Forecast

CASES: tuple[tuple[str, Conversion], ...] = (
    ("unconverted", Unconverted()),
    ("normal ordering", Adiabatic("normal")),
    ("inverted ordering", Adiabatic("inverted")),
    ("equilibrated", Equilibrated()),
)


def other_conversions(forecast: Forecast) -> list[tuple[str, Forecast]]:
    """Name every other conversion, with the same forecast under it."""
    return [(name, forecast.converted(case)) for name, case in CASES if case != forecast.conversion]


def other_bursts(forecast: Forecast) -> list[tuple[str, Forecast]]:
    """Name every burst of the package but this one, with the same forecast of it.

    A burst that knows no time cannot be cut to a window, so it is left out where one is set.
    """
    made = [(name, Burst.preset(name)) for name in Burst.presets()]
    cut = forecast.window_s is not None
    return [
        (name, forecast.of(burst))
        for name, burst in made
        if burst != forecast.burst and not (cut and burst.time_integrated)
    ]
