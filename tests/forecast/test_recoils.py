"""Nuclear recoils end to end: counts per tonne, bins, isotopes, against slow calculations."""

from __future__ import annotations

from itertools import pairwise

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.special import ndtr

from tenkpc import Burst, Detector, Forecast, Unconverted, interactions
from tenkpc.detector.materials import nucleus
from tenkpc.forecast.compiled import FIRST_BIN, Exposure, compile_rows
from tenkpc.forecast.fold import fold
from tenkpc.forecast.grid import EnergyGrid
from tenkpc.interactions import recoil

BURST = Burst.preset("equipartition")
THRESHOLDS = (0.0, 0.5, 1.0, 2.0, 5.0)
# counts per tonne above recoil energies of 0, 0.5, 1, 2 and 5 keV, of an independent slow
# calculation with sin²θ_W = 0.23857; A was the mean mass number in the form factor
SLOW = {
    "Xe": (27.5763, 21.7011, 17.4313, 11.6850, 4.1721),
    "Ar": (7.7328, 7.2048, 6.7307, 5.9103, 4.1420),
    "Ge": (14.2558, 12.5125, 11.0666, 8.7970, 4.7894),
    "Si": (4.5094, 4.2917, 4.0902, 3.7278, 2.8796),
    "Na": (4.0321, 3.8726, 3.7229, 3.4490, 2.7830),
    "I": (26.0928, 20.7089, 16.7569, 11.3781, 4.1926),
    "Cs": (27.6069, 21.6640, 17.3589, 11.5860, 4.0920),
    "W": (38.5934, 27.4804, 20.2622, 11.6971, 2.8851),
    "Pb": (44.0020, 29.9478, 21.2553, 11.4829, 2.3985),
    "O": (2.5770, 2.5059, 2.4379, 2.3103, 1.9822),
    "F": (3.4081, 3.2965, 3.1907, 2.9943, 2.5016),
    "C": (1.9445, 1.9041, 1.8651, 1.7908, 1.5932),
}


def detector(formula, *lines):
    """A tonne of something that sees recoils."""
    text = (
        f'title = "T"\n[[volume]]\nname = "main"\nmass = "1 t"\nformula = "{formula}"\n'
        '[response]\nmedium = "recoil"\n'
    )
    return Detector.parse(text + "\n".join(lines))


def forecast(formula, *lines, conversion=None):
    """Forecast it at 10 kpc."""
    return Forecast(detector(formula, *lines), BURST, distance="10 kpc", conversion=conversion)


@pytest.mark.parametrize("element", SLOW)
def test_counts_per_tonne(element):
    """Five thresholds: half a per cent."""
    base = forecast(element, conversion=Unconverted())
    for threshold, expected in zip(THRESHOLDS, SLOW[element], strict=True):
        made = base.replace({"response.threshold": f"{threshold} keVnr"})
        assert made.total == pytest.approx(expected, rel=5e-3)


def test_flavour_conversion_changes_nothing_at_tree_level():
    """The neutral current is blind to flavour; with radiative charges a per mille is left."""
    before, after = (forecast("Ge", conversion=conversion) for conversion in (Unconverted(), None))
    assert after.total == pytest.approx(before.total, rel=1e-9)
    option = {"interactions": {"coherent-scattering": "radiative"}}
    corrected = [
        Forecast(detector("Ge"), BURST, distance="10 kpc", conversion=conversion, **option).total
        for conversion in (Unconverted(), None)
    ]
    assert 1.005 < corrected[0] / before.total < 1.03
    assert corrected[0] != pytest.approx(corrected[1], rel=1e-5)


def rows(formula):
    """Counts of coherent scattering by final state."""
    found = forecast(formula).breakdown.xs("coherent-scattering", level="interaction")
    return found.groupby(level="final_state")["counted"].sum()


