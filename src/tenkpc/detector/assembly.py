"""From the checked keys of a detector file to what the kernel works with."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, field
from functools import partial
from itertools import pairwise
from types import MappingProxyType
from typing import Any

from tenkpc import data
from tenkpc.detector import materials, recoils
from tenkpc.detector.background import SHAPES, Background, constant, lies_above
from tenkpc.detector.detector_file import (
    COMPOSITIONS,
    BackgroundKeys,
    DetectorKeys,
    VolumeKeys,
    check_choice,
)
from tenkpc.detector.materials import Composition
from tenkpc.detector.media import EVENT_OFFSETS_MEV, MEDIA
from tenkpc.detector.own_reactions import Own, build, counted_twice
from tenkpc.detector.quenching import Light, Plain, quenched_protons
from tenkpc.detector.recoils import Lights, Worth
from tenkpc.detector.response import Curve, Resolution, Response
from tenkpc.detector.response_file import EfficiencyKeys, ResponseKeys, joined
from tenkpc.documents import Document
from tenkpc.errors import InputError
from tenkpc.fields import BIRKS_PER_LENGTH
from tenkpc.interactions.base import HIGHEST_ENERGY_MEV

# the fastest proton that a neutrino of the highest energy knocks on: 2E²/(M + 2E), rounded up
FASTEST_PROTON_MEV = 60.0


@dataclass(frozen=True)
class Volume:
    """So much of one material, how it responds, and which keys of that are its own."""

    name: str
    mass_kg: float
    material: str
    composition: Composition = field(compare=False)
    response: Response = field(compare=False)
    own: frozenset[str] = field(compare=False, default=frozenset())

    def targets(self, kind: str) -> float:
        """Count the targets of a kind: ``"electron"`` or a nuclide such as ``"H-1"``."""
        return self.mass_kg * self.composition.targets(kind)


def volumes(keys: DetectorKeys, document: Document) -> tuple[Volume, ...]:
    """Build every volume with its response.

    Raises
    ------
    FileError
        where a table or a curve is not usable.
    """
    unsure = keys.uncertainty.energy_scale
    known: dict[tuple[Any, ...], Response] = {}
    made = []
    for volume in keys.volume:
        words, composition = _composition(volume)
        given = response_keys(keys, volume)
        own = ("volume", volume.name, "response") if volume.response else ("response",)
        light = _lights(given, volume, composition, document)
        if (given, light) not in known:
            known[given, light] = _response(given, own, light, unsure, document)
        stated = volume.response.model_fields_set if volume.response else ()
        made.append(
            Volume(
                volume.name,
                volume.mass,
                words,
                composition,
                known[given, light],
                own=frozenset(stated),
            )
        )
    return tuple(made)


def own_reactions(keys: DetectorKeys, document: Document) -> tuple[Own, ...]:
    """Build the file's own reactions, and check what the rest of the file says of them.

    Raises
    ------
    FileError
        where one is not usable, or counts the same events as one of the package.
    """
    made = build(keys.interaction, keys.nucleus, document)
    options = {own.key: own.options for own in made}
    problems: list[tuple[tuple[str | int, ...], str]] = []
    for key, value in keys.interactions.items():
        try:
            check_choice(key, value, options)
        except InputError as error:
            problems.append((("interactions", key), str(error)))
    replaced = {key for own in made for key in own.replaces}
    problems += [
        (("interactions", key), f"{key} is replaced, so it cannot be chosen here")
        for key in sorted(replaced & set(keys.interactions))
        if keys.interactions[key] is not False and key not in options
    ]
    problems += [
        (
            ("interaction",) if keys.interaction else ("nucleus",),
            f'{mine} counts the same events as {key}: say replaces = ["{key}"], or switch that '
            f"off in [interactions]",
        )
        for mine, key in counted_twice(made, keys.interactions)
    ]
    if problems:
        raise document.refused(problems)
    return made


def common(keys: DetectorKeys, document: Document) -> Response:
    """Build what `[response]` says of the whole detector; light of recoils belongs to volumes."""
    given = keys.response
    light = recoils.with_gammas(given.gamma_containment) if given.medium == "ionisation" else ()
    return _response(given, ("response",), light, keys.uncertainty.energy_scale, document)


def response_keys(keys: DetectorKeys, volume: VolumeKeys) -> ResponseKeys:
    """Keys of a volume's whole response: its own in place of the common ones."""
    if volume.response is None:
        return keys.response
    whole, own = (
        {name: getattr(table, name) for name in table.model_fields_set}
        for table in (keys.response, volume.response)
    )
    return ResponseKeys.model_construct(**joined(whole, own))


