"""Forecasts what a detector records when a core-collapse supernova goes off nearby.

    from tenkpc import Burst, Detector, Forecast

    forecast = Forecast(
        Detector.gallery("mere-tank"), Burst.preset("ordinary-collapse"), distance="10 kpc"
    )
    forecast.total

The names below are loaded when they are first used, so that importing the package is quick.
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from tenkpc.detector.detector import Detector as Detector
    from tenkpc.forecast.forecast import Forecast as Forecast
    from tenkpc.propagation.conversion import Adiabatic as Adiabatic
    from tenkpc.propagation.conversion import Equilibrated as Equilibrated
    from tenkpc.propagation.conversion import Survival as Survival
    from tenkpc.propagation.conversion import Unconverted as Unconverted
    from tenkpc.source.burst import Burst as Burst

__version__ = "0.1.0"

_HOMES = {
    "Adiabatic": "tenkpc.propagation.conversion",
    "Burst": "tenkpc.source.burst",
    "Detector": "tenkpc.detector.detector",
    "Equilibrated": "tenkpc.propagation.conversion",
    "Forecast": "tenkpc.forecast.forecast",
    "Survival": "tenkpc.propagation.conversion",
    "Unconverted": "tenkpc.propagation.conversion",
}

__all__ = [
    "Adiabatic",
    "Burst",
    "Detector",
    "Equilibrated",
    "Forecast",
    "Survival",
    "Unconverted",
]


def __getattr__(name: str) -> Any:
    if name not in _HOMES:
        message = f"module 'tenkpc' has no attribute {name!r}"
        raise AttributeError(message)
    return getattr(import_module(_HOMES[name]), name)


def __dir__() -> list[str]:
    return [*__all__, "__version__"]
