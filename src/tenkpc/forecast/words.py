"""A forecast in words: what was asked, what was assumed, and how to ask it again."""

from __future__ import annotations

import math
import shlex
from collections.abc import Iterator

import numpy as np

from tenkpc.detector import gallery
from tenkpc.detector.detector import Detector
from tenkpc.detector.media import MEDIA
from tenkpc.detector.response import Curve, Response
from tenkpc.detector.scales import Scale
from tenkpc.forecast.evaluation import Evaluation
from tenkpc.interactions.base import Reference
from tenkpc.rendering import decimals_for, number, percent
from tenkpc.source.burst import Burst

Assumption = tuple[str, str, str]

# errors from here on are said as factors
FACTOR_FROM = 0.3


def opening(forecast: Evaluation) -> str:
    """Say in one sentence what was counted, where, and of what."""
    detector = forecast.detector
    total = number(forecast.total, decimals_for(forecast.total))
    part = window_clause(forecast).rstrip(",")
    return (
        f"{detector.title}, {filling(forecast)}, counts {total} events "
        f"of the burst “{forecast.burst.title}” at {distance(forecast.distance_kpc)}, with "
        f"{forecast.conversion.describe()}{part}. {_counted(forecast)}"
    )


def filling(forecast: Evaluation) -> str:
    """Say what is in the detector and how it sees: ``40 kt light water, by Cherenkov light``."""
    detector = forecast.detector
    parts = [f"{mass(volume.mass_kg)} {volume.material}" for volume in detector.volumes]
    return f"{' and '.join(parts)} seen by {MEDIA[detector.medium].words}"


def window(forecast: Evaluation) -> str:
    """Say which part of the burst is counted."""
    if forecast.window_s is None:
        return "the whole burst"
    start, end = forecast.window_s
    return f"{start:g} s to {end:g} s after bounce"


def window_clause(forecast: Evaluation) -> str:
    """Say which part of the burst is counted where it is not all of it, after a comma."""
    return "" if forecast.window_s is None else f", from {window(forecast)},"


def _counted(forecast: Evaluation) -> str:
    responses = [volume.response for volume in forecast.detector.volumes]
    losses = {
        "efficiency": all(_is_unity(r.efficiency) for r in responses),
        "efficiency in true energy": all(_is_unity(r.true_efficiency) for r in responses),
        "neutron efficiency": all(r.neutron_efficiency in (None, 1.0) for r in responses),
        "live time": all(r.live_fraction == 1 for r in responses),
    }
    names = [name for name, none in losses.items() if not none]
    kept = f", kept by {' and '.join(names)}" if names else ""
    return f"Counted means: {threshold(forecast)}{kept}."


def threshold(forecast: Evaluation) -> str:
    """Say above which energy, and of which kind, an event must be observed."""
    where: dict[str, list[str]] = {}
    for volume in forecast.detector.volumes:
        words = _cut(volume.response, forecast.energy_above_mev or 0.0)
        where.setdefault(words, []).append(volume.name)
    if len(where) == 1:
        return f"observed {next(iter(where))}"
    parts = (f"{words} in {' and '.join(names)}" for words, names in where.items())
    return f"observed {', '.join(parts)}"


def _cut(response: Response, above_mev: float) -> str:
    """Say what one volume's threshold is: in its energy, beside it, or both."""
    lowest, scale = max(response.threshold_mev, above_mev), response.scale
    if lowest <= 0:
        return response.threshold_beside or f"at any {response.kind} energy"
    whose = "" if scale.label else f" of {response.kind} energy"
    both = f" and {response.threshold_beside}" if response.threshold_beside else ""
    return f"above {scale.words(lowest)}{whose}{both}"


def factor_or_percent(error: float) -> str:
    """Print 1σ of a logarithm: per cent where it is small, a factor where it is not."""
    return f"± {percent(error)}" if error < FACTOR_FROM else f"×÷ {math.exp(error):.2g}"


def mass(mass_kg: float) -> str:
    """Print a mass in the unit that suits it, metric throughout."""
    for unit, kilograms in (("kt", 1e6), ("t", 1e3), ("kg", 1.0)):
        if mass_kg >= kilograms:
            return f"{mass_kg / kilograms:.4g} {unit}"
    return f"{mass_kg * 1e3:.4g} g"


def distance(distance_kpc: float) -> str:
    """Print a distance in the unit that suits it."""
    for unit, kpc in (("Mpc", 1e3), ("kpc", 1.0), ("pc", 1e-3)):
        if distance_kpc >= kpc:
            return f"{distance_kpc / kpc:.4g} {unit}"
    return f"{distance_kpc * 1e3:.4g} pc"


def resolution(response: Response) -> str:
    """Print the terms of a resolution that are not zero."""
    width, scale = response.resolution, response.scale
    stochastic = width.stochastic / math.sqrt(scale.mev)
    terms = [
        (width.stochastic, f"{stochastic:.4g}/√(E/{scale.unit})"),
        (width.constant, f"{width.constant:g}"),
        (width.noise_mev, f"{scale.words(width.noise_mev)}/E"),
    ]
    sign = " + " if width.linear else " ⊕ "
    return (
        "σ/E = " + sign.join(text for value, text in terms if value)
        if any(value for value, _ in terms)
        else "perfect"
    )


def curve(efficiency: Curve, scale: Scale) -> str:
    """Print an efficiency: its value, or its range."""
    if efficiency.is_constant:
        return percent(efficiency.values[0])
    first, last = (scale.words(efficiency.knots_mev[end]) for end in (0, -1))
    low, high = percent(efficiency.values[0]), percent(efficiency.values[-1])
    return f"{low} at {first} to {high} at {last}"


