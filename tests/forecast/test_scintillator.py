"""A scintillator's rows against nested adaptive quadrature: quenched protons, carbon, gammas."""

from __future__ import annotations

from itertools import pairwise
from types import MappingProxyType

import numpy as np
import pytest
from numpy.polynomial.legendre import leggauss
from scipy.integrate import quad
from scipy.optimize import brentq
from scipy.special import ndtr

from tenkpc import data, interactions
from tenkpc.constants import ELECTRON_MASS_MEV, PROTON_MASS_MEV
from tenkpc.detector import materials
from tenkpc.detector.media import MEDIA
from tenkpc.detector.quenching import quenched_protons, stopping_mev_cm2_g
from tenkpc.detector.response import Resolution, Response
from tenkpc.forecast.compiled import FIRST_BIN, Exposure, compile_rows
from tenkpc.forecast.fold import fold
from tenkpc.forecast.grid import EnergyGrid
from tenkpc.species import SPECIES

ATOMS = {s: n / 1e3 for s, n in materials.elements(materials.of_formula("C18H30")).items()}
TABLE = data.document("stopping/protons.toml")
BIRKS = 0.0104 * 0.86
PROTONS = quenched_protons(ATOMS, TABLE, BIRKS)
THRESHOLD = 0.25
EDGES = np.array([0.0, 0.3, 0.5, 1.0, 2.0, 6.0, 14.0, 14.5, 15.2, 16.0, 30.0])


def response(*, perfect):
    """A scintillator with a low threshold, perfect or as wide as the gallery's."""
    return Response(
        kind="visible",
        light=MappingProxyType({**MEDIA["scintillator"].light, "proton": PROTONS}),
        threshold_mev=THRESHOLD,
        resolution=Resolution() if perfect else Resolution(0.041, 0.009),
    )


def flux(energy):
    """A pinched spectrum with mean 14 MeV, any normalisation."""
    return energy**2.5 * np.exp(-3.5 * energy / 14.0) / 1e3


def bins(key, species, *, perfect):
    """Counts by bin and above the last edge, through the compiled tensor, for each state."""
    exposure = Exposure("sphere", 1e42, interactions.by_key(key), response(perfect=perfect))
    compiled = compile_rows([exposure], EnergyGrid(), EDGES)
    phi = np.zeros((4, 1, compiled.grid.count))
    phi[SPECIES.index(species), 0] = flux(compiled.grid.nodes_mev)
    counts = fold(phi, compiled.species, compiled.tensor)[:, 0, FIRST_BIN:]
    mine = [row.species == species for row in compiled.rows]
    return counts[mine]


def share(visible, low, high, *, perfect):
    """Probability to observe a visible energy between two edges and above threshold."""
    low = max(low, THRESHOLD)
    if perfect:
        return float(low <= visible < high)
    sigma = np.sqrt(0.041**2 * visible + (0.009 * visible) ** 2)
    return float(ndtr((high - visible) / sigma) - ndtr((low - visible) / sigma))


def kinetic_of(visible):
    """Kinetic energy of a proton for its visible energy, as a root of an own integral."""
    return brentq(lambda t: light(t) - visible, 0.0, 60.0, xtol=1e-9)


def light(kinetic):
    """Birks' integral of a proton by adaptive quadrature."""
    integrand = lambda t: 1 / (1 + BIRKS * float(stopping_mev_cm2_g(np.array(t), ATOMS, TABLE)))
    points = [p for p in (0.01, 1.0) if p < kinetic] or None
    return quad(integrand, 0, kinetic, points=points, epsabs=1e-12, epsrel=1e-10, limit=200)[0]


def per_recoil(kinetic):
    """Recoils of a kinetic energy, ∫ flux dσ/dT dE, over panels of E to 1e-10."""
    (state,) = interactions.by_key("proton-scattering").final_states("nu_x")
    lowest = 0.5 * (kinetic + np.sqrt(kinetic * (kinetic + 2 * PROTON_MASS_MEV)))
    x, w = leggauss(40)
    steps = np.array([lowest, lowest + 5, lowest + 20, lowest + 60])
    total = 0.0
    for start, end in pairwise([*steps[steps < 200.0], 200.0]):
        energy = 0.5 * (start + end) + 0.5 * (end - start) * x
        values = state.deposit.differential(energy, np.array(kinetic)) * 1e42
        total += 0.5 * (end - start) * (w * flux(energy)) @ values
    return total


