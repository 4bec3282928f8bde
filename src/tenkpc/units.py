"""Units at the door: the only module that knows pint.

Quantities come in as texts such as ``"10 kpc"`` or as pint quantities of any registry, and
leave as floats in a stated unit. Nothing is defined in the registry, which is pint's
application registry; tons are therefore translated here, where a mass is due:

* ``kt``, ``kton``, ``kiloton``, ``Mt``, ``Mton``, ``megaton`` are metric. Left alone pint reads
  ``kt`` as a knot and ``kton`` as a thousand US short tons, 9.3 % less.
* a bare ``ton`` is refused, since it may mean three things.
"""

from __future__ import annotations

import math
import re
from functools import lru_cache
from typing import TYPE_CHECKING, Any, cast

from tenkpc.errors import DimensionError, UnitError

if TYPE_CHECKING:
    import pint

_METRIC = {
    "kt": "kilotonne",
    "kton": "kilotonne",
    "ktons": "kilotonne",
    "kiloton": "kilotonne",
    "kilotons": "kilotonne",
    "Mt": "megatonne",
    "Mton": "megatonne",
    "Mtons": "megatonne",
    "megaton": "megatonne",
    "megatons": "megatonne",
}
_AMBIGUOUS = {"ton", "tons"}
# what most files are written in, by dimension: pint's registry takes as long to build as all else
# takes to start, so these are known beside it; a test holds each against pint
_PARSEC_CM = 648000 / math.pi * 149597870700e2
_COMMON: dict[str, dict[str, float]] = {
    "energy": {"eV": 1e-6, "keV": 1e-3, "MeV": 1.0, "GeV": 1e3, "erg": 1e-13 / 1.602176634e-19},
    "mass": {"g": 1e-3, "kg": 1.0, "t": 1e3, "tonne": 1e3, "kt": 1e6, "kiloton": 1e6, "kton": 1e6}
    | {"kilotonne": 1e6, "Mt": 1e9, "megatonne": 1e9, "Mton": 1e9},
    "length": {"fm": 1e-13, "cm": 1.0, "m": 1e2, "km": 1e5}
    | {"pc": _PARSEC_CM, "kpc": 1e3 * _PARSEC_CM, "Mpc": 1e6 * _PARSEC_CM},
    "time": {"us": 1e-6, "ms": 1e-3, "s": 1.0, "min": 60.0, "hour": 3600.0, "day": 86400.0},
    "rate": {"1/s": 1.0, "/s": 1.0, "Hz": 1.0, "/min": 1 / 60, "/hour": 1 / 3600}
    | {"/day": 1 / 86400},
    "power": {"erg/s": 1.0, "MeV/s": 1.602176634e-19 / 1e-13},
    "density": {"g/cm^3": 1.0, "kg/m^3": 1e-3},
    "stopping": {"cm/MeV": 1.0},
    "area": {"cm^2": 1.0, "m^2": 1e4},
}
# a number, then its unit: what most texts are
_PLAIN = re.compile(
    r"(?P<number>[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?)\s*(?P<unit>[A-Za-zµ/].*)"
)
# pint's names of US tons end like this; those of metric and long tons are told apart before it
_SHORT_TONS = re.compile(r"\b\w*(?<!metric_)(?<!long_)ton\b")
# the words for dimensions that the messages use
_DIMENSIONS = {
    frozenset({("[mass]", 1)}): "a mass",
    frozenset({("[length]", 1)}): "a length",
    frozenset({("[time]", 1)}): "a time",
    frozenset({("[time]", -1)}): "a rate",
    frozenset({("[length]", 1), ("[time]", -1)}): "a speed",
    frozenset({("[length]", 2), ("[mass]", 1), ("[time]", -2)}): "an energy",
    frozenset({("[length]", 2), ("[mass]", 1), ("[time]", -3)}): "a luminosity",
    frozenset({("[mass]", 1), ("[length]", -3)}): "a density",
    frozenset({("[length]", 2)}): "an area",
    frozenset({("[length]", 3)}): "a volume",
    frozenset(): "a plain number",
}


@lru_cache(maxsize=1)
def registry() -> Any:
    """Give pint's application registry, the one that other code of the process uses too."""
    import pint

    return pint.get_application_registry()  # type: ignore[no-untyped-call]


def to_float(value: object, unit: str, argument: str, example: str) -> float:
    """Convert a text or quantity to a float in ``unit``.

    Parameters
    ----------
    value
        such as ``"10 kpc"``, or a pint quantity of any registry.
    unit
        the unit of the result, in pint's words.
    argument, example
        what the value is called, and a good value: both for the message.

    Raises
    ------
    UnitError
        where the unit is missing, unknown or of another dimension, or the number not finite.
    """
    if isinstance(value, str):
        plain = _PLAIN.fullmatch(value.strip())
        factor = _factor(plain["unit"], unit) if plain else None
        if (
            plain
            and factor is not None
            and math.isfinite(number := float(plain["number"]) * factor)
        ):
            return number
        quantity = _read(value, unit, argument, example)
    elif hasattr(value, "magnitude") and hasattr(value, "units"):
        quantity = _foreign(value, unit, argument, example)
    else:
        found = f"found {value!r}"
        message = f"{argument}: expected a value with its unit, {_quote(example)}; {found}"
        raise UnitError(message)
    return _converted(quantity, unit, argument, example, shown=str(value))


