"""From the energy that was deposited to the energy that is observed, in closed form.

A deposit that is uniform between two energies, smeared by a Gaussian of constant width and
weighted with a piecewise-linear efficiency, has elementary integrals over any bin. With Φ and φ
the normal distribution and density, s the width and x measured from an end of the deposit,

    ∫ Φ(t/s) dt, t < x      =  G(x) =  x Φ(x/s) + s φ(x/s)
    ∫ t Φ(t/s) dt, t < x    =  M(x) = (x² Φ(x/s) - s² [Φ(x/s) - (x/s) φ(x/s)]) / 2

and the observed density of a deposit uniform in [a, b] is [Φ((x-a)/s) - Φ((x-b)/s)]/(b-a).
Nothing is sampled, so a threshold may be as sharp as it likes.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from types import MappingProxyType

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtr

from tenkpc.detector.quanta import Acceptance
from tenkpc.detector.quenching import Light
from tenkpc.detector.scales import MEV, Scale

Floats = NDArray[np.float64]

# stands for "no lower edge": far below anything that a resolution can reach
FAR_BELOW_MEV = -1e4
# a resolution this small is the exact step of a perfect detector
SMALLEST_SIGMA_MEV = 1e-12
# so many σ away nothing is left (1e-23) and differences would be rounding errors
REACH = 10.0


@dataclass(frozen=True)
class Resolution:
    """Width of the observed energy, σ/E = a/√(E/MeV) ⊕ b ⊕ c/E, as a function of energy.

    Attributes
    ----------
    stochastic, constant
        a and b, numbers.
    noise_mev
        c in MeV.
    linear
        add the three terms as they are instead of in quadrature.
    """

    stochastic: float = 0.0
    constant: float = 0.0
    noise_mev: float = 0.0
    linear: bool = False

    def sigma_mev(self, energy_mev: Floats) -> Floats:
        """1σ in MeV at each energy in MeV (the observed kind)."""
        energy = np.maximum(energy_mev, 0.0)
        terms = (
            self.stochastic * np.sqrt(energy),
            self.constant * energy,
            self.noise_mev * np.ones_like(energy),
        )
        if self.linear:
            return sum(terms, np.zeros_like(energy))
        return np.sqrt(sum((term**2 for term in terms), np.zeros_like(energy)))


@dataclass(frozen=True)
class Curve:
    """A piecewise-linear function of energy with values in [0, 1].

    Attributes
    ----------
    knots_mev, values
        the points; a single point is a constant.
    zero_outside
        whether the curve is zero outside its knots instead of holding its end values.
    """

    knots_mev: tuple[float, ...] = (0.0,)
    values: tuple[float, ...] = (1.0,)
    zero_outside: bool = False

    def __call__(self, energy_mev: Floats) -> Floats:
        """Value at each energy in MeV."""
        outside = 0.0 if self.zero_outside else None
        return np.interp(energy_mev, self.knots_mev, self.values, left=outside, right=outside)

    @property
    def is_constant(self) -> bool:
        """Whether the curve has the same value everywhere."""
        return len(set(self.values)) == 1 and not self.zero_outside


@dataclass(frozen=True)
class Response:
    """What one medium makes of an event: visible energy, resolution, threshold, efficiency.

    Attributes
    ----------
    kind
        the observed kind of energy: ``"total"``, ``"kinetic"``, ``"visible"`` or ``"recoil"``.
    scale
        how energies of that kind are written.
    light
        for every particle that the medium sees, what its kinetic energy is worth.
    event_offset_mev
        what the observed kind adds once per event (the electron mass for ``"total"``).
    threshold_mev
        lowest accepted energy, of the observed kind; zero accepts everything.
    efficiency, true_efficiency
        share of events kept against the observed energy, and against the energy before
        resolution.
    live_fraction
        share of the time in which the detector records.
    scale_error
        1σ of the energy scale, relative.
    acceptance
        for particles with a threshold that is none of the observed energy, the share kept
        against their kinetic energy, before resolution.
    threshold_beside
        words for that threshold.
    neutron_efficiency
        for a counter of neutrons, which has no energies, the probability that it registers one.
    """

    kind: str = "total"
    scale: Scale = MEV
    light: Mapping[str, Light] = field(default_factory=lambda: MappingProxyType({}))
    event_offset_mev: float = 0.0
    resolution: Resolution = Resolution()
    threshold_mev: float = 0.0
    efficiency: Curve = Curve()
    true_efficiency: Curve = Curve()
    live_fraction: float = 1.0
    scale_error: float = 0.0
    acceptance: Mapping[str, Acceptance] = field(default_factory=lambda: MappingProxyType({}))
    threshold_beside: str = ""
    neutron_efficiency: float | None = None

    @property
    def counts_neutrons(self) -> bool:
        """Whether it registers neutrons and nothing else."""
        return self.neutron_efficiency is not None

    def registered(self, neutrons: int) -> float:
        """Share of events with so many neutrons of which at least one is registered."""
        missed = (1 - (self.neutron_efficiency or 0.0)) ** neutrons
        return self.live_fraction * (1 - missed)

    def mean_registered(self, neutrons: int) -> float:
        """Mean number of neutrons that are registered of so many."""
        return self.live_fraction * (self.neutron_efficiency or 0.0) * neutrons

    def accepted(self, particle: str, kinetic_mev: Floats) -> Floats:
        """Share of events that passes thresholds beside that of the observed energy."""
        acceptance = self.acceptance.get(particle)
        return np.ones_like(kinetic_mev) if acceptance is None else acceptance.kept(kinetic_mev)

    def visible(self, particle: str, kinetic_mev: float) -> float | None:
        """What a particle adds to the energy of an event, MeV; None where it is not seen."""
        light = self.light.get(particle)
        return None if light is None else float(light.visible(np.array(kinetic_mev)))

    def kinetic(self, particle: str, visible_mev: Floats) -> Floats:
        """Kinetic energy in MeV of a seen particle that adds ``visible_mev``: the inverse."""
        return self.light[particle].kinetic(visible_mev)

    def scaled(self, factor: float) -> Response:
        """Report every energy ``factor`` times as high: cuts and curves move the other way."""
        curve = self.efficiency
        moved = replace(curve, knots_mev=tuple(knot / factor for knot in curve.knots_mev))
        return replace(self, threshold_mev=self.threshold_mev / factor, efficiency=moved)

    @property
    def knots_mev(self) -> tuple[float, ...]:
        """Energies at which the response is not smooth."""
        knots = {*self.efficiency.knots_mev, *self.true_efficiency.knots_mev}
        for particle, acceptance in self.acceptance.items():
            visible = self.light[particle].visible(np.array(acceptance.knots_mev))
            knots.update((visible + self.event_offset_mev).tolist())
        return tuple(sorted({self.threshold_mev, self.event_offset_mev, *knots}))

    def above_threshold(self, low_mev: Floats, high_mev: Floats) -> Floats:
        """Share of deposits uniform in [low, high] that is observed above threshold, (cells,)."""
        start = np.array([self._start()])
        return 1.0 - _cumulative(start, low_mev, high_mev, self._sigma(low_mev, high_mev))[:, 0]

    def share(self, low_mev: Floats, high_mev: Floats, edges_mev: Floats) -> Floats:
        """Share of deposits uniform in [low, high] that is counted in each bin.

        Parameters
        ----------
        low_mev, high_mev
            ends of the deposits before resolution, MeV, shape (cells,).
        edges_mev
            bin edges in observed energy, MeV, shape (bins + 1,). What is observed below the
            first edge but above threshold goes into the first bin.

        Returns
        -------
        ndarray
            shape (cells, bins + 1): the bins, then everything above the last edge.
        """
        segments, weights = self._segments(edges_mev)
        sigma = self._sigma(low_mev, high_mev)
        pieces = _segment_integrals(segments, weights, low_mev, high_mev, sigma)
        bins = np.searchsorted(edges_mev, segments[:-1], side="right") - 1
        columns = np.zeros((len(low_mev), len(edges_mev)))
        np.add.at(columns.T, np.clip(bins, 0, len(edges_mev) - 1), pieces.T)
        tail = 1.0 - _cumulative(segments[-1:], low_mev, high_mev, sigma)[:, 0]
        columns[:, -1] += self.efficiency(segments[-1:] + 1.0)[0] * tail
        kept = self.true_efficiency(0.5 * (low_mev + high_mev)) * self.live_fraction
        return columns * kept[:, None]

    def _start(self) -> float:
        return self.threshold_mev if self.threshold_mev > 0 else FAR_BELOW_MEV

    def _sigma(self, low_mev: Floats, high_mev: Floats) -> Floats:
        sigma = self.resolution.sigma_mev(0.5 * (low_mev + high_mev))
        return np.maximum(sigma, SMALLEST_SIGMA_MEV)

    def _segments(self, edges_mev: Floats) -> tuple[Floats, Floats]:
        """Borders on which the efficiency is linear, and its values at both ends of each."""
        inner = np.concatenate([edges_mev, self.efficiency.knots_mev])
        start = self._start()
        borders = np.unique(np.concatenate([[start], inner[inner > start]]))
        quarter = np.diff(borders) / 4
        first = self.efficiency(borders[:-1] + quarter)
        second = self.efficiency(borders[1:] - quarter)
        half = (second - first) / 2  # one-sided values: the curve may jump at a border
        return borders, np.stack([first - half, second + half])


def _smooth(x: Floats, sigma: Floats) -> tuple[Floats, Floats]:
    """G(x) and M(x) of the module's docstring."""
    z = x / sigma
    below = ndtr(z)
    density = np.exp(-0.5 * z * z) / np.sqrt(2 * np.pi)
    g = x * below + sigma * density
    m = 0.5 * (x * x * below - sigma * sigma * (below - z * density))
    return g, m