@pytest.mark.parametrize("perfect", [True, False], ids=["perfect", "4 per cent"])
def test_quenched_protons(perfect):
    """Total to 1e-4 and bins to 1e-3, a steep spectrum across a threshold."""
    (found,) = bins("proton-scattering", "nu_x", perfect=perfect) / 2
    expected = []
    for low, high in ((0.0, np.inf), (0.0, 0.3), (0.3, 0.5), (1.0, 2.0), (2.0, 6.0)):
        width = 0.0 if perfect else 0.1
        start = kinetic_of(max(low, THRESHOLD) - 1.5 * width)
        end = 60.0 if np.isinf(high) or high > 5 else kinetic_of(high + 4 * width)
        integrand = lambda t, a=low, b=high: (
            per_recoil(t) * share(float(PROTONS.visible(np.array(t))), a, b, perfect=perfect)
        )
        edges = [kinetic_of(e) for e in (THRESHOLD, low, high) if 0 < e < 20]
        points = sorted({t for t in (*edges, 1.0, 2.0, 5.0, 10.0) if start < t < end}) or None
        expected.append(
            quad(integrand, start, end, points=points, epsabs=0, epsrel=1e-5, limit=100)[0]
        )
    whole, *parts = expected
    assert found.sum() == pytest.approx(whole, rel=1e-4)
    assert found[[0, 1, 3, 4]] == pytest.approx(parts, rel=1e-3)


@pytest.mark.parametrize("perfect", [True, False], ids=["perfect", "4 per cent"])
@pytest.mark.parametrize(
    ("key", "species"),
    [("carbon-12-to-nitrogen-12", "nu_e"), ("carbon-12-to-boron-12", "anti_nu_e")],
)
def test_carbon_lines_are_shifted(key, species, perfect):
    """Lepton plus annihilation, or plus a quenched proton: totals to 1e-4, bins to 1e-3."""
    found = bins(key, species, perfect=perfect)
    for state, counts in zip(interactions.by_key(key).final_states(species), found, strict=True):
        extra = sum(float(PROTONS.visible(np.array(e))) for _, e in state.extras)
        extra += 2 * ELECTRON_MASS_MEV if state.lead == "positron" else 0.0

        def count(low, high, state=state, extra=extra):
            def integrand(energy):
                seen = energy - state.deposit.offset_mev + extra
                sigma = float(state.sigma_cm2(np.array(energy))) * 1e42
                return flux(energy) * sigma * share(seen, low, high, perfect=perfect)

            start = state.deposit.offset_mev
            cuts = [start + e - extra for e in (THRESHOLD, low, high)]
            points = sorted({e for e in (*cuts, 60.0, 100.0) if start < e < 200})
            return quad(integrand, start, 200, points=points, epsabs=0, epsrel=1e-7, limit=400)[0]

        whole = count(0.0, np.inf)
        assert counts.sum() == pytest.approx(whole, rel=1e-4)
        for place in (3, 4, 5, 9):
            expected = count(EDGES[place], EDGES[place + 1])
            assert counts[place] == pytest.approx(expected, rel=1e-3, abs=1e-4 * whole)


@pytest.mark.parametrize("perfect", [True, False], ids=["perfect", "4 per cent"])
def test_gammas_of_the_level_are_lines(perfect):
    """One gamma and two gammas are seen at 15.11 MeV alike, alphas are not seen at all."""
    one, two, alphas = bins("carbon-12-excited", "nu_x", perfect=perfect) / 2
    assert alphas.sum() == 0
    integrand = lambda e: (
        flux(e) * 1e42 * float(interactions.by_key("carbon-12-excited").sigma("nu_x", e))
    )
    whole = quad(integrand, 15.11, 200, points=[30, 60, 100], epsabs=0, epsrel=1e-8)[0]
    for counts, part in ((one, 0.90), (two, 0.06)):
        assert counts.sum() == pytest.approx(part * whole, rel=1e-4)
        for place in (6, 7, 8):
            expected = share(15.11, EDGES[place], EDGES[place + 1], perfect=perfect)
            assert counts[place] == pytest.approx(part * whole * expected, rel=1e-3, abs=1e-9)