def test_isotopes_have_rows_of_their_own():
    """Natural and enriched germanium: the breakdown names isotopes, in their shares."""
    found = rows("Ge")
    assert list(found.index) == [f"recoil of Ge-{a}" for a in (70, 72, 73, 74, 76)]
    pure = rows("Ge[76]")
    assert list(pure.index) == ["recoil of Ge-76"]
    per_kg = [detector(f).volumes[0].composition.targets("Ge-76") for f in ("Ge", "Ge[76]")]
    ratio = found["recoil of Ge-76"] / pure["recoil of Ge-76"]
    assert ratio == pytest.approx(per_kg[0] / per_kg[1], rel=1e-9)


def test_hydrogen_takes_no_part():
    """In a hydrocarbon only carbon recoils coherently."""
    found = forecast("CH2").breakdown
    coherent = found.xs("coherent-scattering", level="interaction")
    assert set(coherent.index.get_level_values("final_state")) == {
        "recoil of C-12",
        "recoil of C-13",
    }


def flux(energy):
    """Fluence of a pinched spectrum, any units."""
    return energy**3 * np.exp(-4 * energy / 15)


def counts_above(found, mass, lowest, highest, kept):
    """∫dT kept(T) ∫dE flux dσ/dT, nested and adaptive."""

    def at(kinetic):
        start = float(recoil.lowest_neutrino_mev(np.array(kinetic), mass))
        if start >= 200:
            return 0.0
        of_energy = lambda e: flux(e) * float(found.deposit.differential(e, kinetic))
        stops = [p for p in (20.0, 60.0) if start < p < 200]
        return quad(of_energy, start, 200, points=stops, epsrel=1e-8, limit=200)[0]

    return quad(lambda t: kept(t) * at(t), lowest, highest, epsrel=1e-6, limit=400)[0]


@pytest.mark.parametrize("lines", [("",), ("resolution = { stochastic = 0.3 }",)])
@pytest.mark.parametrize("kind", ["recoil", "visible"])
def test_bins_against_nested_quadrature(kind, lines):
    """Bins in keVnr and keVee of argon, perfect and 0.3/√E: 1e-3 of each."""
    unit = {"recoil": "keVnr", "visible": "keVee"}[kind]
    made = detector(
        "Ar[40]", f'energy = "{kind}"', f'threshold = "1 {unit}"', 'quenching = "lindhard"', *lines
    )
    response = made.volumes[0].response
    reaction = interactions.by_key("coherent-scattering").on(nucleus("Ar-40"))
    edges = np.array([0.0, 1e-3, 2e-3, 5e-3, 0.02, 0.05])
    grid = EnergyGrid()
    compiled = compile_rows([Exposure("main", 1e42, reaction, response)], grid, edges)
    events = fold(flux(grid.nodes_mev)[None, None], np.zeros(1, int), compiled.tensor[:1])[0, 0]
    ours = events[FIRST_BIN:]
    (found,) = reaction.final_states("nu_e")
    light, width = response.light["Ar-40"], response.resolution

    def in_bin(low, high):
        def kept(kinetic):
            visible = light.visible(np.array(kinetic))
            sigma = max(float(width.sigma_mev(visible)), 1e-12)
            return float(ndtr((high - visible) / sigma) - ndtr((low - visible) / sigma))

        ends = [float(light.kinetic(np.array(e))) for e in (low, high)]
        reach = 0.0 if lines == ("",) else 6 * 0.3 * np.sqrt(1e-3)
        start = float(light.kinetic(np.array(max(low - reach * np.sqrt(low), 0.0))))
        end = float(light.kinetic(np.array(high + reach * np.sqrt(high + 0.01))))
        if not reach:
            start, end = ends
        return 1e42 * counts_above(found, nucleus("Ar-40").mass_mev, start, end, kept)

    for column, (low, high) in enumerate(pairwise(edges[1:]), start=1):
        assert ours[column] == pytest.approx(in_bin(low, high), rel=1e-3)
