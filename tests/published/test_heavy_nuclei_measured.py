"""Argon, iron, iodine and lead against the Sun and neutrinos of stopped muons.

Values and sources are in data/measurements/heavy_nuclei.toml.
"""

from __future__ import annotations

import numpy as np
import pytest

from tenkpc import interactions
from tenkpc.show import checks

CHECKS = {check.name: check for check in checks.all_checks()}
ENERGY = np.linspace(0.0, 53.0, 5001)


def stopped(key, option=None, neutrons=(0, 1, 2)):
    """Average over electron neutrinos of stopped muons, 1e-40 cm²."""
    x = ENERGY / 52.828
    weight = np.where(x < 1, x**2 * (1 - x), 0.0)
    states = interactions.by_key(key, option).final_states("nu_e")
    sigma = sum(s.sigma_cm2(ENERGY) for s in states if s.neutrons in neutrons)
    return float(weight @ sigma / weight.sum()) * 1e40


def test_deap_2026():
    """DEAP-3600, arXiv:2605.12769: 2.4 times the prediction of the strength used here.

    So that prediction is 1.67e-41 cm². Our spectrum of boron-8 is approximate near its end, where
    the cross section doubles within the window: 10 %. A further g_A² would give 2.36e-41.
    """
    check = CHECKS["solar-window-deap"]
    assert check.ours == pytest.approx(1.67, rel=0.1)
    assert abs(check.pull) < 2


def test_karmen_iron():
    """KARMEN, 2.56 ± 1.08 ± 0.43 (from memory); ours is scaled to the published 2.73e-40 cm²."""
    assert stopped("iron-to-cobalt") == pytest.approx(2.73, rel=2e-3)
    assert abs(CHECKS["iron-stopped-muon-karmen"].pull) < 0.5


def test_coherent_iodine():
    """COHERENT, arXiv:2305.19594: inclusive by construction, its two parts within 1.3σ."""
    scaled = stopped("iodine-to-xenon", "measurement-scaled")
    assert scaled == pytest.approx(9.2, rel=0.01)
    assert stopped("iodine-to-xenon", "theory") / scaled == pytest.approx(2.46, rel=0.01)
    for part in ("iodine-no-neutron-coherent", "iodine-neutrons-coherent"):
        assert abs(CHECKS[part].pull) < 1.3


def test_distel_2003_iodine():
    """LAMPF, 2.84 ± 0.91 ± 0.25 to bound levels: unscaled, and right."""
    assert stopped("iodine-to-xenon", neutrons=(0,)) == pytest.approx(2.66, rel=0.01)
    assert abs(CHECKS["iodine-bound-lampf"].pull) < 0.3


def test_published_theory_of_lead():
    """Between E. Kolbe and K. Langanke, 36.2, and C. Volpe et al., 44.4 (both from memory)."""
    ours = stopped("lead-to-bismuth", "theory")
    assert ours == pytest.approx(0.5 * (36.2 + 44.4), rel=2e-3)


def test_coherent_lead():
    """COHERENT, arXiv:2212.11295: 0.29 of a prediction; theory is 4σ above, the option on it."""
    assert CHECKS["lead-neutrons-coherent"].pull == pytest.approx(4.2, abs=0.1)
    parts = [stopped("lead-to-bismuth", o, (1, 2)) for o in ("measurement-scaled", "theory")]
    assert parts[0] / parts[1] == pytest.approx(0.29, rel=1e-3)
