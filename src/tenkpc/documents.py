"""A file that a user wrote, with the tables it names and the changes made to it since.

A detector and a burst both come from such a document and keep it, so that a result can be
written down with all that is needed to compute it again, on another machine too.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import Any

from tenkpc import textfiles
from tenkpc.errors import FileError, Problem
from tenkpc.textfiles import Model, Strict

Pairs = tuple[tuple[str, str], ...]


@dataclass(frozen=True)
class Document:
    """A file as it was read.

    Two documents are equal when their texts, tables and changes are, wherever they came from.

    Attributes
    ----------
    text
        the file.
    changes
        key paths that were changed, in order, with their new values written as TOML.
    tables
        texts of the tables that the file names, by name.
    origin
        what the file is called in messages: its path, or the name of a preset.
    folder
        where the tables it names are looked for, unless their texts are known.
    """

    text: str
    changes: Pairs = ()
    tables: Pairs = ()
    origin: str = field(compare=False, default="text")
    folder: str = field(compare=False, default=".")

    @classmethod
    def read(cls, path: str | Path) -> Document:
        """Read a file.

        Raises
        ------
        FileError
            where it cannot be read.
        """
        place = Path(path)
        return cls(textfiles.read_text(place), origin=str(path), folder=str(place.parent))

    @classmethod
    def of_record(cls, record: Mapping[str, Any]) -> Document:
        """Take a document from what `record` wrote."""
        return cls(
            text=record["text"],
            changes=tuple((path, value) for path, value in record["changes"]),
            tables=tuple(record["tables"].items()),
            origin=record["origin"],
        )

    def record(self) -> dict[str, Any]:
        """Give all that is needed to read the document again, for JSON."""
        return {
            "origin": self.origin,
            "text": self.text,
            "tables": dict(self.tables),
            "changes": [list(pair) for pair in self.changes],
        }

    def changed(self, changes: Mapping[str, object]) -> Document:
        """Change values at some key paths; nothing is checked yet."""
        further = ((path, textfiles.as_text(value)) for path, value in changes.items())
        return replace(self, changes=(*self.changes, *further))

    def content(self) -> dict[str, Any]:
        """Tables of the file with its changes.

        Raises
        ------
        FileError
            where the text is not TOML, or a changed path leads nowhere.
        """
        tables = textfiles.document(self.text, self.origin)
        return textfiles.changed(tables, self.changes, self.origin)

    def checked(self, model: type[Model]) -> Model:
        """Check the content against a model.

        Raises
        ------
        FileError
            with everything that is wrong, each with its line where nothing was changed.
        """
        lines = "" if self.changes else self.text
        return textfiles.validate(self.content(), model, self.origin, lines)

    def with_tables(self, keys: Strict) -> Document:
        """Take in the texts of all tables that the checked keys name.

        Raises
        ------
        FileError
            where one cannot be read.
        """
        known = dict(self.tables)
        texts = {
            name: known[name] if name in known else textfiles.read_text(Path(self.folder) / name)
            for name in files_in(keys)
        }
        return replace(self, tables=tuple(texts.items()))

    def columns(self, table: str, names: Sequence[str]) -> dict[str, list[float]]:
        """Columns of a table that was taken in.

        Raises
        ------
        FileError
            where it does not hold numbers in these columns.
        """
        origin = str(Path(self.folder) / table)
        return textfiles.read_columns(dict(self.tables)[table], names, origin)

    def refused(self, problems: Iterable[tuple[Sequence[str | int], str]]) -> FileError:
        """Make an error of key paths and what is wrong at each."""
        text, content = "" if self.changes else self.text, self.content()
        found = (
            Problem(
                textfiles.line_of(text, path) if text else 0,
                textfiles.dotted(path, content),
                message,
            )
            for path, message in problems
        )
        return FileError(self.origin, found)


def files_in(keys: Strict) -> Iterator[str]:
    """Names of the tables that checked keys mention, each once."""
    yield from dict.fromkeys(_files(keys))


def _files(node: object) -> Iterator[str]:
    if isinstance(node, Strict):
        for name, value in node:
            if name == "file" and isinstance(value, str):
                yield value
            yield from _files(value)
    elif isinstance(node, tuple):
        for element in node:
            yield from _files(element)
