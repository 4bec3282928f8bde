"""What a kilogram of a material holds: free protons, electrons, and every nuclide."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from functools import lru_cache
from types import MappingProxyType

from tenkpc import data
from tenkpc.constants import ATOMIC_MASS_MEV, AVOGADRO_PER_MOL, ELECTRON_MASS_MEV
from tenkpc.errors import InputError, UnknownNameError
from tenkpc.interactions.base import Nucleus
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

    @property
    def nuclei(self) -> tuple[Nucleus, ...]:
        """Every nucleus in it, as a target."""
        return tuple(map(nucleus, self.nuclei_per_kg))

    def targets(self, kind: str) -> float:
        """Number per kilogram of electrons, a nuclide or an element; 0 for none.

        ``"electron"``, ``"H-1"``, or ``"Pb"`` for all its atoms.
        """
        if kind == "electron":
            return self.electrons_per_kg
        found = ((n.name, count) for n, count in self.nuclei_per_kg.items())
        return math.fsum(count for name, count in found if kind in (name, symbol(name)))


def nucleus(nuclide: Nuclide | str) -> Nucleus:
    """Give a nuclide, or the one of a name such as ``"Ar-40"``, as a target.

    Its mass is that of the neutral atom without its electrons.

    Raises
    ------
    InputError
        where a name is not that of one nuclide.
    """
    if isinstance(nuclide, str):
        found = atoms(nuclide)
        if len(found) != 1:
            message = f"{nuclide!r} is not one nuclide; name one, such as {found[0][0].name!r}"
            raise InputError(message)
        nuclide = found[0][0]
    mass = nuclide.mass_g_per_mol * ATOMIC_MASS_MEV - nuclide.protons * ELECTRON_MASS_MEV
    return Nucleus(nuclide.name, nuclide.protons, nuclide.nucleons, mass)


def no_target(name: str) -> str:
    """Say why a name is not that of electrons, an element or an isotope; nothing where it is."""
    if name == "electron":
        return ""
    try:
        found = {symbol(nuclide.name) for nuclide, _ in atoms(name)}
    except InputError as error:
        return str(error)
    if len(found) == 1 and name.partition("-")[0] in found:
        return ""
    return f"{name!r} is no electron, element or isotope such as 'Ar' or 'Pb-208'"


def symbol(nuclide: str) -> str:
    """Symbol of a nuclide's element: ``"Pb"`` of ``"Pb-208"``."""
    return nuclide.partition("-")[0]


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
        element = symbol(nuclide.name)
        found[element] = found.get(element, 0.0) + count
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
