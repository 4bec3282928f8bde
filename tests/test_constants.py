"""Constants against the tables that scipy and the particle package carry."""

from __future__ import annotations

import particle
import pytest
from scipy import constants as codata

from tenkpc import constants


@pytest.mark.parametrize(
    ("ours", "name", "scale"),
    [
        (constants.ELECTRON_MASS_MEV, "electron mass energy equivalent in MeV", 1),
        (constants.PROTON_MASS_MEV, "proton mass energy equivalent in MeV", 1),
        (constants.NEUTRON_MASS_MEV, "neutron mass energy equivalent in MeV", 1),
        (constants.ATOMIC_MASS_MEV, "atomic mass constant energy equivalent in MeV", 1),
        (constants.HBAR_C_MEV_CM, "reduced Planck constant times c in MeV fm", 1e-13),
        (constants.ALPHA, "fine-structure constant", 1),
        (constants.FERMI_CONSTANT_PER_MEV2, "Fermi coupling constant", 1e-6),
        (constants.AVOGADRO_PER_MOL, "Avogadro constant", 1),
        (constants.MUON_MASS_MEV, "muon mass energy equivalent in MeV", 1),
    ],
)
def test_codata(ours, name, scale):
    """Editions differ in the eighth digit at the most."""
    assert ours == pytest.approx(codata.physical_constants[name][0] * scale, rel=1e-7)


def test_pion_and_moments():
    """The pion's mass as the particle package has it, moments as CODATA has them."""
    pion = particle.Particle.from_pdgid(211).mass
    assert pytest.approx(pion, rel=1e-6) == constants.CHARGED_PION_MASS_MEV
    moments = [
        codata.physical_constants[f"{n} mag. mom. to nuclear magneton ratio"][0]
        for n in ("proton", "neutron")
    ]
    expected = moments[0] - 1 - moments[1]
    assert expected == pytest.approx(constants.ANOMALOUS_MOMENT_DIFFERENCE, rel=1e-7)


def test_conversions():
    """Exact ones, against scipy's."""
    assert pytest.approx(codata.parsec * 1e5, rel=1e-10) == constants.CM_PER_KPC
    assert pytest.approx(1e-7 / codata.e / 1e6, rel=1e-9) == constants.MEV_PER_ERG
