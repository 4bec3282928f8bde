"""Mixing of the three neutrino flavours, from a named global fit."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

from tenkpc import data
from tenkpc.errors import InputError, UnknownNameError

ORDERINGS = ("normal", "inverted")
DEFAULT_FIT = "nufit-6.0"


@dataclass(frozen=True)
class Measured:
    """A fitted value with its errors; they are None where the fit's are not carried."""

    value: float
    error_up: float | None = None
    error_down: float | None = None


@dataclass(frozen=True)
class Mixing:
    """Mixing parameters for one ordering of the neutrino masses.

    Attributes
    ----------
    fit, ordering
        name of the global fit and ``"normal"`` or ``"inverted"``.
    sin2_theta12, sin2_theta13, sin2_theta23
        sin² of the three mixing angles.
    delta_deg
        CP-violating phase in degrees.
    dm2_21_ev2, dm2_3l_ev2
        m₂² − m₁², and m₃² − m₁² (normal) or m₃² − m₂² (inverted), eV².
    """

    fit: str
    ordering: str
    sin2_theta12: Measured
    sin2_theta13: Measured
    sin2_theta23: Measured
    delta_deg: Measured
    dm2_21_ev2: Measured
    dm2_3l_ev2: Measured

    def electron_shares(self) -> tuple[float, float, float]:
        """Electron-flavour share of the mass states, (|Ue1|², |Ue2|², |Ue3|²)."""
        return electron_shares(self.sin2_theta12.value, self.sin2_theta13.value)


def electron_shares(sin2_theta12: float, sin2_theta13: float) -> tuple[float, float, float]:
    """Electron-flavour share of the three mass states, which sum to one.

    |Ue1|² = cos²θ₁₂ cos²θ₁₃,  |Ue2|² = sin²θ₁₂ cos²θ₁₃,  |Ue3|² = sin²θ₁₃

    Raises
    ------
    InputError
        where a squared sine is not between 0 and 1.
    """
    for name, value in (("sin2_theta12", sin2_theta12), ("sin2_theta13", sin2_theta13)):
        if not 0 <= value <= 1:
            message = f"{name} is a squared sine and must lie between 0 and 1; found {value!r}"
            raise InputError(message)
    cos2_theta13 = 1 - sin2_theta13
    return (1 - sin2_theta12) * cos2_theta13, sin2_theta12 * cos2_theta13, sin2_theta13


def fits() -> tuple[str, ...]:
    """Names of the global fits there are."""
    return tuple(sorted(set(data.document("mixing.toml")) - {"provenance"}))


@lru_cache(maxsize=16)
def mixing_parameters(ordering: str, fit: str = DEFAULT_FIT) -> Mixing:
    """Mixing parameters of a global fit for one mass ordering.

    Raises
    ------
    UnknownNameError
        where there is no such ordering or fit.
    """
    if ordering not in ORDERINGS:
        kind = "mass ordering"
        raise UnknownNameError(kind, ordering, ORDERINGS)
    if fit not in fits():
        kind = "set of mixing parameters"
        raise UnknownNameError(kind, fit, fits())
    values = data.document("mixing.toml")[fit][ordering]
    return Mixing(fit, ordering, **{key: Measured(*value) for key, value in values.items()})