@lru_cache(maxsize=256)
def _factor(words: str, unit: str) -> float | None:
    """What one of a unit is in another; None where only the whole text tells, or is wrong.

    Files hold the same few units over and over, and pint takes a millisecond for each text.
    """
    for known in _COMMON.values():
        if words in known and unit in known:
            return known[words] / known[unit]
    try:
        one, two = (to_float(registry().Quantity(f"{n} {words}"), unit, "", "") for n in (1, 2))
        metric = _is_mass(unit)
    except Exception:  # whatever it is, reading the whole text says it with its argument
        return None
    # masses have rules of their own, and some units have an offset
    return one if not metric and two == 2 * one else None


def to_fraction(value: object, argument: str) -> float:
    """Convert ``0.94`` or ``"94 %"`` to a share between 0 and 1.

    Raises
    ------
    UnitError
        where the value is no share: ``95`` and ``"95"`` are refused, ``"95 %"`` is meant.
    """
    expected = 'expected a share between 0 and 1, or per cent, such as 0.94 or "94 %"'
    if isinstance(value, bool) or not isinstance(value, int | float | str):
        message = f"{argument}: {expected}; found {value!r}"
        raise UnitError(message)
    words = str(value).strip()
    whole = 100.0 if words.endswith("%") else 1.0
    try:
        share = float(words.removesuffix("%")) / whole
    except ValueError:
        message = f"{argument}: {expected}; found {value!r}"
        raise UnitError(message) from None
    if not 0 <= share <= 1:
        hint = f'; did you mean "{words} %"?' if whole == 1.0 and 1 < share <= 100 else ""
        message = f"{argument}: {expected}; found {value!r}{hint}"
        raise UnitError(message)
    return share


def quantity(value: float, unit: str) -> pint.Quantity[float]:
    """Give a float its unit back, for whoever wants to go on with quantities."""
    return cast("pint.Quantity[float]", registry().Quantity(value, unit))


def _quote(example: str) -> str:
    return f'such as "{example}"'


def _is_mass(unit: str) -> bool:
    return bool(registry().Unit(unit).dimensionality == {"[mass]": 1})


def _read(text: str, unit: str, argument: str, example: str) -> Any:
    """Read a text; where a mass is due, tons are metric."""
    import pint

    words = text.strip()
    if _is_mass(unit):
        names = set(re.findall(r"[A-Za-z]+", words))
        if names & _AMBIGUOUS:
            choices = "tonne (1000 kg), short_ton (907 kg) or long_ton (1016 kg)"
            message = f"{argument}: a ton may be several things; write {choices}: {text!r}"
            raise UnitError(message)
        words = re.sub(r"[A-Za-z]+", lambda m: _METRIC.get(m[0], m[0]), words)
    try:
        read = registry().Quantity(words)
    except pint.UndefinedUnitError as error:
        name = ", ".join(str(part) for part in error.args)
        hint = f"unknown unit {name!r} in {text!r}"
        message = f"{argument}: {hint}; expected a value {_quote(example)}"
        raise UnitError(message) from None
    except Exception:  # pint's parser raises whatever its tokenizer met
        message = f"{argument}: cannot read {text!r}; expected a value {_quote(example)}"
        raise UnitError(message) from None
    if read.dimensionless and not registry().Unit(unit).dimensionless:
        if not read.unitless:
            return read
        message = f"{argument}: {text!r} lacks its unit; expected a value {_quote(example)}"
        raise UnitError(message)
    return read


def _foreign(value: Any, unit: str, argument: str, example: str) -> Any:
    """Take a quantity of any registry, unless its unit is one of the tempting wrong ones."""
    units = str(value.units)
    if _is_mass(unit) and _SHORT_TONS.search(units):
        message = f"{argument}: {value} counts US short tons of 907 kg; give tonnes or kilograms"
        message = f"{message}, {_quote(example)}"
        raise UnitError(message)
    return value


def _converted(value: Any, unit: str, argument: str, example: str, *, shown: str) -> float:
    import pint

    try:
        number = float(value.to(unit).magnitude)
    except pint.DimensionalityError:
        raise DimensionError(_wrong_dimension(value, unit, argument, example, shown)) from None
    except (TypeError, ValueError):
        message = f"{argument}: expected one number, {_quote(example)}; found {shown!r}"
        raise UnitError(message) from None
    if not math.isfinite(number):
        message = f"{argument}: expected a finite number, {_quote(example)}; found {shown!r}"
        raise UnitError(message)
    return number


def _wrong_dimension(value: Any, unit: str, argument: str, example: str, shown: str) -> str:
    found = _dimension(value.dimensionality)
    expected = _dimension(registry().Unit(unit).dimensionality)
    knot = "; a knot? write kilotonne for kt" if "knot" in str(value.units) else ""
    return f"{argument}: {shown!r} is {found}; expected {expected}, {_quote(example)}{knot}"


def _dimension(dimensionality: Any) -> str:
    known = _DIMENSIONS.get(frozenset(dimensionality.items()))
    return known or f"of dimension {dimensionality}"
