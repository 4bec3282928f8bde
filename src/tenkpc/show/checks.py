"""Cross sections beside what was measured with beams, reactors and the Sun."""

from __future__ import annotations

import json
import math
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import asdict, dataclass
from types import MappingProxyType
from typing import Any

import numpy as np
from numpy.polynomial.polynomial import polyval
from numpy.typing import NDArray

from tenkpc import data, interactions, rendering
from tenkpc.constants import CHARGED_PION_MASS_MEV, ELECTRON_MASS_MEV, MUON_MASS_MEV
from tenkpc.detector import materials
from tenkpc.errors import ComputationError, UnknownNameError
from tenkpc.interactions.base import Interaction
from tenkpc.quadrature import gauss
from tenkpc.rendering import Page, Paragraph, Row, Rule, Table

Floats = NDArray[np.float64]

STOPPED_MUON_END_MEV = MUON_MASS_MEV / 2
# of the pion's decay at rest, π⁺ → μ⁺ + νμ
PION_LINE_MEV = (CHARGED_PION_MASS_MEV**2 - MUON_MASS_MEV**2) / (2 * CHARGED_PION_MASS_MEV)
# of neutrino and positron together: one allowed decay with the mean energy of boron-8
BORON_END_MEV = 13.006
REACTOR_MEV = (1.8, 10.0)
# files in data/measurements that hold no averages
INPUTS = ("reactor_spectra",)
ORDER = 96


@dataclass(frozen=True)
class Check:
    """A measured average and ours, both in ``unit_cm2``, with the pull (ours − measured)/error."""

    name: str
    interaction: str
    quantity: str
    unit_cm2: float
    measured: float
    error: float
    ours: float

    @property
    def pull(self) -> float:
        """How many standard deviations ours lies above."""
        return (self.ours - self.measured) / self.error


def all_checks(key: str | None = None) -> tuple[Check, ...]:
    """Every measured average, or those of one interaction.

    Raises
    ------
    UnknownNameError
        where there is no such interaction.
    """
    if key is not None and key not in interactions.KEYS:
        kind = "interaction"
        raise UnknownNameError(kind, key, interactions.KEYS)
    found = (check for check in _checks() if key in (None, check.interaction))
    return tuple(sorted(found, key=lambda check: check.interaction))


def as_text(key: str | None = None) -> str:
    """Print the checks of all interactions or of one."""
    return rendering.text(_page(all_checks(key)))


def as_json(key: str | None = None) -> str:
    """Give the checks as JSON text."""
    rows = [{**asdict(check), "pull": check.pull} for check in all_checks(key)]
    return json.dumps(rows, ensure_ascii=False, indent=2)


def _page(checks: tuple[Check, ...]) -> Page:
    if not checks:
        return [Paragraph("No measurement is known here for this interaction.")]
    rows: list[Row] = []
    for check in checks:
        equation = interactions.by_key(check.interaction).equation
        if equation not in [row.cells[0] for row in rows if row.level == 0]:
            rows.append(Row((equation,)))
        digits = max(0, 1 - math.floor(math.log10(check.error)))
        cells = [f"{check.measured:.{digits}f}", f"± {check.error:.{digits}f}"]
        cells += [f"{check.ours:.{digits}f}", f"{check.unit_cm2:.0e}", f"{check.pull:+.1f} σ"]
        rows.append(Row((check.name, *cells), level=1))
    titles = ("measured with", "value", "error", "ours", "unit/cm²", "pull")
    notes = dict.fromkeys(f"{check.name}: {check.quantity}." for check in checks)
    return [Table(tuple(rows), titles), Rule(), *(Paragraph(n, small=True) for n in notes)]


def _checks() -> Iterator[Check]:
    for file in data.names("measurements"):
        if file not in INPUTS:
            entries = data.document(f"measurements/{file}.toml")
            yield from (_check(name, e) for name, e in entries.items() if name != "provenance")


def _check(name: str, entry: Mapping[str, Any]) -> Check:
    ours = _ours(entry, entry.get("option"))
    if "over_option" in entry:
        ours /= _ours(entry, entry["over_option"])
    ours /= entry["unit_cm2"]
    value = entry["value"]
    below = "error_down" if ours < value else "error_up"
    errors = ("error", "error_statistical", "error_systematic", below)
    error = math.hypot(
        *(entry.get(key, 0.0) for key in errors), entry.get("spectrum_error", 0.0) * ours
    )
    return Check(
        name, entry["interaction"], entry["quantity"], entry["unit_cm2"], value, error, ours
    )


