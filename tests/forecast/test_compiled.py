"""Bins and counts of the compiled tensor against nested adaptive quadrature."""

from __future__ import annotations

import itertools
from types import MappingProxyType

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.special import ndtr

from tenkpc import interactions
from tenkpc.detector.quenching import Plain
from tenkpc.detector.response import Curve, Resolution, Response
from tenkpc.forecast.compiled import (
    ABOVE_THRESHOLD,
    COUNTED_HIGH,
    COUNTED_LOW,
    COUNTED_OUTSIDE,
    FIRST_BIN,
    REACTIONS,
    Exposure,
    by_neutrino_energy,
    compile_rows,
)
from tenkpc.forecast.fold import fold
from tenkpc.forecast.grid import EnergyGrid
from tenkpc.interactions.base import FinalState, Fixed, Interaction, Shifted, Spread

MASS = 0.511
EDGES = np.arange(0.0, 81.0, 1.0)
SEEN = MappingProxyType({"electron": Plain(), "gamma": Plain()})


def flux(energy):
    """A pinched spectrum with mean 13 MeV, any normalisation."""
    return energy**2.5 * np.exp(-3.5 * energy / 13.0)


def recoil(energy, kinetic):
    """A recoil spectrum with the kinematics of an electron target."""
    y = kinetic / energy
    return 0.53 + 0.05 * (1 - y) ** 2 - 0.17 * MASS * y / energy


def recoil_total(energy):
    """The integral of `recoil` over all recoils."""
    y = 2 * energy / (MASS + 2 * energy)
    return energy * (0.53 * y + 0.05 * (1 - (1 - y) ** 3) / 3) - 0.17 * MASS * y**2 / 2


def two_body_bounds(energy):
    """Lowest and highest energy of the narrow state: a few per cent wide, open above 2 MeV."""
    return (energy - 2.0) / (1 + energy / 400.0), energy - 2.0


def narrow(energy, kinetic):
    """Rise with both energies, as a two-body cross section does."""
    return (1 + kinetic / 50) * energy**1.5 / 100


def state(kind):
    """One final state of each form of deposit."""
    error = lambda energy: 0.05 + energy / 1000
    common = {"lead": "electron", "relative_error": error}
    if kind == "shifted":
        sigma = lambda e: np.where(e > 8, (np.maximum(e, 8) - 8) ** 2, 0.0)
        return FinalState("s", sigma, deposit=Shifted(7.0), window_mev=(8.0, 50.0), **common)
    if kind == "line":
        sigma = lambda e: np.where(e > 15.11, np.maximum(e - 15.11, 0) ** 2, 0.0)
        return FinalState("l", sigma, deposit=Fixed(15.11), window_mev=(15.11, 100.0), **common)
    if kind == "broad":
        lowest = lambda t: (t + np.sqrt(t * (t + 2 * MASS))) / 2
        spread = Spread(recoil, lowest, lambda t: np.full_like(t, np.inf))
        return FinalState("b", recoil_total, deposit=spread, window_mev=(0.0, np.inf), **common)
    spread = Spread(narrow, lambda t: t + 2.0, lambda t: (t + 2.0) / (1 - t / 400.0))
    return FinalState("n", narrow_total, deposit=spread, window_mev=(2.0, 300.0), **common)


def narrow_total(energy):
    """The integral of `narrow` between its bounds."""
    energy = np.maximum(energy, 2.0)
    low, high = two_body_bounds(energy)
    return ((high - low) + (high**2 - low**2) / 100) * energy**1.5 / 100


def exposure(kind, response):
    """One target of one interaction with a single final state."""
    made = Interaction("k", "a", "electron", 0.0, (), {"nu_e": (state(kind),)})
    return Exposure("tank", 1.0, made, response)


def counts(kind, response, edges=EDGES):
    """Columns of the folded tensor for the flux above."""
    compiled = compile_rows([exposure(kind, response)], EnergyGrid(), edges)
    phi = np.zeros((4, 1, compiled.grid.count))
    phi[0, 0] = flux(compiled.grid.nodes_mev)
    return fold(phi, compiled.species, compiled.tensor)[0, 0]


