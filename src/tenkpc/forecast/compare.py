"""Why two forecasts differ: one change after another, each as a factor on the total."""

from __future__ import annotations

import copy
from collections.abc import Iterator, Mapping
from dataclasses import replace
from typing import TYPE_CHECKING, Any, NamedTuple

from tenkpc import textfiles
from tenkpc.detector.detector import Detector
from tenkpc.errors import InputError
from tenkpc.forecast import words
from tenkpc.forecast.evaluation import Evaluation

if TYPE_CHECKING:
    from pandas import DataFrame

# parts of a detector file that change no count
SILENT = ("title", "about", "background", "uncertainty")
KeyPath = tuple[str | int, ...]


class Step(NamedTuple):
    """One change on the way from one forecast to the other, and the forecast after it."""

    change: str
    before: str
    after: str
    forecast: Evaluation


def frame(first: Evaluation, second: Evaluation) -> DataFrame:
    """Factors that lead from the first total to the second; their product is the ratio.

    Raises
    ------
    InputError
        where one of them counts nothing, so that there is no ratio.
    """
    from pandas import DataFrame

    if not isinstance(second, Evaluation):
        message = f"compare: expected a forecast, found {second!r}"
        raise InputError(message)
    if first.total <= 0 or second.total <= 0:
        message = "compare: a forecast that counts nothing has no factors"
        raise InputError(message)
    rows, total, held = [], first.total, list[Step]()
    for step in steps(first, second):
        held.append(step)
        after = step.forecast.total
        if after <= 0:
            continue  # no factor leads out of nothing: told together with the next change
        told = (", ".join(part) for part in zip(*(each[:3] for each in held), strict=True))
        rows.append((*told, after / total, after))
        total, held = after, []
    table = DataFrame(rows, columns=["change", "from", "to", "factor", "total"])
    table.attrs["ratio"] = second.total / first.total
    return table.set_index("change")


def steps(first: Evaluation, second: Evaluation) -> Iterator[Step]:
    """Change one input after another until the first forecast has become the second.

    The order is fixed (detector, interactions, burst, distance, conversion, windows): a factor
    says what a change does once those before it are made.
    """
    at = first
    for change, before, after, detector in _detectors(first.detector, second.detector):
        at = at.changed(detector=detector)
        yield Step(change, before, after, at)
    for name, (change, describe) in _INPUTS.items():
        if getattr(first, name) != getattr(second, name):
            at = at.changed(**{name: getattr(second, name)})
            yield Step(change, describe(first), describe(second), at)


_INPUTS: Mapping[str, tuple[str, Any]] = {
    "interactions": (
        "interactions",
        lambda f: ", ".join(f"{key} = {value}" for key, value in f.interactions.items()) or "all",
    ),
    "burst": ("burst", lambda f: f.burst.title),
    "distance_kpc": ("distance", lambda f: words.distance(f.distance_kpc)),
    "conversion": ("conversion", lambda f: f.conversion.describe()),
    "window_s": ("time window", lambda f: words.window(f)),
    "energy_above_mev": ("energy above", lambda f: f"{f.energy_above_mev or 0:g} MeV"),
}


def _detectors(first: Detector, second: Detector) -> Iterator[tuple[str, str, str, Detector]]:
    """Detectors on the way from the first to the second, each with one change more.

    Keys of volumes and of the response change one by one; where that alone makes no detector
    (another medium), all that is left is one change.
    """
    if first == second:
        return
    known = tuple({**dict(first.document.tables), **dict(second.document.tables)}.items())
    whole = replace(first.document, tables=known)
    ours, theirs = first.document.content(), second.document.content()
    for path in _differing(ours, theirs):
        table, before, after = str(path[0]), _at(ours, path), _at(theirs, path)
        ours = _changed(ours, path, after)
        try:
            made = Detector.of_document(whole.changed({table: ours.get(table, {})}))
        except InputError:
            yield "detector", first.title, second.title, second
            return
        whole = replace(made.document, tables=known)
        yield textfiles.dotted(path, theirs), _shown(before), _shown(after), made


def _differing(ours: Mapping[str, Any], theirs: Mapping[str, Any]) -> Iterator[KeyPath]:
    """Key paths at which two files differ: keys of tables that both have, else whole tables."""
    for key in dict.fromkeys([*ours, *theirs]):
        mine, other = ours.get(key), theirs.get(key)
        if mine == other or key in SILENT:
            continue
        if key == "volume" and _names(mine) == _names(other):
            pairs = enumerate(zip(mine or (), other or (), strict=True))
            yield from ((key, n, k) for n, (a, b) in pairs for k in _keys(a, b))
        elif isinstance(mine, dict) and isinstance(other, dict):
            yield from ((key, k) for k in _keys(mine, other))
        else:
            yield (key,)


def _keys(mine: Mapping[str, Any], other: Mapping[str, Any]) -> list[str]:
    """Keys under which two tables differ; a composition is one thing, however it is written."""
    return [k for k in dict.fromkeys([*mine, *other]) if mine.get(k) != other.get(k)]


def _names(volumes: Any) -> list[Any]:
    return [volume.get("name") for volume in volumes or ()]


def _at(tables: Any, path: KeyPath) -> Any:
    for part in path:
        tables = tables.get(part) if isinstance(tables, dict) else tables[part]
    return tables


def _changed(tables: Mapping[str, Any], path: KeyPath, value: Any) -> dict[str, Any]:
    """Copy tables with another value at a path; None takes the key out."""
    made = copy.deepcopy(dict(tables))
    node: Any = made
    for part in path[:-1]:
        node = node[part]
    if value is None:
        node.pop(path[-1], None)
    else:
        node[path[-1]] = value
    return made


def _shown(value: Any) -> str:
    return "—" if value is None else textfiles.as_text(value).strip('"')
