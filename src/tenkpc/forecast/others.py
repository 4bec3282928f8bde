"""The same forecast with other flavour conversions, other bursts, and disputed cross sections."""

from __future__ import annotations

from collections.abc import Iterator
from typing import NamedTuple, TypeVar

from tenkpc import interactions
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


class OtherOption(NamedTuple):
    """What one interaction would count under another of its options.

    No option stands for the package's own, where a file has one in its place.
    """

    key: str
    option: str
    counted: float


def other_options(forecast: Evaluation) -> Iterator[OtherOption]:
    """Count disputed interactions under their other options, and those that a file replaces."""
    chosen = {**forecast.detector.interactions, **forecast.interactions}
    for key in interactions.DISPUTED:
        if key not in forecast.keys or key in {own.key for own in forecast.detector.own}:
            continue
        options = interactions.OPTIONS[key]
        now = chosen.get(key, options[0])
        for option in options:
            if option != (now if isinstance(now, str) else options[0]):
                yield OtherOption(key, option, _alone(forecast, key, option))
    for key in sorted(forecast.detector.replaced):
        yield OtherOption(key, "", _alone(forecast, key, True))


def _alone(forecast: Evaluation, key: str, value: bool | str) -> float:
    """Count one interaction and no other."""
    switched = {**dict.fromkeys(forecast.detector.reactions, False), key: value}
    return forecast.changed(interactions=switched).total


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
