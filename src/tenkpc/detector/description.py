"""What a detector is made of, as rows."""

from __future__ import annotations

from typing import TYPE_CHECKING

from tenkpc.rendering import Page, Paragraph, Row, Rule, Table

if TYPE_CHECKING:
    from tenkpc.detector.assembly import Volume
    from tenkpc.detector.detector import Detector


def page(detector: Detector) -> Page:
    """Lay out masses, free protons, electrons and nuclei by isotope, volume by volume."""
    about = [Paragraph(detector.about)] if detector.about else []
    tables = [Table(_rows(volume), ("", "per kg", "in all")) for volume in detector.volumes]
    return [Paragraph(f"{detector.title} ({detector.origin})"), *about, Rule(), *tables]


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
