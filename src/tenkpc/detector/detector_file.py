"""The detector file: which keys there are, in which units, and which rules tie them together.

The models only check; what the numbers mean is decided in `tenkpc.detector.assembly`.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence
from types import MappingProxyType
from typing import Annotated, Any, Literal

from pydantic import Field

from tenkpc import interactions
from tenkpc.detector import energy_rules, materials
from tenkpc.detector.background import SHAPES
from tenkpc.detector.own_reactions import InteractionKeys, OwnNucleusKeys
from tenkpc.detector.response_file import OwnResponseKeys, ResponseKeys, joined
from tenkpc.errors import InputError, suggestion
from tenkpc.fields import BIRKS_PER_LENGTH, BirksConstant, Density, Energy, Fraction, Mass, Rate
from tenkpc.textfiles import Strict

Problems = Iterable[tuple[tuple[str | int, ...], str]]


def _of_material(name: str) -> materials.Composition:
    return materials.of_formula(materials.named(name).formula)


# no interaction is off by more
LARGEST_FACTOR = 1e6
# ways to say what a volume is made of
COMPOSITIONS: Mapping[str, Callable[[Any], materials.Composition]] = {
    "material": _of_material,
    "formula": materials.of_formula,
    "mass_fractions": materials.of_mass_fractions,
}


class VolumeKeys(Strict):
    """`[[volume]]`: so much of one material."""

    name: Annotated[str, Field(min_length=1)]
    mass: Mass
    material: str | None = None
    formula: str | None = None
    mass_fractions: dict[str, float] | None = None
    density: Density | None = None
    response: OwnResponseKeys | None = None

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


class BackgroundKeys(Strict):
    """`[[background]]`: events that are recorded without a burst, above the threshold."""

    name: Annotated[str, Field(min_length=1)]
    rate: Rate
    per: Mass | None = None
    shape: Literal["constant", "exponential", "gaussian", "power", "table"] | None = None
    start: Annotated[Energy | None, Field(alias="from")] = None
    end: Annotated[Energy | None, Field(alias="to")] = None
    mean: Energy | None = None
    width: Energy | None = None
    index: Annotated[float, Field(ge=-20, le=20)] | None = None
    file: str | None = None

    @classmethod
    def cross_rules(cls, raw: Mapping[str, Any]) -> Problems:
        """Check that a shape has its own keys and no others."""
        shape = raw.get("shape")
        if not isinstance(shape, str) or shape not in SHAPES:
            return
        mine = SHAPES[shape][1]
        for key in mine:
            if key not in raw:
                yield (key,), f"is missing; the shape {shape!r} needs {' and '.join(mine)}"
        for key in {key for _, keys in SHAPES.values() for key in keys} - {*mine}:
            if key in raw:
                yield (key,), f"does not belong to the shape {shape!r}, which has {', '.join(mine)}"


class UncertaintyKeys(Strict):
    """`[uncertainty]`: 1σ of what is known of the detector, relative."""

    mass: Fraction = 0.0
    efficiency: Fraction = 0.0
    energy_scale: Fraction = 0.0


class DetectorKeys(Strict):
    """A whole detector file."""

    title: Annotated[str, Field(min_length=1)]
    about: str = ""
    volume: tuple[VolumeKeys, ...]
    response: ResponseKeys
    background: tuple[BackgroundKeys, ...] = ()
    interaction: tuple[InteractionKeys, ...] = ()
    nucleus: tuple[OwnNucleusKeys, ...] = ()
    interactions: dict[str, bool | float | str] = Field(default_factory=dict)
    uncertainty: UncertaintyKeys = UncertaintyKeys()

    @classmethod
    def cross_rules(cls, raw: Mapping[str, Any]) -> Problems:
        """Check names, that interactions exist, and what the light of protons needs to know."""
        if raw.get("volume") == []:
            yield ("volume",), "expected at least one volume"
        for key in ("volume", "background"):
            yield from _twice(key, _tables(raw, key))
        own: dict[str, tuple[str, ...]] = {
            str(table.get("key")): () for table in _tables(raw, "interaction")
        }
        switched = raw.get("interactions")
        for key, value in (switched if isinstance(switched, dict) else {}).items():
            if key not in {**interactions.TARGETS, **own} and raw.get("nucleus"):
                continue  # a key of the nucleus's file, which is checked once that is read
            try:
                check_choice(key, value, own)
            except InputError as error:
                yield ("interactions", key), str(error)
        response = raw.get("response")
        if isinstance(response, dict) and (scale := energy_rules.scale_of(response)):
            yield from energy_rules.labels(_background_energies(raw), scale)
            counter = energy_rules.kind_of(response) == "none"
            yield from _shapes(_tables(raw, "background"), counter=counter)
        for place, volume in enumerate(_tables(raw, "volume")):
            own = volume.get("response", {})
            if isinstance(response, dict) and isinstance(own, dict):
                yield from _responses(place, volume, response, own)


def check_choice(
    key: str, value: object, own: Mapping[str, tuple[str, ...]] = MappingProxyType({})
) -> None:
    """Check one line of ``[interactions]``: a switch, a factor or the name of an option.

    ``own`` holds the options of a file's own reactions by their keys.

    Raises
    ------
    InputError
        where there is no such interaction or option, or the factor is not a positive number.
    """
    every = (*interactions.KEYS, *own)
    if key not in every:
        message = f"no interaction has this key{suggestion(key, every)}; known: {', '.join(every)}"
        raise InputError(message)
    if isinstance(value, bool):
        return
    if isinstance(value, str):
        options = own.get(key, interactions.OPTIONS.get(key, ()))
        if value not in options:
            allowed = ", ".join(options) or "none"
            message = (
                f"no option is called {value!r}{suggestion(value, options)}; there are: {allowed}"
            )
            raise InputError(message)
        return
    if not isinstance(value, int | float) or not 0 < value <= LARGEST_FACTOR:
        message = (
            f"expected true, false, an option or a positive factor of {LARGEST_FACTOR:g} at most, "
            f"found {value!r}"
        )
        raise InputError(message)


def _tables(raw: Mapping[str, Any], key: str) -> list[Mapping[str, Any]]:
    """Tables of an array, empty ones in place of what is none."""
    given = raw.get(key)
    found = given if isinstance(given, list) else []
    return [table if isinstance(table, dict) else {} for table in found]


def _shapes(backgrounds: Sequence[Mapping[str, Any]], *, counter: bool) -> Iterator[Any]:
    """Check that a background has a shape where energies are observed, and none elsewhere."""
    for place, table in enumerate(backgrounds):
        if counter and "shape" in table:
            message = "a neutron-counter observes no energy, so its background has no shape"
            yield ("background", place, "shape"), message
        elif not counter and "shape" not in table:
            yield ("background", place, "shape"), f"is missing; one of {', '.join(SHAPES)}"


def _background_energies(raw: Mapping[str, Any]) -> Iterator[Any]:
    """Give every energy of the backgrounds with its path."""
    for place, table in enumerate(_tables(raw, "background")):
        for key in ("from", "to", "mean", "width"):
            if key in table:
                yield ("background", place, key), table[key]


def _twice(key: str, tables: list[Mapping[str, Any]]) -> Iterator[Any]:
    seen: set[str] = set()
    for place, table in enumerate(tables):
        name = table.get("name")
        if isinstance(name, str) and name in seen:
            yield (key, place, "name"), f"two tables of {key} are called {name!r}"
        seen.add(name if isinstance(name, str) else "")


def _responses(
    place: int, volume: Mapping[str, Any], common: Mapping[str, Any], own: Mapping[str, Any]
) -> Iterator[Any]:
    """Rules of a volume's whole response, told at its own table where it has one."""
    whole = joined(common, own)
    if own:
        for path, message in ResponseKeys.cross_rules(whole):
            yield ("volume", place, "response", *path), message
        kinds = [energy_rules.kind_of(tables) for tables in (common, whole)]
        scales = [energy_rules.scale_of(tables) for tables in (common, whole)]
        if None not in kinds and (kinds[0], scales[0]) != (kinds[1], scales[1]):
            yield (
                ("volume", place, "response"),
                f"all volumes report one kind of energy; found {kinds[1]} here and {kinds[0]}",
            )
    if "birks" in whole:
        yield from _quenchable(place, volume, whole["birks"])


def _quenchable(place: int, table: Mapping[str, Any], birks: object) -> Iterator[Any]:
    """Say what Birks' constant alone cannot do: other elements, and a density that is missing."""
    given = [key for key in COMPOSITIONS if key in table]
    try:
        per_length = BirksConstant().convert(birks)[1] == BIRKS_PER_LENGTH
        made = COMPOSITIONS[given[0]](table[given[0]]) if len(given) == 1 else None
    except (InputError, TypeError, AttributeError):
        return  # reported where it stands
    others = sorted(set(materials.elements(made)) - {"H", "C"}) if made is not None else []
    if others:
        message = (
            f"birks needs the stopping power of protons, which is known here for H and C "
            f"alone; {table[given[0]]!r} holds {', '.join(others)}: give quenching = "
            "{ file = … } in its place"
        )
        yield ("volume", place, given[0]), message
    elif given[:1] != ["material"] and "density" not in table and per_length:
        yield ("volume", place, "density"), f"is missing; birks in {BIRKS_PER_LENGTH} needs it"
