"""A forecast as JSON: its numbers, and all that is needed to compute them again."""

from __future__ import annotations

import json
import math
import warnings
from collections.abc import Mapping
from typing import Any, TypeVar

from tenkpc import __version__, data
from tenkpc.detector.detector import Detector
from tenkpc.detector.detector_file import check_choice
from tenkpc.documents import Document
from tenkpc.errors import InputError
from tenkpc.forecast import arguments, budget
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
        fingerprint, total = str(record["data"]), made.total
    except (LookupError, TypeError, AttributeError, ValueError, RecursionError) as error:
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
    if not (math.isfinite(written) and abs(total - written) <= SAME * abs(written)):
        differing.append(f"total {written:.10g}, now {total:.10g}")
    if differing:
        warnings.warn(f"not as it was written: {'; '.join(differing)}", stacklevel=3)
    return made


def _made(inputs: Mapping[str, Any], kind: type[Made]) -> Made:
    """Make the forecast, each input under the checks that a user's own would pass."""
    detector = Detector.of_document(Document.of_record(inputs["detector"]))
    burst = Burst.of_document(Document.of_record(inputs["burst"]))
    window, chosen = _window(inputs["window_s"]), dict(inputs["interactions"])
    options = {own.key: own.options for own in detector.own}
    for key, value in chosen.items():
        check_choice(key, value, options)
    span = (burst.start_s, burst.end_s)
    return kind.of_inputs(
        detector=detector,
        burst=burst,
        distance_kpc=arguments.distance_kpc(f"{float(inputs['distance_kpc'])!r} kpc"),
        conversion=conversion.of_record(inputs["conversion"]),
        interactions=chosen,
        window_s=None if window is None else arguments.window_of(*window, span),
        energy_above_mev=_not_negative(inputs, "energy_above_mev"),
        background_time_s=_not_negative(inputs, "background_time_s"),
    )


def _window(given: Any) -> tuple[float, float] | None:
    if given is None:
        return None
    start, end = map(float, given)
    return start, end


def _not_negative(inputs: Mapping[str, Any], name: str) -> float | None:
    value = inputs[name]
    if value is None:
        return None
    if isinstance(value, str) or not 0 <= float(value) < math.inf:
        message = f"{name}: expected a number of zero or more, found {value!r}"
        raise InputError(message)
    return float(value)


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
