"""Lists of what comes with the package, and all about one entry."""

from __future__ import annotations

import json
from collections.abc import Callable, Mapping
from typing import NamedTuple

import numpy as np

from tenkpc import interactions
from tenkpc.detector import gallery, materials
from tenkpc.detector.detector import Detector
from tenkpc.errors import UnknownNameError
from tenkpc.rendering import Facts, Page, Paragraph, columns_of, pad, percent, text
from tenkpc.source.burst import Burst
from tenkpc.species import SPECIES, SYMBOLS

# energies at which a cross section and its error are quoted, MeV
QUOTED_MEV = np.array([10.0, 20.0, 40.0])


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
    rows = [
        ("target", interaction.target),
        ("threshold", f"{interaction.threshold_mev:.4g} MeV"),
        ("seen as", "; ".join(_ways(key))),
        ("options", ", ".join(interactions.OPTIONS.get(key, ())) or "none"),
        *_cross_sections(key),
    ]
    references = [Paragraph(f"{r}: {r.used_for}", small=True) for r in interaction.references]
    return [Paragraph(interaction.equation), Facts(tuple(rows)), *references]


def _ways(key: str) -> tuple[str, ...]:
    """Ways in which a detector may see an interaction, each once."""
    branches = interactions.by_key(key).branches.values()
    return tuple(dict.fromkeys(state.seen_as for states in branches for state in states))


def _cross_sections(key: str) -> list[tuple[str, str]]:
    """σ, its error and its window for each species that the interaction is open to."""
    interaction = interactions.by_key(key)
    rows = []
    for species in SPECIES:
        for state in interaction.final_states(species):
            values = state.sigma_cm2(QUOTED_MEV)
            quoted = ", ".join(f"{value:.3g}" for value in values)
            error = percent(float(state.relative_error(QUOTED_MEV)[1]))
            window = " to ".join(f"{edge:.4g}" for edge in state.window_mev)
            name = f"σ {SYMBOLS[species]}, {state.label}"
            energies = ", ".join(f"{energy:g}" for energy in QUOTED_MEV)
            rows.append((name, f"{quoted} cm² at {energies} MeV, ± {error}, for {window} MeV"))
    return rows


CATALOGUES: Mapping[str, Catalogue] = {
    "bursts": Catalogue(Burst.presets, lambda name: Burst.preset(name).title, _burst),
    "detectors": Catalogue(gallery.names, lambda name: Detector.gallery(name).about, _detector),
    "interactions": Catalogue(
        lambda: interactions.KEYS, lambda key: interactions.by_key(key).equation, _interaction
    ),
    "materials": Catalogue(materials.names, _material_line, _material),
}
