"""Elements, isotopes, chemical formulas: the only module that knows periodictable.

Natural abundances, masses and formulas come from the periodictable package, which carries the
compilations of IUPAC (abundances, atomic weights) and AME (isotope masses).
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

from tenkpc.errors import InputError, suggestion

# more atoms of a single element than any molecule a detector is filled with
MOST_ALIKE = 8


@dataclass(frozen=True)
class Nuclide:
    """An isotope: its name such as ``"O-16"``, Z, A, and atomic mass in g/mol."""

    name: str
    protons: int
    nucleons: int
    mass_g_per_mol: float

    @property
    def neutrons(self) -> int:
        """Number of neutrons."""
        return self.nucleons - self.protons


@lru_cache(maxsize=256)
def atoms(substance: str) -> tuple[tuple[Nuclide, float], ...]:
    """Isotopes of an element, isotope or formula, with how many of each one unit holds.

    Parameters
    ----------
    substance
        ``"C"``, ``"Xe-136"`` or a formula such as ``"C18H30"``; elements come as they are found
        on Earth.

    Raises
    ------
    InputError
        where it is none of these, or looks like a slip of the pen.
    """
    isotope = re.fullmatch(r"([A-Z][a-z]?)-(\d+)", substance.strip())
    if isotope:
        return ((_isotope(isotope[1], int(isotope[2])), 1.0),)
    counts: dict[Nuclide, float] = {}
    for element, count in _formula(substance.strip()).items():
        for nuclide, abundance in _isotopes(element):
            counts[nuclide] = counts.get(nuclide, 0.0) + count * abundance
    return tuple(sorted(counts.items(), key=lambda item: (item[0].protons, item[0].nucleons)))


def _table() -> Any:
    import periodictable

    return periodictable.elements


def _symbols() -> list[str]:
    return [element.symbol for element in _table() if element.number > 0]


def _formula(formula: str) -> dict[Any, float]:
    """Elements or isotopes of a formula, with their numbers."""
    import periodictable

    unknown = [s for s in re.findall(r"[A-Z][a-z]*", formula) if s not in {*_symbols(), "D", "T"}]
    if unknown:
        hint = suggestion(unknown[0], _symbols())
        message = f"{formula!r}: no element has the symbol {unknown[0]!r}{hint}"
        raise InputError(message)
    try:
        counts: dict[Any, float] = dict(periodictable.formula(formula).atoms)
    except Exception:  # its parser raises whatever its grammar met
        counts = {}
    if not counts or not re.fullmatch(r"[A-Za-z0-9().\[\]]+", formula):
        message = f"{formula!r} is no chemical formula; expected one such as 'C18H30'"
        raise InputError(message)
    _check_slip(formula, counts)
    return counts


def _check_slip(formula: str, counts: dict[Any, float]) -> None:
    """Refuse ``H20``, which is twenty hydrogens and hardly what was meant."""
    if len(counts) == 1 and sum(counts.values()) > MOST_ALIKE:
        letter = re.sub(r"(?<=\d)0", "O", formula)
        hint = f"; did you mean {letter!r}, with the letter O?" if letter != formula else ""
        message = f"{formula!r} is {sum(counts.values()):g} atoms of one element{hint}"
        raise InputError(message)


def _isotopes(element: Any) -> list[tuple[Nuclide, float]]:
    """Isotopes with their natural shares of atoms, which add up to 1."""
    if hasattr(element, "isotope"):
        return [(_nuclide(element), 1.0)]
    natural = [element[number] for number in element.isotopes]
    shares = [isotope.abundance for isotope in natural]
    total = sum(shares)
    if total <= 0:
        message = (
            f"{element.symbol} has no natural isotopes; name one, such as '{element.symbol}-1'"
        )
        raise InputError(message)
    return [(_nuclide(i), s / total) for i, s in zip(natural, shares, strict=True) if s > 0]


def _nuclide(isotope: Any) -> Nuclide:
    symbol = "H" if isotope.symbol in {"D", "T"} else isotope.symbol
    return Nuclide(f"{symbol}-{isotope.isotope}", isotope.number, isotope.isotope, isotope.mass)


def _isotope(symbol: str, nucleons: int) -> Nuclide:
    if symbol not in _symbols():
        message = f"no element has the symbol {symbol!r}{suggestion(symbol, _symbols())}"
        raise InputError(message)
    element = _table().symbol(symbol)
    if nucleons not in element.isotopes:
        known = ", ".join(f"{symbol}-{a}" for a in element.isotopes if element[a].abundance > 0)
        message = f"no isotope is called '{symbol}-{nucleons}'; natural ones: {known or 'none'}"
        raise InputError(message)
    return _nuclide(element[nucleons])
