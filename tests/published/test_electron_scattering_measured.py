"""Scattering on electrons against measurements and recalled totals.

LSND (hep-ex/0101039) and the Fermilab 15-ft chamber are in data/measurements. Solar line totals
of J. N. Bahcall, M. Kamionkowski and A. Sirlin, Phys. Rev. D 51 (1995) 6146, from memory.
"""

from __future__ import annotations

import math

import numpy as np
import pytest

from tenkpc import data, interactions
from tenkpc.constants import MUON_MASS_MEV
from tenkpc.forecast.grid import panel_nodes

ES = interactions.by_key("electron-scattering")
MEASURED = data.document("measurements/electron_scattering.toml")


def test_electron_neutrinos_of_stopped_muons():
    """LSND's σ/E within one standard deviation, averaged over 12x²(1-x) with x = 2E/m_μ."""
    lsnd = MEASURED["stopped-muon-nu-e"]
    end = MUON_MASS_MEV / 2
    energy, weight = panel_nodes(np.linspace(0.0, end, 9), 8)
    spectrum = 12 * (energy / end) ** 2 * (1 - energy / end) / end * weight
    mean = spectrum @ ES.sigma("nu_e", energy) / (spectrum @ energy) * 1e45
    error = math.hypot(lsnd["error_statistical"], lsnd["error_systematic"])
    assert mean == pytest.approx(lsnd["value"], abs=error)


def test_muon_neutrinos_at_high_energy():
    """The bubble chamber's σ/E within one standard deviation; the ratio is flat in energy."""
    chamber = MEASURED["wide-band-nu-mu"]
    tree = interactions.by_key("electron-scattering", "tree")
    found = float(tree.sigma("nu_x", 5000.0)) / 5000.0 * 1e45
    assert found == pytest.approx(chamber["value"], abs=chamber["error"])


@pytest.mark.parametrize(
    ("species", "energy", "published"),
    [("nu_e", 0.862, 57.9), ("nu_x", 0.862, 12.8), ("nu_x", 0.384, 5.08)],
)
def test_beryllium_lines(species, energy, published):
    """Totals in 1e-46 cm², three digits, from memory: 0.2 % for the last digit."""
    assert float(ES.sigma(species, energy)) * 1e46 == pytest.approx(published, rel=2e-3)
