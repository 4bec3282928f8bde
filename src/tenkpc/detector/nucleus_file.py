"""A nucleus's file: the same tables as those that come with the package, checked.

Units are in the names of the keys. What the strengths mean is in `tenkpc.interactions.nuclear`.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from itertools import pairwise
from typing import Annotated, Any, Literal

from pydantic import Field

from tenkpc.detector import materials
from tenkpc.interactions.strength import KINDS
from tenkpc.textfiles import Strict

Problems = Iterable[tuple[tuple[str | int, ...], str]]
Words = Annotated[str, Field(min_length=1)]
Positive = Annotated[float, Field(gt=0, le=1e6)]
NotNegative = Annotated[float, Field(ge=0, le=1e6)]
Triple = tuple[NotNegative, NotNegative, NotNegative]


class SourceKeys(Strict):
    """`[[references]]`: who, where, what of it was used, and for which reactions."""

    authors: Words
    where: Words
    used_for: Words
    reactions: tuple[str, ...] | None = None


class ScaleKeys(Strict):
    """Factors on all strength below and above the neutron's separation energy."""

    bound: NotNegative = 1.0
    unbound: NotNegative = 1.0
    error: Positive | None = None


class ErrorKeys(Strict):
    """`relative_error`: 1σ of ln σ, linear between some neutrino energies, held beyond."""

    energy_mev: tuple[NotNegative, ...] = Field(min_length=1)
    error: tuple[Positive, ...] = Field(min_length=1)

    @classmethod
    def cross_rules(cls, raw: Mapping[str, Any]) -> Problems:
        """Check that there is an error for each energy."""
        energies, errors = raw.get("energy_mev"), raw.get("error")
        if isinstance(energies, list) and isinstance(errors, list):
            if len(energies) != len(errors):
                yield ("error",), "expected as many values as there are energies"
            if not all(a < b for a, b in pairwise(e for e in energies if isinstance(e, float))):
                yield ("energy_mev",), "expected ascending energies"


class ReactionKeys(Strict):
    """One reaction: what leaves, what it costs, and the strength by energy of excitation."""

    equation: Words
    current: Literal["electron", "positron", "neutral"]
    protons: Annotated[int, Field(ge=1, le=120)]
    mass_difference_mev: Annotated[float, Field(ge=-50, le=50)] = 0.0
    separation_mev: tuple[Positive, ...] = Field(default=(), max_length=2)
    end_mev: Annotated[float, Field(gt=0, le=200)]
    relative_error: ErrorKeys
    scale: ScaleKeys | None = None
    options: dict[str, ScaleKeys] = Field(default_factory=dict)
    fermi: tuple[Triple, ...] | None = None
    gamow_teller: tuple[Triple, ...] | None = None
    gamow_teller_with_axial_coupling: tuple[Triple, ...] | None = None
    magnetic_dipole: tuple[Triple, ...] | None = None
    spin_dipole: tuple[Triple, ...] | None = None
    vector_dipole: tuple[Triple, ...] | None = None

    @classmethod
    def cross_rules(cls, raw: Mapping[str, Any]) -> Problems:
        """Check that there is strength, of kinds that go with the current."""
        given = [kind for kind in KINDS if kind in raw]
        if not any(raw[kind] for kind in given):
            yield (), f"expected some strength; the kinds are {', '.join(KINDS)}"
        if raw.get("current") == "neutral":
            for key in ("mass_difference_mev", "fermi"):
                if key in raw:
                    yield (key,), "has no place in a neutral current"
        elif "magnetic_dipole" in raw:
            yield ("magnetic_dipole",), "belongs to the neutral current; give gamow_teller"
        if "scale" in raw and "options" in raw:
            yield ("scale",), "give either scale or options"
        separation = raw.get("separation_mev")
        if isinstance(separation, list) and len(separation) == 2:
            first, second = separation
            if isinstance(first, float) and isinstance(second, float) and first >= second:
                yield ("separation_mev",), "expected the energies of one and of two neutrons"


class NucleusKeys(Strict):
    """A whole file."""

    stands_for: Words
    nucleons: Annotated[int, Field(ge=2, le=300)]
    radius_squared_fm2: NotNegative
    reactions: dict[str, ReactionKeys] = Field(min_length=1)
    references: tuple[SourceKeys, ...] = Field(min_length=1)
    provenance: dict[str, Any] | None = None

    @classmethod
    def cross_rules(cls, raw: Mapping[str, Any]) -> Problems:
        """Check what it stands for, that keys are keys, and that sources name reactions of it."""
        target = raw.get("stands_for")
        if isinstance(target, str) and (problem := materials.no_target(target)):
            yield ("stands_for",), problem
        reactions = raw.get("reactions")
        known = reactions if isinstance(reactions, dict) else {}
        for key in known:
            if not re.fullmatch(r"[a-z][a-z0-9]*(-[a-z0-9]+)*", key):
                yield ("reactions", key), "expected small letters, digits and single hyphens"
        sources = raw.get("references")
        for place, source in enumerate(sources if isinstance(sources, list) else []):
            named = source.get("reactions") if isinstance(source, dict) else None
            for key in named if isinstance(named, list) else []:
                if key not in known:
                    yield ("references", place, "reactions"), f"{key!r} is no reaction of this file"
