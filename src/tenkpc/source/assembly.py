"""From the checked keys of a burst file to components: units, what is left out, and notes."""

from __future__ import annotations

import math
from collections.abc import Iterator

from tenkpc.constants import MEV_PER_ERG
from tenkpc.source.burst_file import (
    AnyKeys,
    BurstKeys,
    BySpecies,
    CoreKeys,
    Emission,
    FourValues,
    IntegratedKeys,
    LongCoolingKeys,
    PeakKeys,
    TwoPhaseKeys,
)
from tenkpc.source.components import Core, Flowing, Integrated, Peak, Pinched, Thermal
from tenkpc.source.long_cooling import LongCooling
from tenkpc.source.neutron_star import NeutronStar
from tenkpc.source.two_phase import TwoPhase

NOTHING: FourValues = (0.0, 0.0, 0.0, 0.0)


def component(keys: AnyKeys) -> Flowing | Integrated:
    """Build the component that a table of the file describes."""
    match keys:
        case PeakKeys():
            return _peak(keys)
        case CoreKeys():
            return _core(keys)
        case TwoPhaseKeys():
            return _two_phase(keys)
        case LongCoolingKeys():
            return _long_cooling(keys)
        case IntegratedKeys():
            return _integrated(keys)


def star(keys: BurstKeys) -> NeutronStar | None:
    """Give the neutron star that is left, where the file says which."""
    given = keys.neutron_star
    return None if given is None else NeutronStar(given.solar_masses, given.radius)


def notes(keys: BurstKeys) -> Iterator[str]:
    """Say where one value was taken for more than the species it was given for."""
    doubled = [table.name for table in keys.component if any(_doubled(table))]
    if doubled:
        names = " and ".join(doubled)
        yield f"nu_x is given without anti_nu_x and sets both, each of four kinds ({names})"
    summed = [table.name for table in keys.component if any(_summed(table))]
    if summed:
        names = " and ".join(summed)
        yield f"nu_x_sum_of_four is divided by four for nu_x and anti_nu_x each ({names})"


def _doubled(keys: AnyKeys) -> Iterator[bool]:
    for _, value in keys:
        if isinstance(value, BySpecies | Emission):
            yield value.nu_x is not None and value.anti_nu_x is None


def _summed(keys: AnyKeys) -> Iterator[bool]:
    for _, value in keys:
        yield isinstance(value, Emission) and value.nu_x_sum_of_four is not None


def _peak(keys: PeakKeys) -> Peak:
    return Peak(
        peak_luminosity_mev_s=keys.peak_luminosity * MEV_PER_ERG,
        peak_time_s=keys.peak_time,
        rise_time_s=keys.rise_time,
        fall_time_s=keys.fall_time,
        mean_energy_mev=keys.mean_energy,
        pinching=keys.pinching,
    )


def _integrated(keys: IntegratedKeys) -> Integrated:
    spectrum: Pinched | Thermal
    if keys.mean_energy is not None:
        spectrum = Pinched(_values(keys.mean_energy), _values(keys.pinching))
    else:
        spectrum = Thermal(_values(keys.temperature), _values(keys.degeneracy))
    return Integrated(_emitted_mev(keys.energy_each), spectrum)


def _two_phase(keys: TwoPhaseKeys) -> TwoPhase:
    return TwoPhase(
        radius_cm=keys.cooling_radius,
        temperature_mev=keys.cooling_temperature,
        cooling_time_s=keys.cooling_time,
        accreting_solar_masses=keys.accreting_solar_masses,
        neutron_share=keys.neutron_fraction,
        accretion_temperature_mev=keys.accretion_temperature,
        accretion_time_s=keys.accretion_time,
        accretion_sharpness=keys.accretion_sharpness,
        warming_power=keys.warming_power,
        x_temperature_ratio=keys.x_temperature_ratio,
        rise_time_s=keys.rise_time,
    )


def _long_cooling(keys: LongCoolingKeys) -> LongCooling:
    return LongCooling(
        solar_masses=keys.solar_masses,
        radius_cm=keys.radius,
        density_correction=keys.density_correction,
        opacity_boost=keys.opacity_boost,
        total_energy_mev=keys.total_energy * MEV_PER_ERG,
        pinching=keys.pinching,
        begins_s=keys.begins_at,
    )


def _core(keys: CoreKeys) -> Core:
    accretion_s = _or(keys.accretion_time, math.inf)
    first, pinching = keys.mean_energy.values(), keys.pinching.values()
    return Core(
        accretion_mev_s=_emitted_mev(keys.accretion_luminosity_each),
        growth=_values(keys.accretion_growth, NOTHING),
        mean_energy_mev=first,
        mean_energy_end_mev=_values(keys.mean_energy_end, first),
        pinching=pinching,
        cooling_mev_s=_emitted_mev(keys.cooling_luminosity_each, keys.cooling_scale),
        cooling_mean_energy_mev=_values(keys.cooling_mean_energy, first),
        cooling_pinching=_values(keys.cooling_pinching, pinching),
        rise_time_s=keys.rise_time,
        accretion_time_s=accretion_s,
        accretion_sharpness=_or(keys.accretion_sharpness, 1.0),
        growth_time_s=_or(keys.growth_time, accretion_s),
        plateau_s=_or(keys.cooling_plateau, 1.0),
        cooling_power=_or(keys.cooling_power, 0.0),
        cooling_time_s=_or(keys.cooling_time, math.inf),
        cooling_sharpness=_or(keys.cooling_sharpness, 1.0),
        energy_time_s=_or(keys.cooling_energy_time, 1.0),
        energy_power=_or(keys.cooling_energy_power, 0.0),
        cut_at_s=_or(keys.cut_at, math.inf),
        cut_fall_time_s=_or(keys.cut_fall_time, 1.0),
    )


def _or(value: float | None, default: float) -> float:
    return default if value is None else value


def _values(given: BySpecies[float] | None, default: FourValues = NOTHING) -> FourValues:
    return default if given is None else given.values()


def _emitted_mev(given: Emission[float] | None, scale: float = 1.0) -> FourValues:
    if given is None:
        return NOTHING
    nu_x = _or(given.nu_x, _or(given.nu_x_sum_of_four, 0.0) / 4)
    factor = scale * MEV_PER_ERG
    return (
        factor * given.nu_e,
        factor * given.anti_nu_e,
        factor * nu_x,
        factor * _or(given.anti_nu_x, nu_x),
    )
