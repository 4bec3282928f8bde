"""Everything that came from a paper or handbook, and the curves of our own, as files.

A file says inside itself where its numbers are from; one that does not is refused. Files are
read when they are first asked for, from wherever the package is installed.
"""

from __future__ import annotations

import tomllib
from collections.abc import Iterator
from functools import lru_cache
from hashlib import sha256
from importlib.resources import files
from importlib.resources.abc import Traversable
from typing import Any

from tenkpc.errors import ComputationError

PROVENANCE = ("source", "columns", "validity", "uncertainty", "obtained", "version", "date")


def text(relative: str) -> str:
    """Text of a data file, such as ``"bursts/equipartition.toml"``."""
    return files(__name__).joinpath(relative).read_text(encoding="utf-8")


@lru_cache(maxsize=64)
def document(relative: str) -> dict[str, Any]:
    """Tables of a data file, whose ``[provenance]`` must be complete.

    Raises
    ------
    ComputationError
        where the file does not say where its numbers are from.
    """
    tables = tomllib.loads(text(relative))
    provenance = tables.get("provenance", {})
    missing = [key for key in PROVENANCE if not str(provenance.get(key, "")).strip()]
    if missing:
        message = f"data file {relative} lacks provenance: {', '.join(missing)}"
        raise ComputationError(message)
    return tables


def names(folder: str) -> tuple[str, ...]:
    """Names of the files in a data folder, without their ending, alphabetically."""
    entries = files(__name__).joinpath(folder).iterdir()
    found = (entry.name for entry in entries if entry.name.endswith(".toml"))
    return tuple(sorted(name.removesuffix(".toml") for name in found))


@lru_cache(maxsize=1)
def fingerprint() -> str:
    """Short hash over all data files: equal where every number that ships is equal."""
    digest = sha256()
    for name, content in sorted(_contents(files(__name__), "")):
        digest.update(f"{name}\n{len(content)}\n".encode() + content)
    return digest.hexdigest()[:12]


def _contents(folder: Traversable, path: str) -> Iterator[tuple[str, bytes]]:
    for entry in folder.iterdir():
        inner = f"{path}/{entry.name}"
        if entry.is_dir():
            yield from _contents(entry, inner)
        elif entry.name.endswith(".toml"):
            yield inner, entry.read_bytes()
