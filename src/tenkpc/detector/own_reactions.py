"""Reactions that a detector's file brings: tables of cross sections, and nuclei by their strength.

A reaction of one's own counts beside those of the package. Where it would count the same events,
the file has to say which of them it replaces, or switch that off.
"""

from __future__ import annotations

import tomllib
from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from itertools import pairwise
from pathlib import Path
from typing import Annotated, Any, Literal

from pydantic import Field

from tenkpc import interactions, textfiles, units
from tenkpc.detector import materials
from tenkpc.detector.nucleus_file import NucleusKeys
from tenkpc.documents import Document
from tenkpc.errors import InputError, suggestion
from tenkpc.fields import Energy, RelativeError
from tenkpc.interactions import nucleus_tables
from tenkpc.interactions.base import Interaction
from tenkpc.interactions.tabulated import TabulatedInputs, tabulated
from tenkpc.textfiles import Strict

Problems = Iterable[tuple[tuple[str | int, ...], str]]
Words = Annotated[str, Field(min_length=1)]
Key = Annotated[str, Field(pattern=r"^[a-z][a-z0-9]*(-[a-z0-9]+)*$")]
Species = Literal["nu_e", "anti_nu_e", "nu_x", "anti_nu_x"]

# no neutrino below 200 MeV has cross sections outside these, cm²
LEAST_CM2, MOST_CM2 = 1e-52, 1e-35
FEWEST_ROWS = 3


class ColumnKeys(Strict):
    """A column of a table, and the unit of its numbers."""

    column: Words
    unit: Words


class InteractionKeys(Strict):
    """`[[interaction]]`: a cross section of one's own, as a table."""

    key: Key
    equation: Words
    target: Words
    species: tuple[Species, ...] = Field(min_length=1)
    file: Words
    energy: ColumnKeys
    sigma: ColumnKeys
    lead: Literal["electron", "positron", "gamma", "neutron"]
    cost: Energy | None = None
    gamma: Energy = 0.0
    neutrons: Annotated[int, Field(ge=0, le=10)] = 0
    window: tuple[Energy, Energy] | None = None
    error: RelativeError
    source: Words
    replaces: tuple[str, ...] = ()

    @classmethod
    def cross_rules(cls, raw: Mapping[str, Any]) -> Problems:
        """Check what leaves, and that the target is one."""
        lead = raw.get("lead")
        if lead in ("electron", "positron") and "cost" not in raw:
            yield ("cost",), "is missing: the neutrino's energy less the lepton's kinetic energy"
        if lead in ("gamma", "neutron") and "cost" in raw:
            yield ("cost",), "belongs to an electron or positron"
        if lead == "gamma" and "gamma" not in raw:
            yield ("gamma",), "is missing: the energy of the gamma rays"
        if lead == "neutron" and not raw.get("neutrons"):
            yield ("neutrons",), "is missing: how many of them"
        target = raw.get("target")
        if isinstance(target, str) and (problem := materials.no_target(target)):
            yield ("target",), problem
        for column, unit in (("energy", "MeV"), ("sigma", "cm^2")):
            given = raw.get(column)
            words = given.get("unit") if isinstance(given, dict) else None
            if isinstance(words, str) and (problem := _no_unit(words, unit)):
                yield (column, "unit"), problem
        yield from _replaced(raw)


class OwnNucleusKeys(Strict):
    """`[[nucleus]]`: reactions of one's own, as a file of strengths."""

    file: Words
    replaces: tuple[str, ...] = ()

    @classmethod
    def cross_rules(cls, raw: Mapping[str, Any]) -> Problems:
        """Check that what is replaced is there."""
        yield from _replaced(raw)


@dataclass(frozen=True)
class Own:
    """A reaction of a detector's file.

    Attributes
    ----------
    key
        its key.
    by_option
        the reaction by the name of its option, the default first; the name is empty for none.
    replaces
        keys of the package that it takes the place of.
    """

    key: str
    by_option: Mapping[str, Interaction]
    replaces: tuple[str, ...]

    @property
    def options(self) -> tuple[str, ...]:
        """Names of options, the default first."""
        return tuple(name for name in self.by_option if name)

    def under(self, option: str | None) -> Interaction:
        """Give the reaction under an option, or its default."""
        return self.by_option[option or next(iter(self.by_option))]


def build(
    tables: Sequence[InteractionKeys], nuclei: Sequence[OwnNucleusKeys], document: Document
) -> tuple[Own, ...]:
    """Build every reaction of a file.

    Raises
    ------
    FileError
        where a table or a nucleus is not usable, or keys are given twice.
    """
    made: list[Own] = []
    for place, keys in enumerate(tables):
        made.append(Own(keys.key, {"": _tabulated(keys, place, document)}, keys.replaces))
    for keys_of in nuclei:
        made += _of_nucleus(keys_of, document)
    seen: set[str] = set()
    for own in made:
        taken = own.key in seen or (own.key in interactions.KEYS and own.key not in own.replaces)
        if taken:
            message = f"{own.key!r} is taken; choose another key, or say what it replaces"
            raise document.refused([(("interaction",), message)])
        seen.add(own.key)
    return tuple(made)


