"""The detector: volumes of material, what is in them, and how they respond."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from itertools import pairwise
from pathlib import Path
from types import MappingProxyType
from typing import Any

from tenkpc import rendering, textfiles
from tenkpc.constants import ELECTRON_MASS_MEV
from tenkpc.detector import description, gallery
from tenkpc.detector.detector_file import (
    COMPOSITIONS,
    DetectorKeys,
    EfficiencyKeys,
    ResponseKeys,
    VolumeKeys,
)
from tenkpc.detector.materials import Composition
from tenkpc.detector.response import Curve, Resolution, Response
from tenkpc.errors import FileError, Problem
from tenkpc.interactions.base import HIGHEST_ENERGY_MEV

# what a Cherenkov medium sees: charged particles above threshold and what gammas scatter
CHERENKOV_PARTICLES = MappingProxyType({"electron": 0.0, "positron": 0.0, "gamma": 0.0})
# what the observed kind adds to the kinetic energy of an event taken for a single electron
EVENT_OFFSETS_MEV = {"kinetic": 0.0, "total": ELECTRON_MASS_MEV}


@dataclass(frozen=True)
class Volume:
    """So much of one material."""

    name: str
    mass_kg: float
    material: str
    composition: Composition = field(compare=False)

    def targets(self, kind: str) -> float:
        """Count the targets of a kind: ``"electron"`` or a nuclide such as ``"H-1"``."""
        return self.mass_kg * self.composition.targets(kind)


@dataclass(frozen=True)
class Detector:
    """A detector as its file describes it.

    Made by `Detector.load`, `Detector.parse` or `Detector.gallery`. Two detectors are equal when
    their files, the tables these name and the changes made since are equal.

    Attributes
    ----------
    text
        the file as it was read.
    changes
        key paths changed by `replace`, in order, with their new values written as TOML.
    tables
        texts of the tables that the file names, by name.
    origin, folder
        where the file was read from; a gallery detector's name and no folder.
    title, about, medium
        words of the file.
    volumes
        masses of material.
    response
        what the medium and the instrument make of an event.
    interactions
        switches, factors and options of interactions.
    stated
        keys of ``[response]`` that the file gives; all others are defaults.
    """

    text: str
    changes: tuple[tuple[str, str], ...] = ()
    tables: tuple[tuple[str, str], ...] = ()
    origin: str = field(compare=False, default="detector")
    folder: str = field(compare=False, default=".")
    title: str = field(compare=False, default="")
    about: str = field(compare=False, default="")
    medium: str = field(compare=False, default="")
    volumes: tuple[Volume, ...] = field(compare=False, default=())
    response: Response = field(compare=False, default_factory=Response)
    interactions: Mapping[str, bool | float | str] = field(compare=False, default_factory=dict)
    stated: frozenset[str] = field(compare=False, default=frozenset())

    @classmethod
    def load(cls, path: str | Path) -> Detector:
        """Read a detector file.

        Raises
        ------
        FileError
            with everything that is wrong with the file, each with its line.
        """
        place = Path(path)
        return cls.parse(textfiles.read_text(place), origin=str(path), folder=str(place.parent))

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
        keys = textfiles.parse(text, DetectorKeys, origin)
        return cls._build(keys, text=text, origin=origin, folder=folder)

    def replace(self, changes: Mapping[str, object]) -> Detector:
        """Change values at some key paths, ``{"response.threshold": "8 MeV"}``.

        Tables of an array go by their name: ``"volume.tank.mass"``.

        Raises
        ------
        FileError
            where a path or value is not one that a detector file may have.
        """
        further = ((path, textfiles.as_text(value)) for path, value in changes.items())
        made = (*self.changes, *further)
        tables = textfiles.changed(textfiles.document(self.text, self.origin), made, self.origin)
        keys = textfiles.validate(tables, DetectorKeys, self.origin)
        return self._build(
            keys, text=self.text, changes=made, origin=self.origin, folder=self.folder
        )

    @classmethod
    def _build(cls, keys: DetectorKeys, **read: Any) -> Detector:
        """Put the parts together; ``read`` is where they were read from."""
        curve, tables = _efficiency(keys.response, read)
        return cls(
            **read,
            tables=tables,
            title=keys.title,
            about=keys.about,
            medium=keys.response.medium,
            volumes=tuple(_volume(volume) for volume in keys.volume),
            response=_response(keys.response, curve),
            interactions=MappingProxyType(dict(keys.interactions)),
            stated=frozenset(keys.response.model_fields_set),
        )

    @property
    def mass_kg(self) -> float:
        """Mass of all volumes together, kg."""
        return math.fsum(volume.mass_kg for volume in self.volumes)

    def targets(self, kind: str) -> float:
        """Count the targets of a kind in all volumes."""
        return math.fsum(volume.targets(kind) for volume in self.volumes)

    def describe(self) -> str:
        """Say what the detector is made of, in kilograms and numbers of targets."""
        return rendering.text(description.page(self))

    def __repr__(self) -> str:
        return f"<Detector {self.title!r} from {self.origin}>"


def _volume(keys: VolumeKeys) -> Volume:
    key = next(key for key in COMPOSITIONS if getattr(keys, key) is not None)
    made_of = getattr(keys, key)
    words = made_of if isinstance(made_of, str) else " + ".join(made_of)
    return Volume(keys.name, keys.mass, words, COMPOSITIONS[key](made_of))


def _response(keys: ResponseKeys, efficiency: Curve) -> Response:
    width = keys.resolution
    of_truth = keys.efficiency is not None and keys.efficiency.of == "true"
    return Response(
        kind=keys.energy,
        offsets_mev=CHERENKOV_PARTICLES,
        event_offset_mev=EVENT_OFFSETS_MEV[keys.energy],
        resolution=Resolution(
            width.stochastic, width.constant, width.noise, linear=width.combine == "linear"
        ),
        threshold_mev=_threshold_mev(keys),
        efficiency=Curve() if of_truth else efficiency,
        true_efficiency=efficiency if of_truth else Curve(),
        live_fraction=keys.live_fraction,
    )


def _threshold_mev(keys: ResponseKeys) -> float:
    """Threshold in the observed kind of energy."""
    if keys.threshold is None:
        return 0.0
    given_in = keys.threshold.of or keys.energy
    shift = EVENT_OFFSETS_MEV[keys.energy] - EVENT_OFFSETS_MEV[given_in]
    return max(keys.threshold.value + shift, 0.0)


Tables = tuple[tuple[str, str], ...]


def _efficiency(keys: ResponseKeys, read: Mapping[str, Any]) -> tuple[Curve, Tables]:
    """Curve of an efficiency, and the text of the table it was read from, if any."""
    given = keys.efficiency
    if given is None:
        return Curve(), ()
    if given.value is not None:
        return Curve((0.0,), (given.value,)), ()
    tables: Tables = ()
    points = given.points or ()
    if given.file is not None:
        names = ("energy_mev", "efficiency")
        text, columns = textfiles.read_columns(Path(read["folder"]) / given.file, names)
        points = tuple(zip(columns["energy_mev"], columns["efficiency"], strict=True))
        tables = ((given.file, text),)
    problem = _unusable(points, given, _threshold_mev(keys))
    if problem:
        path = ("response", "efficiency")
        line = textfiles.line_of(read["text"], path)
        raise FileError(read["origin"], [Problem(line, ".".join(path), problem)])
    energies, values = zip(*points, strict=True)
    return Curve(tuple(energies), tuple(values), zero_outside=given.beyond == "zero"), tables


def _unusable(
    points: Sequence[tuple[float, float]], keys: EfficiencyKeys, threshold_mev: float
) -> str:
    """Say what keeps points from being an efficiency curve; nothing where they are one."""
    energies = [energy for energy, _ in points]
    if not points or any(later <= earlier for earlier, later in pairwise(energies)):
        return "expected points with ascending energies"
    if not all(0 <= value <= 1 for _, value in points):
        return "an efficiency lies between 0 and 1"
    needed = threshold_mev if keys.of == "observed" else 0.0
    if keys.beyond == "error" and (energies[0] > needed or energies[-1] < HIGHEST_ENERGY_MEV):
        span = f"{energies[0]:g} to {energies[-1]:g} MeV"
        return f'the points cover {span} only; say what holds beyond: "hold" or "zero"'
    return ""
