"""Interactions by their keys, built from the numbers in ``data/cross_sections``.

Everything below this module is a formula on floats; only here do the two meet.
"""

from __future__ import annotations

from collections.abc import Mapping
from functools import lru_cache
from types import MappingProxyType

from tenkpc import data
from tenkpc.errors import UnknownNameError
from tenkpc.interactions.base import Interaction
from tenkpc.interactions.electron import ElectronInputs, electron_scattering
from tenkpc.interactions.inverse_beta import inverse_beta_decay
from tenkpc.interactions.inverse_beta_kernel import InverseBetaInputs

KEYS = ("electron-scattering", "inverse-beta-decay")
# named options of an interaction, the default first
OPTIONS: Mapping[str, tuple[str, ...]] = MappingProxyType(
    {"electron-scattering": ("radiative", "tree")}
)


@lru_cache(maxsize=64)
def by_key(key: str, option: str | None = None) -> Interaction:
    """Give an interaction, under one of its options if it has any.

    Raises
    ------
    UnknownNameError
        where there is no such interaction or option.
    """
    if key not in KEYS:
        kind = "interaction"
        raise UnknownNameError(kind, key, KEYS)
    options = OPTIONS.get(key, ())
    if option is not None and option not in options:
        kind = f"option of {key}"
        raise UnknownNameError(kind, option, options)
    if key == "inverse-beta-decay":
        return inverse_beta_decay(_inverse_beta_inputs())
    return electron_scattering(_electron_inputs(option or options[0]))


def _inverse_beta_inputs() -> InverseBetaInputs:
    tables = data.document("cross_sections/inverse_beta_decay.toml")
    return InverseBetaInputs(**{k: v for k, v in tables.items() if k != "provenance"})


def _electron_inputs(option: str) -> ElectronInputs:
    tables = data.document("cross_sections/electron_scattering.toml")
    return ElectronInputs(
        sin2_theta_w=tables["sin2_theta_w"],
        relative_error=tables["relative_error"][option],
        radiative=option == "radiative",
    )
