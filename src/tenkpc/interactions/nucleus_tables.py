"""From the tables of a nucleus, shipped or a user's own, to its reactions."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from tenkpc.interactions.base import Interaction, Reference
from tenkpc.interactions.nuclear import NuclearInputs, nuclear
from tenkpc.interactions.strength import KINDS


@dataclass(frozen=True)
class Couplings:
    """V_ud, g_A, and sin²θ_W at zero momentum transfer."""

    v_ud: float
    axial_coupling: float
    sin2_theta_w: float


def options(tables: Mapping[str, Any], key: str) -> tuple[str, ...]:
    """Names of a reaction's options, the default first; none where it has but one form."""
    return tuple(tables["reactions"][key].get("options", {}))


def reaction(tables: Mapping[str, Any], key: str, option: str, couplings: Couplings) -> Interaction:
    """Build one reaction of a nucleus, see `inputs`."""
    return nuclear(inputs(tables, key, option, couplings))


def inputs(tables: Mapping[str, Any], key: str, option: str, couplings: Couplings) -> NuclearInputs:
    """Give what the cross section of a reaction depends on.

    Parameters
    ----------
    tables
        ``stands_for``, ``nucleons``, ``radius_squared_fm2``, ``references`` and ``reactions``.
    key
        the reaction.
    option
        the name of its option; empty for the first.
    couplings
        what all nuclei share.
    """
    table = tables["reactions"][key]
    given = table.get("options", {})
    chosen = given[option or next(iter(given))] if given else table.get("scale", {})
    errors = table["relative_error"]
    error = tuple(errors["error"])
    return NuclearInputs(
        key=key,
        equation=table["equation"],
        target=tables["stands_for"],
        references=_references(tables, key),
        current=table["current"],
        protons=table["protons"],
        nucleons=tables["nucleons"],
        mass_difference_mev=table.get("mass_difference_mev", 0.0),
        separation_mev=tuple(table.get("separation_mev", ())),
        radius_squared_fm2=tables["radius_squared_fm2"],
        peaks={kind: [tuple(p) for p in table[kind]] for kind in KINDS if kind in table},
        scale_bound=chosen.get("bound", 1.0),
        scale_unbound=chosen.get("unbound", 1.0),
        end_mev=table["end_mev"],
        error_mev=tuple(errors["energy_mev"]),
        error=(chosen["error"],) * len(error) if "error" in chosen else error,
        v_ud=couplings.v_ud,
        axial_coupling=couplings.axial_coupling,
        sin2_theta_w=couplings.sin2_theta_w,
    )


def _references(tables: Mapping[str, Any], key: str) -> tuple[Reference, ...]:
    """Sources of one reaction: those that name it, and those that name none."""
    return tuple(
        Reference(**{name: words for name, words in source.items() if name != "reactions"})
        for source in tables["references"]
        if key in source.get("reactions", [key])
    )