def probability(response, deposit, low, high):
    """Probability that a deposit is counted between two observed energies, by the book."""
    low = max(low, response.threshold_mev)
    if high <= low:
        return 0.0
    sigma = float(response.resolution.sigma_mev(np.array(deposit)))
    if sigma == 0:
        return float(response.efficiency(np.array(deposit))) * (low <= deposit < high)
    if response.efficiency.is_constant:
        return float(ndtr((high - deposit) / sigma) - ndtr((low - deposit) / sigma))
    density = lambda x: np.exp(-0.5 * ((x - deposit) / sigma) ** 2) / sigma / np.sqrt(2 * np.pi)
    knots = [k for k in response.efficiency.knots_mev if low < k < high]
    near = [e for e in (deposit - 6 * sigma, deposit, deposit + 6 * sigma) if low < e < high]
    integrand = lambda x: density(x) * float(response.efficiency(np.array(x)))
    points = sorted({*knots, *near}) or None
    return quad(integrand, low, high, points=points, epsabs=1e-12, epsrel=1e-9)[0]


def brute_force(kind, response, low, high):
    """Counts between two observed energies by nested adaptive quadrature."""
    made = state(kind)
    cuts = sorted({low, high, response.threshold_mev})
    reach = 8 * float(response.resolution.sigma_mev(np.array(high))) + 1e-9

    def given(energy):
        if kind == "shifted":
            return float(made.sigma_cm2(np.array(energy))) * probability(
                response, energy - made.deposit.offset_mev, low, high
            )
        start, end = (0.0, 2 * energy**2 / (MASS + 2 * energy))
        if kind == "narrow":
            start, end = two_body_bounds(energy)
        start, end = max(start, low - reach), min(end, high + reach)
        if end <= start:
            return 0.0
        points = [c for c in cuts if start < c < end] or None
        inner = lambda t: made.deposit.differential(energy, t) * probability(response, t, low, high)
        return quad(inner, start, end, points=points, epsabs=1e-9, epsrel=1e-7, limit=200)[0]

    bounds = {
        "shifted": lambda t: t + 7.0,
        "narrow": lambda t: t + 2.0,
        "broad": lambda t: (t + np.sqrt(t * (t + 2 * MASS))) / 2,
    }[kind]
    upper = {"narrow": lambda t: (t + 2.0) / (1 - t / 400.0)}.get(kind, bounds)
    points = [bounds(c) for c in cuts if c > 0] + [upper(c) for c in cuts if c > 0]
    start = max(bounds(max(low - reach, 0.0)), 2.0 if kind == "narrow" else 0.0)
    end = 200.0 if kind == "broad" else min(upper(high + reach), 200.0)
    edges = sorted({start, *(p for p in points if start < p < end), end})
    total = 0.0
    for a, b in itertools.pairwise(edges):
        total += quad(lambda e: flux(e) * given(e), a, b, epsabs=1e-6, epsrel=1e-6, limit=200)[0]
    return total


SHARP = Response(kind="kinetic", light=SEEN, threshold_mev=5.3)
BLURRED = Response(
    kind="kinetic", light=SEEN, threshold_mev=5.3, resolution=Resolution(constant=0.03)
)
RAMPED = Response(
    kind="kinetic",
    light=SEEN,
    threshold_mev=5.3,
    resolution=Resolution(constant=0.03),
    efficiency=Curve((5.0, 8.0, 12.5), (0.2, 0.9, 0.97)),
)


@pytest.mark.parametrize("kind", ["shifted", "narrow", "broad"])
@pytest.mark.parametrize("response", [SHARP, BLURRED], ids=["perfect", "3 per cent"])
@pytest.mark.parametrize("place", [5, 6, 12, 23, 37])
def test_a_bin_agrees_with_nested_quadrature(kind, response, place):
    """Bins above 1e-4 of the total are right to 1e-3, the accuracy this project promises."""
    found = counts(kind, response)
    expected = brute_force(kind, response, EDGES[place], EDGES[place + 1])
    assert found[FIRST_BIN + place] == pytest.approx(expected, rel=1e-3)


