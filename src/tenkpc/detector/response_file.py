"""The `[response]` table of a detector file: which keys there are, and how they belong together.

Shorthands (`threshold = "5 MeV"`, `efficiency = "94 %"`) are written out before the check, so
that a key means the same however it was written. `[response]` is one model for all media: a
misspelt medium must not hide the mistakes in the lines below it.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from typing import Annotated, Any, Literal

from pydantic import BeforeValidator, Field

from tenkpc.detector import energy_rules
from tenkpc.detector.media import MEDIA
from tenkpc.fields import Birks, Energy, Fraction, QuantumYield, ThresholdCut
from tenkpc.textfiles import Strict

Problems = Iterable[tuple[tuple[str | int, ...], str]]
Kind = Literal["kinetic", "recoil", "total", "visible"]
MediumName = Literal["cherenkov", "ionisation", "neutron-counter", "recoil", "scintillator"]


def written_out(value: Any) -> Any:
    """Turn a bare value into the table that it is short for."""
    return value if isinstance(value, dict) else {"value": value}


class ThresholdKeys(Strict):
    """`threshold`: an energy or a number of quanta, or an energy and the kind it is given in."""

    value: ThresholdCut
    of: Kind | None = None


class ResolutionKeys(Strict):
    """`resolution`: σ/E = a/√(E/MeV) ⊕ b ⊕ c/E, added in quadrature or linearly."""

    stochastic: Annotated[float, Field(ge=0, le=10)] = 0.0
    constant: Annotated[float, Field(ge=0, le=10)] = 0.0
    noise: Energy = 0.0
    combine: Literal["quadrature", "linear"] = "quadrature"


class EfficiencyKeys(Strict):
    """`efficiency`: a share, or points of a curve, in the file or in a table beside it."""

    value: Fraction | None = None
    points: tuple[tuple[Energy, Fraction], ...] | None = None
    file: str | None = None
    of: Literal["observed", "true"] = "observed"
    beyond: Literal["error", "hold", "zero"] = "error"

    @classmethod
    def cross_rules(cls, raw: Mapping[str, Any]) -> Problems:
        """Check that the efficiency is given in exactly one way."""
        given = [key for key in ("value", "points", "file") if key in raw]
        if len(given) != 1:
            yield (), f"give one of value, points and file; found {' and '.join(given) or 'none'}"


class QuenchingKeys(Strict):
    """`quenching`: a table of the light of recoils, or the word for how it is reckoned."""

    value: Literal["lindhard", "none"] | None = None
    file: str | None = None
    beyond: Literal["error", "extend"] = "error"

    @classmethod
    def cross_rules(cls, raw: Mapping[str, Any]) -> Problems:
        """Check that it is either a table or a word."""
        if ("value" in raw) == ("file" in raw):
            yield (), "expected a word, or { file = … } with a table of kinetic and visible energy"


class YieldKeys(Strict):
    """`light_yield`, `charge_yield`: quanta set free by a recoil, and the share registered."""

    value: QuantumYield | None = None
    file: str | None = None
    beyond: Literal["error", "hold", "zero"] = "error"
    registered: Fraction = 1.0

    @classmethod
    def cross_rules(cls, raw: Mapping[str, Any]) -> Problems:
        """Check that it is either a value or a table."""
        if ("value" in raw) == ("file" in raw):
            yield (), "give one of value and file"


class ResponseKeys(Strict):
    """`[response]`: what the instrument makes of an event."""

    medium: MediumName
    energy: Kind | None = None
    threshold: Annotated[ThresholdKeys, BeforeValidator(written_out)] | None = None
    resolution: ResolutionKeys = ResolutionKeys()
    birks: Birks | None = None
    quenching: Annotated[QuenchingKeys, BeforeValidator(written_out)] | None = None
    lindhard_k: Annotated[float, Field(gt=0, lt=1)] | None = None
    light_yield: Annotated[YieldKeys, BeforeValidator(written_out)] | None = None
    charge_yield: Annotated[YieldKeys, BeforeValidator(written_out)] | None = None
    fluctuation: Literal["poisson", "binomial"] = "poisson"
    gamma_containment: Fraction = 1.0
    neutron_efficiency: Fraction = 1.0
    efficiency: Annotated[EfficiencyKeys, BeforeValidator(written_out)] | None = None
    live_fraction: Fraction = 1.0

    @property
    def kind(self) -> str:
        """The observed kind of energy: as given, or as the threshold says, or the default."""
        label = self.threshold.value.label if self.threshold else ""
        return self.energy or energy_rules.KINDS.get(label) or MEDIA[self.medium].kinds[0]

    @classmethod
    def cross_rules(cls, raw: Mapping[str, Any]) -> Problems:
        """Check what a medium can report and what it has to be told."""
        return energy_rules.response(raw)


class OwnResponseKeys(ResponseKeys):
    """`[volume.response]`: what one volume does otherwise than `[response]` says.

    What is left out is as in `[response]`; a medium of its own begins anew.
    """

    medium: MediumName | None = None  # type: ignore[assignment]

    @classmethod
    def cross_rules(cls, raw: Mapping[str, Any]) -> Problems:
        """None alone: the rules are those of the whole that it makes with `[response]`."""
        return ()


# each of these takes the other's place
_EITHER = ("birks", "quenching")


def joined(common: Mapping[str, Any], own: Mapping[str, Any]) -> dict[str, Any]:
    """Tables of a volume's whole response: the common keys with its own in their place."""
    if "medium" in own:
        return dict(own)
    replaced = set(_EITHER) if any(key in own for key in _EITHER) else set()
    return {**{k: v for k, v in common.items() if k not in replaced}, **own}
