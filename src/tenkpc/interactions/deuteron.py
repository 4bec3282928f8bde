"""The deuteron: two protons and an electron, two neutrons and a positron, or breakup.

Cross sections are a table, interpolated as ln σ against ln(E − threshold). The two nucleons keep
an energy ε between them, so that the lepton has T = E − threshold − ε, distributed as

    dσ/dT ∝ p E_l √ε / [(ε + b)² (ε + ε_s)],    ε_s = ħ²/(M a²)

which is the wave function of the deuteron seen through the attraction of two nucleons of
scattering length a (S. D. Ellis and J. N. Bahcall, Nucl. Phys. A 114 (1968) 636, from memory,
where b is the binding energy); here b grows with the neutrino's energy so that the lepton's mean
energy is the computed one.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property, partial

import numpy as np
from numpy.typing import ArrayLike, NDArray

from tenkpc.constants import (
    ELECTRON_MASS_MEV,
    HBAR_C_MEV_CM,
    NEUTRON_MASS_MEV,
    PROTON_MASS_MEV,
)
from tenkpc.interactions.base import (
    FinalState,
    Fixed,
    Interaction,
    OfEnergy,
    Reference,
    Spread,
    piecewise,
)
from tenkpc.interpolation import Monotone
from tenkpc.quadrature import gauss
from tenkpc.species import SPECIES

Floats = NDArray[np.float64]

ISOTOPE = "H-2"
END_MEV = 100.0
UNIT_CM2 = 1e-42
# nodes over ε, in its root: 1e-8 of the norm
NODES = 48
# knots of the norm against the energy above the threshold, MeV: 1e-5 between them
NORM_MEV, NORM_KNOTS = (1e-6, 250.0), 3000
# the two nucleons attract each other below this energy, MeV
STEEP_MEV = 3.0
# between these b is sought, MeV
LEAST_B_MEV, MOST_B_MEV, HALVINGS = 1e-3, 1e3, 60

REFERENCES = (
    Reference(
        "S. Nakamura, T. Sato, S. Ando, T.-S. Park, F. Myhrer, V. Gudkov and K. Kubodera",
        "Nucl. Phys. A 707 (2002) 561, arXiv:nucl-th/0201062",
        "values at low energy that the table is held against, from memory",
    ),
    Reference(
        "A. Kurylov, M. J. Ramsey-Musolf and P. Vogel",
        "Phys. Rev. C 65 (2002) 055501, arXiv:nucl-th/0110051",
        "radiative correction, from memory",
    ),
    Reference(
        "S. D. Ellis and J. N. Bahcall",
        "Nucl. Phys. A 114 (1968) 636",
        "shape of the lepton's spectrum, from memory",
    ),
)


@dataclass(frozen=True)
class Table:
    """A cross section as a table.

    Attributes
    ----------
    threshold_mev
        neutrino energy at which it opens, MeV.
    energy_mev, sigma
        knots: energies in MeV, and σ in 1e-42 cm².
    error_mev, error
        1σ of ln σ at some neutrino energies.
    """

    threshold_mev: float
    energy_mev: tuple[float, ...]
    sigma: tuple[float, ...]
    error_mev: tuple[float, ...]
    error: tuple[float, ...]

    def sigma_cm2(self, neutrino_mev: ArrayLike) -> Floats:
        """σ in cm² for each deuteron: zero below the threshold, held above 100 MeV."""
        energy = np.minimum(np.asarray(neutrino_mev, dtype=float), END_MEV)
        opened = energy > self.threshold_mev
        above = np.log(np.where(opened, energy - self.threshold_mev, 1.0))
        return np.where(opened, UNIT_CM2 * np.exp(self._curve(above)), 0.0)

    @cached_property
    def _curve(self) -> Monotone:
        knots = [(e, s) for e, s in zip(self.energy_mev, self.sigma, strict=True) if s > 0]
        energies, values = np.array(knots).T
        return Monotone.through(np.log(energies - self.threshold_mev), np.log(values))


@dataclass(frozen=True)
class Lepton:
    """What is known of the lepton that leaves.

    Attributes
    ----------
    energy_mev
        neutrino energies, MeV.
    mean_mev, cosine
        mean total energy of the lepton in MeV, and mean cosine to the neutrino, at these.
    scattering_length_fm
        a of the two nucleons that are left, fm.
    """

    energy_mev: tuple[float, ...]
    mean_mev: tuple[float, ...]
    cosine: tuple[float, ...]
    scattering_length_fm: float


class Spectrum:
    """Distribution of the lepton's kinetic energy."""

    def __init__(self, table: Table, lepton: Lepton) -> None:
        self.table = table
        length = lepton.scattering_length_fm * 1e-13 / HBAR_C_MEV_CM
        nucleon = 0.5 * (PROTON_MASS_MEV + NEUTRON_MASS_MEV)
        self.virtual_mev = 1 / (nucleon * length**2)
        energies = np.array(lepton.energy_mev)
        wanted = energies - table.threshold_mev + ELECTRON_MASS_MEV - np.array(lepton.mean_mev)
        self.curve = Monotone.through(energies, np.log(self._solved(energies, wanted)))
        above = np.geomspace(*NORM_MEV, NORM_KNOTS)
        norms = self._moments(above + table.threshold_mev, self._b(above + table.threshold_mev))[0]
        self.norm = Monotone.through(np.log(above), np.log(norms))

    def differential(self, neutrino_mev: Floats, kinetic_mev: Floats) -> Floats:
        """dσ/dT in cm²/MeV where the neutrino's energy suffices."""
        b = self._b(neutrino_mev)
        above = np.maximum(neutrino_mev - self.table.threshold_mev, NORM_MEV[0])
        norm = np.exp(self.norm(np.log(above)))
        pair = np.maximum(neutrino_mev - self.table.threshold_mev - kinetic_mev, 0.0)
        shape = np.sqrt(pair) * self._rest(pair, kinetic_mev, b)
        result: Floats = self.table.sigma_cm2(neutrino_mev) / norm * shape
        return result

    def _b(self, neutrino_mev: Floats) -> Floats:
        # not held above the window: a kink there would spoil the table of the norm
        return np.exp(self.curve(neutrino_mev))

    def _rest(self, pair_mev: Floats, kinetic_mev: Floats, b: Floats) -> Floats:
        """P E_l/[(ε + b)² (ε + ε_s)]."""
        energy = kinetic_mev + ELECTRON_MASS_MEV
        p = np.sqrt(kinetic_mev * (energy + ELECTRON_MASS_MEV))
        result: Floats = p * energy / ((pair_mev + b) ** 2 * (pair_mev + self.virtual_mev))
        return result

    def _moments(self, neutrino_mev: Floats, b: Floats) -> tuple[Floats, Floats]:
        """∫ dε of the shape, and of ε times it, over all that is open."""
        x, w = gauss(NODES)
        left = np.maximum(neutrino_mev - self.table.threshold_mev, 1e-12)[..., None]
        # ε = left × x²(2 − x²): crowded at both ends, where the shape has square roots
        pair, weight = left * x**2 * (2 - x**2), left * w * 4 * x * (1 - x**2)
        density = np.sqrt(pair) * self._rest(pair, left - pair, b[..., None]) * weight
        return density.sum(axis=-1), (pair * density).sum(axis=-1)

    def _solved(self, neutrino_mev: Floats, mean_mev: Floats) -> Floats:
        """Find b, by halving, that gives the pair its mean energy."""
        low = np.full_like(neutrino_mev, np.log(LEAST_B_MEV))
        high = np.full_like(neutrino_mev, np.log(MOST_B_MEV))
        for _ in range(HALVINGS):
            middle = 0.5 * (low + high)
            norm, moment = self._moments(neutrino_mev, np.exp(middle))
            less = moment < mean_mev * norm
            low, high = np.where(less, middle, low), np.where(less, high, middle)
        return np.exp(low)


