"""Files to begin with: valid as they are, every key with a word about it.

A detector's is the common part in ``detector.toml`` with the first volume and the response of a
medium in the place of ``@volume`` and ``@response``, and energies as the medium writes them.
"""

from __future__ import annotations

import re
from pathlib import Path

# media that a file to begin with may be for, that which is meant unless another is named first
MEDIA = ("scintillator", "cherenkov", "ionisation", "neutron-counter", "recoil")
# energies of a background: mean, width, from, to
_ENERGIES = {
    "scintillator": ("1.1 MeV", "0.4 MeV", "0.5 MeV", "3 MeV"),
    "cherenkov": ("7 MeV", "1.5 MeV", "6 MeV", "12 MeV"),
    "ionisation": ("6 MeV", "1.5 MeV", "5 MeV", "9 MeV"),
    "recoil": ("3 keVnr", "1 keVnr", "2 keVnr", "9 keVnr"),
}


def detector(medium: str = MEDIA[0]) -> str:
    """Text of a detector file to begin with."""
    volume, response = _read(medium).split("\n\n", 1)
    text = _read("detector")
    if medium not in _ENERGIES:  # a background without energies has no shape
        text = re.sub(r"\nshape = .*?(?=\n\n)", "", text, count=1, flags=re.MULTILINE | re.DOTALL)
    energies = zip(
        ("@mean", "@width", "@from", "@to"), _ENERGIES.get(medium, ("",) * 4), strict=True
    )
    marks = {"@volume": volume, "@response": response.rstrip(), **dict(energies)}
    for mark, words in marks.items():
        text = text.replace(mark, words)
    return text


def burst() -> str:
    """Text of a burst file to begin with."""
    return _read("burst")


def _read(name: str) -> str:
    return Path(__file__).with_name(f"{name}.toml").read_text(encoding="utf-8")