@pytest.mark.parametrize("place", [5, 8, 12])
def test_a_bin_across_efficiency_knots_agrees_with_nested_quadrature(place):
    """An efficiency that bends inside a bin is integrated with the resolution, to 1e-3."""
    found = counts("shifted", RAMPED)
    expected = brute_force("shifted", RAMPED, EDGES[place], EDGES[place + 1])
    assert found[FIRST_BIN + place] == pytest.approx(expected, rel=1e-3)


@pytest.mark.parametrize("kind", ["shifted", "narrow", "broad"])
@pytest.mark.parametrize("response", [SHARP, BLURRED], ids=["perfect", "3 per cent"])
def test_the_counted_total_agrees_with_nested_quadrature(kind, response):
    """Totals are right to 1e-4, the accuracy this project promises."""
    expected = brute_force(kind, response, 5.3, 199.0)
    assert counts(kind, response)[FIRST_BIN:].sum() == pytest.approx(expected, rel=1e-4)


@pytest.mark.parametrize("kind", ["shifted", "narrow", "broad", "line"])
@pytest.mark.parametrize("resolution", [Resolution(), Resolution(0.2, 0.03, 0.1)])
def test_nothing_is_lost_without_threshold(kind, resolution):
    """Without threshold and losses every reaction is counted: 1e-6 is the quadrature's."""
    found = counts(kind, Response(light=SEEN, resolution=resolution))
    assert found[FIRST_BIN:].sum() == pytest.approx(found[REACTIONS], rel=1e-6)
    assert found[ABOVE_THRESHOLD] == pytest.approx(found[REACTIONS], rel=1e-6)


def test_reactions_agree_with_quadrature_over_the_total_cross_section():
    """The first column is ∫ flux × σ, smooth on each side of the threshold: 1e-9."""
    for kind in ("shifted", "narrow", "broad", "line"):
        made = state(kind)
        threshold = made.window_mev[0]
        integrand = lambda e, sigma=made.sigma_cm2: flux(e) * float(sigma(np.array(e)))
        expected = sum(
            quad(integrand, a, b, epsabs=0, epsrel=1e-11)[0]
            for a, b in ((threshold, 40.0), (40.0, 200.0))
        )
        assert counts(kind, SHARP)[REACTIONS] == pytest.approx(expected, rel=1e-9)


def test_a_line_falls_into_its_bin():
    """A line without resolution is in the one bin that holds it, and only if above threshold."""
    found = counts("line", SHARP)[FIRST_BIN:]
    assert np.flatnonzero(found).tolist() == [15]
    high = Response(kind="kinetic", light=SEEN, threshold_mev=16.0)
    assert counts("line", high)[FIRST_BIN:].sum() == 0


def test_cross_section_errors_are_factors_at_each_energy():
    """Low and high counts are the counts with σ·exp(∓error) at every energy: 1e-6."""
    made = state("broad")
    lowered = lambda e: float(np.exp(-made.relative_error(e)) * made.sigma_cm2(np.array(e)))
    expected = quad(lambda e: flux(e) * lowered(e), 0, 200, epsrel=1e-10, limit=200)[0]
    found = counts("broad", Response(light=SEEN))
    assert found[COUNTED_LOW] == pytest.approx(expected, rel=1e-6)
    assert found[COUNTED_LOW] < found[FIRST_BIN:].sum() < found[COUNTED_HIGH]


def test_the_share_outside_a_window_is_exact():
    """What comes from above a cross section's window is integrated from its edge on: 1e-6."""
    made = state("shifted")
    sigma = lambda e: float(made.sigma_cm2(np.array(e)))
    expected = quad(lambda e: flux(e) * sigma(e), 50, 200, epsrel=1e-11, limit=200)[0]
    found = counts("shifted", Response(light=SEEN))
    assert found[COUNTED_OUTSIDE] == pytest.approx(expected, rel=1e-6)


def test_an_unseen_particle_reacts_but_is_not_counted():
    """A row whose lead particle the medium does not see keeps its reactions and counts none."""
    found = counts("broad", Response(light=MappingProxyType({"proton": Plain()})))
    assert found[REACTIONS] > 0
    assert not found[ABOVE_THRESHOLD:].any()


