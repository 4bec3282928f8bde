"""What a kilogram of a material holds: free protons, electrons, and every nuclide."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from functools import lru_cache
from types import MappingProxyType

from tenkpc import data
from tenkpc.constants import AVOGADRO_PER_MOL
from tenkpc.errors import InputError, UnknownNameError
from tenkpc.nuclides import Nuclide, atoms

# mass fractions may miss 1 by this much, for rounding; then they are scaled to add up exactly
ROUNDING = 1e-3


@dataclass(frozen=True, eq=False)
class Composition:
    """Nuclei and electrons in a kilogram.

    Attributes
    ----------
    nuclei_per_kg
        number of nuclei by nuclide.
    """

    nuclei_per_kg: Mapping[Nuclide, float]

    @property
    def electrons_per_kg(self) -> float:
        """Number of electrons: as many as protons."""
        return math.fsum(n.protons * count for n, count in self.nuclei_per_kg.items())

    def targets(self, kind: str) -> float:
        """Number per kilogram of ``"electron"`` or of a nuclide such as ``"H-1"``; 0 for none."""
        if kind == "electron":
            return self.electrons_per_kg
        return math.fsum(count for n, count in self.nuclei_per_kg.items() if n.name == kind)


@dataclass(frozen=True)
class Material:
    """A material with a name."""

    name: str
    formula: str
    density_g_cm3: float
    source: str


def elements(composition: Composition) -> dict[str, float]:
    """Atoms of each element, by its symbol, in a kilogram."""
    found: dict[str, float] = {}
    for nuclide, count in composition.nuclei_per_kg.items():
        symbol = nuclide.name.partition("-")[0]
        found[symbol] = found.get(symbol, 0.0) + count
    return found


def of_formula(formula: str) -> Composition:
    """Composition of a chemical formula, element or isotope: N_A × number / molar mass."""
    parts = atoms(formula)
    molar_mass = math.fsum(nuclide.mass_g_per_mol * count for nuclide, count in parts)
    per_kg = 1000.0 * AVOGADRO_PER_MOL / molar_mass
    return Composition(MappingProxyType({nuclide: per_kg * count for nuclide, count in parts}))


def of_mass_fractions(fractions: Mapping[str, float]) -> Composition:
    """Composition of a mixture given by mass fractions of elements, isotopes or formulas.

    Raises
    ------
    InputError
        where a fraction is not positive or they do not add up to 1.
    """
    wrong = [name for name, share in fractions.items() if not 0 < share <= 1]
    if wrong:
        message = f"mass fraction of {wrong[0]!r}: expected more than 0 and at most 1"
        raise InputError(message)
    total = math.fsum(fractions.values())
    if abs(total - 1) > ROUNDING:
        parts = " + ".join(f"{name} {share:g}" for name, share in fractions.items())
        message = f"mass fractions add up to {total:g}, not 1 ({parts})"
        raise InputError(message)
    nuclei: dict[Nuclide, float] = {}
    for name, share in fractions.items():
        for nuclide, count in of_formula(name).nuclei_per_kg.items():
            nuclei[nuclide] = nuclei.get(nuclide, 0.0) + count * share / total
    return Composition(MappingProxyType(nuclei))


def names() -> tuple[str, ...]:
    """Names of the materials that come with the package, alphabetically."""
    return tuple(sorted(_materials()))


def named(name: str) -> Material:
    """Look a material up by its name.

    Raises
    ------
    UnknownNameError
        where there is none of this name.
    """
    if name not in _materials():
        kind = "material"
        raise UnknownNameError(kind, name, names())
    return _materials()[name]


@lru_cache(maxsize=1)
def _materials() -> dict[str, Material]:
    return {material.name: material for material in _read()}


def _read() -> Iterator[Material]:
    for file in data.names("materials"):
        tables = data.document(f"materials/{file}.toml")
        source = tables["provenance"]["source"]
        yield Material(tables["name"], tables["formula"], tables["density_g_cm3"], source)