def backgrounds(keys: DetectorKeys, document: Document) -> tuple[Background, ...]:
    """Build every background; a rate per mass is multiplied by the whole detector's mass.

    Raises
    ------
    FileError
        where a shape has nothing above the threshold, or a table is not usable.
    """
    mass_kg = sum(volume.mass for volume in keys.volume)
    threshold_mev = _threshold_mev(keys.response)
    return tuple(
        _background(table, place, mass_kg, threshold_mev, document)
        for place, table in enumerate(keys.background)
    )


def _composition(keys: VolumeKeys) -> tuple[str, Composition]:
    """Words for what a volume is made of, and the composition."""
    key = next(key for key in COMPOSITIONS if getattr(keys, key) is not None)
    made_of = getattr(keys, key)
    if isinstance(made_of, str):
        return made_of, COMPOSITIONS[key](made_of)
    words = " + ".join(f"{100 * share:.3g} % {name}" for name, share in made_of.items())
    return words, COMPOSITIONS[key](made_of)


def _response(
    given: ResponseKeys,
    path: tuple[str, ...],
    lights: Lights,
    scale_error: float,
    document: Document,
) -> Response:
    efficiency = _efficiency(given, path, document)
    width, medium = given.resolution, MEDIA[given.medium]
    scale = medium.scales[given.kind]
    of_truth = given.efficiency is not None and given.efficiency.of == "true"
    light = {**medium.light, **{particle: of.observed for particle, of in lights}}
    return Response(
        kind=given.kind,
        scale=scale,
        light=MappingProxyType(light),
        event_offset_mev=EVENT_OFFSETS_MEV[given.kind],
        resolution=Resolution(
            # a of σ/E = a/√E is for energies in the unit in which they are written
            width.stochastic * math.sqrt(scale.mev),
            width.constant,
            width.noise,
            linear=width.combine == "linear",
        ),
        threshold_mev=_threshold_mev(given),
        efficiency=Curve() if of_truth else efficiency,
        true_efficiency=efficiency if of_truth else Curve(),
        live_fraction=given.live_fraction,
        scale_error=scale_error,
        acceptance=recoils.acceptance(given, lights, path, document),
        threshold_beside=recoils.beside(given),
        neutron_efficiency=given.neutron_efficiency if given.kind == "none" else None,
    )


def _threshold_mev(keys: ResponseKeys) -> float:
    """Threshold in the observed kind of energy; none where it is of another kind."""
    if keys.threshold is None or recoils.is_beside(keys):
        return 0.0
    given_in = keys.threshold.of or keys.kind
    shift = EVENT_OFFSETS_MEV[keys.kind] - EVENT_OFFSETS_MEV[given_in]
    return max(keys.threshold.value.value + shift, 0.0)


def _lights(
    keys: ResponseKeys, volume: VolumeKeys, composition: Composition, document: Document
) -> Lights:
    """What slow particles are worth in a volume; none where they are not seen."""
    if keys.medium == "recoil":
        return recoils.lights(keys, composition.nuclei, document)
    if keys.medium == "ionisation":
        return recoils.with_gammas(keys.gamma_containment)
    protons = _proton_light(keys, volume, composition, document)
    return () if protons is None else (("proton", Worth(protons, protons)),)


