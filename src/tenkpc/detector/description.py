"""What a detector is made of, as rows."""

from __future__ import annotations

from collections.abc import Sequence

from tenkpc.detector.assembly import Volume
from tenkpc.rendering import Page, Paragraph, Row, Rule, Table


def page(title: str, about: str, volumes: Sequence[Volume]) -> Page:
    """Lay out masses, free protons, electrons and nuclei by isotope, volume by volume."""
    words = [Paragraph(about)] if about else []
    tables = [Table(_rows(volume), ("", "per kg", "in all")) for volume in volumes]
    return [Paragraph(title), *words, Rule(), *tables]


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
