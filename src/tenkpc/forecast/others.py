"""The same forecast with the other flavour conversions, and with the other bursts."""

from __future__ import annotations

from typing import TypeVar

from tenkpc.forecast.evaluation import Evaluation
from tenkpc.propagation.conversion import Adiabatic, Conversion, Equilibrated, Unconverted
from tenkpc.source.burst import Burst

Made = TypeVar("Made", bound=Evaluation)

CASES: tuple[tuple[str, Conversion], ...] = (
    ("unconverted", Unconverted()),
    ("normal ordering", Adiabatic("normal")),
    ("inverted ordering", Adiabatic("inverted")),
    ("equilibrated", Equilibrated()),
)


def other_conversions(forecast: Made) -> list[tuple[str, Made]]:
    """Name every other conversion, with the same forecast under it."""
    return [(name, forecast.converted(case)) for name, case in CASES if case != forecast.conversion]


def other_bursts(forecast: Made) -> list[tuple[str, Made]]:
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