def to_two_protons(table: Table, lepton: Lepton) -> Interaction:
    """νe + d → e⁻ + p + p."""
    return _charged(
        table,
        lepton,
        "nu_e",
        lead="electron",
        neutrons=0,
        key="deuteron-to-two-protons",
        equation="νe + d → e⁻ + p + p",
    )


def to_two_neutrons(table: Table, lepton: Lepton) -> Interaction:
    """ν̄e + d → e⁺ + n + n."""
    return _charged(
        table,
        lepton,
        "anti_nu_e",
        lead="positron",
        neutrons=2,
        key="deuteron-to-two-neutrons",
        equation="ν̄e + d → e⁺ + n + n",
    )


def breakup(neutrino: Table, antineutrino: Table) -> Interaction:
    """ν + d → ν + p + n, of every species: a neutron alone."""
    plain, anti = (_broken(table) for table in (neutrino, antineutrino))
    return Interaction(
        key="deuteron-breakup",
        equation="ν + d → ν + p + n",
        target=ISOTOPE,
        threshold_mev=neutrino.threshold_mev,
        references=REFERENCES[:2],
        branches={s: (anti if s.startswith("anti_") else plain,) for s in SPECIES},
    )


def _charged(
    table: Table,
    lepton: Lepton,
    species: str,
    *,
    lead: str,
    neutrons: int,
    key: str,
    equation: str,
) -> Interaction:
    state = FinalState(
        label="two neutrons" if neutrons else "two protons",
        sigma_cm2=table.sigma_cm2,
        lead=lead,
        deposit=Spread(
            differential=Spectrum(table, lepton).differential,
            lowest_mev=partial(np.add, table.threshold_mev),
            highest_mev=partial(np.full_like, fill_value=np.inf),
            steep_mev=STEEP_MEV,
        ),
        window_mev=(table.threshold_mev, END_MEV),
        relative_error=_error(table),
        neutrons=neutrons,
        mean_cosine=partial(piecewise, knots_mev=lepton.energy_mev, values=lepton.cosine),
    )
    return Interaction(
        key=key,
        equation=equation,
        target=ISOTOPE,
        threshold_mev=table.threshold_mev,
        references=REFERENCES,
        branches={species: (state,)},
    )


def _broken(table: Table) -> FinalState:
    return FinalState(
        label="neutron and proton",
        sigma_cm2=table.sigma_cm2,
        lead="neutron",
        deposit=Fixed(0.0),
        window_mev=(table.threshold_mev, END_MEV),
        relative_error=_error(table),
        neutrons=1,
    )


def _error(table: Table) -> OfEnergy:
    return partial(piecewise, knots_mev=table.error_mev, values=table.error)
