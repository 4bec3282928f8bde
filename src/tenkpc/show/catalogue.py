"""Lists of what comes with the package, and all about one entry."""

from __future__ import annotations

import json
from collections.abc import Callable, Iterator, Mapping
from typing import NamedTuple

import numpy as np

from tenkpc import interactions
from tenkpc.detector import gallery, materials
from tenkpc.detector.detector import Detector
from tenkpc.errors import UnknownNameError
from tenkpc.forecast.words import factor_or_percent
from tenkpc.interactions.base import FinalState, Interaction
from tenkpc.rendering import (
    Facts,
    Page,
    Paragraph,
    Row,
    Rule,
    Table,
    columns_of,
    pad,
    text,
)
from tenkpc.source.burst import Burst
from tenkpc.species import SPECIES, SYMBOLS

# energies at which a cross section and its error are quoted, MeV
QUOTED_MEV = np.array([10.0, 20.0, 40.0])
# nuclei on which a reaction of every nucleus is quoted
EXAMPLES = ("O-16", "Ar-40", "Ge-74", "Xe-132", "Pb-208")
QUOTED = tuple(f"{energy:g} MeV" for energy in QUOTED_MEV)


class Catalogue(NamedTuple):
    """A list: its names, a line about each, and the page that says all about one."""

    names: Callable[[], tuple[str, ...]]
    line: Callable[[str], str]
    page: Callable[[str], Page]


def as_text(what: str, name: str | None = None) -> str:
    """Print a list, or all about one of its names.

    Raises
    ------
    UnknownNameError
        where the list has no such name.
    """
    catalogue = CATALOGUES[what]
    names = catalogue.names()
    if name is None:
        wide = max(columns_of(entry) for entry in names)
        return "\n".join(f"{pad(entry, wide)}  {catalogue.line(entry)}" for entry in names)
    if name not in names:
        raise UnknownNameError(what.removesuffix("s"), name, names)
    return text(catalogue.page(name))


def as_json(what: str, name: str | None = None) -> str:
    """Give a list, or all about one of its names, as JSON text."""
    catalogue = CATALOGUES[what]
    if name is not None:
        lines = as_text(what, name).splitlines()
        return json.dumps({"name": name, "lines": lines}, ensure_ascii=False, indent=2)
    lines_by_name = {entry: catalogue.line(entry) for entry in catalogue.names()}
    return json.dumps(lines_by_name, ensure_ascii=False, indent=2)


def _burst(name: str) -> Page:
    burst = Burst.preset(name)
    table = str(burst.summary()).splitlines()
    return [Paragraph(burst.about), Paragraph(""), *map(Paragraph, table)]


def _detector(name: str) -> Page:
    return [Paragraph(line) for line in Detector.gallery(name).describe().splitlines()]


def _material(name: str) -> Page:
    material = materials.named(name)
    return [Paragraph(f"{name}: {_material_line(name)}"), Paragraph(material.source, small=True)]


def _material_line(name: str) -> str:
    material = materials.named(name)
    return f"{material.formula}, {material.density_g_cm3:g} g/cm³"


def _interaction(key: str) -> Page:
    interaction = interactions.by_key(key)
    made = [interaction] if interaction.of_nucleus is None else list(_examples(interaction))
    rows = [
        ("target", interaction.target),
        ("threshold", f"{interaction.threshold_mev:.4g} MeV"),
        ("seen as", "; ".join(_ways(made[0]))),
        ("options", ", ".join(interactions.OPTIONS.get(key, ())) or "none"),
    ]
    references = [Paragraph(f"{r}: {r.used_for}", small=True) for r in interaction.references]
    table = Table(
        tuple(row for reaction in made for row in _cross_sections(reaction)),
        ("σ per target in cm²", *QUOTED, f"1σ at {QUOTED[1]}", "window"),
    )
    return [Paragraph(interaction.equation), Facts(tuple(rows)), Rule(), table, Rule(), *references]


def _examples(interaction: Interaction) -> Iterator[Interaction]:
    """Give a reaction of every nucleus on a few of them."""
    for name in EXAMPLES:
        made = interaction.on(materials.nucleus(name))
        if made is not None:
            yield made


def _ways(interaction: Interaction) -> tuple[str, ...]:
    """Ways in which a detector may see an interaction, each once."""
    branches = interaction.branches.values()
    return tuple(dict.fromkeys(state.seen_as() for states in branches for state in states))


def _cross_sections(interaction: Interaction) -> Iterator[Row]:
    """σ, its error at the middle energy and its window, for kinds that react alike together."""
    branches = interaction.branches
    alike: dict[tuple[int, ...], list[str]] = {}
    for species in (s for s in SPECIES if s in branches):
        alike.setdefault(tuple(map(id, branches[species])), []).append(species)
    for kinds in alike.values():
        yield Row((", ".join(SYMBOLS[species] for species in kinds),))
        by_label: dict[str, list[FinalState]] = {}
        for state in branches[kinds[0]]:
            by_label.setdefault(state.label, []).append(state)
        for label, states in by_label.items():
            total = np.sum([state.sigma_cm2(QUOTED_MEV) for state in states], axis=0)
            error = factor_or_percent(float(states[0].relative_error(QUOTED_MEV)[1]))
            low = min(state.window_mev[0] for state in states)
            window = f"{low:.3g} to {states[0].window_mev[1]:.3g}"
            yield Row((label, *(f"{value:.3g}" for value in total), error, window), level=1)


CATALOGUES: Mapping[str, Catalogue] = {
    "bursts": Catalogue(Burst.presets, lambda name: Burst.preset(name).title, _burst),
    "detectors": Catalogue(gallery.names, lambda name: Detector.gallery(name).about, _detector),
    "interactions": Catalogue(
        lambda: interactions.KEYS, lambda key: interactions.by_key(key).equation, _interaction
    ),
    "materials": Catalogue(materials.names, _material_line, _material),
}
