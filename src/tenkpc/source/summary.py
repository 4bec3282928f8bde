"""What a burst emits in all, to be held against what is known of core collapses."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from tenkpc.constants import MEV_PER_ERG
from tenkpc.source.neutron_star import USUAL_LEPTONS, NeutronStar
from tenkpc.source.spectra import pinching_from_moments
from tenkpc.species import ANTI_NU_E, MULTIPLICITY, NU_E, SPECIES, SYMBOLS

Floats = NDArray[np.float64]

# A core collapse gives about 1e46 J = 1e53 erg, nearly all of it in neutrinos, most of it within
# about ten seconds; a neutron star's binding energy sets the scale (Lattimer & Prakash 2001,
# ApJ 550, 426, astro-ph/0002232). The limits leave room on both sides.
USUAL_TOTAL_ERG = (1e53, 6e53)
USUAL_MEAN_ENERGY_MEV = (5.0, 30.0)


@dataclass(frozen=True)
class Summary:
    """Time-integrated emission, by species, of ONE neutrino kind each.

    Mean energies are number-weighted; the effective pinching follows from the summed moments
    and is smaller than the pinching at any one time, because a mixture is broader than its parts.

    Attributes
    ----------
    title
        of the burst.
    energy_erg, number
        emitted energy in erg and number of neutrinos, by species.
    mean_energy_mev, pinching
        mean energy and effective pinching, by species; not a number where nothing is emitted.
    star
        the neutron star that is left, where it is known.
    """

    title: str
    energy_erg: tuple[float, ...]
    number: tuple[float, ...]
    mean_energy_mev: tuple[float, ...]
    pinching: tuple[float, ...]
    star: NeutronStar | None = None

    @classmethod
    def from_moments(cls, title: str, moments: Floats, star: NeutronStar | None = None) -> Summary:
        """Summarise the emitted Σ Eⁿ, n = 0, 1, 2, shape (3, 4), in MeVⁿ."""
        number, energy, square = moments
        emits = number > 0
        mean, pinching = np.full(len(SPECIES), np.nan), np.full(len(SPECIES), np.nan)
        mean[emits] = energy[emits] / number[emits]
        pinching[emits] = pinching_from_moments(mean[emits], square[emits] / number[emits])
        columns = (energy / MEV_PER_ERG, number, mean, pinching)
        first, second, third, fourth = (tuple(map(float, column)) for column in columns)
        return cls(title, first, second, third, fourth, star)

    @property
    def total_energy_erg(self) -> float:
        """Energy of all six neutrino kinds together, erg."""
        return float(MULTIPLICITY @ np.array(self.energy_erg))

    @property
    def rms_energy_mev(self) -> tuple[float, ...]:
        """Root mean square energy by species, MeV: ⟨E⟩ √((2+α)/(1+α))."""
        pairs = zip(self.mean_energy_mev, self.pinching, strict=True)
        return tuple(mean * ((2 + alpha) / (1 + alpha)) ** 0.5 for mean, alpha in pairs)

    @property
    def net_lepton_number(self) -> float:
        """Electron neutrinos less their antineutrinos: the lepton number that the core loses."""
        return self.number[NU_E] - self.number[ANTI_NU_E]

    @property
    def warnings(self) -> tuple[str, ...]:
        """Plain sentences about what is unusual for a core collapse; empty if nothing is."""
        return tuple(self._warnings())

    def _warnings(self) -> Iterator[str]:
        low, high = USUAL_TOTAL_ERG
        if not low <= self.total_energy_erg <= high:
            yield (
                f"All six neutrino kinds together carry {self.total_energy_erg:.3g} erg; a core "
                f"collapse gives {low:.0e} to {high:.0e} erg. Is an energy per kind taken for a "
                "sum, or the reverse?"
            )
        yield from self._beyond_the_star()
        least, most = USUAL_MEAN_ENERGY_MEV
        for name, mean in zip(SPECIES, self.mean_energy_mev, strict=True):
            if mean < least or mean > most:
                yield (
                    f"The mean energy of {name} is {mean:.3g} MeV; {least:g} to {most:g} MeV is "
                    "usual. Is a temperature taken for a mean energy, or the reverse?"
                )

    def _beyond_the_star(self) -> Iterator[str]:
        """Say where the burst gives more than the star that it leaves has lost."""
        if self.star is None:
            return
        most, fewest, highest = self.star.highest_binding_energy_erg, *USUAL_LEPTONS
        if self.total_energy_erg > most:
            yield (
                f"The burst carries {self.total_energy_erg:.3g} erg, more than the binding energy "
                f"of its neutron star, {self.star.binding_energy_erg:.3g} erg (at most {most:.3g})."
            )
        leptons = self.net_lepton_number / self.star.baryons
        if not fewest <= leptons <= highest:
            yield (
                f"The burst carries away {leptons:.2g} leptons for each baryon of its neutron "
                f"star; {fewest:g} to {highest:g} is usual."
            )

    def _of_star(self) -> Iterator[str]:
        if self.star is not None:
            bound = self.star.binding_energy_erg
            yield (
                f"of the neutron star's binding energy, {bound:.4g} erg: "
                f"{100 * self.total_energy_erg / bound:.0f} %; "
                f"leptons per baryon: {self.net_lepton_number / self.star.baryons:.3f}"
            )

    def __str__(self) -> str:
        head = f"{'one kind of':<12}{'energy':>12}{'number':>12}{'mean energy':>14}{'pinching':>10}"
        lines = [self.title, "", head, f"{'':<12}{'erg':>12}{'':>12}{'MeV':>14}"]
        rows = zip(
            SPECIES, self.energy_erg, self.number, self.mean_energy_mev, self.pinching, strict=True
        )
        for name, energy, number, mean, pinching in rows:
            label = f"{name:<10}"
            lines.append(f"{label:<12}{energy:>12.3e}{number:>12.3e}{mean:>14.2f}{pinching:>10.2f}")
        lines += [
            "",
            f"all six kinds: {self.total_energy_erg:.4g} erg; "
            f"{SYMBOLS['nu_e']} less {SYMBOLS['anti_nu_e']}: {self.net_lepton_number:.3e}",
            *self._of_star(),
            *self.warnings,
        ]
        return "\n".join(line for text in lines for line in _wrapped(text))

    __repr__ = __str__


def _wrapped(text: str, width: int = 78) -> Iterator[str]:
    line = text
    while len(line) > width:
        cut = line.rfind(" ", 0, width)
        yield line[:cut].rstrip()
        line = line[cut + 1 :]
    yield line.rstrip()
