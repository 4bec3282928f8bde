"""How flavours change between the core of the star and the detector.

With p the survival probability of νe and p̄ that of ν̄e, the fluxes of ONE kind each become

    F_e → p F_e + (1 − p) F_x        F_x → [(1 − p) F_e + (1 + p) F_x]/2

for neutrinos, and the same with p̄ for antineutrinos. The sum over the three flavours is kept
separately for both, and that is checked whenever a flux is converted.

`Unconverted`
    p = p̄ = 1.
`Adiabatic`
    matter effects in the star's mantle with no jump at a resonance (the default elsewhere).
`Equilibrated`
    p = p̄ = 1/3: all flavours equal.
`Survival`
    any other pair of constants.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any, Protocol

import numpy as np
from numpy.typing import ArrayLike, NDArray

from tenkpc.errors import ComputationError, InputError, UnknownNameError
from tenkpc.propagation.mixing import DEFAULT_FIT, electron_shares, mixing_parameters
from tenkpc.species import ANTI_NU_E, ANTI_NU_X, NU_E, NU_X, SPECIES

Floats = NDArray[np.float64]

# three roundings of a sum of two products, with a wide margin; a wrong formula misses by far
CONSERVED_TO = 1e-12
# below this, far out in a tail, numbers are too small for the full count of digits
SMALLEST = float(np.finfo(float).tiny)


class Conversion(Protocol):
    """What turns emitted fluxes into arriving ones."""

    @property
    def survival(self) -> tuple[float, float]:
        """Survival probabilities of νe and ν̄e."""

    def arriving(self, flux: Floats, energy_mev: ArrayLike, time_s: ArrayLike) -> Floats:
        """Convert fluxes of one kind each, shape (4, …), in any unit."""

    def mass_states(self, flux: Floats) -> Floats | None:
        """Arriving fluxes of ν₁ ν₂ ν₃ ν̄₁ ν̄₂ ν̄₃, shape (6, …), or None where unknown."""

    def describe(self) -> str:
        """Say in a few words what it does."""

    def options(self) -> tuple[str, ...]:
        """Options of the shell that ask for it; none where there are none."""

    def record(self) -> dict[str, Any]:
        """All that `of_record` needs to make it again, for JSON."""

    def within_errors(self) -> tuple[tuple[str, Conversion, Conversion], ...]:
        """Each parameter that has an error, with the conversions for it 1σ low and high."""


class _Constant:
    """A conversion by two constant survival probabilities."""

    @property
    def survival(self) -> tuple[float, float]:
        """Survival probabilities of νe and ν̄e."""
        raise NotImplementedError

    def arriving(self, flux: Floats, energy_mev: ArrayLike, time_s: ArrayLike) -> Floats:
        """Convert fluxes of one kind each, shape (4, …), in any unit.

        Parameters
        ----------
        flux
            emitted fluxes by species, shape (4, …).
        energy_mev, time_s
            where the fluxes stand; constants do not look at them.

        Raises
        ------
        ComputationError
            where the six fluxes do not add up to the same sum after as before.
        """
        return converted(flux, *self.survival)

    def mass_states(self, flux: Floats) -> Floats | None:
        """None: the content of mass states does not follow from survival probabilities."""
        return None

    def options(self) -> tuple[str, ...]:
        """None: the shell has no options for it."""
        return ()

    def record(self) -> dict[str, Any]:
        """All that `of_record` needs to make it again: the class and its arguments."""
        return {"conversion": type(self).__name__.lower(), **vars(self)}

    def within_errors(self) -> tuple[tuple[str, Conversion, Conversion], ...]:
        """None: no parameter has an error."""
        return ()


@dataclass(frozen=True)
class Unconverted(_Constant):
    """No conversion: every flavour arrives as it was emitted."""

    @property
    def survival(self) -> tuple[float, float]:
        """Survival probabilities of νe and ν̄e: both one."""
        return 1.0, 1.0

    def describe(self) -> str:
        """Say in a few words what it does."""
        return "no flavour conversion"

    def options(self) -> tuple[str, ...]:
        """Options of the shell that ask for it."""
        return "--conversion", "unconverted"


@dataclass(frozen=True)
class Adiabatic(_Constant):
    """Adiabatic conversion by matter in the star's mantle; the mass states then arrive.

    Normal ordering: p = |Ue3|², p̄ = |Ue1|². Inverted ordering: p = |Ue2|², p̄ = |Ue3|².

    Valid while the density falls smoothly through the resonances: before a shock reaches them
    (some seconds) and without collective effects, which are not settled.

    Parameters
    ----------
    ordering
        ``"normal"`` or ``"inverted"``.
    mixing
        name of the global fit that the mixing angles come from.

    Raises
    ------
    UnknownNameError
        where there is no such ordering or fit.

    References
    ----------
    Dighe & Smirnov 2000, Phys. Rev. D 62, 033007, hep-ph/9907423.
    """

    ordering: str
    mixing: str = DEFAULT_FIT

    def __post_init__(self) -> None:
        mixing_parameters(self.ordering, self.mixing)

    @property
    def survival(self) -> tuple[float, float]:
        """Survival probabilities of νe and ν̄e."""
        shares = mixing_parameters(self.ordering, self.mixing).electron_shares()
        return crossing_survival(shares, self.ordering, high=0.0, low=0.0)

    def mass_states(self, flux: Floats) -> Floats:
        """Arriving fluxes of ν₁ ν₂ ν₃ ν̄₁ ν̄₂ ν̄₃, shape (6, …).

        νe leaves the star as ν₃ (normal) or ν₂ (inverted), ν̄e as ν̄₁ (normal) or ν̄₃ (inverted);
        the other two states carry F_x each.
        """
        nu, anti = (2, 0) if self.ordering == "normal" else (1, 2)
        states = [flux[NU_X]] * 3 + [flux[ANTI_NU_X]] * 3
        states[nu], states[3 + anti] = flux[NU_E], flux[ANTI_NU_E]
        return np.stack(states)

    def describe(self) -> str:
        """Say in a few words what it does."""
        p, anti_p = self.survival
        words = f"adiabatic conversion, {self.ordering} ordering"
        return f"{words} (νe survival {p:.3f}, ν̄e {anti_p:.3f})"

    def options(self) -> tuple[str, ...]:
        """Options of the shell that ask for it."""
        if self.mixing != DEFAULT_FIT:
            return ()
        return "--conversion", "adiabatic", "--ordering", self.ordering

    def within_errors(self) -> tuple[tuple[str, Conversion, Conversion], ...]:
        """Both mixing angles, 1σ low and high, as pairs of survival probabilities."""
        central = mixing_parameters(self.ordering, self.mixing)
        angles = {"sin2_theta12": central.sin2_theta12, "sin2_theta13": central.sin2_theta13}
        found = []
        for name, angle in angles.items():
            ends = (-(angle.error_down or 0.0), angle.error_up or 0.0)
            low, high = (self._with_angle(name, angle.value + step) for step in ends)
            found.append((name, low, high))
        return tuple(found)

    def _with_angle(self, name: str, value: float) -> Survival:
        central = mixing_parameters(self.ordering, self.mixing)
        both = {key: getattr(central, key).value for key in ("sin2_theta12", "sin2_theta13")}
        shares = electron_shares(**{**both, name: value})
        nu_e, anti_nu_e = crossing_survival(shares, self.ordering, high=0.0, low=0.0)
        return Survival(nu_e=nu_e, anti_nu_e=anti_nu_e)


@dataclass(frozen=True)
class Equilibrated(_Constant):
    """Full equilibration: each flavour arrives as the mean of the three emitted ones."""

    @property
    def survival(self) -> tuple[float, float]:
        """Survival probabilities of νe and ν̄e: both a third."""
        return 1 / 3, 1 / 3

    def mass_states(self, flux: Floats) -> Floats:
        """Arriving fluxes of ν₁ ν₂ ν₃ ν̄₁ ν̄₂ ν̄₃, shape (6, …): three equal ones, twice."""
        nu = (flux[NU_E] + 2 * flux[NU_X]) / 3
        anti = (flux[ANTI_NU_E] + 2 * flux[ANTI_NU_X]) / 3
        return np.stack([nu] * 3 + [anti] * 3)

    def describe(self) -> str:
        """Say in a few words what it does."""
        return "full flavour equilibration (νe and ν̄e survival 1/3)"

    def options(self) -> tuple[str, ...]:
        """Options of the shell that ask for it."""
        return "--conversion", "equilibrated"


@dataclass(frozen=True, kw_only=True)
class Survival(_Constant):
    """Conversion by two survival probabilities of your own.

    Parameters
    ----------
    nu_e, anti_nu_e
        probability that a νe or a ν̄e arrives as what it was, 0 to 1.

    Raises
    ------
    InputError
        where one is not a number from 0 to 1.

    Examples
    --------
    >>> Survival(nu_e=0.4, anti_nu_e=0.7).describe()
    'conversion with νe survival 0.400 and ν̄e survival 0.700'
    """

    nu_e: float
    anti_nu_e: float

    def __post_init__(self) -> None:
        _check_probability("nu_e", self.nu_e)
        _check_probability("anti_nu_e", self.anti_nu_e)

    @classmethod
    def from_crossings(
        cls, ordering: str, *, high: float = 0.0, low: float = 0.0, mixing: str = DEFAULT_FIT
    ) -> Survival:
        """Survival probabilities where states may cross at the two resonances in the star.

        Parameters
        ----------
        ordering
            ``"normal"`` or ``"inverted"``.
        high, low
            probability of a jump from one mass state to the other at the resonance of high
            density (for neutrinos in the normal ordering, for antineutrinos in the inverted
            one) and at that of low density (neutrinos), 0 to 1; both zero is adiabatic.
        mixing
            name of the global fit that the mixing angles come from.
        """
        _check_probability("high", high)
        _check_probability("low", low)
        shares = mixing_parameters(ordering, mixing).electron_shares()
        nu_e, anti_nu_e = crossing_survival(shares, ordering, high=high, low=low)
        return cls(nu_e=nu_e, anti_nu_e=anti_nu_e)

    @property
    def survival(self) -> tuple[float, float]:
        """Survival probabilities of νe and ν̄e."""
        return float(self.nu_e), float(self.anti_nu_e)

    def describe(self) -> str:
        """Say in a few words what it does."""
        return f"conversion with νe survival {self.nu_e:.3f} and ν̄e survival {self.anti_nu_e:.3f}"


def _check_probability(name: str, value: float) -> None:
    number = isinstance(value, int | float) and not isinstance(value, bool)
    if not (number and 0 <= value <= 1):
        message = f"{name} is a probability and must be a number from 0 to 1; found {value!r}"
        raise InputError(message)


def crossing_survival(
    shares: tuple[float, float, float], ordering: str, *, high: float, low: float
) -> tuple[float, float]:
    """Survival of νe and ν̄e for given jump probabilities at the two resonances.

    Normal:   p = (1 − P_H)|Ue3|² + P_H [(1 − P_L)|Ue2|² + P_L|Ue1|²],  p̄ = |Ue1|²
    Inverted: p = (1 − P_L)|Ue2|² + P_L|Ue1|²,  p̄ = (1 − P_H)|Ue3|² + P_H|Ue1|²

    Parameters
    ----------
    shares
        (|Ue1|², |Ue2|², |Ue3|²).
    ordering
        ``"normal"`` or ``"inverted"``.
    high, low
        P_H and P_L.

    References
    ----------
    Dighe & Smirnov 2000, Phys. Rev. D 62, 033007, hep-ph/9907423.
    """
    ue1, ue2, ue3 = shares
    lower = (1 - low) * ue2 + low * ue1
    if ordering == "normal":
        return (1 - high) * ue3 + high * lower, ue1
    return lower, (1 - high) * ue3 + high * ue1


def converted(flux: Floats, p: float, anti_p: float) -> Floats:
    """Convert fluxes of one kind each, shape (4, …), and check that none is lost.

    Raises
    ------
    ComputationError
        where the sum over the flavours is not the same after as before, or not finite.
    """
    result = np.empty(np.shape(flux))
    for e, x, stays in ((NU_E, NU_X, p), (ANTI_NU_E, ANTI_NU_X, anti_p)):
        result[e] = stays * flux[e] + (1 - stays) * flux[x]
        result[x] = ((1 - stays) * flux[e] + (1 + stays) * flux[x]) / 2
        lost = np.abs(result[e] + 2 * result[x] - flux[e] - 2 * flux[x])
        scale = np.abs(flux[e]) + 2 * np.abs(flux[x])
        if not np.all(lost <= CONSERVED_TO * scale + SMALLEST):
            kinds = f"{SPECIES[e]} and {SPECIES[x]}"
            message = (
                f"flavour conversion did not keep the summed flux of {kinds}, or it is no number"
            )
            raise ComputationError(message)
    return result


# the words of the shell; each is made from the mass ordering
WORDS: dict[str, Callable[[str], Conversion]] = {
    "adiabatic": Adiabatic,
    "equilibrated": lambda ordering: Equilibrated(),
    "unconverted": lambda ordering: Unconverted(),
}


def of_record(record: Mapping[str, Any]) -> Conversion:
    """Make a conversion from what its `record` said."""
    kinds = {
        kind.__name__.lower(): kind for kind in (Adiabatic, Equilibrated, Survival, Unconverted)
    }
    arguments = {key: value for key, value in record.items() if key != "conversion"}
    if record["conversion"] not in kinds:
        kind = "flavour conversion"
        raise UnknownNameError(kind, record["conversion"], kinds)
    made: Conversion = kinds[record["conversion"]](**arguments)
    return made


def parse(name: str, ordering: str = "normal") -> Conversion:
    """Make the conversion that a word of the shell stands for.

    Parameters
    ----------
    name
        ``"unconverted"``, ``"adiabatic"`` or ``"equilibrated"``.
    ordering
        ``"normal"`` or ``"inverted"``; only the adiabatic one depends on it.

    Raises
    ------
    UnknownNameError
        where a word is not known.
    """
    if name not in WORDS:
        kind = "flavour conversion"
        raise UnknownNameError(kind, name, WORDS)
    mixing_parameters(ordering)
    return WORDS[name](ordering)
