"""A forecast as JSON: its numbers, and all that is needed to compute them again."""

from __future__ import annotations

import json
from typing import TYPE_CHECKING, Any

from tenkpc import __version__, interactions
from tenkpc.forecast.frames import named

if TYPE_CHECKING:
    from tenkpc.forecast.forecast import Forecast


def to_json(forecast: Forecast) -> str:
    """Write results, inputs, version and sources as JSON text."""
    return json.dumps(_record(forecast), indent=2, ensure_ascii=False, allow_nan=False)


def _record(forecast: Forecast) -> dict[str, Any]:
    fall, rise = forecast.cross_section_error
    chance = forecast.chance
    reactions, above, counted = forecast.chain
    return {
        "tenkpc_version": __version__,
        "inputs": _inputs(forecast),
        "total": forecast.total,
        "chain": {"reactions": reactions, "above_threshold": above, "counted": counted},
        "chance_68_percent": [chance.low, chance.high],
        "cross_section_error": {"down": fall, "up": rise},
        "counts": _counts(forecast),
        "sources": {
            key: [str(source) for source in interactions.by_key(key).references]
            for key in forecast.keys
        },
    }


def _inputs(forecast: Forecast) -> dict[str, Any]:
    detector, burst = forecast.detector, forecast.burst
    return {
        "detector": {
            "origin": detector.origin,
            "text": detector.text,
            "tables": dict(detector.tables),
            "changes": dict(detector.changes),
        },
        "burst": {"origin": burst.origin, "text": burst.text, "changes": dict(burst.changes)},
        "distance_kpc": forecast.distance_kpc,
        "conversion": forecast.conversion.describe(),
        "survival": dict(zip(("nu_e", "anti_nu_e"), forecast.conversion.survival, strict=True)),
        "interactions": forecast.interactions,
        "window_s": forecast.window_s,
        "energy_above_mev": forecast.energy_above_mev,
        "observed_energy": detector.response.kind,
    }


def _counts(forecast: Forecast) -> dict[str, dict[str, float]]:
    table = named(forecast.values)
    return {
        key: {name: float(column[place]) for name, column in table.items()}
        for place, key in enumerate(forecast.keys)
    }
