"""The detector file: which keys there are, in which units, and which rules tie them together.

Shorthands (`threshold = "5 MeV"`, `efficiency = "94 %"`) are written out before the check, so
that a key means the same however it was written. The model only checks; what the numbers mean
is decided in `tenkpc.detector.detector`.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping
from typing import Annotated, Any, Literal

from pydantic import BeforeValidator, Field

from tenkpc import interactions
from tenkpc.detector import materials
from tenkpc.errors import InputError, suggestion
from tenkpc.fields import Density, Energy, Fraction, Mass
from tenkpc.textfiles import Strict

Problems = Iterable[tuple[tuple[str | int, ...], str]]


def _written_out(value: Any) -> Any:
    """Turn a bare value into the table that it is short for."""
    return value if isinstance(value, dict) else {"value": value}


def _of_material(name: str) -> materials.Composition:
    return materials.of_formula(materials.named(name).formula)


# ways to say what a volume is made of
COMPOSITIONS: Mapping[str, Callable[[Any], materials.Composition]] = {
    "material": _of_material,
    "formula": materials.of_formula,
    "mass_fractions": materials.of_mass_fractions,
}


class ThresholdKeys(Strict):
    """`threshold`: an energy, or an energy and the kind of energy it is given in."""

    value: Energy
    of: Literal["kinetic", "total"] | None = None


class ResolutionKeys(Strict):
    """`resolution`: σ/E = a/√(E/MeV) ⊕ b ⊕ c/E, added in quadrature or linearly."""

    stochastic: Annotated[float, Field(ge=0, le=10)] = 0.0
    constant: Annotated[float, Field(ge=0, le=10)] = 0.0
    noise: Energy = 0.0
    combine: Literal["quadrature", "linear"] = "quadrature"


class EfficiencyKeys(Strict):
    """`efficiency`: a share, or points of a curve, in the file or in a table beside it."""

    value: Fraction | None = None
    points: tuple[tuple[Energy, Fraction], ...] | None = None
    file: str | None = None
    of: Literal["observed", "true"] = "observed"
    beyond: Literal["error", "hold", "zero"] = "error"

    @classmethod
    def cross_rules(cls, raw: Mapping[str, Any]) -> Problems:
        """Check that the efficiency is given in exactly one way."""
        given = [key for key in ("value", "points", "file") if key in raw]
        if len(given) != 1:
            yield (), f"give one of value, points and file; found {' and '.join(given) or 'none'}"


class ResponseKeys(Strict):
    """`[response]`: what the instrument makes of an event."""

    medium: Literal["cherenkov"]
    energy: Literal["kinetic", "total"] = "total"
    threshold: Annotated[ThresholdKeys, BeforeValidator(_written_out)] | None = None
    resolution: ResolutionKeys = ResolutionKeys()
    efficiency: Annotated[EfficiencyKeys, BeforeValidator(_written_out)] | None = None
    live_fraction: Fraction = 1.0


class VolumeKeys(Strict):
    """`[[volume]]`: so much of one material."""

    name: Annotated[str, Field(min_length=1)]
    mass: Mass
    material: str | None = None
    formula: str | None = None
    mass_fractions: dict[str, float] | None = None
    density: Density | None = None

    @classmethod
    def cross_rules(cls, raw: Mapping[str, Any]) -> Problems:
        """Check that the composition is given in exactly one way, and can be read."""
        given = [key for key in COMPOSITIONS if key in raw]
        if len(given) != 1:
            found = " and ".join(given) or "none"
            yield (), f"give one of {', '.join(COMPOSITIONS)}; found {found}"
        for key in given:
            try:
                COMPOSITIONS[key](raw[key])
            except InputError as error:
                yield (key,), str(error)
            except (TypeError, AttributeError):
                continue  # not even of the right type, which is reported already


class DetectorKeys(Strict):
    """A whole detector file."""

    title: Annotated[str, Field(min_length=1)]
    about: str = ""
    volume: tuple[VolumeKeys, ...]
    response: ResponseKeys
    interactions: dict[str, bool | float | str] = Field(default_factory=dict)

    @classmethod
    def cross_rules(cls, raw: Mapping[str, Any]) -> Problems:
        """Check that names of volumes differ and interactions exist, with options they have."""
        seen: set[str] = set()
        volumes = raw.get("volume")
        if volumes == []:
            yield ("volume",), "expected at least one volume"
        for place, volume in enumerate(volumes if isinstance(volumes, list) else []):
            name = volume.get("name") if isinstance(volume, dict) else None
            if isinstance(name, str) and name in seen:
                yield ("volume", place, "name"), f"two volumes are called {name!r}"
            seen.add(name if isinstance(name, str) else "")
        switched = raw.get("interactions")
        for key, value in (switched if isinstance(switched, dict) else {}).items():
            try:
                check_choice(key, value)
            except InputError as error:
                yield ("interactions", key), str(error)


def check_choice(key: str, value: object) -> None:
    """Check one line of ``[interactions]``: a switch, a factor or the name of an option.

    Raises
    ------
    InputError
        where there is no such interaction or option, or the factor is not a positive number.
    """
    if key not in interactions.KEYS:
        known = ", ".join(interactions.KEYS)
        message = f"no interaction has this key{suggestion(key, interactions.KEYS)}; known: {known}"
        raise InputError(message)
    if isinstance(value, bool):
        return
    if isinstance(value, str):
        options = interactions.OPTIONS.get(key, ())
        if value not in options:
            allowed = ", ".join(options) or "none"
            message = (
                f"no option is called {value!r}{suggestion(value, options)}; there are: {allowed}"
            )
            raise InputError(message)
        return
    if not isinstance(value, int | float) or not 0 < value < float("inf"):
        message = f"expected true, false, an option or a positive factor, found {value!r}"
        raise InputError(message)
