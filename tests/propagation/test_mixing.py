"""Mixing parameters and what they mean for electron neutrinos."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from tenkpc import data
from tenkpc.errors import InputError, UnknownNameError
from tenkpc.propagation.mixing import ORDERINGS, electron_shares, fits, mixing_parameters

# computed from the file's angles, six digits
SHARES = {
    "normal": (0.676672, 0.301178, 0.022150),
    "inverted": (0.676561, 0.301129, 0.022310),
}


@pytest.mark.parametrize("ordering", ORDERINGS)
def test_shares_of_the_default_fit(ordering: str) -> None:
    """Electron shares of the mass states agree with the computed values to their digits."""
    found = mixing_parameters(ordering).electron_shares()
    assert found == pytest.approx(SHARES[ordering], abs=0.5001e-6)


@given(s12=st.floats(0, 1), s13=st.floats(0, 1))
def test_shares_sum_to_one(s12: float, s13: float) -> None:
    """Shares are probabilities: between 0 and 1, and together one."""
    shares = electron_shares(s12, s13)
    assert sum(shares) == pytest.approx(1.0, abs=1e-15)
    assert all(0 <= share <= 1 for share in shares)


@pytest.mark.parametrize("ordering", ORDERINGS)
@pytest.mark.parametrize("fit", fits())
def test_every_fit_is_sensible(fit: str, ordering: str) -> None:
    """The sign of the large mass difference is the ordering; errors are small and positive."""
    found = mixing_parameters(ordering, fit)
    assert (found.dm2_3l_ev2.value > 0) == (ordering == "normal")
    for measured in (found.sin2_theta12, found.sin2_theta13, found.dm2_21_ev2):
        assert measured.error_up is not None
        assert 0 < measured.error_up < 0.1 * measured.value
    assert hash(found) == hash(mixing_parameters(ordering, fit))


def test_provenance() -> None:
    """The file says where its numbers are from."""
    assert "2410.05380" in data.document("mixing.toml")["provenance"]["source"]


def test_refusals() -> None:
    """Unknown orderings and fits are answered with the nearest name, bad angles with the range."""
    with pytest.raises(UnknownNameError, match="did you mean 'normal'"):
        mixing_parameters("normale")
    with pytest.raises(UnknownNameError, match=r"did you mean 'nufit-6\.0'"):
        mixing_parameters("normal", "nufit-6")
    with pytest.raises(InputError, match="must lie between 0 and 1"):
        electron_shares(0.3, 1.2)
