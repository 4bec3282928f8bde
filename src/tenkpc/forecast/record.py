"""A forecast as JSON: its numbers, and all that is needed to compute them again."""

from __future__ import annotations

import json
import warnings
from collections.abc import Mapping
from typing import Any, TypeVar

from tenkpc import __version__, data
from tenkpc.detector.detector import Detector
from tenkpc.documents import Document
from tenkpc.errors import InputError
from tenkpc.forecast import budget
from tenkpc.forecast.evaluation import Evaluation
from tenkpc.forecast.frames import named
from tenkpc.propagation import conversion
from tenkpc.source.burst import Burst

Made = TypeVar("Made", bound=Evaluation)

# totals of one version agree to this: the same sums in the same order, but for the library's
SAME = 1e-10


def to_json(forecast: Evaluation) -> str:
    """Write results, inputs, version and sources as JSON text."""
    return json.dumps(_record(forecast), indent=2, ensure_ascii=False, allow_nan=False)


def from_json(text: str, kind: type[Made]) -> Made:
    """Make a forecast again, and warn where its total is not the one that was written.

    Raises
    ------
    InputError
        where the text is no record of a forecast.
    """
    try:
        record = json.loads(text)
        made = _made(record["inputs"], kind)
        written, version = float(record["total"]), str(record["tenkpc_version"])
        fingerprint = str(record["data"])
    except (json.JSONDecodeError, KeyError, TypeError, AttributeError, ValueError) as error:
        if isinstance(error, InputError):
            raise
        message = f"expected what to_json wrote; found something else ({error})"
        raise InputError(message) from None
    differing = [
        f"{what} {then}, now {now}"
        for what, then, now in (
            ("version", version, __version__),
            ("data files", fingerprint, data.fingerprint()),
        )
        if then != now
    ]
    if abs(made.total - written) > SAME * abs(written):
        differing.append(f"total {written:.10g}, now {made.total:.10g}")
    if differing:
        warnings.warn(f"not as it was written: {'; '.join(differing)}", stacklevel=3)
    return made


def _made(inputs: Mapping[str, Any], kind: type[Made]) -> Made:
    window = inputs["window_s"]
    return kind.of_inputs(
        detector=Detector.of_document(Document.of_record(inputs["detector"])),
        burst=Burst.of_document(Document.of_record(inputs["burst"])),
        distance_kpc=float(inputs["distance_kpc"]),
        conversion=conversion.of_record(inputs["conversion"]),
        interactions=dict(inputs["interactions"]),
        window_s=None if window is None else (float(window[0]), float(window[1])),
        energy_above_mev=inputs["energy_above_mev"],
        background_time_s=inputs["background_time_s"],
    )


def _record(forecast: Evaluation) -> dict[str, Any]:
    fall, rise = forecast.cross_section_error
    chance, both = forecast.chance, forecast.predictive
    reactions, above, counted = forecast.chain
    return {
        "tenkpc_version": __version__,
        "data": data.fingerprint(),
        "inputs": _inputs(forecast),
        "total": forecast.total,
        "chain": {"reactions": reactions, "above_threshold": above, "counted": counted},
        "chance_68_percent": [chance.low, chance.high],
        "cross_section_error": {"down": fall, "up": rise},
        "chance_and_cross_sections_68_percent": [both.low, both.high],
        "budget": [effect._asdict() for effect in budget.effects(forecast)],
        "background": {"live_s": forecast.live_s, "counted": forecast.background_events},
        "counts": _counts(forecast),
        "sources": {
            key: [str(source) for source in forecast.detector.reaction(key).references]
            for key in forecast.keys
        },
    }


def _inputs(forecast: Evaluation) -> dict[str, Any]:
    return {
        "detector": forecast.detector.document.record(),
        "burst": forecast.burst.document.record(),
        "distance_kpc": forecast.distance_kpc,
        "conversion": forecast.conversion.record(),
        "survival": dict(zip(("nu_e", "anti_nu_e"), forecast.conversion.survival, strict=True)),
        "interactions": forecast.interactions,
        "window_s": forecast.window_s,
        "energy_above_mev": forecast.energy_above_mev,
        "background_time_s": forecast.background_time_s,
        "observed_energy": forecast.detector.response.kind,
    }


def _counts(forecast: Evaluation) -> dict[str, dict[str, float]]:
    table = named(forecast.by_interaction)
    return {
        key: {name: float(column[place]) for name, column in table.items()}
        for place, key in enumerate(forecast.keys)
    }
