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
    assumed,
    colour,
    foot,
    halo,
    in_all,
    names_at_right,
    names_in_column,
    panels,
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

# times drawn, s: fine at the first peak, then evenly in ratio
TIMES_S = np.concatenate([np.linspace(-0.02, 0.1, 481), np.geomspace(0.1003, 20.0, 600)])
# a line of the mean energy is as wide as this share of the spectrum's standard deviation
LINE_SHARE = 0.25
SHARES = (0.1, 0.5, 0.9)
HIGHEST_MEV = 60.0


def burst(burst: Burst, *, other: Burst | None = None, ax: Sequence[Axes] | None = None) -> Axes:
    """Draw what a burst emits: luminosities as stacked areas, below them mean energies.

    Parameters
    ----------
    burst
        a burst with a time profile.
    other
        a second one, drawn as thin dashed lines.
    ax
        two axes to draw on; without, a new figure.

    Returns
    -------
    Axes
        the upper axes. Areas are those of ALL kinds of a species (two for ν_x and ν̄_x each);
        triangles at the bottom mark when 10, 50 and 90 % of the energy is emitted, numbers at the
        right are effective pinchings of the whole burst.

    Raises
    ------
    InputError
        where a burst has no time profile.
    """
    for made in filter(None, (burst, other)):
        if made.time_integrated:
            message = f"burst: {made.title!r} is integrated over time and has no time profile"
            raise InputError(message)
    if ax is None:
        upper, lower = panels(None, (3, 2), tall=5.6)
    else:
        upper, lower = ax
    times = TIMES_S[(burst.start_s <= TIMES_S) & (burst.end_s >= TIMES_S)]
    _luminosities(upper, burst, times)
    _mean_energies(lower, burst, times)
    if other is not None:
        _second(upper, lower, other, times)
    _running_share(upper, burst)
    stretched_time([upper, lower], times[0], times[-1])
    _phases(upper, burst, times)
    seconds = f", dashed: “{other.title}”" if other is not None else ""
    foot(lower, f"“{burst.title}”{seconds}; {in_all(burst)}")
    return upper


def fluence(forecast: Forecast, *, ax: Sequence[Axes] | None = None) -> Axes:
    """Draw what arrives in front of what was emitted, one panel for each species.

    Parameters
    ----------
    forecast
        the forecast: burst, distance, conversion and window of time.
    ax
        four axes to draw on; without, a new figure.

    Returns
    -------
    Axes
        the first of the axes. Fluences are of ONE neutrino kind; the emitted ones, spread over
        the same sphere, are the grey areas; other conversions are thin lines.
    """
    from matplotlib import pyplot as plt

    line = f"{assumed(forecast)}; {in_all(forecast.burst)}"
    if ax is None:
        layout: dict[str, Any] = {"figsize": (WIDTH_IN, 5.2), "layout": "constrained"}
        figure, grid = plt.subplots(2, 2, sharex=True, sharey=True, **layout)
        ax = list(grid.ravel())
        figure.supxlabel(wrapped(line), x=0.02, ha="left", fontsize=FOOT_SIZE, color="0.25")
    energy = np.linspace(0.05, HIGHEST_MEV, 400)
    emitted, arriving = forecast.fluence(energy, converted=False), forecast.fluence(energy)
    lines = [(name, case.fluence(energy)) for name, case in other_conversions(forecast)]
    for place, (axes, species) in enumerate(zip(ax, SPECIES, strict=True)):
        axes.fill_between(energy, emitted[place], color="0.8", linewidth=0)
        axes.plot(energy, arriving[place], color=colour(0), linewidth=weight(0))
        for rank, (_, other) in enumerate(lines):
            axes.plot(energy, other[place], color=colour(rank + 1), linewidth=0.9)
        axes.annotate(SYMBOLS[species], (0.95, 0.9), xycoords="axes fraction", ha="right", va="top")
        axes.set_ylim(bottom=0)
        axes.set_xlim(0, HIGHEST_MEV)
    _name_cases(ax[1], energy, [("arriving", arriving[1]), *((n, o[1]) for n, o in lines)])
    for axes in ax[2:]:
        axes.set_xlabel("neutrino energy [MeV]")
    for axes in ax[::2]:
        axes.set_ylabel("of one kind [cm⁻² MeV⁻¹]")
    words: dict[str, Any] = {"xycoords": "axes fraction", "ha": "right", "fontsize": FOOT_SIZE}
    ax[0].annotate("grey: as emitted", (0.95, 0.7), **words)
    return ax[0]