def _proton_light(
    keys: ResponseKeys, volume: VolumeKeys, composition: Composition, document: Document
) -> Light | None:
    if keys.birks is not None:
        constant, unit = keys.birks
        density = _density(volume) if unit == BIRKS_PER_LENGTH else 1.0
        atoms = {symbol: n / 1e3 for symbol, n in materials.elements(composition).items()}
        table = data.document("stopping/protons.toml")
        return quenched_protons(atoms, table, constant * density)
    if keys.quenching is None:
        return None
    if keys.quenching.file is None:
        return Plain()
    return recoils.table(
        keys.quenching, ("kinetic_mev", "visible_mev"), 1.0, FASTEST_PROTON_MEV, document
    )


def _density(keys: VolumeKeys) -> float:
    """Density in g/cm³: as given, or that of the named material."""
    return keys.density or materials.named(keys.material or "").density_g_cm3


def _efficiency(keys: ResponseKeys, path: tuple[str, ...], document: Document) -> Curve:
    """Curve of an efficiency; perfect where none is given."""
    given = keys.efficiency
    if given is None:
        return Curve()
    if given.value is not None:
        return Curve((0.0,), (given.value,))
    points = given.points or ()
    if given.file is not None:
        columns = document.columns(given.file, ("energy_mev", "efficiency"))
        points = tuple(zip(columns["energy_mev"], columns["efficiency"], strict=True))
    problem = _unusable(points, given, _threshold_mev(keys))
    if problem:
        raise document.refused([((*path, "efficiency"), problem)])
    energies, values = zip(*points, strict=True)
    return Curve(tuple(energies), tuple(values), zero_outside=given.beyond == "zero")


def _unusable(
    points: Sequence[tuple[float, float]], keys: EfficiencyKeys, threshold_mev: float
) -> str:
    """Say what keeps points from being an efficiency curve; nothing where they are one."""
    energies = [energy for energy, _ in points]
    if not points or not _ascending(energies):
        return "expected points with ascending energies"
    if not all(0 <= value <= 1 for _, value in points):
        return "an efficiency lies between 0 and 1"
    needed = threshold_mev if keys.of == "observed" else 0.0
    if keys.beyond == "error" and (energies[0] > needed or energies[-1] < HIGHEST_ENERGY_MEV):
        span = f"{energies[0]:g} to {energies[-1]:g} MeV"
        return f'the points cover {span} only; say what holds beyond: "hold" or "zero"'
    return ""


def _background(
    keys: BackgroundKeys, place: int, mass_kg: float, threshold_mev: float, document: Document
) -> Background:
    scale = 1.0 if keys.per is None else mass_kg / keys.per
    if keys.shape is None:  # of a counter, which sorts nothing by energy
        return Background(keys.name, keys.rate * scale, partial(constant, start=0.0, end=1.0))
    form, _ = SHAPES[keys.shape]
    problem, parameters = "", _parameters(keys)
    if keys.file is not None:
        columns = document.columns(keys.file, ("energy_mev", "density"))
        energies, densities = columns["energy_mev"], columns["density"]
        if len(energies) < 2 or not _ascending(energies) or min(densities) < 0:
            problem = (
                "expected at least two ascending energies with densities that are not negative"
            )
        parameters = {"energies": tuple(energies), "densities": tuple(densities)}
    elif keys.start is not None and keys.end is not None and keys.start >= keys.end:
        problem = "expected from to be less than to"
    elif keys.shape == "power" and keys.start == 0:
        problem = "a power starts above zero"
    elif 0.0 in (keys.mean if keys.shape == "exponential" else None, keys.width):
        problem = "expected a mean or width above zero"
    cumulative = partial(form, **parameters)
    if not problem and not lies_above(cumulative, threshold_mev):
        problem = f"nothing of its shape lies above the threshold of {threshold_mev:g} MeV"
    if problem:
        raise document.refused([(("background", place, "shape"), problem)])
    return Background(keys.name, keys.rate * scale, cumulative)


def _parameters(keys: BackgroundKeys) -> dict[str, Any]:
    """Parameters of a shape as they are given."""
    names = ("start", "end", "mean", "width", "index")
    return {name: value for name in names if (value := getattr(keys, name)) is not None}


def _ascending(values: Sequence[float]) -> bool:
    return all(later > earlier for earlier, later in pairwise(values))
