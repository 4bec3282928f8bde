"""From the keys of a response to what recoils are worth, and to thresholds beside the energy."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from itertools import pairwise
from types import MappingProxyType

import numpy as np

from tenkpc.constants import ELECTRON_MASS_MEV
from tenkpc.detector.energy_rules import KINDS
from tenkpc.detector.media import MEDIA
from tenkpc.detector.quanta import Above, Acceptance, Registered, Yield
from tenkpc.detector.quenching import Light, Plain, Quenched, lindhard
from tenkpc.detector.response_file import QuenchingKeys, ResponseKeys, YieldKeys
from tenkpc.detector.scales import RECOIL
from tenkpc.documents import Document
from tenkpc.interactions.base import Nucleus

# the fastest recoil that has to be told: of helium, of a neutrino of the highest energy
FASTEST_RECOIL_MEV = 20.0
# which yield counts which quanta
YIELDS = {"photoelectrons": "light_yield", "electrons": "charge_yield"}


@dataclass(frozen=True)
class Worth:
    """What a recoil is worth in the observed kind of energy, and in that of an electron."""

    observed: Light
    electron_equivalent: Light


Lights = tuple[tuple[str, Worth], ...]


def lights(keys: ResponseKeys, nuclei: Iterable[Nucleus], document: Document) -> Lights:
    """Give what the recoil of each nucleus is worth; hydrogen is not among them."""
    shared = _shared(keys, document)
    made = []
    for nucleus in nuclei:
        if nucleus.protons > 1:
            quenched = shared or lindhard(nucleus.protons, nucleus.nucleons, keys.lindhard_k)
            observed = Plain() if keys.kind == "recoil" else quenched
            made.append((nucleus.name, Worth(observed, quenched)))
    return tuple(made)


def with_gammas(containment: float) -> Lights:
    """Give what gammas are worth, alone and behind a positron, where a share of them is seen."""
    annihilation = 2 * ELECTRON_MASS_MEV * containment
    positron = Plain(annihilation)
    made = [("positron", Worth(positron, positron))]
    if containment > 0:
        gamma = Plain(share=containment)
        made.append(("gamma", Worth(gamma, gamma)))
    return tuple(made)


def is_beside(keys: ResponseKeys) -> bool:
    """Whether the threshold is a number of quanta or in a kind of energy that is not observed."""
    cut = keys.threshold.value if keys.threshold else None
    return cut is not None and bool(cut.quanta or (cut.label and KINDS[cut.label] != keys.kind))


def beside(keys: ResponseKeys) -> str:
    """Say what the threshold is where it is none of the observed energy."""
    if keys.kind == "none":
        return "with at least one neutron registered"
    if keys.threshold is None or not is_beside(keys):
        return ""
    cut = keys.threshold.value
    if cut.quanta:
        number = int(cut.value)
        return f"with at least {number} {cut.quanta if number > 1 else cut.quanta[:-1]}"
    scale = next(s for s in MEDIA["recoil"].scales.values() if s.label == cut.label)
    return f"above {scale.words(cut.value)} before resolution"


def acceptance(
    keys: ResponseKeys, lights: Lights, path: tuple[str, ...], document: Document
) -> Mapping[str, Acceptance]:
    """Give the share kept of each nucleus's recoils, where the threshold is beside the energy."""
    if keys.threshold is None or not is_beside(keys):
        return MappingProxyType({})
    cut = keys.threshold.value
    made: dict[str, Acceptance] = {}
    for particle, worth in lights:
        if cut.quanta:
            given: YieldKeys = getattr(keys, YIELDS[cut.quanta])
            made[particle] = Registered(
                at_least=int(cut.value),
                released=_yield(given, worth, (*path, YIELDS[cut.quanta]), document),
                probability=given.registered,
                binomial=keys.fluctuation == "binomial",
            )
        elif cut.label == RECOIL.label:
            made[particle] = Above(cut.value)
        else:
            made[particle] = Above(float(worth.electron_equivalent.kinetic(np.array(cut.value))))
    return MappingProxyType(made)


def table(
    keys: QuenchingKeys,
    columns: tuple[str, str],
    mev: float,
    fastest_mev: float,
    document: Document,
) -> Quenched:
    """Read a table of visible against kinetic energy, in a unit of so many MeV.

    Raises
    ------
    FileError
        where its energies do not ascend, or it ends too early and nothing is said of that.
    """
    read = document.columns(keys.file or "", columns)
    kinetic, visible = ([mev * value for value in read[column]] for column in columns)
    problem = ""
    nothing = kinetic[0] == 0
    if not _ascending(kinetic) or not _ascending(visible) or kinetic[0] < 0 or visible[0] < 0:
        problem = "expected kinetic and visible energies that ascend from zero"
    elif (nothing and visible[0] > 0) or len(kinetic) - nothing < 1:
        problem = "expected no visible energy at zero, and some above it"
    elif any(seen > 1.0001 * energy for energy, seen in zip(kinetic, visible, strict=True)):
        problem = "visible energies are those of an electron: never more than the kinetic energy"
    elif kinetic[-1] < fastest_mev and keys.beyond != "extend":
        problem = (
            f"the table ends at {kinetic[-1]:g} MeV and recoils have up to {fastest_mev:g} MeV; "
            'say beyond = "extend" to go on with its last slope'
        )
    if problem:
        raise document.refused([(("response", "quenching"), problem)])
    start = [] if kinetic[0] == 0 else [0.0]
    return Quenched((*start, *kinetic), (*start, *visible))


def _shared(keys: ResponseKeys, document: Document) -> Light | None:
    """Give the light that all nuclei share; none where Lindhard's formula tells them apart."""
    quenching = keys.quenching
    if quenching is None or quenching.value == "none":
        return Plain()
    if quenching.file is None:
        return None
    return table(quenching, ("recoil_kev", "visible_kev"), 1e-3, FASTEST_RECOIL_MEV, document)


def _yield(keys: YieldKeys, worth: Worth, path: tuple[str, ...], document: Document) -> Yield:
    if keys.value is not None:
        light = Plain() if keys.value.label == RECOIL.label else worth.electron_equivalent
        return Yield((0.0,), (keys.value.per_mev,), light=light)
    read = document.columns(keys.file or "", ("recoil_kev", "quanta_per_kev"))
    energies = [1e-3 * value for value in read["recoil_kev"]]
    values = [1e3 * value for value in read["quanta_per_kev"]]
    problem = ""
    if not _ascending(energies) or energies[0] < 0 or min(values) < 0:
        problem = "expected recoil energies that ascend from zero, and yields that are not negative"
    elif keys.beyond == "error" and (energies[0] > 0 or energies[-1] < FASTEST_RECOIL_MEV):
        problem = (
            f"the table covers {1e3 * energies[0]:g} to {1e3 * energies[-1]:g} keV only; say "
            'what holds beyond: "hold" or "zero"'
        )
    if problem:
        raise document.refused([(path, problem)])
    return Yield(tuple(energies), tuple(values), zero_outside=keys.beyond == "zero")


def _ascending(values: list[float]) -> bool:
    return all(later > earlier for earlier, later in pairwise(values))
