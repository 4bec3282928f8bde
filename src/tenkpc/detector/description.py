"""What a detector is made of, as rows."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from tenkpc import interactions
from tenkpc.detector.assembly import Volume
from tenkpc.detector.own_reactions import Own
from tenkpc.interactions.base import Interaction
from tenkpc.rendering import Page, Paragraph, Row, Rule, Table

# energies at which cross sections are quoted
QUOTED_MEV = np.array([10.0, 20.0, 40.0])


def page(title: str, about: str, volumes: Sequence[Volume], own: Sequence[Own]) -> Page:
    """Lay out masses, free protons, electrons and nuclei by isotope, volume by volume.

    Then cross sections that the file brings, each with those that it replaces beneath it.
    """
    words = [Paragraph(about)] if about else []
    tables = [Table(_rows(volume), ("", "per kg", "in all")) for volume in volumes]
    return [Paragraph(title), *words, Rule(), *tables, *_reactions(own)]


def _reactions(own: Sequence[Own]) -> Page:
    if not own:
        return []
    rows: list[Row] = []
    for reaction in own:
        mine = reaction.under(None)
        rows.append(_sigma(reaction.key, mine, 0))
        pairs = ((key, interactions.by_key(key)) for key in reaction.replaces)
        rows += [_sigma(f"replaces {key}", made, 1) for key, made in pairs if _alike(mine, made)]
    titles = ("σ per target in cm²", *(f"{energy:g} MeV" for energy in QUOTED_MEV))
    return [Rule(), Table(tuple(rows), titles)]


def _alike(mine: Interaction, other: Interaction) -> bool:
    """Whether two reactions are open to the same species."""
    return set(mine.branches) == set(other.branches)


def _sigma(name: str, made: Interaction, level: int) -> Row:
    """σ of the first species that a reaction is open to."""
    values = made.sigma(next(iter(made.branches)), QUOTED_MEV)
    return Row((name, *(f"{value:.3g}" for value in values)), level=level)


def _rows(volume: Volume) -> tuple[Row, ...]:
    head = Row((f"{volume.name}: {volume.material}", "", f"{volume.mass_kg:.6g} kg"))
    kinds = [("free protons", "H-1"), ("electrons", "electron")]
    nuclei = sorted(volume.composition.nuclei_per_kg, key=lambda n: (n.protons, n.nucleons))
    kinds += [(f"{nuclide.name} nuclei", nuclide.name) for nuclide in nuclei]
    rows = (
        Row(
            (name, f"{volume.composition.targets(kind):.5g}", f"{volume.targets(kind):.5g}"),
            level=1,
        )
        for name, kind in kinds
    )
    return (head, *rows)
