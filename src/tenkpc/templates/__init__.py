"""Files to begin with: valid as they are, every key with a word about it."""

from __future__ import annotations

from importlib.resources import files


def text(kind: str) -> str:
    """Text of a file to begin with, ``"detector"`` or ``"burst"``."""
    return files(__name__).joinpath(f"{kind}.toml").read_text(encoding="utf-8")
