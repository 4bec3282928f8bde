"""Speed as ratios against a reference in the same run: ``pytest tests/benchmarks -q -s``.

Nothing is asserted about time: each line prints ours, the reference, their ratio and the target.
"""

from __future__ import annotations

import itertools
import math
import subprocess
import sys
import time

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.special import ndtr

from tenkpc import Burst, Detector, Forecast, Unconverted, interactions
from tenkpc.constants import CM_PER_KPC
from tenkpc.detector import gallery
from tenkpc.forecast import arguments, exposures, flux
from tenkpc.forecast.compiled import compile_rows
from tenkpc.forecast.fold import fold
from tenkpc.forecast.grid import EnergyGrid

TANK = Detector.gallery("mere-tank")
ORDINARY = Burst.preset("ordinary-collapse")
SIMPLE = Burst.preset("equipartition")


def seconds(work, repeat=5):
    """Shortest of several runs."""
    best = math.inf
    for _ in range(repeat):
        start = time.perf_counter()
        work()
        best = min(best, time.perf_counter() - start)
    return best


def line(what, ours, reference, target):
    """Print one row of the table."""
    ratio = ours / reference
    print(f"\n{what}: {ours:.3g} s, reference {reference:.3g} s, ratio {ratio:.3g} ({target})")


def test_a_forecast_of_a_compiled_detector():
    """The whole forecast against fluxes at the nodes and the plain matrix product."""
    base = Forecast(TANK, ORDINARY, distance="10 kpc")
    total = base.total
    compiled = exposures.compiled(*base._inputs, arguments.energy_edges_mev(None))
    nodes = compiled.grid.nodes_mev
    tensor = np.ascontiguousarray(np.moveaxis(compiled.tensor, 0, 1).reshape(len(nodes), -1))

    def reference():
        spectra, _ = flux.emission(ORDINARY, nodes, (ORDINARY.start_s, ORDINARY.end_s))
        return spectra.sum(axis=1) @ tensor

    ours = seconds(lambda: base.at("10 kpc").total)
    line("full forecast, compiled detector", ours, seconds(reference), "at most 2")
    assert base.at("10 kpc").total == total


def bin_by_bin(burst_energy, response, low=6.0):
    """Counts of inverse beta decay by nested quadrature with the response."""
    (state,) = interactions.by_key("inverse-beta-decay").final_states("anti_nu_e")
    area = 4 * math.pi * (10 * CM_PER_KPC) ** 2

    def given(energy):
        centre = energy - 1.293
        start, end = centre * (1 - 2 * energy / 939) - 0.6, centre
        start = max(start, 0.6)

        def observed(positron):
            if not state.deposit.lowest_mev(positron - 0.511) <= energy:
                return 0.0
            if not state.deposit.highest_mev(positron - 0.511) >= energy:
                return 0.0
            sigma = float(response.resolution.sigma_mev(np.array(positron)))
            kept = float(ndtr((positron - low) / sigma))
            return kept * float(state.deposit.differential(energy, positron - 0.511))

        return quad(observed, start, end, epsrel=1e-4)[0] if end > start else 0.0

    value = quad(lambda e: burst_energy(e) * given(e), 1.9, 80.0, epsrel=1e-4, limit=100)[0]
    return value * TANK.targets("H-1") / area


def test_counts_of_one_more_integrated_burst():
    """One design point of a fold of many against nested quadrature of a single row."""
    import warnings

    compiled = compile_rows(
        exposures.exposures(TANK, (), None), EnergyGrid(), np.array([0.0, 100.0])
    )
    nodes = compiled.grid.nodes_mev
    emitted = SIMPLE.emitted(nodes)
    many = np.repeat(emitted[:, None, :], 4000, axis=1)
    ours = seconds(lambda: fold(many, compiled.species, compiled.counted)) / many.shape[1]

    def brute():
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")
            return bin_by_bin(lambda e: SIMPLE.emitted(np.array([e]))[1, 0], TANK.response)

    reference = seconds(brute, repeat=1)
    line("counts of one more integrated burst", ours, reference, "at most 1/1000")


@pytest.mark.parametrize("name", gallery.names())
def test_compiling_a_detector(name):
    """All interactions of a gallery detector, in seconds."""
    detector = Detector.gallery(name)
    made = exposures.exposures(detector, (), None)
    edges = np.array(arguments.energy_edges_mev(None, detector.response.scale))
    ours = seconds(lambda: compile_rows(made, EnergyGrid(), edges), repeat=5)
    line(f"compile {name}", ours, 1.0, "at most 0.5 s")


def process(code):
    """Shortest time of a fresh process."""
    command = [sys.executable, *code]
    return seconds(lambda: subprocess.run(command, capture_output=True, check=True))


def test_starting_up():
    """Imports and the first page, as processes."""
    numpy = process(["-c", "import numpy"])
    line("import tenkpc", process(["-c", "import tenkpc"]), numpy, "at most 1")
    click = process(["-c", "import click"])
    line("tenkpc --help", process(["-m", "tenkpc", "--help"]), click, "at most 1.5")
    stack = process(["-c", "import numpy, scipy.special, pandas, pint, pydantic"])
    page = process(["-m", "tenkpc", "forecast", "mere-tank"])
    line("tenkpc forecast mere-tank", page, stack, "at most 1.5")


def test_conversion_is_cheap():
    """Another conversion of a forecast against computing its fluxes."""
    base = Forecast(TANK, ORDINARY, distance="10 kpc")
    assert base.total > 0
    nodes = base._grid.nodes_mev
    window = (ORDINARY.start_s, ORDINARY.end_s)
    reference = seconds(lambda: flux.emission(ORDINARY, nodes, window))
    line("another conversion", seconds(lambda: base.converted(Unconverted()).total), reference, "2")


def test_counts_of_one_more_time_dependent_burst():
    """Emission at all times, conversion and fold, against nested quadrature without response.

    The reference leaves the response out and takes one row, so the true ratio is smaller still.
    """
    base = Forecast(TANK, ORDINARY, distance="10 kpc")
    assert base.total > 0
    sigma = interactions.by_key("inverse-beta-decay").sigma

    def at(time_s):
        def integrand(energy):
            rate = ORDINARY.rate(np.array([time_s]), np.array([energy]))[1, 0, 0]
            return rate * float(sigma("anti_nu_e", np.array(energy)))

        return quad(integrand, 1.9, 80.0, epsrel=1e-4)[0]

    edges = ORDINARY.time_panels()
    spans = list(itertools.pairwise(edges))
    reference = seconds(lambda: [quad(at, a, b, epsrel=1e-4)[0] for a, b in spans], repeat=1)
    ours = seconds(lambda: base.at("10 kpc").total)
    line("counts of one more time-dependent burst", ours, reference, "at most 1/3000")
