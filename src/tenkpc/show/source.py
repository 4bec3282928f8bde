"""Pictures of a burst: what the star emits in time, and what arrives."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from tenkpc.errors import InputError
from tenkpc.forecast.forecast import Forecast
from tenkpc.forecast.others import other_conversions
from tenkpc.show.marks import (
    FOOT_SIZE,
    LABEL_SIZE,
    WIDTH_IN,
    apart,
    assumed,
    colour,
    foot,
    given_axes,
    halo,
    in_all,
    names_at_right,
    names_in_column,
    panels,
    spacing,
    stretched_time,
    weight,
    wrapped,
)
from tenkpc.source.burst import Burst
from tenkpc.source.components import Peak
from tenkpc.species import MULTIPLICITY, SPECIES, SYMBOLS

if TYPE_CHECKING:
    from matplotlib.axes import Axes

Floats = NDArray[np.float64]
Point = tuple[float, float]

# times drawn, s: fine at the first peak, then evenly in ratio
TIMES_S = np.concatenate([np.linspace(-0.02, 0.1, 481), np.geomspace(0.1003, 20.0, 600)])
# a line of the mean energy is as wide as this share of the spectrum's standard deviation
LINE_SHARE = 0.25
SHARES = (0.1, 0.5, 0.9)
HIGHEST_MEV = 60.0
# areas are named where they are thickest, but not within the first peak, s
NAMES_FROM_S = 0.05


def burst(burst: Burst, *, other: Burst | None = None, ax: Sequence[Axes] | None = None) -> Axes:
    """Draw what a burst emits: luminosities as stacked areas, below them mean energies.

    Parameters
    ----------
    burst
        a burst with a time profile.
    other
        a second one, drawn as thin dashed lines.
    ax
        two axes to draw on, the upper one first; without, a new figure.

    Returns
    -------
    Axes
        the upper axes. Areas are those of ALL kinds of a species (two for ν_x and ν̄_x each), so
        that the top of the stack is the luminosity of all six; triangles at the bottom mark when
        10, 50 and 90 % of the energy is emitted, numbers at the right are effective pinchings of
        the whole burst.

    Raises
    ------
    InputError
        where a burst has no time profile, or there are not two axes.
    """
    for made in filter(None, (burst, other)):
        if made.time_integrated:
            message = f"burst: {made.title!r} is integrated over time and has no time profile"
            raise InputError(message)
    upper, lower = (
        panels(None, (3, 2), tall=5.6) if ax is None else given_axes(ax, 2, "a picture of a burst")
    )
    times = TIMES_S[(burst.start_s <= TIMES_S) & (burst.end_s >= TIMES_S)]
    _luminosities(upper, burst, times)
    names, ends = _mean_energies(lower, burst, times)
    if other is not None:
        _second(upper, lower, other, times)
    names_at_right(lower, names, ends)
    _running_share(upper, burst)
    stretched_time([upper, lower], times[0], times[-1])
    _phases(upper, burst, times)
    second = f"; dashed: “{other.title}”, all six kinds together above" if other else ""
    widths = "widths of lines: a quarter of the spectrum's standard deviation"
    foot(lower, f"“{burst.title}”, {in_all(burst)}; {widths}; α: pinching in all{second}")
    return upper


def fluence(forecast: Forecast, *, ax: Sequence[Axes] | None = None) -> Axes:
    """Draw what arrives in front of what was emitted, one panel for each species.

    Parameters
    ----------
    forecast
        the forecast: burst, distance, conversion and window of time.
    ax
        four axes to draw on, one for each species; without, a new figure of two by two.

    Returns
    -------
    Axes
        the first of the axes. Fluences are of ONE neutrino kind; the emitted ones, spread over
        the same sphere, are the grey areas; other conversions are thin lines.

    Raises
    ------
    InputError
        where there are not four axes.
    """
    from matplotlib import pyplot as plt

    line = f"{assumed(forecast)}; {in_all(forecast.burst)}"
    if ax is None:
        layout: dict[str, Any] = {"figsize": (WIDTH_IN, 5.2), "layout": "constrained"}
        figure, grid = plt.subplots(2, 2, sharex=True, sharey=True, **layout)
        axes: list[Axes] = list(grid.ravel())
        figure.supxlabel(wrapped(line), x=0.02, ha="left", fontsize=FOOT_SIZE, color="0.25")
    else:
        axes = given_axes(ax, len(SPECIES), "a picture of fluences")
        foot(axes[2], line)
    energy = np.linspace(0.05, HIGHEST_MEV, 400)
    cases = [("arriving", forecast.fluence(energy))]
    cases += [(name, case.fluence(energy)) for name, case in _thin(forecast)]
    emitted = forecast.fluence(energy, converted=False)
    for place, panel in enumerate(axes):
        _fluences(panel, SPECIES[place], energy, emitted[place], [c[place] for _, c in cases])
    for panel in axes[2:]:
        panel.set_xlabel("neutrino energy [MeV]")
    for panel in axes[::2]:
        panel.set_ylabel("fluence of ONE kind [cm⁻² MeV⁻¹]", fontsize=LABEL_SIZE)
    named = [("grey: emitted, unconverted", emitted), *cases]
    clearest = _clearest([curves for _, curves in named])
    _name_cases(axes[clearest], energy, [(name, curves[clearest]) for name, curves in named])
    return axes[0]


def _thin(forecast: Forecast) -> list[tuple[str, Forecast]]:
    """Other conversions that are drawn as lines: what is not converted is the grey area."""
    return [(name, case) for name, case in other_conversions(forecast) if name != "unconverted"]


def _fluences(
    ax: Axes, species: str, energy: Floats, emitted: Floats, curves: Sequence[Floats]
) -> None:
    """Draw the panel of one species: emitted in grey, arriving in front, others as thin lines."""
    ax.fill_between(energy, emitted, color="0.8", linewidth=0)
    for rank, curve in enumerate(curves):
        heavy, front = (weight(0), 3) if rank == 0 else (0.9, 4)
        ax.plot(energy, curve, color=colour(rank), linewidth=heavy, zorder=front)
    ax.annotate(SYMBOLS[species], (0.95, 0.5), xycoords="axes fraction", ha="right")
    ax.set_ylim(bottom=0)
    ax.set_xlim(0, HIGHEST_MEV)


def _luminosities(ax: Axes, burst: Burst, times: Floats) -> None:
    """Stack the luminosities of all kinds of each species, 1e52 erg/s."""
    values = burst.luminosity(times) * MULTIPLICITY[:, None] / 1e52
    base, middles = np.zeros(len(times)), []
    for rank, part in enumerate(values):
        ax.fill_between(times, base, base + part, color=colour(rank), alpha=0.8, linewidth=0)
        ax.plot(times, base + part, color="0.15", linewidth=weight(rank) / 2)
        base = base + part
        middles.append(base - 0.5 * part)
    ax.set_ylim(0, base.max() * 1.08)
    ax.set_ylabel("luminosity of all six kinds [10⁵² erg/s]")
    _name_areas(ax, times, values, np.array(middles))


def _name_areas(ax: Axes, times: Floats, values: Floats, middles: Floats) -> None:
    """Name each area where it is thickest, and none that is empty."""
    words = {1.0: "", 2.0: ", both kinds"}
    late = times >= min(NAMES_FROM_S, times[-1])
    some = [rank for rank, part in enumerate(values) if part[late].any()]
    places = [int(np.argmax(np.where(late, values[rank], -1.0))) for rank in some]
    top = ax.get_ylim()[1]
    heights = np.array([middles[rank, at] / top for rank, at in zip(some, places, strict=True)])
    style: dict[str, Any] = {"fontsize": LABEL_SIZE, "va": "center", "path_effects": halo()}
    heights = apart(heights, 0.75 * spacing(ax, LABEL_SIZE))
    for rank, at, height in zip(some, places, heights, strict=True):
        side = "right" if times[at] > 0.9 * times[-1] else "center"
        name = f"{SYMBOLS[SPECIES[rank]]}{words[float(MULTIPLICITY[rank])]}"
        ax.text(times[at], height * top, name, ha=side, **style)


def _mean_energies(ax: Axes, burst: Burst, times: Floats) -> tuple[list[str], list[Point]]:
    """Draw mean energies as lines whose width is a share of the spectrum's own.

    Their names and ends are given back, to be written once the axes have their last scale.
    """
    mean, width = burst.mean_energy(times), burst.energy_width(times)
    pinching = burst.summary().pinching
    names, ends = [], []
    for rank, species in enumerate(SPECIES):
        middle, half = mean[rank], 0.5 * LINE_SHARE * width[rank]
        known = np.flatnonzero(np.isfinite(middle))
        if not known.size or (species == "anti_nu_x" and _alike(mean)):
            continue
        shade = colour(rank)
        ax.fill_between(times, middle - half, middle + half, color=shade, alpha=0.6, linewidth=0)
        ax.plot(times, middle, color="0.15", linewidth=0.6)
        names.append(f"{_both(species, mean)}, α = {pinching[rank]:.1f}")
        ends.append((float(times[known[-1]]), float(middle[known[-1]])))
    ax.set_ylim(np.nanmin(mean) * 0.85, np.nanmax(mean) * 1.12)
    ax.set_ylabel("mean energy [MeV]")
    return names, ends


def _alike(mean: Floats) -> bool:
    """Say whether ν_x and ν̄_x have the same mean energy at all times."""
    return np.allclose(mean[2], mean[3], equal_nan=True)


def _both(species: str, mean: Floats) -> str:
    """Name a species, with its antineutrino where both have the same line."""
    alike = species == "nu_x" and _alike(mean)
    return f"{SYMBOLS['nu_x']}, {SYMBOLS['anti_nu_x']}" if alike else SYMBOLS[species]


def _second(upper: Axes, lower: Axes, other: Burst, times: Floats) -> None:
    """Draw another burst as thin dashed lines, its luminosity summed over all kinds."""
    inside = times[(times >= other.start_s) & (times <= other.end_s)]
    dashed: dict[str, Any] = {"linestyle": (0, (4, 2)), "linewidth": 0.8}
    total = MULTIPLICITY @ other.luminosity(inside) / 1e52
    upper.plot(inside, total, color="black", **dashed)
    upper.set_ylim(top=max(upper.get_ylim()[1], total.max() * 1.08))
    mean = other.mean_energy(inside)
    for rank, line in enumerate(mean):
        lower.plot(inside, line, color=colour(rank), **dashed)
    low, high = lower.get_ylim()
    lower.set_ylim(min(low, np.nanmin(mean) * 0.85), max(high, np.nanmax(mean) * 1.12))


def _running_share(ax: Axes, burst: Burst) -> None:
    """Mark along the bottom when some shares of the energy have been emitted."""
    times = np.unique(np.concatenate([burst.time_panels(), TIMES_S]))
    times = times[(times >= burst.start_s) & (times <= burst.end_s)]
    power = MULTIPLICITY @ burst.luminosity(times)
    steps = 0.5 * (power[1:] + power[:-1]) * np.diff(times)
    share = np.append(0.0, np.cumsum(steps)) / steps.sum()
    reached = [float(np.interp(wanted, share, times)) for wanted in SHARES]
    for wanted, at in zip(SHARES, reached, strict=True):
        if at > TIMES_S[-1]:
            continue
        ax.plot(at, 0, marker="^", markersize=5, color="black", clip_on=False)
        ax.annotate(
            f"{wanted:.0%}",
            (at, 0),
            xytext=(0, -6),
            textcoords="offset points",
            ha="center",
            va="top",
            fontsize=FOOT_SIZE,
            path_effects=halo(),
        )


def _phases(ax: Axes, burst: Burst, times: Floats) -> None:
    """Name the components along the top, each where it is brightest, and mark its joints."""
    for name, part in burst.flowing.items():
        power = MULTIPLICITY @ part.moment(1, times)
        # the peak's joints are steps for the quadrature, those of others are ends of phases
        joints = () if isinstance(part, Peak) else part.joints_s
        for joint in (t for t in joints if times[0] < t < times[-1]):
            ax.axvline(joint, color="0.6", linewidth=0.5, zorder=0)
        ax.annotate(
            name,
            (times[int(np.argmax(power))], 1.01),
            xycoords=("data", "axes fraction"),
            ha="center",
            va="bottom",
            fontsize=LABEL_SIZE,
        )


def _clearest(cases: Sequence[Floats]) -> int:
    """Index of the species whose curves, (species, energies) each, differ most at the closest."""
    curves = np.array(cases)
    pairs = [np.abs(a - b).max(axis=-1) for n, a in enumerate(curves) for b in curves[n + 1 :]]
    return int(np.argmax(np.min(pairs, axis=0) / np.maximum(curves.max(axis=(0, 2)), 1e-300)))


def _name_cases(ax: Axes, energy: Floats, curves: Sequence[tuple[str, Floats]]) -> None:
    """Name the curves of one panel, each where it is furthest from the others."""
    values = np.array([curve for _, curve in curves])
    points = []
    for rank, curve in enumerate(values):
        away = np.abs(np.delete(values, rank, axis=0) - curve).min(axis=0)
        at = int(np.argmax(away))
        points.append((float(energy[at]), float(curve[at])))
    names_in_column(ax, [name for name, _ in curves], points, left=0.42)
