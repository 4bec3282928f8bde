"""Which interactions a detector's targets are exposed to, compiled once per detector."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from tenkpc import interactions
from tenkpc.detector.assembly import Volume
from tenkpc.detector.detector import Detector
from tenkpc.detector.response import Response
from tenkpc.forecast.compiled import Compiled, Exposure, by_neutrino_energy, compile_rows
from tenkpc.forecast.grid import EnergyGrid
from tenkpc.interactions import coherent
from tenkpc.interactions.base import Interaction

Floats = NDArray[np.float64]
Choices = tuple[tuple[str, bool | float | str], ...]


def choices(detector: Detector, further: Mapping[str, bool | float | str]) -> Choices:
    """Switches, factors and options of the detector file, overruled by further ones."""
    return tuple(sorted({**detector.interactions, **further}.items()))


def exposures(
    detector: Detector, chosen: Choices, energy_above_mev: float | None
) -> tuple[Exposure, ...]:
    """List every interaction that the detector's volumes hold targets for."""
    made = []
    responses: dict[int, Response] = {}  # volumes that respond alike share their cells
    for volume in detector.volumes:
        response = responses.setdefault(
            id(volume.response), _cut(volume.response, energy_above_mev)
        )
        for key in detector.reactions:
            value = dict(chosen).get(key, key not in detector.replaced)
            if value is False or not _may_have(interactions.TARGETS.get(key), volume):
                continue
            interaction = detector.reaction(key, value if isinstance(value, str) else None)
            scale = 1.0 if isinstance(value, bool | str) else value
            for reaction in _on(interaction, volume):
                targets = volume.targets(reaction.target) * scale
                if targets > 0:
                    made.append(Exposure(volume.name, targets, reaction, response))
    return tuple(made)


def _may_have(target: str | None, volume: Volume) -> bool:
    """Whether a volume may hold a target: an interaction need not be built where it does not."""
    return target in (None, coherent.EVERY_NUCLEUS) or volume.targets(target) > 0


def _on(interaction: Interaction, volume: Volume) -> tuple[Interaction, ...]:
    """Give an interaction as it is, or one of every nucleus on each in a volume."""
    if interaction.of_nucleus is None:
        return (interaction,)
    each = map(interaction.on, volume.composition.nuclei)
    return tuple(reaction for reaction in each if reaction is not None)


def _cut(response: Response, energy_above_mev: float | None) -> Response:
    lowest = max(response.threshold_mev, energy_above_mev or 0.0)
    return replace(response, threshold_mev=lowest)


@lru_cache(maxsize=32)
def compiled(
    detector: Detector,
    chosen: Choices,
    energy_above_mev: float | None,
    grid: EnergyGrid,
    edges_mev: tuple[float, ...],
) -> Compiled:
    """Compile a detector, or remember that it was compiled before."""
    made = exposures(detector, chosen, energy_above_mev)
    return compile_rows(made, grid, np.array(edges_mev))


@lru_cache(maxsize=8)
def compiled_by_neutrino_energy(
    detector: Detector,
    chosen: Choices,
    energy_above_mev: float | None,
    grid: EnergyGrid,
    edges_mev: tuple[float, ...],
) -> Floats:
    """Compile the counted events by bin of neutrino energy, (rows, nodes, bins + 1)."""
    made = exposures(detector, chosen, energy_above_mev)
    return by_neutrino_energy(made, grid, np.array(edges_mev))
