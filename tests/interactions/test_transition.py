"""Transitions between levels: their limits, the Fermi function, the angle."""

from __future__ import annotations

from dataclasses import replace

import mpmath
import numpy as np
import pytest
from scipy.integrate import quad

from tenkpc.constants import ALPHA, ELECTRON_MASS_MEV, FERMI_CONSTANT_PER_MEV2, HBAR_C_MEV_CM
from tenkpc.interactions.coulomb import fermi_function
from tenkpc.interactions.transition import Transition

PLAIN = Transition(FERMI_CONSTANT_PER_MEV2, 1.5, 16.8, 0.0, 0.0, 7, 12)


def test_without_magnetism_and_form_factor_it_is_the_allowed_cross_section():
    """(G²/π) p E F S: the bracket integrates to three exactly, 1e-12."""
    energy = np.array([17.5, 25.0, 60.0, 150.0])
    assert PLAIN.total_cm2(energy) == pytest.approx(1.5 * PLAIN.scale_cm2(energy), rel=1e-12, abs=0)
    lepton = energy - 16.8
    p = np.sqrt(lepton**2 - ELECTRON_MASS_MEV**2)
    expected = FERMI_CONSTANT_PER_MEV2**2 * HBAR_C_MEV_CM**2 / np.pi * p * lepton
    assert PLAIN.scale_cm2(energy) == pytest.approx(expected * fermi_function(p, 7, 12), rel=1e-12)


def test_an_allowed_transition_sends_electrons_backwards():
    """Pure Gamow-Teller leptons follow 1 - (v/c) cosθ/3, so their mean cosine is -1/9 v/c."""
    slow = replace(PLAIN, energy_mev=1.0)
    assert float(slow.mean_cosine(1e3)) == pytest.approx(-1 / 9, abs=1e-3)


def test_antineutrinos_lose_what_neutrinos_gain():
    """The interference term changes sign and nothing else does."""
    up, down = replace(PLAIN, moment_over_axial=4.0), replace(PLAIN, moment_over_axial=-4.0)
    mean = 0.5 * (up.total_cm2(40.0) + down.total_cm2(40.0))
    rho_only = quad_total(replace(PLAIN, moment_over_axial=4.0), 40.0, interference=False)
    assert float(mean) == pytest.approx(rho_only, rel=1e-9, abs=0)
    assert up.total_cm2(40.0) > down.total_cm2(40.0)


def quad_total(transition, energy, *, interference=True):
    """Integrate the formula over the angle as it is written, with adaptive quadrature."""
    lepton = energy - transition.energy_mev
    p = np.sqrt(lepton**2 - ELECTRON_MASS_MEV**2)
    mass = 938.9187543

    def integrand(c):
        q = np.sqrt(energy**2 + p**2 - 2 * energy * p * c)
        q_mu2 = q**2 - transition.energy_mev**2
        cos2, sin2 = (1 + c) / 2, (1 - c) / 2
        rho = transition.moment_over_axial * q / (2 * mass)
        y = (transition.oscillator_fm * q / (2 * 197.3269804)) ** 2
        form = (1 - 2 * y / 3) * np.exp(-y)
        bracket = cos2 * transition.energy_mev**2 / q**2
        bracket += (q_mu2 / (2 * q**2) * cos2 + sin2) * 2 * (1 + rho**2)
        if interference:
            bracket += 4 * rho * np.sqrt(sin2) / q * np.sqrt(q_mu2 * cos2 + q**2 * sin2)
        return form**2 * bracket / 3

    scale = FERMI_CONSTANT_PER_MEV2**2 * HBAR_C_MEV_CM**2 / np.pi * p * lepton
    scale *= float(fermi_function(p, transition.charge, transition.nucleons)) * transition.strength
    return scale * quad(integrand, -1, 1, epsabs=0, epsrel=1e-11, limit=200)[0]


@pytest.mark.parametrize("moment", [4.0, -4.0])
@pytest.mark.parametrize("energy", [17.4, 30.0, 120.0])
def test_the_fixed_quadrature_is_good_enough(energy, moment):
    """The whole formula against adaptive quadrature of its text: 1e-9."""
    whole = replace(PLAIN, moment_over_axial=moment, oscillator_fm=1.7)
    assert float(whole.total_cm2(energy)) == pytest.approx(
        quad_total(whole, energy), rel=1e-9, abs=0
    )


@pytest.mark.parametrize("charge", [-5, 7])
@pytest.mark.parametrize("momentum", [0.3, 5.0, 60.0])
def test_the_fermi_function_against_arbitrary_precision(charge, momentum):
    """Mpmath's gamma functions give the same: 1e-12."""
    root = mpmath.sqrt(1 - (ALPHA * charge) ** 2)
    eta = ALPHA * charge * mpmath.sqrt(momentum**2 + ELECTRON_MASS_MEV**2) / momentum
    radius = 1.2 * mpmath.mpf(12) ** (mpmath.mpf(1) / 3) / mpmath.mpf("197.3269804")
    expected = (
        2 * (1 + root) * (2 * momentum * radius) ** (2 * root - 2) * mpmath.exp(mpmath.pi * eta)
    )
    expected *= abs(mpmath.gamma(root + 1j * eta)) ** 2 / mpmath.gamma(2 * root + 1) ** 2
    found = fermi_function(np.array(momentum), charge, 12)
    assert float(found) == pytest.approx(float(expected), rel=1e-12, abs=0)


def test_the_fermi_function_draws_electrons_in_and_drives_positrons_out():
    """Above one for electrons, below for positrons, one without charge, finite at rest."""
    momentum = np.array([0.0, 0.2, 2.0])
    assert np.all(fermi_function(momentum, 7, 12) > 1)
    assert np.all(fermi_function(momentum, -5, 12) < 1)
    assert np.array_equal(fermi_function(momentum, 0, 12), np.ones(3))


def test_it_is_closed_below_threshold():
    """No cross section below, a small one just above."""
    threshold = 16.8 + ELECTRON_MASS_MEV
    assert PLAIN.total_cm2(np.array([0.0, 10.0, threshold - 1e-9])).tolist() == [0.0, 0.0, 0.0]
    assert PLAIN.total_cm2(threshold + 1e-3) > 0
