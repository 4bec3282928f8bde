"""Text files that users write, read so that every mistake is reported, each with its line.

A file is described by pydantic models that derive from `Strict`. `parse` reads a text against
such a model and raises one `FileError` that holds everything that is wrong: keys that are
misspelt, missing, of the wrong dimension or out of range, and whatever the ``cross_rules`` of
the models say, which run on the tables as they were read, also where single fields failed.
"""

from __future__ import annotations

import math
import re
import tomllib
from collections.abc import Iterable, Iterator, Mapping, Sequence
from pathlib import Path
from typing import Any, TypeVar, get_args, get_origin

from pydantic import (
    BaseModel,
    ConfigDict,
    ValidationError,
)

from tenkpc.errors import FileError, Problem, suggestion
from tenkpc.keypaths import KeyPath, as_text, changed, dotted, line_of

__all__ = [
    "Strict",
    "as_text",
    "changed",
    "document",
    "dotted",
    "line_of",
    "parse",
    "read_columns",
    "read_text",
    "validate",
]

# no description of a detector or a burst is longer, and no table of an efficiency either
MOST_BYTES = 4_000_000

MISSING = "required key is missing"

Model = TypeVar("Model", bound="Strict")


class Strict(BaseModel):
    """Base of every table of a file: frozen, and unknown keys are mistakes."""

    model_config = ConfigDict(extra="forbid", frozen=True)

    @classmethod
    def cross_rules(cls, raw: Mapping[str, Any]) -> Iterable[tuple[KeyPath, str]]:
        """Say what is wrong between the keys of a table: paths inside it, and sentences."""
        return ()


def read_text(path: str | Path) -> str:
    """Read a text file in UTF-8.

    Raises
    ------
    FileError
        where there is none, or it is a folder, too long, or not text.
    """
    place = Path(path)
    try:
        if place.is_dir():
            raise _unreadable(place, "this is a folder; expected a file")
        if place.stat().st_size > MOST_BYTES:
            raise _unreadable(place, f"longer than {MOST_BYTES} bytes, so hardly what was meant")
        return place.read_text(encoding="utf-8-sig")
    except FileNotFoundError:
        raise _unreadable(place, f"no such file{_nearest(place)}") from None
    except UnicodeDecodeError:
        raise _unreadable(place, "not a text in UTF-8") from None
    except OSError as error:
        raise _unreadable(place, f"cannot be read: {error.strerror or error}") from None


def document(text: str, origin: str) -> dict[str, Any]:
    """Read TOML into tables.

    Raises
    ------
    FileError
        where the text is not TOML, with the line.
    """
    try:
        return tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        words = str(error)
        place = re.search(r"\(at line (\d+), column \d+\)", words)
        line = int(place[1]) if place else len(text.splitlines())
        sentence = re.sub(r"\s*\(at [^)]*\)", "", words)
        message = f"not valid TOML: {sentence[:1].lower()}{sentence[1:]}"
        raise FileError(origin, [_problem(text, line, "", message)]) from None


def parse(text: str, model: type[Model], origin: str) -> Model:
    """Read a text against a model.

    Raises
    ------
    FileError
        with every problem found, in the order of their lines.
    """
    return validate(document(text, origin), model, origin, text)


def validate(tables: Mapping[str, Any], model: type[Model], origin: str, text: str = "") -> Model:
    """Check tables against a model; the text they came from gives the lines.

    Raises
    ------
    FileError
        with every problem found, in the order of their lines.
    """
    found: dict[tuple[KeyPath, str], None] = {}
    checked = None
    try:
        checked = model.model_validate(tables)
    except ValidationError as error:
        for detail in error.errors(include_url=False):
            found[_explained(detail, model, tables)] = None
    for path, message in _cross(model, tables, ()):
        found[path, message] = None
    if found or checked is None:
        problems = (
            _problem(text, line_of(text, path) if text else 0, dotted(path, tables), message)
            for path, message in found
        )
        raise FileError(origin, problems)
    return checked


def read_columns(text: str, names: Sequence[str], origin: str) -> dict[str, list[float]]:
    """Read named columns of a CSV text with a line of headings; ``#`` begins a comment.

    Raises
    ------
    FileError
        with every line that does not hold a number in each of the columns.
    """
    lines = [
        (number, [cell.strip() for cell in line.split("#")[0].split(",")])
        for number, line in enumerate(text.splitlines(), 1)
        if line.split("#")[0].strip()
    ]
    if not lines:
        raise FileError(origin, [Problem(0, "", f"empty; expected columns {', '.join(names)}")])
    number, heads = lines[0]
    missing = [name for name in names if name not in heads]
    if missing or len(lines) < 2:
        message = f"expected a line of headings with {', '.join(names)}, then rows of numbers"
        raise FileError(origin, [Problem(number, "", message)])
    problems: list[Problem] = []
    columns = {name: _column(name, heads.index(name), lines[1:], problems) for name in names}
    if problems:
        raise FileError(origin, problems)
    return columns


def _column(
    name: str, place: int, lines: Sequence[tuple[int, list[str]]], problems: list[Problem]
) -> list[float]:
    values = []
    for number, cells in lines:
        cell = cells[place] if place < len(cells) else ""
        try:
            value = float(cell)
        except ValueError:
            value = math.nan
        if not math.isfinite(value):
            problems.append(Problem(number, name, f"expected a finite number, found {cell!r}"))
        values.append(value)
    return values


def _unreadable(place: Path, message: str) -> FileError:
    return FileError(str(place), [Problem(0, "", message)])


