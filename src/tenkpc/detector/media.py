"""What a medium sees of an event, and in which kinds of energy it reports."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from types import MappingProxyType

from tenkpc.constants import ELECTRON_MASS_MEV
from tenkpc.detector.quenching import Light, Plain
from tenkpc.detector.scales import ELECTRON_EQUIVALENT, MEV, RECOIL, Scale


@dataclass(frozen=True)
class Medium:
    """One way of seeing particles.

    Attributes
    ----------
    words
        what events are seen by, for sentences.
    scales
        kinds of energy that it can report and how these are written, the default first.
    light
        what each particle it sees is worth; quenched particles come with the volume.
    keys
        keys of ``[response]`` that this medium has and not all others.
    """

    words: str
    scales: Mapping[str, Scale]
    light: Mapping[str, Light]
    keys: frozenset[str]

    @property
    def kinds(self) -> tuple[str, ...]:
        """Kinds of energy that it can report, the default first."""
        return tuple(self.scales)


# keys of a medium that reports an energy
_ENERGIES = frozenset({"energy", "threshold", "resolution", "efficiency"})

MEDIA: Mapping[str, Medium] = MappingProxyType(
    {
        # charged particles above the Cherenkov threshold, and what gammas scatter
        "cherenkov": Medium(
            words="Cherenkov light",
            scales={"total": MEV, "kinetic": MEV},
            light={"electron": Plain(), "gamma": Plain(), "positron": Plain()},
            keys=_ENERGIES,
        ),
        # charge of tracks; what gammas are worth comes with their containment
        "ionisation": Medium(
            words="ionisation charge",
            scales={"visible": MEV},
            light={"electron": Plain()},
            keys=_ENERGIES | {"gamma_containment"},
        ),
        # neutrons that were set free, whatever else was in the event
        "neutron-counter": Medium(
            words="neutrons",
            scales={"none": MEV},
            light={},
            keys=frozenset({"neutron_efficiency"}),
        ),
        # nuclei set in motion, told from electrons; what each is worth comes with the volume
        "recoil": Medium(
            words="nuclear recoils",
            scales={"recoil": RECOIL, "visible": ELECTRON_EQUIVALENT},
            light={},
            keys=_ENERGIES
            | {"quenching", "lindhard_k", "light_yield", "charge_yield", "fluctuation"},
        ),
        # everything that is charged; a positron always with its annihilation gammas
        "scintillator": Medium(
            words="scintillation light",
            scales={"visible": MEV},
            light={
                "electron": Plain(),
                "gamma": Plain(),
                "positron": Plain(2 * ELECTRON_MASS_MEV),
            },
            keys=_ENERGIES | {"birks", "quenching"},
        ),
    }
)
# what a kind adds to the kinetic energy of an event that is taken for a single electron
EVENT_OFFSETS_MEV = {
    "kinetic": 0.0,
    "none": 0.0,
    "recoil": 0.0,
    "total": ELECTRON_MASS_MEV,
    "visible": 0.0,
}