def assumptions(forecast: Evaluation) -> Iterator[Assumption]:
    """List every assumption: what, its value, and whether it was given or is a default."""
    yield from _of_detector(forecast)
    yield "burst", forecast.burst.title, forecast.burst.origin
    yield "distance", distance(forecast.distance_kpc), "given"
    yield "flavour conversion", forecast.conversion.describe(), "given, or the default"
    start, end = forecast.window_s or (forecast.burst.start_s, forecast.burst.end_s)
    if not forecast.burst.time_integrated:
        origin = "given" if forecast.window_s else "the whole burst"
        yield "time window", f"{start:g} s to {end:g} s", origin
    if forecast.energy_above_mev is not None:
        cut = forecast.detector.response.scale.words(forecast.energy_above_mev)
        yield "only above", f"{cut} observed", "given"


def _of_detector(forecast: Evaluation) -> Iterator[Assumption]:
    detector = forecast.detector
    response, given = detector.response, detector.stated
    for volume in detector.volumes:
        yield f"volume {volume.name}", f"{volume.mass_kg:.6g} kg {volume.material}", detector.origin
        yield "  free protons", f"{volume.targets('H-1'):.4g}", "composition"
        yield "  electrons", f"{volume.targets('electron'):.4g}", "composition"
        rows = _of_response(volume.response)
        yield from ((f"  {n}", v, detector.origin) for key, n, v in rows if key in volume.own)
    kind = "none: neutrons are counted" if response.kind == "none" else f"{response.kind} energy"
    yield "observed energy", kind, _origin(detector, "energy", given)
    yield "threshold", threshold(forecast), _origin(detector, "threshold", given)
    for key, name, value in _of_response(response)[1:]:
        yield name, value, _origin(detector, key, given)
    yield "light of slow protons and nuclei", detector.quenching, detector.origin
    for source in detector.backgrounds:
        rate = f"{source.rate_hz:.4g} Hz above the threshold"
        yield f"background {source.name}", rate, detector.origin
    errors = {
        "mass": detector.mass_error,
        "efficiency": detector.efficiency_error,
        "energy scale": detector.scale_error,
    }
    for name, error in errors.items():
        yield f"error of {name}", percent(error), detector.origin if error else "default"


def _of_response(response: Response) -> tuple[tuple[str, str, str], ...]:
    """Keys of a response with their names and values, the threshold first."""
    threshold = ("threshold", "threshold", _cut(response, 0.0))
    live = ("live_fraction", "live fraction", percent(response.live_fraction))
    if response.neutron_efficiency is not None:
        share = percent(response.neutron_efficiency)
        return (threshold, ("neutron_efficiency", "neutron efficiency", share), live)
    gamma = response.light.get("gamma", None)
    seen = float(gamma.visible(np.array(1.0))) if gamma is not None else 0.0
    gammas = ("gamma_containment", "gamma rays contained", percent(seen))
    return (
        threshold,
        ("resolution", "resolution", resolution(response)),
        ("efficiency", "efficiency", curve(response.efficiency, response.scale)),
        *([gammas] if "electron" in response.light else []),
        live,
    )


def _origin(detector: Detector, key: str, given: frozenset[str]) -> str:
    return detector.origin if key in given else "default"


def largest_sources(forecast: Evaluation, most: int) -> list[tuple[str, tuple[Reference, ...]]]:
    """Sources of the interactions that count most, the largest first."""
    ranked = sorted(zip(forecast.counted, forecast.keys, strict=True), key=lambda pair: -pair[0])
    keys = [key for count, key in ranked[:most] if count > 0]
    return [(key, forecast.detector.reaction(key).references) for key in keys]


def command(forecast: Evaluation) -> str:
    """Give the shell command that prints the page again, or say what the shell cannot be told."""
    in_python = list(_beyond_the_shell(forecast))
    if in_python:
        return f"in Python, since the shell has no words for {', '.join(in_python)}"
    words = ["tenkpc", "forecast", forecast.detector.origin]
    words += ["--burst", forecast.burst.origin]
    words += ["--distance", f"{forecast.distance_kpc:.12g} kpc", *forecast.conversion.options()]
    if forecast.interactions:
        words += [word for key in forecast.keys for word in ("--only", key)]
    if forecast.window_s is not None:
        words += ["--between", *(f"{t:.12g} s" for t in forecast.window_s)]
    return shlex.join(words)


def _beyond_the_shell(forecast: Evaluation) -> Iterator[str]:
    """List what went into a forecast that no option of the shell can say."""
    detector, burst = forecast.detector, forecast.burst
    if detector.origin not in gallery.names() and not detector.origin.endswith(".toml"):
        yield "a detector without a file"
    if burst.origin not in Burst.presets() and not burst.origin.endswith(".toml"):
        yield "a burst without a file"
    if not forecast.conversion.options():
        yield "this conversion"
    if forecast.energy_above_mev is not None:
        yield "a cut in energy"
    if forecast.background_time_s is not None:
        yield "a time for the background"
    choices = {key: value for key, value in forecast.interactions.items() if value is not False}
    changes = [*detector.document.changes, *burst.document.changes, *choices.items()]
    yield from (f"{key} = {value}" for key, value in changes)


def _is_unity(efficiency: Curve) -> bool:
    return efficiency.is_constant and efficiency.values[0] == 1.0