def _nearest(place: Path) -> str:
    folder = place.parent
    names = [entry.name for entry in folder.iterdir()] if folder.is_dir() else []
    return suggestion(place.name, names)


def _problem(text: str, line: int, path: str, message: str) -> Problem:
    lines = text.splitlines()
    shown = 0 < line <= len(lines) and message != MISSING
    excerpt = lines[line - 1].strip() if shown else ""
    return Problem(line, path, message, excerpt[:100])


def _explained(
    detail: Mapping[str, Any], model: type[Strict], tables: Mapping[str, Any]
) -> tuple[KeyPath, str]:
    """Key path of an error as the user wrote it, and what is wrong in plain words."""
    kind, context = detail["type"], detail.get("ctx", {})
    path, node = _written_path(detail["loc"], tables, keep_last=kind in _ABSENT)
    found = f"; found {as_text(node)[:60]}" if kind not in _ABSENT else ""
    match kind:
        case "sentence":
            return path, str(context["words"])
        case "missing":
            return path, MISSING
        case "extra_forbidden":
            known = _known_keys(model, tables, path[:-1])
            hint = suggestion(str(path[-1]), known)
            return path, f"unknown key{hint}; known here: {', '.join(known)}"
        case "literal_error" | "union_tag_invalid":
            expected = str(context.get("expected") or context.get("expected_tags"))
            words = re.findall(r"'([^']*)'", expected)
            hint = suggestion(str(node), words)
            place = path if kind == "literal_error" else (*path, "kind")
            value = node if kind == "literal_error" else context.get("tag")
            hint = suggestion(str(value), words)
            return place, f"expected one of {', '.join(words)}; found {value!r}{hint}"
        case "union_tag_not_found":
            return (*path, "kind"), MISSING
        case _:
            return path, f"{_PLAIN.get(kind, detail['msg']).format(**context)}{found}"


_ABSENT = {"missing", "extra_forbidden"}
_PLAIN = {
    "float_parsing": "expected a number",
    "float_type": "expected a number",
    "int_parsing": "expected a whole number",
    "int_type": "expected a whole number",
    "finite_number": "expected a finite number",
    "bool_type": "expected true or false",
    "bool_parsing": "expected true or false",
    "string_type": "expected a text in quotes",
    "string_too_short": "expected a text that is not empty",
    "tuple_type": "expected a list",
    "list_type": "expected a list",
    "dict_type": "expected a table",
    "model_type": "expected a table",
    "model_attributes_type": "expected a table",
    "too_short": "expected at least {min_length}",
    "too_long": "expected at most {max_length}",
    "greater_than": "expected more than {gt}",
    "greater_than_equal": "expected at least {ge}",
    "less_than": "expected less than {lt}",
    "less_than_equal": "expected at most {le}",
}


def _written_path(
    location: Sequence[str | int], tables: object, *, keep_last: bool
) -> tuple[KeyPath, object]:
    """Leave out what the checker adds to a path: tags of unions, keys that a shorthand implies."""
    path: list[str | int] = []
    node: object = tables
    for place, part in enumerate(location):
        last = keep_last and place == len(location) - 1
        if (isinstance(node, dict) and part in node) or last:
            path.append(part)
            node = node.get(part) if isinstance(node, dict) else None
        elif isinstance(node, list) and isinstance(part, int) and part < len(node):
            path.append(part)
            node = node[part]
    return tuple(path), node


def _models_in(annotation: Any) -> Iterator[type[Strict]]:
    """Every model that an annotation mentions."""
    if isinstance(annotation, type) and issubclass(annotation, Strict):
        yield annotation
    for part in get_args(annotation):
        yield from _models_in(part)


def _model_for(annotation: Any, table: Mapping[str, Any]) -> type[Strict] | None:
    """Model that a table is checked against; of several, the one of its kind."""
    models = list(_models_in(annotation))
    if len(models) <= 1:
        return models[0] if models else None
    return next((m for m in models if table.get("kind") in _kinds(m)), None)


def _kinds(model: type[Strict]) -> tuple[Any, ...]:
    tag = model.model_fields.get("kind")
    return get_args(tag.annotation) if tag is not None else ()


def _known_keys(model: type[Strict], tables: Mapping[str, Any], path: KeyPath) -> tuple[str, ...]:
    """Keys that the table at a path may have."""
    for table_path, table_model, _ in _tables(model, tables, ()):
        if table_path == path:
            return tuple(table_model.model_fields)
    return ()


def _tables(
    model: type[Strict], table: Mapping[str, Any], path: KeyPath
) -> Iterator[tuple[KeyPath, type[Strict], Mapping[str, Any]]]:
    """Every table of a document with the model it is checked against."""
    yield path, model, table
    for key, value in table.items():
        field = model.model_fields.get(key)
        if field is None:
            continue
        for where, element in _elements(value, field.annotation, (*path, key)):
            inner = _model_for(field.annotation, element) if isinstance(element, dict) else None
            if inner is not None:
                yield from _tables(inner, element, where)


def _elements(value: Any, annotation: Any, path: KeyPath) -> Iterator[tuple[KeyPath, Any]]:
    """Tables of an array, tables by name where names are free, or the one table itself."""
    if isinstance(value, list):
        yield from (((*path, place), element) for place, element in enumerate(value))
    elif get_origin(annotation) is dict and isinstance(value, dict):
        yield from (((*path, name), element) for name, element in value.items())
    else:
        yield path, value


def _cross(
    model: type[Strict], tables: Mapping[str, Any], path: KeyPath
) -> Iterator[tuple[KeyPath, str]]:
    for where, inner, table in _tables(model, tables, path):
        for part, message in inner.cross_rules(table):
            yield (*where, *part), message
