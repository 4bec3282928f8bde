"""Scattering on protons: computed tables, an explicit Dirac trace, limits."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from scipy.integrate import quad

from tenkpc import interactions
from tenkpc.constants import FERMI_CONSTANT_PER_MEV2, HBAR_C_MEV_CM, PROTON_MASS_MEV
from tenkpc.interactions import proton, recoil
from tenkpc.species import SPECIES

PROTON = interactions.by_key("proton-scattering")
INPUTS = proton.ProtonInputs(0.23863, 1.2754, 0.0, 1014.0, 0.71e6, 0.06)

# an independent slow calculation: E in MeV, largest recoil in MeV, totals in 1e-42 cm² of
# neutrinos and antineutrinos without strangeness, and of neutrinos with Δs = -0.15
TABLE = (
    (5.0, 0.0527, 0.51111, 0.49971, 0.63760),
    (10.0, 0.2087, 2.03019, 1.94127, 2.52968),
    (15.0, 0.4647, 4.53437, 4.24187, 5.64358),
    (20.0, 0.8178, 7.99886, 7.32332, 9.94459),
    (30.0, 1.8031, 17.70137, 15.53873, 21.96043),
    (40.0, 3.1426, 30.90867, 26.05125, 38.26769),
    (50.0, 4.8157, 47.37282, 38.39166, 58.53845),
    (60.0, 6.8035, 66.83234, 52.15302, 82.43271),
)


@pytest.mark.parametrize("row", TABLE, ids=lambda row: f"{row[0]:g} MeV")
def test_totals_are_those_of_the_slow_calculation(row):
    """Neutrinos, antineutrinos and strangeness: half a unit of the last digit."""
    energy, recoil_mev, nu, anti_nu, strange = row
    assert recoil.highest_recoil_mev(energy, PROTON_MASS_MEV) == pytest.approx(recoil_mev, abs=6e-5)
    assert float(PROTON.sigma("nu_x", energy)) * 1e42 == pytest.approx(nu, abs=6e-6)
    assert float(PROTON.sigma("anti_nu_x", energy)) * 1e42 == pytest.approx(anti_nu, abs=6e-6)
    found = proton.total_cm2(energy, 1.0, replace(INPUTS, strange_coupling=-0.15))
    assert float(found) * 1e42 == pytest.approx(strange, abs=6e-6)


def test_all_flavours_scatter_alike():
    """The neutral current does not know flavours, only neutrinos from antineutrinos."""
    energy = np.array([8.0, 25.0])
    sigma = {species: PROTON.sigma(species, energy) for species in SPECIES}
    assert np.array_equal(sigma["nu_e"], sigma["nu_x"])
    assert np.array_equal(sigma["anti_nu_e"], sigma["anti_nu_x"])
    assert np.all(sigma["nu_e"] > sigma["anti_nu_e"])


def test_low_energies_go_over_into_the_point_form():
    """At 0.1 MeV the total is G_F² E²/π (c_V² + 3 c_A²) but for recoil, of order E/M: 1e-3."""
    axial, vector = 1.2754 / 2, 0.5 - 2 * 0.23863
    scale = FERMI_CONSTANT_PER_MEV2**2 * HBAR_C_MEV_CM**2 / np.pi * 0.1**2
    expected = scale * (vector**2 + 3 * axial**2)
    assert float(PROTON.sigma("nu_e", 0.1)) == pytest.approx(expected, rel=1e-3, abs=0)


@pytest.mark.parametrize("sign", [1.0, -1.0])
@pytest.mark.parametrize("energy", [1.0, 30.0, 250.0])
def test_the_fixed_quadrature_is_good_enough(energy, sign):
    """Totals agree with adaptive quadrature over the recoil: 1e-11."""
    highest = recoil.highest_recoil_mev(energy, PROTON_MASS_MEV)
    integrand = lambda t: float(
        proton.per_recoil_energy(np.array(energy), np.array(t), sign, INPUTS)
    )
    expected = quad(integrand, 0, highest, epsabs=0, epsrel=1e-12)[0]
    assert float(proton.total_cm2(energy, sign, INPUTS)) == pytest.approx(
        expected, rel=1e-11, abs=0
    )


def by_traces(dirac, energy, kinetic, sign):
    """dσ/dT in cm²/MeV from explicit traces over currents with G_F/√2 in front."""
    mass, q2 = PROTON_MASS_MEV, 2 * PROTON_MASS_MEV * kinetic
    out = energy - kinetic
    cosine = 1 - q2 / (2 * energy * out)
    k = np.array([energy, 0, 0, energy])
    after = out * np.array([1, np.sqrt(1 - cosine**2), 0, cosine])
    p = np.array([mass, 0, 0, 0.0])
    q = k - after
    f1, f2, g = (float(f) for f in proton.form_factors(np.array(q2), INPUTS))
    lower = [dirac.metric[i, i] * q[i] for i in range(4)]
    current = []
    for i in range(4):
        sigma_q = sum(
            0.5j * (dirac.gamma[i] @ dirac.gamma[j] - dirac.gamma[j] @ dirac.gamma[i]) * lower[j]
            for j in range(4)
        )
        # the sign of the axial part is that of charged currents with a positive coupling
        current.append(
            f1 * dirac.gamma[i] + 1j * f2 / (2 * mass) * sigma_q - g * dirac.gamma[i] @ dirac.gamma5
        )
    bar = [dirac.gamma0 @ c.conj().T @ dirac.gamma0 for c in current]
    one, total = np.eye(4), 0
    for a in range(4):
        for b in range(4):
            chiral = (one - sign * dirac.gamma5) @ dirac.slash(k)
            lepton = np.trace(dirac.slash(after) @ dirac.gamma[a] @ chiral @ dirac.gamma[b]) * 2
            hadron = np.trace(
                (dirac.slash(p + q) + mass * one)
                @ current[a]
                @ (dirac.slash(p) + mass * one)
                @ bar[b]
            )
            total += dirac.metric[a, a] * dirac.metric[b, b] * lepton * hadron
    # G_F²/2 for the couplings, 1/2 for the proton's spin, dσ/dt = |M|²/(64π M² E²), dt = 2M dT
    squared = FERMI_CONSTANT_PER_MEV2**2 / 2 * total.real / 2
    return squared / (64 * np.pi * mass**2 * energy**2) * 2 * mass * HBAR_C_MEV_CM**2


@pytest.mark.parametrize("sign", [1.0, -1.0])
@pytest.mark.parametrize(("energy", "kinetic"), [(10.0, 0.1044), (30.0, 1.6228), (60.0, 1.3607)])
def test_the_cross_section_is_the_spin_sum(dirac, energy, kinetic, sign):
    """Neutrinos and antineutrinos against explicit Dirac traces, in size too: 1e-10."""
    found = proton.per_recoil_energy(np.array(energy), np.array(kinetic), sign, INPUTS)
    assert float(found) == pytest.approx(by_traces(dirac, energy, kinetic, sign), rel=1e-10, abs=0)


def test_the_option_with_strangeness_raises_the_rate():
    """Δs = -0.035 with (g_A - Δs)² on all but the small vector part: 5 to 6 %."""
    strange = interactions.by_key("proton-scattering", "with-strangeness")
    ratio = strange.sigma("nu_e", 20.0) / PROTON.sigma("nu_e", 20.0)
    assert 1.05 < float(ratio) < 1.06
