"""Everything that tenkpc raises on purpose.

    TenkpcError
    ├── InputError            what the user gave cannot be used; also a ValueError
    │   ├── UnitError         a unit is missing, unknown, or not what it should be
    │   │   └── DimensionError   of another dimension
    │   ├── UnknownNameError  a name that is not in the list it was looked up in; also a KeyError
    │   └── FileError         a file that cannot be read or does not say what it must
    └── ComputationError      the input was fine, the computation was not; also a RuntimeError

The shell ends with code 2 for an `InputError` and 1 for a `ComputationError`.
"""

from __future__ import annotations

import difflib
from collections.abc import Iterable
from dataclasses import dataclass


class TenkpcError(Exception):
    """Base of every error that tenkpc raises on purpose."""


class InputError(TenkpcError, ValueError):
    """What the user gave cannot be used."""


class UnitError(InputError):
    """A unit is missing, unknown, or of another dimension than the quantity asked for."""


class DimensionError(UnitError):
    """A quantity has its unit, but of another dimension than the one asked for."""


class UnknownNameError(InputError, KeyError):
    """A name that is not in the list it was looked up in."""

    def __init__(self, kind: str, name: object, known: Iterable[str]) -> None:
        choices = sorted(known)
        message = f"no {kind} is called {name!r}{suggestion(str(name), choices)}"
        super().__init__(f"{message}; there are: {', '.join(choices)}")

    def __str__(self) -> str:
        return str(self.args[0])


@dataclass(frozen=True)
class Problem:
    """One thing that is wrong in a file: where it stands and what it says."""

    line: int
    path: str
    message: str
    excerpt: str = ""


class FileError(InputError):
    """A file that cannot be read or does not say what it must; holds every problem found."""

    def __init__(self, origin: str, problems: Iterable[Problem]) -> None:
        self.origin = origin
        self.problems = tuple(sorted(problems, key=lambda p: (p.line, p.path)))
        count = len(self.problems)
        lines = [f"{count} problem{'' if count == 1 else 's'} in {origin}"]
        for problem in self.problems:
            place = f"{origin}:{problem.line}" if problem.line else origin
            subject = f"{problem.path}: " if problem.path else ""
            lines.append(f"{place}: {subject}{problem.message}")
            if problem.excerpt:
                lines.append(f"    {problem.excerpt}")
        super().__init__("\n".join(lines))


class ComputationError(TenkpcError, RuntimeError):
    """The input was fine, the computation was not."""


def suggestion(name: str, known: Iterable[str]) -> str:
    """Give ``"; did you mean 'x'?"`` for the nearest of the known names, or nothing."""
    near = difflib.get_close_matches(name, list(known), n=1, cutoff=0.6)
    return f"; did you mean {near[0]!r}?" if near else ""
