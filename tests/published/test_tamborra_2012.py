"""The pinched form: Tamborra et al. 2012, Phys. Rev. D 86, 125031, arXiv:1211.3920."""

import pytest

from tenkpc.source import spectra


def test_pinching_of_a_fermi_dirac_spectrum() -> None:
    """Their introduction: 2.30 stands for Fermi-Dirac without degeneracy (three digits given)."""
    assert spectra.pinched_from_fermi_dirac(4.0, 0.0)[1] == pytest.approx(2.30, abs=0.005)


def test_pinching_of_a_maxwell_boltzmann_spectrum() -> None:
    """Their introduction: 2 stands for Maxwell-Boltzmann, the limit of no degeneracy at all."""
    # at a degeneracy of -30 the pinching differs from 2 by less than rounding
    assert spectra.pinched_from_fermi_dirac(4.0, -30.0)[1] == pytest.approx(2.0, abs=1e-12)