def counted_twice(
    own: Sequence[Own], switched: Mapping[str, bool | float | str]
) -> Iterator[tuple[str, str]]:
    """Find reactions of the package that count the same events: pairs of keys."""
    for reaction in own:
        mine = reaction.under(None)
        for key in interactions.KEYS:
            off = key in reaction.replaces or switched.get(key) is False
            if not off and key != reaction.key and _overlap(mine, key):
                yield reaction.key, key


def _overlap(mine: Interaction, key: str) -> bool:
    """Whether a reaction of the package has the same target, a species and lead in common."""
    target = interactions.TARGETS[key]
    element = materials.symbol(target) == materials.symbol(mine.target)
    if not element or (target != mine.target and "-" in target and "-" in mine.target):
        return False
    theirs = interactions.by_key(key).branches
    return any(
        {state.lead for state in theirs.get(species, ())} & {state.lead for state in states}
        for species, states in mine.branches.items()
    )


def _tabulated(keys: InteractionKeys, place: int, document: Document) -> Interaction:
    columns = document.columns(keys.file, (keys.energy.column, keys.sigma.column))
    mev = units.to_float(_one(keys.energy.unit), "MeV", "", "MeV")
    cm2 = units.to_float(_one(keys.sigma.unit), "cm^2", "", "1e-42 cm^2")
    energy = tuple(mev * value for value in columns[keys.energy.column])
    sigma = tuple(cm2 * value for value in columns[keys.sigma.column])
    problem = _unusable(energy, sigma, keys)
    if problem:
        raise document.refused([(("interaction", place, "file"), problem)])
    inputs = TabulatedInputs(
        key=keys.key,
        equation=keys.equation,
        target=keys.target,
        species=keys.species,
        energy_mev=energy,
        sigma_cm2=sigma,
        lead=keys.lead,
        cost_mev=keys.cost or 0.0,
        gamma_mev=keys.gamma,
        neutrons=keys.neutrons,
        window_mev=keys.window or (energy[0], energy[-1]),
        error=keys.error,
        source=keys.source,
    )
    return tabulated(inputs)


def _one(unit: str) -> str:
    """Write a unit such as ``1e-42 cm^2`` or ``cm^2`` as one of it."""
    return unit if unit[:1].isdigit() else f"1 {unit}"


def _no_unit(words: str, unit: str) -> str:
    """Say what keeps words from being a unit of some dimension; nothing where they are one."""
    try:
        units.to_float(_one(words), unit, "", unit)
    except InputError as error:
        return str(error).removeprefix(": ")
    return ""


def _unusable(energy: Sequence[float], sigma: Sequence[float], keys: InteractionKeys) -> str:
    """Say what keeps a table from being a cross section; nothing where it is one."""
    if len(energy) < FEWEST_ROWS or not all(a < b for a, b in pairwise(energy)) or energy[0] < 0:
        return f"expected at least {FEWEST_ROWS} rows with ascending energies"
    if min(sigma) < 0 or max(sigma) == 0:
        return "expected cross sections that are not negative, and some above zero"
    if not LEAST_CM2 < max(sigma) < MOST_CM2:
        return (
            f"the largest cross section is {max(sigma):.3g} cm², where at most {MOST_CM2:g} and at "
            f"least {LEAST_CM2:g} are expected; is its unit {keys.sigma.unit!r}?"
        )
    if keys.window and not energy[0] <= keys.window[0] < keys.window[1] <= energy[-1]:
        return f"the window lies outside the table, {energy[0]:g} to {energy[-1]:g} MeV"
    open_ = [e for e, s in zip(energy, sigma, strict=True) if s > 0]
    if keys.cost is not None and open_[0] < keys.cost:
        return (
            f"the cross section is above zero at {open_[0]:g} MeV, where no lepton can leave: "
            f"it costs {keys.cost:g} MeV"
        )
    return ""


def _of_nucleus(keys: OwnNucleusKeys, document: Document) -> Iterator[Own]:
    text = dict(document.tables)[keys.file]
    textfiles.parse(text, NucleusKeys, str(Path(document.folder) / keys.file))
    tables: dict[str, Any] = tomllib.loads(text)
    for key in tables["reactions"]:
        by_option = {
            option: nucleus_tables.reaction(tables, key, option, interactions.couplings())
            for option in nucleus_tables.options(tables, key) or ("",)
        }
        yield Own(key, by_option, keys.replaces)


def _replaced(raw: Mapping[str, Any]) -> Problems:
    given = raw.get("replaces")
    for place, key in enumerate(given if isinstance(given, list) else []):
        if isinstance(key, str) and key not in interactions.KEYS:
            known = suggestion(key, interactions.KEYS)
            yield ("replaces", place), f"no interaction has the key {key!r}{known}"
