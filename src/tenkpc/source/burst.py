"""The burst: what the star emits, as a frozen value."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from functools import cached_property
from pathlib import Path

import numpy as np
from numpy.typing import ArrayLike, NDArray

from tenkpc import data, textfiles
from tenkpc.constants import MEV_PER_ERG
from tenkpc.documents import Document
from tenkpc.errors import InputError, UnknownNameError
from tenkpc.source import assembly, panels
from tenkpc.source.burst_file import BurstKeys
from tenkpc.source.components import Flowing, Integrated
from tenkpc.source.neutron_star import NeutronStar
from tenkpc.source.summary import Summary

Floats = NDArray[np.float64]
BySpecies = Mapping[str, object]

# energies at which the time panels are tried: low ones and those that steep reactions count
PROBES_MEV = np.array([3.0, 10.0, 20.0, 40.0])


@dataclass(frozen=True)
class Burst:
    """Neutrinos of all species that a core collapse emits.

    Made by `Burst.preset`, `Burst.load`, `Burst.parse` or `Burst.integrated`. Two bursts are
    equal when they say and emit the same, wherever they were read from.

    Attributes
    ----------
    title, about
        words of the file.
    start_s, end_s
        time after bounce that the burst covers, s.
    components
        its parts, whose emission adds.
    names
        what the file calls them, in the same order.
    notes
        sentences about what was set without being written.
    star
        the neutron star that is left, where the file says which.
    document
        the file as it was read, or one that says the same, and what was changed since.
    """

    title: str
    about: str
    start_s: float
    end_s: float
    components: tuple[Flowing | Integrated, ...]
    names: tuple[str, ...] = ()
    notes: tuple[str, ...] = field(compare=False, default=())
    star: NeutronStar | None = None
    document: Document = field(compare=False, default=Document(""), repr=False)

    @classmethod
    def load(cls, path: str | Path) -> Burst:
        """Read a burst file.

        Raises
        ------
        FileError
            with everything that is wrong with the file, each with its line.
        """
        return cls.of_document(Document.read(path))

    @classmethod
    def parse(cls, text: str, origin: str = "burst") -> Burst:
        """Read a burst from the text of a file."""
        return cls.of_document(Document(text, origin=origin))

    @classmethod
    def of_document(cls, document: Document) -> Burst:
        """Read a burst from a document, with the changes made to it."""
        keys = document.checked(BurstKeys)
        if keys.start >= keys.end:
            message = f"must be later than start; found {keys.end:g} s after {keys.start:g} s"
            raise document.refused([(("end",), message)])
        return cls(
            title=keys.title,
            about=keys.about,
            start_s=keys.start,
            end_s=keys.end,
            components=tuple(assembly.component(table) for table in keys.component),
            names=tuple(table.name for table in keys.component),
            notes=tuple(assembly.notes(keys)),
            star=assembly.star(keys),
            document=document.with_tables(keys),
        )

    @classmethod
    def presets(cls) -> tuple[str, ...]:
        """Names of the bursts that come with the package: curves of our own, nobody's model."""
        return data.names("bursts")

    @classmethod
    def preset(cls, name: str) -> Burst:
        """Take one of the bursts that come with the package.

        Raises
        ------
        UnknownNameError
            where there is none of this name.
        """
        if name not in cls.presets():
            kind = "burst"
            raise UnknownNameError(kind, name, cls.presets())
        made = cls.parse(data.text(f"bursts/{name}.toml"), origin=name)
        return replace(made, notes=())  # nobody wrote this file who has to be told

    @classmethod
    def integrated(
        cls,
        *,
        energy: BySpecies,
        mean_energy: BySpecies | None = None,
        pinching: BySpecies | None = None,
        temperature: BySpecies | None = None,
        degeneracy: BySpecies | None = None,
        title: str = "time-integrated burst",
    ) -> Burst:
        """Make a burst without a time profile.

        Parameters
        ----------
        energy
            energy of ONE neutrino kind of each species, such as ``{"nu_e": "5e52 erg", …}``;
            ``nu_x_sum_of_four`` in place of ``nu_x`` is divided by four.
        mean_energy, pinching
            pinched spectra, by species: energies with a unit, and plain numbers.
        temperature, degeneracy
            Fermi-Dirac spectra in place of them.
        title
            what the burst is called in results.

        Raises
        ------
        FileError
            with everything that cannot be used.
        """
        tables = {
            "energy_each": energy,
            "mean_energy": mean_energy,
            "pinching": pinching,
            "temperature": temperature,
            "degeneracy": degeneracy,
        }
        lines = [f"title = {textfiles.as_text(title)}", "", "[[component]]"]
        lines += ['name = "all"', 'kind = "integrated"']
        given = {key: values for key, values in tables.items() if values is not None}
        lines += [f"{key} = {textfiles.as_text(values)}" for key, values in given.items()]
        return cls.parse("\n".join(lines) + "\n", origin=title)

    def replace(self, changes: Mapping[str, object]) -> Burst:
        """Make a burst with other values at some key paths, ``{"core.rise_time": "40 ms"}``.

        Components go by their name: ``"core.mean_energy.nu_e"``.

        Raises
        ------
        FileError
            where a path or value is not one that a burst file may have.
        """
        in_file = {_in_file(path): value for path, value in changes.items()}
        return self.of_document(self.document.changed(in_file))

    @property
    def text(self) -> str:
        """The file as it was read, without the changes made since."""
        return self.document.text

    @property
    def origin(self) -> str:
        """Path of the file, or name of the preset."""
        return self.document.origin

    @property
    def time_integrated(self) -> bool:
        """Whether the burst has no time profile."""
        return any(isinstance(part, Integrated) for part in self.components)

    @property
    def joints_s(self) -> tuple[float, ...]:
        """Times in s at which the emission is not smooth, from start to end."""
        inside = {t for part in self.components for t in part.joints_s}
        return tuple(sorted(t for t in inside if self.start_s < t < self.end_s))

    @property
    def joints_mev(self) -> tuple[float, ...]:
        """Energies in MeV at which a spectrum is not smooth."""
        return tuple(sorted({e for part in self.components for e in part.joints_mev}))

    def rate(self, time_s: ArrayLike, energy_mev: ArrayLike) -> Floats:
        """Emission of one kind each in 1/s/MeV, shape (4, times, energies); 0 outside the burst.

        Raises
        ------
        InputError
            for a burst without a time profile.
        """
        times, energies = np.atleast_1d(time_s), np.atleast_1d(energy_mev)
        parts = [part.rate(times, energies) for part in self._flowing()]
        total: Floats = np.sum(parts, axis=0) * self._covers(times)[:, None]
        return total

    def emitted(self, energy_mev: ArrayLike) -> Floats:
        """Neutrinos of one kind each emitted in all, in 1/MeV, shape (4, energies).

        Raises
        ------
        InputError
            for a burst with a time profile: integrate its rate.
        """
        parts = [part for part in self.components if isinstance(part, Integrated)]
        if not parts:
            message = f"the burst {self.title!r} has a time profile; ask for its rate"
            raise InputError(message)
        total: Floats = np.sum([part.emitted(np.atleast_1d(energy_mev)) for part in parts], axis=0)
        return total

    def luminosity(self, time_s: ArrayLike) -> Floats:
        """Luminosity of one neutrino kind each in erg/s, shape (4, times)."""
        return self._moment(1, time_s) / MEV_PER_ERG

    def mean_energy(self, time_s: ArrayLike) -> Floats:
        """Mean energy in MeV, shape (4, times); not a number where nothing is emitted."""
        number, energy = self._moment(0, time_s), self._moment(1, time_s)
        mean: Floats = np.full(number.shape, np.nan)
        np.divide(energy, number, out=mean, where=number > 0)
        return mean

    def energy_width(self, time_s: ArrayLike) -> Floats:
        """Standard deviation √(⟨E²⟩ − ⟨E⟩²) of the spectrum in MeV, (4, times); NaN as above."""
        number, square = self._moment(0, time_s), self._moment(2, time_s)
        mean = self.mean_energy(time_s)
        spread: Floats = np.full(number.shape, np.nan)
        np.divide(square, number, out=spread, where=number > 0)
        return np.sqrt(spread - mean**2)

    def time_panels(self) -> Floats:
        """Edges of time panels from start to end, for 8 Gauss-Legendre points each."""
        return self._panels

    def summary(self) -> Summary:
        """Sum up energies and numbers, as a small table with warnings about the unusual."""
        return Summary.from_moments(self.title, self._emitted_moments, self.star)

    @cached_property
    def _panels(self) -> Floats:
        def probe(times: Floats) -> Floats:
            return np.moveaxis(self.rate(times, PROBES_MEV), 1, 2).reshape(-1, len(times))

        edges = panels.time_panels(self.start_s, self.end_s, self.joints_s, probe)
        edges.setflags(write=False)
        return edges

    @cached_property
    def _emitted_moments(self) -> Floats:
        orders = (0, 1, 2)
        if self.time_integrated:
            parts = [part for part in self.components if isinstance(part, Integrated)]
            return np.array([np.sum([part.moment(n) for part in parts], axis=0) for n in orders])

        def moments(times: Floats) -> Floats:
            return np.concatenate([self._moment(n, times) for n in orders])

        integrals = panels.panel_integrals(moments, self._panels)
        return np.reshape(np.sum(integrals, axis=-1), (len(orders), -1))

    def _moment(self, order: int, time_s: ArrayLike) -> Floats:
        times = np.atleast_1d(np.asarray(time_s, float))
        parts = [part.moment(order, times) for part in self._flowing()]
        total: Floats = np.sum(parts, axis=0) * self._covers(times)
        return total

    @property
    def flowing(self) -> dict[str, Flowing]:
        """Components with a time profile by their name in the file."""
        pairs = zip(self.names, self.components, strict=False)
        return {name: part for name, part in pairs if not isinstance(part, Integrated)}

    def _flowing(self) -> list[Flowing]:
        parts = [part for part in self.components if not isinstance(part, Integrated)]
        if not parts:
            message = (
                f"the burst {self.title!r} has no time profile; ask for what is emitted in all"
            )
            raise InputError(message)
        return parts

    def _covers(self, times: Floats) -> NDArray[np.bool_]:
        return (times >= self.start_s) & (times <= self.end_s)


def _in_file(path: str) -> str:
    """Key path as it stands in the file, where components are elements of an array."""
    first, dot, _ = path.partition(".")
    return f"component.{path}" if dot and first not in BurstKeys.model_fields else path
