"""Global fit of neutrino mixing: Esteban et al. 2024, JHEP 12 (2024) 216, arXiv:2410.05380."""

import math

import pytest

from tenkpc.propagation.mixing import Measured, mixing_parameters


def spread(measured: Measured, sigmas: float) -> tuple[float, float]:
    """Lower and upper value at so many standard deviations."""
    assert measured.error_up is not None
    assert measured.error_down is not None
    return (
        measured.value - sigmas * measured.error_down,
        measured.value + sigmas * measured.error_up,
    )


# The abstract gives the relative precision at three sigma in whole per cent, of the angle itself
# and of the mass difference: half a per cent is its rounding; another half is for our errors, which
# are one-sigma errors (from memory) multiplied by three, where the fit's are not quite Gaussian.
@pytest.mark.parametrize(
    ("parameter", "percent"),
    [("sin2_theta12", 13.0), ("sin2_theta13", 8.0), ("dm2_21_ev2", 15.0)],
)
def test_relative_precision(parameter: str, percent: float) -> None:
    """Three-sigma ranges of the data file are as wide as the paper's abstract says."""
    low, high = spread(getattr(mixing_parameters("normal"), parameter), 3)
    if parameter.startswith("sin2"):
        low, high = math.asin(math.sqrt(low)), math.asin(math.sqrt(high))
    assert 200 * (high - low) / (high + low) == pytest.approx(percent, abs=1.0)
