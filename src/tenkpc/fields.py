"""Types of the fields of users' files: written with a unit or per cent, floats inside."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from typing import Annotated, Any, TypeAlias

from pydantic import GetCoreSchemaHandler, GetJsonSchemaHandler
from pydantic_core import PydanticCustomError, core_schema

from tenkpc import units
from tenkpc.errors import DimensionError, InputError

BIRKS_PER_LENGTH = "cm/MeV"
BIRKS_UNITS = (BIRKS_PER_LENGTH, "g/cm^2/MeV")
# scintillators have about 0.01 (common practice); ten times as much is a slip of a unit
LARGEST_BIRKS = 0.1
# letters behind an energy that say whose it is: of a nucleus that recoils, or of the electron
# that would give the same signal
_LABELLED = re.compile(r"(?P<energy>.*[A-Za-z]?eV)(?P<label>nr|ee)\s*")
_QUANTA = re.compile(r"(?P<number>\d+)\s+(?P<quanta>photo)?electrons?\s*")
_FACTOR = re.compile(r"factor\s+(?P<number>\d+(\.\d*)?)\s*")
_YIELD = re.compile(
    r"(?P<number>\S+)\s+(?P<quanta>photoelectrons|electrons)\s*/\s*"
    r"(?P<energy>\w*eV)(?P<label>nr|ee)\s*"
)


def labelled(value: object) -> tuple[object, str]:
    """Split an energy such as ``"3 keVnr"`` into what pint can read, and its label."""
    found = _LABELLED.fullmatch(value) if isinstance(value, str) else None
    return (found["energy"], found["label"]) if found else (value, "")


class _Converted:
    """A field whose value `convert` makes of what is written, or says what is wrong with it."""

    def convert(self, value: object) -> Any:
        """Turn what is written into floats; raise an `InputError` where it cannot be."""
        raise NotImplementedError

    def _checked(self, value: object) -> Any:
        try:
            return self.convert(value)
        except InputError as error:
            words = str(error).removeprefix(": ")
            kind = "sentence"
            raise PydanticCustomError(kind, "{words}", {"words": words}) from None

    def __get_pydantic_core_schema__(
        self, source: Any, handler: GetCoreSchemaHandler
    ) -> core_schema.CoreSchema:
        return core_schema.no_info_plain_validator_function(self._checked)

    def __get_pydantic_json_schema__(
        self, schema: core_schema.CoreSchema, handler: GetJsonSchemaHandler
    ) -> dict[str, Any]:
        return self.json_schema()

    def json_schema(self) -> dict[str, Any]:
        """Give the schema that lets an editor complete and check."""
        raise NotImplementedError


@dataclass(frozen=True)
class InUnit(_Converted):
    """A quantity in a unit.

    Attributes
    ----------
    unit
        unit of the float.
    example
        a good value, for messages and for the schema.
    minimum, above
        least value, and value that must be exceeded, in ``unit``.
    """

    unit: str
    example: str
    minimum: float | None = None
    above: float | None = None

    def convert(self, value: object) -> float:
        """Turn a text such as ``"12 kt"`` into a float in the unit."""
        number = units.to_float(value, self.unit, "", self.example)
        if self.minimum is not None and number < self.minimum:
            message = f"expected at least {self.minimum:g} {self.unit}; found {value!r}"
            raise InputError(message)
        if self.above is not None and number <= self.above:
            message = f"expected more than {self.above:g} {self.unit}; found {value!r}"
            raise InputError(message)
        return number

    def json_schema(self) -> dict[str, Any]:
        """Give a text with an example."""
        return {"type": "string", "examples": [self.example]}


@dataclass(frozen=True)
class LabelledEnergy(InUnit):
    """An energy that may say whose it is, ``"3 keVnr"``; see `labelled`."""

    def convert(self, value: object) -> float:
        """Turn a text into a float in the unit; whether its label fits is for others to say."""
        return super().convert(labelled(value)[0])


@dataclass(frozen=True)
class Cut:
    """A threshold: an energy in MeV with its label, or a number of quanta with their name."""

    value: float
    label: str = ""
    quanta: str = ""


@dataclass(frozen=True)
class Threshold(_Converted):
    """An energy, or a number of ``electrons`` or ``photoelectrons``."""

    example: str = "5 MeV"

    def convert(self, value: object) -> Cut:
        """Turn a text into a cut."""
        found = _QUANTA.fullmatch(value) if isinstance(value, str) else None
        if found is None:
            return Cut(
                LabelledEnergy("MeV", self.example, minimum=0.0).convert(value), labelled(value)[1]
            )
        number = int(found["number"])
        if number < 1:
            message = f"expected at least 1; found {value!r}"
            raise InputError(message)
        return Cut(number, quanta=f"{found['quanta'] or ''}electrons")

    def json_schema(self) -> dict[str, Any]:
        """Give a text with examples."""
        return {"type": "string", "examples": [self.example, "3 keVnr", "4 electrons"]}


@dataclass(frozen=True)
class QuantaPerEnergy:
    """So many quanta for each MeV of an energy of a label."""

    per_mev: float
    quanta: str
    label: str


@dataclass(frozen=True)
class QuantaYield(_Converted):
    """A yield such as ``"6.5 photoelectrons/keVee"``."""

    example: str = "6.5 photoelectrons/keVee"

    def convert(self, value: object) -> QuantaPerEnergy:
        """Turn a text into a yield."""
        found = _YIELD.fullmatch(value) if isinstance(value, str) else None
        if found is None:
            message = (
                f"expected a number of electrons or photoelectrons per keVnr or keVee, such as "
                f"{self.example!r}; found {value!r}"
            )
            raise InputError(message)
        one = InUnit("MeV", "1 keV", above=0.0).convert(f"1 {found['energy']}")
        try:
            number = float(found["number"])
        except ValueError:
            number = 0.0
        if not 0 < number < float("inf"):
            message = f"expected a number above zero; found {value!r}"
            raise InputError(message)
        return QuantaPerEnergy(number / one, found["quanta"], found["label"])

    def json_schema(self) -> dict[str, Any]:
        """Give a text with an example."""
        return {"type": "string", "examples": [self.example]}


@dataclass(frozen=True)
class BirksConstant(_Converted):
    """Birks' constant, which comes in two dimensions: a float and the unit it is in.

    In cm/MeV it goes with the stopping power in MeV/cm, in g/(cm² MeV) with the mass stopping
    power; the density of the medium turns one into the other.
    """

    example: str = "0.01 cm/MeV"

    def convert(self, value: object) -> tuple[float, str]:
        """Turn a text into a float and its unit, one of `BIRKS_UNITS`."""
        for unit in BIRKS_UNITS:
            try:
                number = units.to_float(value, unit, "", self.example)
            except DimensionError:
                continue
            if not 0 <= number <= LARGEST_BIRKS:
                message = f"expected 0 to {LARGEST_BIRKS:g} {unit}; found {value!r}"
                raise InputError(message)
            return number, unit
        message = f"expected a value in {' or '.join(BIRKS_UNITS)}; found {value!r}"
        raise InputError(message)

    def json_schema(self) -> dict[str, Any]:
        """Give a text with an example."""
        return {"type": "string", "examples": [self.example]}


@dataclass(frozen=True)
class LogError(_Converted):
    """1σ of a logarithm: ``"15 %"`` for a small one, ``"factor 1.5"`` for a large one."""

    example: str = "15 %"

    def convert(self, value: object) -> float:
        """Turn per cent or a factor into the error of a logarithm."""
        found = _FACTOR.fullmatch(value) if isinstance(value, str) else None
        error = math.log(float(found["number"])) if found else units.to_fraction(value, "")
        if error <= 0:
            message = f"expected an error above zero; found {value!r}"
            raise InputError(message)
        return error

    def json_schema(self) -> dict[str, Any]:
        """Give a text with examples."""
        return {"type": "string", "examples": [self.example, "factor 1.5"]}


@dataclass(frozen=True)
class Share(_Converted):
    """A share between 0 and 1, written ``0.94`` or ``"94 %"``."""

    def convert(self, value: object) -> float:
        """Turn a number or per cent into a share."""
        return units.to_fraction(value, "")

    def json_schema(self) -> dict[str, Any]:
        """Give a number between 0 and 1, or a text."""
        return {"anyOf": [{"type": "number", "minimum": 0, "maximum": 1}, {"type": "string"}]}


Mass: TypeAlias = Annotated[float, InUnit("kg", "12 kt", above=0.0)]
Energy: TypeAlias = Annotated[float, LabelledEnergy("MeV", "5 MeV", minimum=0.0)]
Rate: TypeAlias = Annotated[float, InUnit("1/s", "40 /day", minimum=0.0)]
Birks: TypeAlias = Annotated[tuple[float, str], BirksConstant()]
Density: TypeAlias = Annotated[float, InUnit("g/cm^3", "0.86 g/cm^3", above=0.0)]
RelativeError: TypeAlias = Annotated[float, LogError()]
Fraction: TypeAlias = Annotated[float, Share()]
ThresholdCut: TypeAlias = Annotated[Cut, Threshold()]
QuantumYield: TypeAlias = Annotated[QuantaPerEnergy, QuantaYield()]
