"""A cross section that a user brings as a table."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property, partial

import numpy as np
from numpy.typing import ArrayLike, NDArray

from tenkpc.interactions.base import (
    Deposit,
    FinalState,
    Fixed,
    Interaction,
    Reference,
    Shifted,
)
from tenkpc.interpolation import Monotone

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class TabulatedInputs:
    """A cross section and what leaves.

    Attributes
    ----------
    key, equation, target, species
        of the interaction, and the species that it is open to.
    energy_mev, sigma_cm2
        the table: neutrino energies, ascending, and σ per target.
    lead
        ``"electron"``, ``"positron"``, ``"gamma"`` or ``"neutron"``.
    cost_mev
        the neutrino's energy less the kinetic energy of an electron or positron, MeV.
    gamma_mev
        energy of gamma rays, alone or beside it, MeV; 0 for none.
    neutrons
        free neutrons.
    window_mev
        neutrino energies for which the table is meant; σ is held above.
    error
        1σ of ln σ.
    source
        where the table is from.
    """

    key: str
    equation: str
    target: str
    species: tuple[str, ...]
    energy_mev: tuple[float, ...]
    sigma_cm2: tuple[float, ...]
    lead: str
    cost_mev: float
    gamma_mev: float
    neutrons: int
    window_mev: tuple[float, float]
    error: float
    source: str

    def sigma(self, neutrino_mev: ArrayLike) -> Floats:
        """σ in cm²: monotone between the rows, zero below the first, held above the window."""
        energy = np.minimum(np.asarray(neutrino_mev, dtype=float), self.window_mev[1])
        opened = energy >= max(self.energy_mev[0], self.opens_mev)
        inside = self._curve(np.minimum(energy, self.energy_mev[-1]))
        return np.where(opened, np.maximum(inside, 0.0), 0.0)

    @property
    def opens_mev(self) -> float:
        """Lowest neutrino energy, MeV."""
        return self.cost_mev if self.lead in ("electron", "positron") else 0.0

    @cached_property
    def _curve(self) -> Monotone:
        return Monotone(self.energy_mev, self.sigma_cm2)


def tabulated(inputs: TabulatedInputs) -> Interaction:
    """Build the interaction: one final state, the same for every species it is open to."""
    charged = inputs.lead in ("electron", "positron")
    deposit: Deposit = Shifted(inputs.cost_mev) if charged else Fixed(inputs.gamma_mev)
    threshold = max(inputs.window_mev[0], inputs.opens_mev)
    state = FinalState(
        label="as tabulated",
        sigma_cm2=inputs.sigma,
        lead=inputs.lead,
        deposit=deposit,
        window_mev=(threshold, inputs.window_mev[1]),
        relative_error=partial(np.full_like, fill_value=inputs.error),
        extras=(("gamma", inputs.gamma_mev),) if charged and inputs.gamma_mev else (),
        neutrons=inputs.neutrons,
        breaks_mev=inputs.energy_mev,
    )
    return Interaction(
        key=inputs.key,
        equation=inputs.equation,
        target=inputs.target,
        threshold_mev=max(inputs.energy_mev[0], inputs.opens_mev),
        references=(Reference(inputs.source, "a table of the user's own", "cross section"),),
        branches=dict.fromkeys(inputs.species, (state,)),
    )
