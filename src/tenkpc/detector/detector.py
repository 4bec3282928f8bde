"""The detector: volumes of material, what is in them, and how they respond."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path
from types import MappingProxyType

from tenkpc import interactions, rendering
from tenkpc.detector import assembly, description, gallery
from tenkpc.detector.assembly import Volume
from tenkpc.detector.background import Background
from tenkpc.detector.detector_file import DetectorKeys, UncertaintyKeys
from tenkpc.detector.own_reactions import Own
from tenkpc.detector.response import Response
from tenkpc.detector.response_file import ResponseKeys
from tenkpc.documents import Document
from tenkpc.interactions.base import Interaction


@dataclass(frozen=True)
class Detector:
    """A detector as its file describes it.

    Made by `Detector.load`, `Detector.parse` or `Detector.gallery`. Two detectors are equal when
    their files, the tables these name and the changes made since are equal.

    Attributes
    ----------
    document
        the file, the tables it names, and what was changed since.
    title, about, medium
        words of the file.
    volumes
        masses of material, each with its response.
    response
        what the instrument makes of an event, as far as it is common to all volumes.
    backgrounds
        events recorded without a burst.
    interactions
        switches, factors and options of interactions.
    own
        reactions that the file brings.
    quenching
        words for how the light of slow protons and nuclei is reckoned.
    mass_error, efficiency_error, scale_error
        1σ of mass, efficiency and energy scale, relative.
    stated
        keys of ``[response]`` that the file gives; all others are defaults.
    """

    document: Document
    title: str = field(compare=False, default="")
    about: str = field(compare=False, default="")
    medium: str = field(compare=False, default="")
    volumes: tuple[Volume, ...] = field(compare=False, default=())
    response: Response = field(compare=False, default_factory=Response)
    backgrounds: tuple[Background, ...] = field(compare=False, default=())
    interactions: Mapping[str, bool | float | str] = field(compare=False, default_factory=dict)
    own: tuple[Own, ...] = field(compare=False, default=())
    quenching: str = field(compare=False, default="")
    mass_error: float = field(compare=False, default=0.0)
    efficiency_error: float = field(compare=False, default=0.0)
    scale_error: float = field(compare=False, default=0.0)
    stated: frozenset[str] = field(compare=False, default=frozenset())

    @classmethod
    def load(cls, path: str | Path) -> Detector:
        """Read a detector file.

        Raises
        ------
        FileError
            with everything that is wrong with the file, each with its line.
        """
        return cls.of_document(Document.read(path))

    @classmethod
    def gallery(cls, name: str) -> Detector:
        """Take one of the invented detectors that come with the package.

        Raises
        ------
        UnknownNameError
            where there is none of this name.
        """
        return cls.parse(gallery.text(name), origin=name)

    @classmethod
    def parse(cls, text: str, origin: str = "detector", folder: str = ".") -> Detector:
        """Read a detector from the text of a file; tables it names are looked for in folder."""
        return cls.of_document(Document(text, origin=origin, folder=folder))

    @classmethod
    def of_document(cls, document: Document) -> Detector:
        """Read a detector from a document, with the changes made to it."""
        keys = document.checked(DetectorKeys)
        whole = document.with_tables(keys)
        unsure: UncertaintyKeys = keys.uncertainty
        return cls(
            document=whole,
            title=keys.title,
            about=keys.about,
            medium=keys.response.medium,
            volumes=assembly.volumes(keys, whole),
            response=assembly.common(keys, whole),
            backgrounds=assembly.backgrounds(keys, whole),
            interactions=MappingProxyType(dict(keys.interactions)),
            own=assembly.own_reactions(keys, whole),
            quenching=_quenching(keys.response),
            mass_error=unsure.mass,
            efficiency_error=unsure.efficiency,
            scale_error=unsure.energy_scale,
            stated=frozenset(keys.response.model_fields_set),
        )

    def replace(self, changes: Mapping[str, object]) -> Detector:
        """Change values at some key paths, ``{"response.threshold": "8 MeV"}``.

        Tables of an array go by their name: ``"volume.tank.mass"``.

        Raises
        ------
        FileError
            where a path or value is not one that a detector file may have.
        """
        return self.of_document(self.document.changed(changes))

    @property
    def text(self) -> str:
        """The file as it was read, without the changes made since."""
        return self.document.text

    @property
    def origin(self) -> str:
        """Path of the file, or name in the gallery."""
        return self.document.origin

    @property
    def mass_kg(self) -> float:
        """Mass of all volumes together, kg."""
        return math.fsum(volume.mass_kg for volume in self.volumes)

    def targets(self, kind: str) -> float:
        """Count the targets of a kind in all volumes."""
        return math.fsum(volume.targets(kind) for volume in self.volumes)

    @property
    def reactions(self) -> tuple[str, ...]:
        """Keys of every interaction that may take part, alphabetically."""
        return tuple(sorted({*interactions.KEYS, *(own.key for own in self.own)}))

    @property
    def replaced(self) -> frozenset[str]:
        """Keys of the package that the file's own reactions take the place of."""
        mine = {own.key for own in self.own}
        return frozenset(key for own in self.own for key in own.replaces) - mine

    def reaction(self, key: str, option: str | None = None) -> Interaction:
        """Give an interaction by its key, the file's own or one of the package.

        Raises
        ------
        UnknownNameError
            where there is none of this key, or no such option.
        """
        for own in self.own:
            if own.key == key:
                return own.under(option)
        return interactions.by_key(key, option)

    def describe(self) -> str:
        """Say what the detector is made of, in kilograms and numbers of targets."""
        title = f"{self.title} ({self.origin})"
        return rendering.text(description.page(title, self.about, self.volumes, self.own))

    def __repr__(self) -> str:
        return f"<Detector {self.title!r} from {self.origin}>"


def _quenching(keys: ResponseKeys) -> str:
    if keys.birks is not None:
        constant, unit = keys.birks
        return f"Birks' law with {constant:g} {unit}"
    if keys.quenching is None:
        return "none: not needed" if keys.medium == "recoil" else "none: the medium sees none"
    if keys.quenching.value == "lindhard":
        return f"Lindhard's formula with k {keys.lindhard_k or 'of each nucleus'}"
    return f"table {keys.quenching.file}" if keys.quenching.file else "not quenched"
