"""The invented detectors that come with the package."""

from __future__ import annotations

from importlib.resources import files
from importlib.resources.abc import Traversable
from pathlib import Path

from tenkpc.errors import ComputationError, UnknownNameError

SUFFIX = ".toml"


def root() -> Traversable:
    """Folder of the gallery: inside an installed package, or at the top of a checkout."""
    installed = files("tenkpc") / "detectors"
    if installed.is_dir():
        return installed
    checkout = Path(__file__).resolve().parents[3] / "detectors"
    if checkout.is_dir():
        return checkout
    message = "this installation of tenkpc lacks its gallery of detectors"
    raise ComputationError(message)


def names() -> tuple[str, ...]:
    """Names of the gallery's detectors, alphabetically."""
    found = (entry.name for entry in root().iterdir() if entry.name.endswith(SUFFIX))
    return tuple(sorted(name.removesuffix(SUFFIX) for name in found))


def text(name: str) -> str:
    """Text of a gallery detector's file.

    Raises
    ------
    UnknownNameError
        where the gallery has no detector of this name.
    """
    if name not in names():
        kind = "detector of the gallery"
        raise UnknownNameError(kind, name, names())
    return (root() / f"{name}{SUFFIX}").read_text(encoding="utf-8")