def _luminosities(ax: Axes, burst: Burst, times: Floats) -> None:
    """Stack the luminosities of all kinds of each species, 1e52 erg/s."""
    values = burst.luminosity(times) * MULTIPLICITY[:, None] / 1e52
    base, heights = np.zeros(len(times)), []
    for rank, part in enumerate(values):
        ax.fill_between(times, base, base + part, color=colour(rank), alpha=0.8, linewidth=0)
        ax.plot(times, base + part, color="0.15", linewidth=weight(rank) / 2)
        base = base + part
        heights.append(base - 0.5 * part)
    ax.set_ylim(0, base.max() * 1.08)
    ax.set_ylabel("luminosity [10⁵² erg/s]")
    at = int(np.argmin(np.abs(times - 0.15)))
    counts = {1.0: "", 2.0: ", each of two"}
    names = [
        f"{SYMBOLS[name]}{counts[float(kinds)]}"
        for name, kinds in zip(SPECIES, MULTIPLICITY, strict=True)
    ]
    style: dict[str, Any] = {"fontsize": LABEL_SIZE, "va": "center", "path_effects": halo()}
    for name, height in zip(names, heights, strict=True):
        ax.text(0.15, height[at], name, **style)


def _mean_energies(ax: Axes, burst: Burst, times: Floats) -> None:
    """Draw mean energies as lines whose width is a share of the spectrum's own."""
    mean, width = burst.mean_energy(times), burst.energy_width(times)
    pinching = burst.summary().pinching
    names, ends = [], []
    for rank, species in enumerate(SPECIES):
        if species == "anti_nu_x" and np.allclose(mean[rank], mean[rank - 1], equal_nan=True):
            continue
        half = 0.5 * LINE_SHARE * width[rank]
        middle, shade = mean[rank], colour(rank)
        ax.fill_between(times, middle - half, middle + half, color=shade, alpha=0.6, linewidth=0)
        ax.plot(times, middle, color="0.15", linewidth=0.6)
        known = middle[np.isfinite(middle)]
        names.append(f"{_both(species, mean)}, α = {pinching[rank]:.1f}")
        ends.append(known[-1] if known.size else 0.0)
    low, high = np.nanmin(mean) * 0.85, np.nanmax(mean) * 1.12
    ax.set_ylim(low, high)
    ax.set_ylabel("mean energy [MeV]")
    names_at_right(ax, names, (np.array(ends) - low) / (high - low), 1.6 * LABEL_SIZE)
    for text in ax.texts:
        text.set_fontsize(LABEL_SIZE)
    words = "widths: a quarter of each spectrum's standard deviation"
    ax.annotate(words, (0.01, 0.04), xycoords="axes fraction", fontsize=FOOT_SIZE)


def _both(species: str, mean: Floats) -> str:
    """Name a species, with its antineutrino where both have the same line."""
    alike = species == "nu_x" and np.allclose(mean[2], mean[3], equal_nan=True)
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
    for wanted in SHARES:
        at = float(np.interp(wanted, share, times))
        ax.plot(at, 0, marker="^", markersize=5, color="black", clip_on=False)
        ax.annotate(
            f"{wanted:.0%}",
            (at, 0),
            xytext=(0, 5),
            textcoords="offset points",
            ha="center",
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


def _name_cases(ax: Axes, energy: Floats, curves: Sequence[tuple[str, Floats]]) -> None:
    """Name the curves of one panel at energies where they stand apart."""
    places = np.linspace(0.12, 0.4, len(curves)) * len(energy)
    points = [
        (float(energy[int(at)]), float(curve[int(at)]))
        for at, (_, curve) in zip(places, curves, strict=True)
    ]
    names_in_column(ax, [name for name, _ in curves], points, left=0.5)
