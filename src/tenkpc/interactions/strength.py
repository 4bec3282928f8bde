"""Where the strength of a nucleus lies in excitation energy, and what is emitted from there.

A strength is a list of levels and resonances (E_x, width, value): a width of zero is a level,
any other a Gaussian, cut at 2.5 widths and at E_x = 0 and normalised to its value. Resonances
are cut into bins so narrow that each reacts like a level in its middle.

Above the separation energy S₁ₙ a neutron is emitted with an energy ε drawn from ε exp(−ε/t),
t = √((E_x − S₁ₙ)/(A/10 MeV)), the spectrum of evaporation (V. F. Weisskopf, Phys. Rev. 52 (1937)
295, with A/10 MeV for the level density: common practice), and a second one where more than S₂ₙ is
left. What remains is emitted as gamma rays.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtr

Floats = NDArray[np.float64]
# energy of excitation and width in MeV, and a value in the unit of its kind
Peak = tuple[float, float, float]

# Gaussians end so many widths from their middle
CUT = 2.5
# bins of excitation energy under wide and under narrow Gaussians, and what is narrow, MeV: half as
# wide moves no cross section by 2e-3 at 20 MeV
COARSE_MEV, FINE_MEV, NARROW_MEV = 1.0, 0.5, 4.0
# kinds of strength: of isospin, of spin and isospin (with g_A² inside or not), and of both
# dipoles; what the field calls magnetic dipole is spin strength in units of μ_N²
KINDS = (
    "fermi",
    "gamow_teller",
    "gamow_teller_with_axial_coupling",
    "magnetic_dipole",
    "spin_dipole",
    "vector_dipole",
)


@dataclass(frozen=True, eq=False)
class Excited:
    """Strength by excitation energy.

    Attributes
    ----------
    energy_mev
        energies of excitation, ascending, shape (levels,).
    of
        for each kind of strength that there is, its value in each, shape (levels,).
    """

    energy_mev: Floats
    of: Mapping[str, Floats]


@dataclass(frozen=True)
class Emission:
    """A way in which an excited nucleus decays: how often, and what comes out on average.

    Attributes
    ----------
    neutrons
        number of neutrons.
    share
        share of decays.
    gamma_mev
        energy that is left for gamma rays, MeV.
    """

    neutrons: int
    share: float
    gamma_mev: float


def excited(peaks: Mapping[str, Sequence[Peak]], borders_mev: Sequence[float]) -> Excited:
    """Spread strengths over levels and narrow bins, none of which lies across a border."""
    flat = [peak for of_kind in peaks.values() for peak in of_kind]
    levels = sorted({energy for energy, width, _ in flat if width == 0})
    edges = _edges(flat, borders_mev)
    energy = np.concatenate([levels, 0.5 * (edges[1:] + edges[:-1])])
    order = np.argsort(energy, kind="stable")
    values = {
        kind: np.concatenate([_in_levels(of_kind, levels), _in_bins(of_kind, edges)])[order]
        for kind, of_kind in peaks.items()
    }
    some = np.sum([np.abs(value) for value in values.values()], axis=0) > 0
    return Excited(energy[order][some], {kind: value[some] for kind, value in values.items()})


def emissions(
    energy_mev: float, separation_mev: Sequence[float], nucleons: int
) -> Iterator[Emission]:
    """Ways in which a nucleus of some excitation energy decays.

    Parameters
    ----------
    energy_mev
        energy of excitation, MeV.
    separation_mev
        energies S₁ₙ and S₂ₙ that it costs to take one and two neutrons away, or fewer of them.
    nucleons
        A of the nucleus.
    """
    first, second = (*separation_mev, np.inf, np.inf)[:2]
    if energy_mev <= first:
        yield Emission(0, 1.0, energy_mev)
        return
    left = energy_mev - first
    temperature = np.sqrt(left / (nucleons / 10))
    both = _below(energy_mev - second, temperature) if energy_mev > second else 0.0
    if both:
        after = energy_mev - second
        taken = _mean_between(0.0, after, temperature)
        cooler = np.sqrt(max(after - taken, 0.0) / (nucleons / 10))
        gammas = after - taken - min(2 * cooler, after - taken)
        yield Emission(2, float(both), float(gammas))
    mean = _mean_between(max(energy_mev - second, 0.0), left, temperature)
    yield Emission(1, float(1 - both), float(max(left - mean, 0.0)))


def _edges(peaks: Sequence[Peak], borders_mev: Sequence[float]) -> Floats:
    """Edges of bins under all Gaussians, with the borders and the ends of each among them."""
    ends = [_ends(peak) for peak in peaks if peak[1]]
    if not ends:
        return np.zeros(1)
    low, high = min(end[0] for end in ends), max(end[1] for end in ends)
    steps = [_steps(peak) for peak in peaks if peak[1]]
    wanted = np.concatenate([*steps, borders_mev, np.ravel(ends)])
    return np.unique(np.clip(wanted, low, high))


def _steps(peak: Peak) -> Floats:
    """Borders of bins under one Gaussian."""
    step = FINE_MEV if peak[1] < NARROW_MEV else COARSE_MEV
    low, high = _ends(peak)
    return np.arange(np.ceil(low / step), np.floor(high / step) + 1) * step


def _ends(peak: Peak) -> tuple[float, float]:
    energy, width, _ = peak
    return max(energy - CUT * width, 0.0), energy + CUT * width


def _in_levels(peaks: Sequence[Peak], levels_mev: Sequence[float]) -> Floats:
    """Strength of one kind in each level."""
    sharp = [(energy, value) for energy, width, value in peaks if width == 0]
    return np.array([sum(v for e, v in sharp if e == level) for level in levels_mev])


def _in_bins(peaks: Sequence[Peak], edges: Floats) -> Floats:
    """Strength of one kind in each bin of excitation energy."""
    shares = (_share(peak, edges) for peak in peaks if peak[1])
    return sum(shares, np.zeros(len(edges) - 1))


def _share(peak: Peak, edges: Floats) -> Floats:
    """Strength of a Gaussian in each bin."""
    energy, width, value = peak
    inside = ndtr((np.clip(edges, *_ends(peak)) - energy) / width)
    result: Floats = value * np.diff(inside) / (inside[-1] - inside[0])
    return result


def _below(energy_mev: float, temperature_mev: float) -> float:
    """Share of the spectrum ε exp(−ε/t) below an energy."""
    x = energy_mev / temperature_mev
    return float(1 - (1 + x) * np.exp(-x))


def _first_moment(energy_mev: float, temperature_mev: float) -> float:
    """∫ ε² exp(−ε/t) dε/t² below an energy."""
    x = energy_mev / temperature_mev
    return float(temperature_mev * (2 - (x**2 + 2 * x + 2) * np.exp(-x)))


def _mean_between(low_mev: float, high_mev: float, temperature_mev: float) -> float:
    """Mean energy of the spectrum between two energies."""
    share = _below(high_mev, temperature_mev) - _below(low_mev, temperature_mev)
    if share < 1e-12:
        return low_mev
    moment = _first_moment(high_mev, temperature_mev) - _first_moment(low_mev, temperature_mev)
    return moment / share