def _moments(
    x: Floats, low: Floats, high: Floats, sigma: Floats, origin: Floats
) -> tuple[Floats, Floats]:
    """∫ p and ∫ (t - origin) p of the observed density p up to x, shapes (cells, x)."""
    low, high, sigma = low[:, None], high[:, None], sigma[:, None]
    g_low, m_low = _smooth(x - low, sigma)
    g_high, m_high = _smooth(x - high, sigma)
    zeroth = (g_low - g_high) / (high - low)
    first = (m_low - m_high + (low - origin) * g_low - (high - origin) * g_high) / (high - low)
    before, after = x < low - REACH * sigma, x > high + REACH * sigma
    zeroth = np.where(before, 0.0, np.where(after, 1.0, zeroth))
    first = np.where(before, 0.0, np.where(after, 0.5 * (low + high) - origin, first))
    return zeroth, first


def _cumulative(x: Floats, low: Floats, high: Floats, sigma: Floats) -> Floats:
    """Share observed below each x, shape (cells, x)."""
    return _moments(x, low, high, sigma, np.zeros_like(x))[0]


def _segment_integrals(
    borders: Floats, weights: Floats, low: Floats, high: Floats, sigma: Floats
) -> Floats:
    """∫ efficiency × observed density over each segment, shape (cells, segments)."""
    left, right = borders[:-1], borders[1:]
    zeroth: Floats = np.diff(_cumulative(borders, low, high, sigma), axis=1)
    slope = (weights[1] - weights[0]) / (right - left)
    integrals: Floats = zeroth * weights[0]
    if np.any(slope):
        end = _moments(right, low, high, sigma, left)[1]
        start = _moments(left, low, high, sigma, left)[1]
        integrals += slope * (end - start)
    return integrals
