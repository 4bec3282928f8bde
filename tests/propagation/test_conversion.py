"""Flavour conversion: survival probabilities, conservation, mass states, and words."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tenkpc.errors import ComputationError, InputError, UnknownNameError
from tenkpc.propagation import conversion as module
from tenkpc.propagation.conversion import (
    Adiabatic,
    Conversion,
    Equilibrated,
    Survival,
    Unconverted,
    converted,
    crossing_survival,
    parse,
)
from tenkpc.propagation.mixing import electron_shares, mixing_parameters
from tenkpc.species import MULTIPLICITY

ALL: tuple[Conversion, ...] = (
    Unconverted(),
    Adiabatic("normal"),
    Adiabatic("inverted"),
    Equilibrated(),
    Survival(nu_e=0.25, anti_nu_e=0.6),
)
SOURCE = np.array([10.0, 8.0, 5.0, 5.0])
# down to the smallest numbers there are: tails of a burst reach them
fluxes = st.lists(st.floats(0, 1e60), min_size=4, max_size=4).map(np.array)


@pytest.mark.parametrize(
    ("conversion", "survival"),
    [
        (Adiabatic("normal"), (0.022150, 0.676672)),
        (Adiabatic("inverted"), (0.301129, 0.022310)),
        (Survival.from_crossings("normal", high=1.0), (0.301178, 0.676672)),
        (Survival.from_crossings("inverted", high=1.0), (0.301129, 0.676561)),
        (Unconverted(), (1.0, 1.0)),
        (Equilibrated(), (1 / 3, 1 / 3)),
    ],
)
def test_survival(conversion: Conversion, survival: tuple[float, float]) -> None:
    """Survival probabilities agree with the computed table to its six digits."""
    assert conversion.survival == pytest.approx(survival, abs=0.5001e-6)


@pytest.mark.parametrize(
    ("ordering", "angles", "survival"),
    [
        ("normal", (0.3088, 0.02248), (0.022480, 0.675662)),
        ("inverted", (0.3088, 0.02262), (0.301815, 0.022620)),
    ],
)
def test_survival_of_other_angles(
    ordering: str, angles: tuple[float, float], survival: tuple[float, float]
) -> None:
    """Angles of a later fit give the survival probabilities computed for them."""
    found = crossing_survival(electron_shares(*angles), ordering, high=0.0, low=0.0)
    assert found == pytest.approx(survival, abs=0.5001e-6)


# arriving nu_e, both other neutrinos, anti_nu_e, both other antineutrinos, for 10, 8 and 5 each
@pytest.mark.parametrize(
    ("conversion", "expected"),
    [
        (Adiabatic("normal"), (5.11075, 14.88925, 7.03002, 10.96998)),
        (Adiabatic("inverted"), (6.50564, 13.49436, 5.06693, 12.93307)),
        (Unconverted(), (10.0, 10.0, 8.0, 10.0)),
        (Equilibrated(), (6.66667, 13.33333, 6.0, 12.0)),
    ],
)
def test_arriving(conversion: Conversion, expected: tuple[float, ...]) -> None:
    """Arriving fluxes agree with the computed table, of which 38 in all are kept."""
    e, anti_e, x, anti_x = conversion.arriving(SOURCE, 10.0, 0.0)
    assert (e, 2 * x, anti_e, 2 * anti_x) == pytest.approx(expected, abs=0.5001e-5)
    assert MULTIPLICITY @ np.array([e, anti_e, x, anti_x]) == pytest.approx(38.0, rel=1e-14)


@given(flux=fluxes, p=st.floats(0, 1), anti_p=st.floats(0, 1))
def test_six_fluxes_are_conserved(flux: np.ndarray, p: float, anti_p: float) -> None:
    """Neutrinos and antineutrinos are each conserved, and no flux turns negative."""
    result = Survival(nu_e=p, anti_nu_e=anti_p).arriving(flux, 10.0, 0.0)
    assert np.all(result >= 0)
    for e, x in ((0, 2), (1, 3)):
        total = flux[e] + 2 * flux[x]
        assert abs(result[e] + 2 * result[x] - total) <= 1e-14 * total + 1e-300


@given(flux=fluxes)
def test_unconverted_changes_nothing(flux: np.ndarray) -> None:
    """With survival one every flux arrives as it was emitted."""
    np.testing.assert_array_equal(Unconverted().arriving(flux, 10.0, 0.0), flux)


@given(flux=fluxes)
@pytest.mark.parametrize("conversion", [Adiabatic("normal"), Adiabatic("inverted"), Equilibrated()])
def test_mass_states_give_the_same_fluxes(conversion: Conversion, flux: np.ndarray) -> None:
    """Mass states weighted with their electron shares are the arriving electron flavours."""
    ordering = conversion.ordering if isinstance(conversion, Adiabatic) else "normal"
    shares = np.array(mixing_parameters(ordering).electron_shares())
    states = conversion.mass_states(flux)
    assert states is not None
    arriving = conversion.arriving(flux, 10.0, 0.0)
    assert shares @ states[:3] == pytest.approx(arriving[0], rel=1e-13, abs=1e-300)
    assert shares @ states[3:] == pytest.approx(arriving[1], rel=1e-13, abs=1e-300)
    assert states[:3].sum() == pytest.approx(flux[0] + 2 * flux[2], rel=1e-13, abs=1e-300)


def test_mass_states_are_unknown_for_constants() -> None:
    """Survival probabilities alone, or no conversion, do not say what mass states arrive."""
    assert Unconverted().mass_states(SOURCE) is None
    assert Survival(nu_e=0.5, anti_nu_e=0.5).mass_states(SOURCE) is None


def test_shapes_are_kept() -> None:
    """Axes after the species go through unchanged, each element on its own."""
    flux = np.arange(24.0).reshape(4, 2, 3)
    result = Adiabatic("normal").arriving(flux, np.zeros(3), np.zeros(2))
    assert result.shape == flux.shape
    alone = Adiabatic("normal").arriving(flux[:, 1, 2], 0.0, 0.0)
    np.testing.assert_array_equal(result[:, 1, 2], alone)


def test_lost_flux_is_an_error(monkeypatch: pytest.MonkeyPatch) -> None:
    """A conversion that does not keep the sum, or meets what is no number, stops at once."""
    with pytest.raises(ComputationError, match="summed flux of nu_e and nu_x"):
        converted(np.array([np.nan, 1.0, 1.0, 1.0]), 0.5, 0.5)
    # with no tolerance left, rounding alone must trip the check: it does look
    monkeypatch.setattr(module, "CONSERVED_TO", -1.0)
    with pytest.raises(ComputationError, match="summed flux"):
        converted(SOURCE, 0.3, 0.7)


@pytest.mark.parametrize("bad", [-0.1, 1.1, float("nan"), "30 %", True, None])
def test_survival_is_a_probability(bad: object) -> None:
    """What is not a number from 0 to 1 is refused."""
    with pytest.raises(InputError, match="a number from 0 to 1"):
        Survival(nu_e=bad, anti_nu_e=0.5)  # type: ignore[arg-type]
    with pytest.raises(InputError, match="high is a probability"):
        Survival.from_crossings("normal", high=bad)  # type: ignore[arg-type]


@given(high=st.floats(0, 1), low=st.floats(0, 1))
def test_crossings(high: float, low: float) -> None:
    """Without jumps crossings are adiabatic, with any they stay between the pure states."""
    for ordering in ("normal", "inverted"):
        shares = mixing_parameters(ordering).electron_shares()
        found = Survival.from_crossings(ordering, high=high, low=low).survival
        assert all(min(shares) - 1e-15 <= p <= max(shares) + 1e-15 for p in found)
        adiabatic = Survival.from_crossings(ordering).survival
        assert adiabatic == Adiabatic(ordering).survival


def test_values() -> None:
    """Conversions are equal and hash alike by value."""
    assert len({Adiabatic("normal"), Adiabatic("normal"), Adiabatic("inverted")}) == 2
    assert Survival(nu_e=0, anti_nu_e=1) == Survival(nu_e=0.0, anti_nu_e=1.0)
    assert Unconverted() != Survival(nu_e=1.0, anti_nu_e=1.0)


@pytest.mark.parametrize("conversion", ALL)
def test_words(conversion: Conversion) -> None:
    """Every conversion describes itself shortly; the shell's words make it again."""
    assert 5 < len(conversion.describe()) < 72
    options = conversion.options()
    if options:
        words = dict(zip(options[::2], options[1::2], strict=True))
        assert parse(words["--conversion"], words.get("--ordering", "normal")) == conversion


def test_description_of_the_default() -> None:
    """The default says its ordering and both survival probabilities."""
    words = "adiabatic conversion, normal ordering (νe survival 0.022, ν̄e 0.677)"
    assert Adiabatic("normal").describe() == words


def test_unknown_words() -> None:
    """Misspelt conversions and orderings are answered with the nearest name."""
    with pytest.raises(UnknownNameError, match="did you mean 'adiabatic'"):
        parse("adiabatik")
    with pytest.raises(UnknownNameError, match="did you mean 'inverted'"):
        parse("unconverted", "invertd")
    with pytest.raises(UnknownNameError, match="mass ordering"):
        Adiabatic("upside down")