def _ours(entry: Mapping[str, Any], option: str | None) -> float:
    """Our sum, or mean, over the spectra of an entry, in cm²."""
    spectra = entry["spectra"].items()
    total = sum(_average(entry, option, species, spectrum) for species, spectrum in spectra)
    return total / (len(spectra) if entry.get("mean") else 1)


def _average(entry: Mapping[str, Any], option: str | None, species: str, spectrum: str) -> float:
    """Average over a spectrum of the wanted final states, or of σ/E, in cm²."""
    wanted = entry.get("final_states")
    _all_there(entry, option, species, wanted)
    energy, weight = SPECTRA[spectrum](entry)
    if entry.get("per_energy"):
        weight = weight / (weight @ energy)
    return float(
        sum(
            share * (weight @ state.sigma_cm2(energy))
            for share, made in _reactions(entry, option)
            for state in made.final_states(species)
            if wanted is None or state.label in wanted
        )
    )


def _all_there(
    entry: Mapping[str, Any], option: str | None, species: str, wanted: Sequence[str] | None
) -> None:
    """Refuse labels that no final state has, which would count as nothing."""
    labels = {s.label for _, made in _reactions(entry, option) for s in made.final_states(species)}
    if not labels.issuperset(wanted or ()):
        message = f"no final states of {entry['interaction']} are called {wanted}"
        raise ComputationError(message)


def _reactions(entry: Mapping[str, Any], option: str | None) -> Iterator[tuple[float, Interaction]]:
    """Give the interaction of an entry, or that on each nucleus of a substance with its share."""
    made = interactions.by_key(entry["interaction"], option)
    if made.of_nucleus is None:
        yield 1.0, made
        return
    per_kg = materials.of_formula(entry["substance"]).nuclei_per_kg
    for nuclide, count in per_kg.items():
        reaction = made.on(materials.nucleus(nuclide))
        if reaction is not None:
            yield count / math.fsum(per_kg.values()), reaction


def _stopped_muon(shape: Callable[[Floats], Floats]) -> tuple[Floats, Floats]:
    x, w = gauss(ORDER)
    return x * STOPPED_MUON_END_MEV, w * shape(x)


def _line(energy_mev: float) -> tuple[Floats, Floats]:
    return np.array([energy_mev]), np.ones(1)


def _boron_8(low_mev: float = 0.0, high_mev: float = BORON_END_MEV) -> tuple[Floats, Floats]:
    """Approximate spectrum of solar boron-8: good to 5 % in an average that rises as E²."""
    x, w = gauss(ORDER)
    energy = low_mev + x * (min(high_mev, BORON_END_MEV) - low_mev)
    kinetic = BORON_END_MEV - energy
    electron = kinetic + ELECTRON_MASS_MEV
    shape = energy**2 * electron * np.sqrt(kinetic * (electron + ELECTRON_MASS_MEV)) * w
    return energy, shape / shape.sum()


def _reactor(fractions: Mapping[str, float]) -> tuple[Floats, Floats]:
    """Antineutrinos per fission of a mixture of isotopes."""
    x, w = gauss(ORDER)
    low, high = REACTOR_MEV
    energy = low + (high - low) * x
    spectra = data.document("measurements/reactor_spectra.toml")
    per_fission = sum(
        share * np.exp(polyval(energy, np.array(spectra[isotope])))
        for isotope, share in fractions.items()
    )
    return energy, np.asarray(per_fission * w * (high - low))


# energies in MeV and weights that sum over a spectrum, by its name in the files
SPECTRA: Mapping[str, Callable[[Mapping[str, Any]], tuple[Floats, Floats]]] = MappingProxyType(
    {
        "stopped muon nu_e": lambda _: _stopped_muon(lambda x: 12 * x**2 * (1 - x)),
        "stopped muon anti_nu_mu": lambda _: _stopped_muon(lambda x: 2 * x**2 * (3 - 2 * x)),
        "stopped pion line": lambda _: _line(PION_LINE_MEV),
        "solar boron-8": lambda entry: _boron_8(*entry.get("between_mev", ())),
        "5 GeV": lambda _: _line(5000.0),
        "reactor mixture": lambda entry: _reactor(entry["fission_fractions"]),
    }
)
