"""Counts of every preset against quadrature over time and energy, and bins across the gate."""

from __future__ import annotations

import itertools
import math

import numpy as np
import pytest
from scipy.integrate import quad

from tenkpc import Burst, Detector, Forecast, Unconverted, interactions
from tenkpc.constants import CM_PER_KPC
from tenkpc.forecast.grid import panel_nodes
from tenkpc.species import MULTIPLICITY, SPECIES

HALL = Detector.gallery("brine-hall")
# a sharp bin-free view: reactions, with windows reached by no count that matters
KEYS = ("carbon-12-excited", "inverse-beta-decay", "proton-scattering")
ENERGY, WEIGHT = panel_nodes(np.unique([*np.linspace(0, 60, 25), 15.11, 80, 100, 150, 200.0]), 16)
FLOWING = [name for name in Burst.presets() if not Burst.preset(name).time_integrated]


def kernel(key):
    """Targets times cross section of each species at the energies, over the sphere of 10 kpc."""
    interaction = interactions.by_key(key)
    sigma = np.array([interaction.sigma(species, ENERGY) for species in SPECIES])
    area = 4 * math.pi * (10 * CM_PER_KPC) ** 2
    return HALL.targets(interaction.target) * sigma * MULTIPLICITY[:, None] * WEIGHT / area


def rate(burst, weights, time):
    """Reactions per second at a time."""
    return float((burst.rate([time], ENERGY)[:, 0] * weights).sum())


def over_time(burst, weights, start, end):
    """Reactions between two times by adaptive quadrature, cut where the burst is not smooth."""
    inner = (*burst.joints_s, 0.01, 0.02, 0.06, 0.2, 0.5, 1.0, 3.0, 10.0)
    cuts = [start, *sorted(t for t in set(inner) if start < t < end), end]
    pieces = itertools.pairwise(cuts)
    return sum(
        quad(lambda t: rate(burst, weights, t), a, b, epsabs=1e-9, epsrel=1e-7, limit=200)[0]
        for a, b in pieces
    )


@pytest.mark.parametrize("name", FLOWING)
def test_counts_of_a_preset(name):
    """Reactions of three kinds to 1e-4."""
    burst = Burst.preset(name)
    made = Forecast(HALL, burst, distance="10 kpc", conversion=Unconverted())
    found = made.counts["reactions"]
    for key in KEYS:
        expected = over_time(burst, kernel(key), burst.start_s, burst.end_s)
        assert found[key] == pytest.approx(expected, rel=1e-4)


def test_bins_of_a_millisecond_across_the_gate():
    """Where the black hole cuts off, 1 ms bins of the light curve to 1e-4 of each."""
    burst = Burst.preset("black-hole-cutoff")
    plain = HALL.replace(
        {"response": {"medium": "scintillator", "quenching": "none", "energy": "visible"}}
    )
    made = Forecast(plain, burst, distance="10 kpc", conversion=Unconverted())
    edges = np.round(np.arange(0.545, 0.5601, 0.001), 6)
    curve = made.light_curve([f"{edge!r} s" for edge in edges.tolist()])
    for key in ("inverse-beta-decay", "proton-scattering"):
        weights = kernel(key)
        expected = [over_time(burst, weights, a, b) for a, b in itertools.pairwise(edges)]
        largest = max(expected)
        assert curve[key].to_numpy() == pytest.approx(expected, rel=1e-4, abs=1e-9 * largest)
