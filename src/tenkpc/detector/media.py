"""What a medium sees of an event, and in which kinds of energy it reports."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from types import MappingProxyType

from tenkpc.constants import ELECTRON_MASS_MEV
from tenkpc.detector.quenching import Light, Plain


@dataclass(frozen=True)
class Medium:
    """One way of seeing particles.

    Attributes
    ----------
    words
        what events are seen by, for sentences.
    kinds
        kinds of energy that it can report, the default first.
    light
        what each particle it sees is worth; quenched particles come with the volume.
    quenches
        whether slow protons are seen, with less light than electrons.
    """

    words: str
    kinds: tuple[str, ...]
    light: Mapping[str, Light]
    quenches: bool = False


MEDIA: Mapping[str, Medium] = MappingProxyType(
    {
        # charged particles above the Cherenkov threshold, and what gammas scatter
        "cherenkov": Medium(
            words="Cherenkov light",
            kinds=("total", "kinetic"),
            light={"electron": Plain(), "gamma": Plain(), "positron": Plain()},
        ),
        # everything that is charged; a positron always with its annihilation gammas
        "scintillator": Medium(
            words="scintillation light",
            kinds=("visible",),
            light={
                "electron": Plain(),
                "gamma": Plain(),
                "positron": Plain(2 * ELECTRON_MASS_MEV),
            },
            quenches=True,
        ),
    }
)
# what a kind adds to the kinetic energy of an event that is taken for a single electron
EVENT_OFFSETS_MEV = {"kinetic": 0.0, "total": ELECTRON_MASS_MEV, "visible": 0.0}