@pytest.mark.parametrize("kind", ["shifted", "narrow", "broad", "line"])
def test_counts_by_neutrino_energy_add_up(kind):
    """Bins of true neutrino energy hold the counted events: 1e-6, two quadratures of one thing."""
    exposures = [exposure(kind, RAMPED)]
    grid = EnergyGrid()
    bins = by_neutrino_energy(exposures, grid, np.arange(0.0, 101.0, 2.0))
    phi = np.zeros((4, 1, grid.count))
    phi[0, 0] = flux(grid.nodes_mev)
    found = fold(phi, np.array([0]), bins)[0, 0]
    assert found.sum() == pytest.approx(counts(kind, RAMPED)[FIRST_BIN:].sum(), rel=1e-6)


def test_a_bin_of_neutrino_energy_agrees_with_quadrature():
    """Without losses a bin of neutrino energy is ∫ flux × σ over it: 1e-6."""
    grid = EnergyGrid()
    exposures = [exposure("broad", Response(light=SEEN))]
    bins = by_neutrino_energy(exposures, grid, np.arange(0.0, 101.0, 2.0))
    phi = np.zeros((4, 1, grid.count))
    phi[0, 0] = flux(grid.nodes_mev)
    expected = quad(lambda e: flux(e) * recoil_total(e), 14, 16, epsrel=1e-11)[0]
    assert fold(phi, np.array([0]), bins)[0, 0, 7] == pytest.approx(expected, rel=1e-6)


@pytest.mark.slow
@pytest.mark.parametrize("kind", ["shifted", "narrow", "broad"])
@pytest.mark.parametrize("response", [SHARP, BLURRED], ids=["perfect", "3 per cent"])
@pytest.mark.parametrize("place", range(5, 45))
def test_every_bin_agrees_with_nested_quadrature(kind, response, place):
    """All bins that hold more than 1e-4 of the total are right to 1e-3."""
    found = counts(kind, response)[FIRST_BIN:]
    if found[place] > 1e-4 * found.sum():
        expected = brute_force(kind, response, EDGES[place], EDGES[place + 1])
        assert found[place] == pytest.approx(expected, rel=1e-3)


@pytest.mark.parametrize("key", ["inverse-beta-decay", "electron-scattering"])
@pytest.mark.parametrize(("low", "high"), [(8.0, 9.0), (17.0, 18.0), (33.0, 34.0)])
def test_bins_of_the_real_cross_sections_agree_with_nested_quadrature(key, low, high):
    """The same for the interactions themselves, at 3 per cent: 1e-3."""
    seen = MappingProxyType({"electron": Plain(), "positron": Plain()})
    response = Response(
        kind="kinetic", light=seen, threshold_mev=5.3, resolution=Resolution(constant=0.03)
    )
    interaction = interactions.by_key(key)
    (made,) = interaction.final_states("anti_nu_e")
    compiled = compile_rows([Exposure("tank", 1.0, interaction, response)], EnergyGrid(), EDGES)
    phi = np.zeros((4, 1, compiled.grid.count))
    phi[1, 0] = flux(compiled.grid.nodes_mev)
    found = fold(phi, compiled.species, compiled.tensor)[:, 0, FIRST_BIN + int(low)].sum()

    def observed(kinetic):
        start = float(made.deposit.lowest_mev(np.array(kinetic)))
        end = min(float(made.deposit.highest_mev(np.array(kinetic))), 150.0)
        inner = lambda e: flux(e) * float(made.deposit.differential(np.array(e), np.array(kinetic)))
        split = start + 0.1 * (end - start)
        total = sum(
            quad(inner, a, b, epsabs=0, epsrel=1e-6)[0] for a, b in [(start, split), (split, end)]
        )
        return total * probability(response, kinetic, low, high)

    parts = [(0.8 * low, low), (low, high), (high, 1.2 * high)]
    expected = sum(quad(observed, a, b, epsabs=0, epsrel=1e-5)[0] for a, b in parts)
    assert found == pytest.approx(expected, rel=1e-3)
