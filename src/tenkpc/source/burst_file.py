"""The burst file: which keys there are, in which units, and which rules tie them together.

A burst is a sum of ``[[component]]`` tables, each of one ``kind``. All luminosities and energies
are of ONE neutrino kind ("each"); ``nu_x`` is each of the muon and the tau neutrino.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from typing import Annotated, Any, Generic, Literal, TypeVar

from pydantic import Field

from tenkpc.fields import Fraction, InUnit
from tenkpc.textfiles import Strict

Problems = Iterable[tuple[tuple[str | int, ...], str]]

Time = Annotated[float, InUnit("s", "5 ms")]
Span = Annotated[float, InUnit("s", "30 ms", above=0.0)]
SpectralEnergy = Annotated[float, InUnit("MeV", "12 MeV", above=0.0)]
Luminosity = Annotated[float, InUnit("erg/s", "4e52 erg/s", minimum=0.0)]
TotalEnergy = Annotated[float, InUnit("erg", "5e52 erg", minimum=0.0)]
Pinching = Annotated[float, Field(gt=-1, le=100)]
Degeneracy = Annotated[float, Field(ge=-100, le=1000)]
Power = Annotated[float, Field(ge=0, le=20)]
Sharpness = Annotated[float, Field(gt=0)]

T = TypeVar("T")
FourValues = tuple[float, float, float, float]


class BySpecies(Strict, Generic[T]):
    """A value for each species; `anti_nu_x` left out is the same as `nu_x`."""

    nu_e: T
    anti_nu_e: T
    nu_x: T
    anti_nu_x: T | None = None

    def values(self) -> tuple[T, T, T, T]:
        """Values in the order of `tenkpc.species.SPECIES`."""
        anti_nu_x = self.nu_x if self.anti_nu_x is None else self.anti_nu_x
        return self.nu_e, self.anti_nu_e, self.nu_x, anti_nu_x


class Emission(Strict, Generic[T]):
    """A luminosity or energy of ONE kind of each species, or the sum of the four x kinds."""

    nu_e: T
    anti_nu_e: T
    nu_x: T | None = None
    anti_nu_x: T | None = None
    nu_x_sum_of_four: T | None = None

    @classmethod
    def cross_rules(cls, raw: Mapping[str, Any]) -> Problems:
        """One way to give the x species."""
        if "nu_x_sum_of_four" in raw:
            for key in ("nu_x", "anti_nu_x"):
                if key in raw:
                    yield (key,), "nu_x_sum_of_four sets nu_x and anti_nu_x; give only one of them"
        elif "nu_x" not in raw:
            yield (), "nu_x is missing: give nu_x (each of the kinds) or nu_x_sum_of_four"


class PeakKeys(Strict):
    """`kind = "peak"`: the peak of electron neutrinos just after bounce."""

    name: Annotated[str, Field(min_length=1)]
    kind: Literal["peak"]
    peak_luminosity: Luminosity
    peak_time: Time
    rise_time: Span
    fall_time: Span
    mean_energy: SpectralEnergy
    pinching: Pinching


# what a cooling core needs, all of it or nothing
COOLING = (
    "cooling_luminosity_each",
    "cooling_mean_energy",
    "cooling_pinching",
    "cooling_plateau",
    "cooling_power",
    "cooling_time",
    "cooling_sharpness",
    "cooling_energy_time",
    "cooling_energy_power",
)


class CoreKeys(Strict):
    """`kind = "core"`: accretion that passes over into cooling."""

    name: Annotated[str, Field(min_length=1)]
    kind: Literal["core"]
    rise_time: Span
    accretion_luminosity_each: Emission[Luminosity]
    accretion_growth: BySpecies[Annotated[float, Field(ge=-1)]] | None = None
    accretion_time: Span | None = None
    accretion_sharpness: Sharpness | None = None
    growth_time: Span | None = None
    mean_energy: BySpecies[SpectralEnergy]
    mean_energy_end: BySpecies[SpectralEnergy] | None = None
    pinching: BySpecies[Pinching]
    cooling_luminosity_each: Emission[Luminosity] | None = None
    cooling_scale: Annotated[float, Field(ge=0)] = 1.0
    cooling_plateau: Span | None = None
    cooling_power: Power | None = None
    cooling_time: Span | None = None
    cooling_sharpness: Sharpness | None = None
    cooling_mean_energy: BySpecies[SpectralEnergy] | None = None
    cooling_energy_time: Span | None = None
    cooling_energy_power: Power | None = None
    cooling_pinching: BySpecies[Pinching] | None = None
    cut_at: Span | None = None
    cut_fall_time: Span | None = None

    @classmethod
    def cross_rules(cls, raw: Mapping[str, Any]) -> Problems:
        """Keys that need one another."""
        yield from _all_or_none(raw, COOLING)
        yield from _all_or_none(raw, ("accretion_time", "accretion_sharpness"))
        yield from _all_or_none(raw, ("cut_at", "cut_fall_time"))
        if "accretion_time" in raw and not any(key in raw for key in COOLING):
            yield (
                ("accretion_time",),
                "accretion that ends passes over into cooling: give cooling_…",
            )
        if "accretion_time" not in raw and "growth_time" not in raw:
            for key in ("accretion_growth", "mean_energy_end"):
                if key in raw:
                    yield (key,), "needs growth_time, since without accretion_time nothing ends it"


def _all_or_none(raw: Mapping[str, Any], keys: tuple[str, ...]) -> Iterator[Any]:
    given = [key for key in keys if key in raw]
    for key in keys:
        if given and key not in raw:
            yield (key,), f"is missing; it belongs with {given[0]}"


class IntegratedKeys(Strict):
    """`kind = "integrated"`: energies and spectra of the whole burst, without times."""

    name: Annotated[str, Field(min_length=1)]
    kind: Literal["integrated"]
    energy_each: Emission[TotalEnergy]
    mean_energy: BySpecies[SpectralEnergy] | None = None
    pinching: BySpecies[Pinching] | None = None
    temperature: BySpecies[SpectralEnergy] | None = None
    degeneracy: BySpecies[Degeneracy] | None = None

    @classmethod
    def cross_rules(cls, raw: Mapping[str, Any]) -> Problems:
        """One way to give the spectra."""
        pinched = [key for key in ("mean_energy", "pinching") if key in raw]
        thermal = [key for key in ("temperature", "degeneracy") if key in raw]
        ways = "give mean_energy and pinching, or temperature and degeneracy"
        if pinched and thermal:
            yield (thermal[0],), f"a spectrum is given in one way only: {ways}"
        elif not pinched and not thermal:
            yield (), f"no spectrum is given: {ways}"
        elif pinched:
            yield from _all_or_none(raw, ("mean_energy", "pinching"))
        else:
            yield from _all_or_none(raw, ("temperature", "degeneracy"))


class TwoPhaseKeys(Strict):
    """`kind = "two-phase"`: accretion by positrons on neutrons, then a cooling thermal sphere."""

    name: Annotated[str, Field(min_length=1)]
    kind: Literal["two-phase"]
    rise_time: Span
    accreting_solar_masses: Annotated[float, Field(gt=0, le=10)]
    neutron_fraction: Fraction
    accretion_temperature: SpectralEnergy
    accretion_time: Span
    accretion_sharpness: Sharpness
    warming_power: Annotated[float, Field(gt=0, le=20)]
    cooling_radius: Annotated[float, InUnit("cm", "15 km", above=0.0)]
    cooling_temperature: SpectralEnergy
    cooling_time: Span
    x_temperature_ratio: Annotated[float, Field(gt=0, le=10)] = 1.0


class LongCoolingKeys(Strict):
    """`kind = "long-cooling"`: a neutron star that cools for minutes, all kinds alike."""

    name: Annotated[str, Field(min_length=1)]
    kind: Literal["long-cooling"]
    begins_at: Time
    solar_masses: Annotated[float, Field(gt=0, le=10)]
    radius: Annotated[float, InUnit("cm", "12 km", above=0.0)]
    total_energy: Annotated[float, InUnit("erg", "1e53 erg", above=0.0)]
    density_correction: Annotated[float, Field(gt=0, le=10)]
    opacity_boost: Annotated[float, Field(gt=0, le=1000)]
    pinching: Pinching


AnyKeys = PeakKeys | CoreKeys | IntegratedKeys | LongCoolingKeys | TwoPhaseKeys
ComponentKeys = Annotated[AnyKeys, Field(discriminator="kind")]


class NeutronStarKeys(Strict):
    """`[neutron_star]`: what is left, whose binding energy the burst may not exceed."""

    solar_masses: Annotated[float, Field(gt=0, le=3)]
    radius: Annotated[float, InUnit("cm", "12 km", minimum=9e5)]


class BurstKeys(Strict):
    """A whole burst file."""

    title: Annotated[str, Field(min_length=1)]
    about: str = ""
    start: Time = -0.03
    end: Time = 80.0
    neutron_star: NeutronStarKeys | None = None
    component: tuple[ComponentKeys, ...]

    @classmethod
    def cross_rules(cls, raw: Mapping[str, Any]) -> Problems:
        """Names that differ, and components that are all of one nature."""
        given = raw.get("component")
        if given == []:
            yield ("component",), "a burst needs at least one [[component]]"
        found = given if isinstance(given, list) else []
        tables = [table if isinstance(table, dict) else {} for table in found]
        kinds = {str(table["kind"]) for table in tables if "kind" in table}
        names: set[object] = set()
        for place, table in enumerate(tables):
            name = str(table.get("name", ""))
            if name and name in names:
                yield ("component", place, "name"), f"two components are called {name!r}"
            names.add(name)
            if table.get("kind") == "integrated" and len(kinds) > 1:
                message = "a burst is integrated over time in all its components or in none"
                yield ("component", place, "kind"), message
