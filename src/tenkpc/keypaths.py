"""Key paths of a TOML document: on which line they stand, and how to change what they hold."""

from __future__ import annotations

import copy
import json
import re
import tomllib
from collections.abc import Iterable, Mapping, Sequence
from numbers import Integral, Real
from typing import Any

from tenkpc.errors import FileError, Problem, suggestion

KeyPath = tuple[str | int, ...]

_HEAD = re.compile(r"^\s*(\[\[?)\s*([^\[\]]+?)\s*\]\]?\s*(?:#.*)?$")
_PART = r"(?:[\w-]+|\"[^\"]*\"|'[^']*')"
_KEY = re.compile(rf"^\s*({_PART}(?:\s*\.\s*{_PART})*)\s*=")
_STRINGS = re.compile(r"\"(?:\\.|[^\"\\])*\"|'[^']*'")
_LONG = re.compile(r"\"{3}|'{3}")


def line_of(text: str, path: Sequence[str | int]) -> int:
    """Line of a key path, from 1; of the nearest table around it where it does not stand.

    Keys inside an inline table stand on the line of the table.
    """
    best, found = 0, 1
    for key, line in key_lines(text):
        common = 0
        while common < min(len(key), len(path)) and key[common] == path[common]:
            common += 1
        if common > best and common == len(key):
            best, found = common, line
    return found


def key_lines(text: str) -> Iterable[tuple[KeyPath, int]]:
    """Every key and table heading with the line that it begins on."""
    table: KeyPath = ()
    counted: dict[KeyPath, int] = {}
    rest = _Continuation()
    for number, line in enumerate(text.splitlines(), 1):
        if rest.goes_on(line):
            continue
        if head := _HEAD.match(line):
            table = _heading(_parts(head[2]), counted, array=head[1] == "[[")
            yield table, number
        elif key := _KEY.match(line):
            yield (*table, *_parts(key[1])), number
            rest.begin(line[key.end() :])


def dotted(path: Sequence[str | int], document: object = None) -> str:
    """Print a key path; elements of an array go by their name where they have one."""
    words, node = [], document
    for part in path:
        inside = _child(node, part)
        named = _name(inside) if isinstance(part, int) else None
        if isinstance(part, int):
            words.append(named if isinstance(named, str) and named else str(part + 1))
        else:
            words.append(part)
        node = inside
    return ".".join(words)


def _name(table: object) -> object:
    """Give what an element of an array is called by: its name, or its key."""
    return table.get("name", table.get("key")) if isinstance(table, dict) else None


def as_text(value: object) -> str:
    """Write a value as TOML; a quantity becomes a text with its unit."""
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, Integral):
        return repr(int(value))
    if isinstance(value, Real):
        return repr(float(value))
    if isinstance(value, Mapping):
        return "{ " + ", ".join(f"{_quoted(k)} = {as_text(v)}" for k, v in value.items()) + " }"
    if isinstance(value, list | tuple):
        return "[" + ", ".join(as_text(v) for v in value) + "]"
    return json.dumps(str(value), ensure_ascii=False)


def changed(
    document: Mapping[str, Any], changes: Iterable[tuple[str, str]], origin: str
) -> dict[str, Any]:
    """Copy a document with other values at some dotted paths.

    Parameters
    ----------
    document
        the tables of a TOML file.
    changes
        dotted paths, elements of an array by name (``volume.tank.mass``), with values written
        as TOML (see `as_text`).
    origin
        what the document is called in messages.

    Raises
    ------
    FileError
        where a path leads nowhere.
    """
    result = copy.deepcopy(dict(document))
    for path, text in changes:
        *tables, last = path.split(".")
        node: Any = result
        for place, part in enumerate(tables):
            node = _step(node, part, ".".join(tables[: place + 1]), origin)
        if not isinstance(node, dict):
            raise _nowhere(path, f"{'.'.join(tables)} is not a table", origin)
        node[last] = tomllib.loads(f"value = {text}")["value"]
    return result


class _Continuation:
    """Whether a line belongs to a value that began on an earlier one."""

    def __init__(self) -> None:
        self.quote = ""
        self.depth = 0

    def begin(self, value: str) -> None:
        self.quote, self.depth = "", 0
        self._take(value)

    def goes_on(self, line: str) -> bool:
        inside = bool(self.quote) or self.depth > 0
        if inside:
            self._take(line)
        return inside

    def _take(self, text: str) -> None:
        while text:
            if self.quote:
                _before, quote, text = text.partition(self.quote)
                if not quote:
                    return
                self.quote = ""
            elif opening := _LONG.search(text):
                self._count(text[: opening.start()])
                self.quote, text = opening[0], text[opening.end() :]
            else:
                self._count(text)
                return

    def _count(self, text: str) -> None:
        bare = _STRINGS.sub("", text).split("#")[0]
        self.depth += sum(bare.count(c) for c in "[{") - sum(bare.count(c) for c in "]}")


def _parts(words: str) -> list[str]:
    return [part.strip().strip("\"'") for part in re.findall(_PART, words)]


def _quoted(key: str) -> str:
    return key if re.fullmatch(r"[\w-]+", key) else json.dumps(key, ensure_ascii=False)


def _heading(parts: Sequence[str], counted: dict[KeyPath, int], *, array: bool) -> KeyPath:
    """Path of a heading, with the index of the latest element for each array it goes through."""
    path: KeyPath = ()
    for part in parts[:-1]:
        path = (*path, part)
        path = (*path, counted[path]) if path in counted else path
    path = (*path, parts[-1])
    if array:
        counted[path] = counted.get(path, -1) + 1
    return (*path, counted[path]) if path in counted else path


def _child(node: object, part: str | int) -> object:
    if isinstance(node, Mapping):
        return node.get(part)
    if isinstance(node, list) and isinstance(part, int) and part < len(node):
        return node[part]
    return None


def _step(node: Any, part: str, path: str, origin: str) -> Any:
    """Go one part down; an element of an array is found by its name, a new table is made."""
    if isinstance(node, list):
        names = {str(_name(element)): element for element in node if isinstance(element, dict)}
        if part not in names:
            hint = suggestion(part, names) or f"; there are: {', '.join(names)}"
            raise _nowhere(path, f"none is called {part!r}{hint}", origin)
        return names[part]
    if not isinstance(node, dict):
        raise _nowhere(path, "there is no table above it", origin)
    return node.setdefault(part, {})


def _nowhere(path: str, message: str, origin: str) -> FileError:
    return FileError(origin, [Problem(0, path, message)])
