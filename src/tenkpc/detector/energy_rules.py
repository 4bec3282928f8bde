"""Which kinds of energy a medium reports, and which of its keys belong together.

The rules run on tables as they were read, so that one mistake does not hide the next.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from types import MappingProxyType
from typing import Any

from tenkpc.detector.media import MEDIA, Medium
from tenkpc.detector.scales import Scale
from tenkpc.fields import labelled

Problem = tuple[tuple[str | int, ...], str]

# the kind of energy that each label of a unit stands for
KINDS: Mapping[str, str] = MappingProxyType({"nr": "recoil", "ee": "visible"})
WHOSE = "keVnr, of the nucleus that recoils, or keVee, of an electron that gives the same signal"
# keys that some media have and others do not, in the order in which they are told
_OF_MEDIA = tuple(sorted(frozenset().union(*(medium.keys for medium in MEDIA.values()))))


def kind_of(raw: Mapping[str, Any]) -> str | None:
    """Observed kind of energy of a response as it was read; None where that cannot be told."""
    medium = _medium(raw)
    if medium is None:
        return None
    of_threshold = KINDS.get(labelled(_value(raw.get("threshold")))[1])
    kind = raw.get("energy", of_threshold or medium.kinds[0])
    return kind if isinstance(kind, str) and kind in medium.scales else None


def scale_of(raw: Mapping[str, Any]) -> Scale | None:
    """How energies of a response are written; None where that cannot be told."""
    medium, kind = _medium(raw), kind_of(raw)
    return medium.scales[kind] if medium and kind else None


def response(raw: Mapping[str, Any]) -> Iterator[Problem]:
    """Rules of a whole response."""
    name, medium = str(raw.get("medium")), _medium(raw)
    if medium is None:
        return
    whole = f"an {name}" if name[0] in "aeiou" else f"a {name}"
    for key in _OF_MEDIA:
        if key in raw and key not in medium.keys:
            yield (key,), f"does not belong to {whole}, which has {', '.join(sorted(medium.keys))}"
    threshold = raw.get("threshold")
    of = threshold.get("of") if isinstance(threshold, dict) else None
    for path, kind in ((("energy",), raw.get("energy")), (("threshold", "of"), of)):
        if kind is not None and kind not in medium.kinds:
            yield path, f"{whole} reports {' or '.join(medium.kinds)} energy; found {kind!r}"
    if name == "recoil":
        yield from _recoil(raw)
    elif name == "scintillator":
        yield from _scintillator(raw)
    scale = scale_of(raw)
    if scale is not None:
        yield from labels(_energies(raw), scale)


def labels(found: Iterable[tuple[tuple[str | int, ...], Any]], scale: Scale) -> Iterator[Problem]:
    """Check that energies, given with their paths, say whose they are where that is to be said."""
    for path, value in found:
        energy, label = labelled(value)
        if not isinstance(energy, str) or "eV" not in energy:
            continue  # no energy at all, which is reported already
        either = path[0] == "threshold" and scale.label
        if label == scale.label or (either and label):
            continue
        if not scale.label:
            yield path, f"{value!r}: {scale.unit} has no label {label!r} here; write plain energies"
        elif not label:
            yield path, f"{value!r} does not say whose energy it is; write {WHOSE}"
        else:
            yield path, f"{value!r}: energies are in {scale.unit} here"


def _recoil(raw: Mapping[str, Any]) -> Iterator[Problem]:
    """Rules for what becomes of a recoil's energy."""
    threshold, quenching = _value(raw.get("threshold")), raw.get("quenching")
    if isinstance(raw.get("threshold"), dict) and "of" in raw["threshold"]:
        yield ("threshold", "of"), f"the unit says it: write {WHOSE}"
    yields = {"light_yield": "photoelectrons", "charge_yield": "electrons"}
    given = [_value(raw.get(key)) for key in yields]
    needs = [v for v in (threshold, *given) if isinstance(v, str) and v.strip().endswith("ee")]
    if quenching is None and (needs or kind_of(raw) == "visible"):
        yield (
            ("quenching",),
            'is missing: energies in keVee need it; give "lindhard", or a table { file = … }, '
            'or "none" where nothing is lost',
        )
    if "lindhard_k" in raw and _value(quenching) != "lindhard":
        yield ("lindhard_k",), 'belongs to quenching = "lindhard"'
    for (key, quanta), value in zip(yields.items(), given, strict=True):
        word = threshold.split()[-1] if isinstance(threshold, str) and threshold.split() else ""
        if word.removesuffix("s") == quanta.removesuffix("s") and key not in raw:
            yield (key,), f"is missing: a threshold in {quanta} needs it"
        if isinstance(value, str) and "electrons" in value and f" {quanta}" not in f" {value}":
            yield (key,), f"is in {quanta}; found {value!r}"


def _scintillator(raw: Mapping[str, Any]) -> Iterator[Problem]:
    """Rules for the light of slow protons."""
    given = [key for key in ("birks", "quenching") if key in raw]
    if len(given) != 1:
        found = " and ".join(given) or "neither"
        yield (
            (),
            "the light of recoil protons: give birks (hydrocarbons), or quenching = "
            f'{{ file = … }}, or quenching = "none"; found {found}',
        )
    if _value(raw.get("quenching")) == "lindhard":
        yield ("quenching",), "Lindhard's formula is for heavy nuclei, not for protons"


def _energies(raw: Mapping[str, Any]) -> Iterator[tuple[tuple[str | int, ...], Any]]:
    """Give every energy of a response with its path."""
    if "threshold" in raw:
        yield ("threshold",), _value(raw["threshold"])
    resolution, efficiency = raw.get("resolution"), raw.get("efficiency")
    if isinstance(resolution, dict) and "noise" in resolution:
        yield ("resolution", "noise"), resolution["noise"]
    points = efficiency.get("points") if isinstance(efficiency, dict) else None
    for place, point in enumerate(points if isinstance(points, list) else []):
        if isinstance(point, list) and point:
            yield ("efficiency", "points", place, 0), point[0]


def _medium(raw: Mapping[str, Any]) -> Medium | None:
    name = raw.get("medium")
    return MEDIA.get(name) if isinstance(name, str) else None


def _value(given: Any) -> Any:
    """Give what a key says, whether it is written short or as a table."""
    return given.get("value") if isinstance(given, dict) else given
