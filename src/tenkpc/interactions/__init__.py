"""Interactions by their keys, built from the numbers in ``data/cross_sections``.

Everything below this module is a formula on floats; only here do the two meet.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from functools import lru_cache
from types import MappingProxyType
from typing import Any

from tenkpc import data
from tenkpc.errors import UnknownNameError
from tenkpc.interactions import carbon, deuteron, levels, nucleus_tables, oxygen
from tenkpc.interactions.base import Interaction
from tenkpc.interactions.coherent import EVERY_NUCLEUS, CoherentInputs, coherent_scattering
from tenkpc.interactions.electron import ElectronInputs, electron_scattering
from tenkpc.interactions.inverse_beta import inverse_beta_decay
from tenkpc.interactions.inverse_beta_kernel import InverseBetaInputs
from tenkpc.interactions.proton import ProtonInputs, proton_scattering
from tenkpc.species import SPECIES

# named options of an interaction, the default first
OPTIONS: Mapping[str, tuple[str, ...]] = MappingProxyType(
    {
        "coherent-scattering": ("tree", "radiative"),
        "electron-scattering": ("radiative", "tree"),
        "iodine-to-xenon": ("measurement-scaled", "theory"),
        "lead-to-bismuth": ("theory", "measurement-scaled"),
        "proton-scattering": ("without-strangeness", "with-strangeness"),
    }
)


# interactions for which theory and measurement disagree, each an option
DISPUTED = ("iodine-to-xenon", "lead-to-bismuth")


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
    return _BUILDERS[key](option or (options[0] if options else ""))


def _tables(name: str) -> dict[str, Any]:
    tables = data.document(f"cross_sections/{name}.toml")
    return {key: value for key, value in tables.items() if key != "provenance"}


def _inverse_beta(_: str) -> Interaction:
    couplings = _tables("weak_couplings")
    del couplings["sin2_theta_w"]
    return inverse_beta_decay(InverseBetaInputs(**couplings))


def _deuteron_table(name: str, column: str = "sigma") -> deuteron.Table:
    tables = _tables("deuteron")
    errors = tables["relative_error"]
    return deuteron.Table(
        threshold_mev=tables[name]["threshold_mev"],
        energy_mev=tuple(tables["energy_mev"]),
        sigma=tuple(tables[name][column]),
        error_mev=tuple(errors["energy_mev"]),
        error=tuple(errors["error"]),
    )


def _deuteron(
    name: str, build: Callable[[deuteron.Table, deuteron.Lepton], Interaction]
) -> Callable[[str], Interaction]:
    def built(_: str) -> Interaction:
        reaction = _tables("deuteron")[name]
        moments = {key: tuple(values) for key, values in reaction["lepton"].items()}
        lepton = deuteron.Lepton(**moments, scattering_length_fm=reaction["scattering_length_fm"])
        return build(_deuteron_table(name), lepton)

    return built


def _breakup(_: str) -> Interaction:
    return deuteron.breakup(
        _deuteron_table("breakup", "neutrino"), _deuteron_table("breakup", "antineutrino")
    )


def _electron(option: str) -> Interaction:
    inputs = ElectronInputs(
        sin2_theta_w=_tables("weak_couplings")["sin2_theta_w"]["at_z_mass"],
        relative_error=_tables("electron_scattering")["relative_error"][option],
        radiative=option == "radiative",
    )
    return electron_scattering(inputs)


def _coherent(option: str) -> Interaction:
    tables = _tables("coherent_scattering")
    couplings, errors = tables["radiative"], tables["relative_error"]
    flavours = {s: ("nu_mu", "nu_tau") if "nu_x" in s else ("nu_e",) for s in SPECIES}
    if option == "tree":
        sin2 = _tables("weak_couplings")["sin2_theta_w"]["at_zero"]
        neutron, protons = 1.0, dict.fromkeys(flavours, (4 * sin2 - 1,))
    else:
        neutron = -2 * couplings["neutron"]
        protons = {s: tuple(-2 * couplings["proton"][f] for f in flavours[s]) for s in SPECIES}
    inputs = CoherentInputs(
        neutron_charge=neutron,
        proton_charges=protons,
        **tables["helm"],
        light_radii_fm={entry["nucleus"]: entry["radius_fm"] for entry in tables["light"].values()},
        radius_error=errors["radius"],
        other_error=errors["other"][option],
    )
    return coherent_scattering(inputs)


def _proton(option: str) -> Interaction:
    couplings, tables = _tables("weak_couplings"), _tables("proton_scattering")
    inputs = ProtonInputs(
        sin2_theta_w=couplings["sin2_theta_w"]["at_zero"],
        axial_coupling=couplings["axial_coupling"],
        strange_coupling=tables["strange_coupling"][option],
        axial_mass_mev=couplings["axial_mass_mev"],
        vector_mass_squared_mev2=couplings["vector_mass_squared_mev2"],
        relative_error=tables["relative_error"][option],
    )
    return proton_scattering(inputs)


def _carbon(build: Callable[[carbon.CarbonInputs], Interaction]) -> Callable[[str], Interaction]:
    def built(_: str) -> Interaction:
        couplings, tables = _tables("weak_couplings"), _tables("carbon_12")
        two_ft, log_ft = tables["twice_superallowed_ft_s"], tables.pop("log_ft")
        errors = tables.pop("relative_error")
        inputs = carbon.CarbonInputs(
            **tables,
            error_mev=tuple(errors["energy_mev"]),
            charged_error=tuple(errors["charged"]),
            neutral_error=tuple(errors["neutral"]),
            excited_error=errors["excited"],
            # 3 is the ratio of spins of a 1⁺ and a 0⁺ level
            strength={name: 3 * two_ft / 10**value for name, value in log_ft.items()},
            axial_coupling=couplings["axial_coupling"],
            sin2_theta_w=couplings["sin2_theta_w"]["at_zero"],
        )
        return build(inputs)

    return built


def _oxygen(build: Callable[[oxygen.OxygenInputs], Interaction]) -> Callable[[str], Interaction]:
    def built(_: str) -> Interaction:
        tables = _tables("oxygen_16")
        gammas, errors = tables["gammas"], tables["relative_error"]
        inputs = oxygen.OxygenInputs(
            groups=tables["groups"],
            gamma_scale_cm2=gammas["scale_cm2"],
            gamma_threshold_mev=gammas["threshold_mev"],
            lines=tuple(oxygen.Line(**line) for line in gammas["lines"]),
            error_mev=tuple(errors["energy_mev"]),
            charged_error=tuple(errors["charged"]),
            gamma_error=errors["gammas"],
        )
        return build(inputs)

    return built


def _levels(
    key: str, build: Callable[[levels.LevelInputs], Interaction]
) -> Callable[[str], Interaction]:
    def built(_: str) -> Interaction:
        couplings, tables = _tables("weak_couplings"), _tables("rare_isotopes")
        ft, reaction = tables["twice_superallowed_ft_s"], tables[key]
        inputs = levels.LevelInputs(
            charge=reaction["charge"],
            nucleons=reaction["nucleons"],
            levels=tuple(_level(level, ft) for level in reaction["levels"]),
            twice_superallowed_ft_s=ft,
            axial_coupling=couplings["axial_coupling"],
            sin2_theta_w=couplings["sin2_theta_w"]["at_zero"],
            oscillator_fm=tables["oscillator_fm"],
        )
        return build(inputs)

    return built


def _level(table: Mapping[str, Any], two_ft: float) -> levels.Level:
    """Level of a table; its strength is given, or follows from the ft value of a decay."""
    fermi, strength = table.get("fermi", 0.0), table.get("strength", 0.0)
    if "ft_s" in table:  # between the two halves of a doublet: 2Ft/ft = B(F) + S
        strength = two_ft / table["ft_s"] - fermi
    elif "log_ft" in table:  # 1⁺ to 0⁺, whose spins have the ratio 3
        strength = 3 * two_ft / 10 ** table["log_ft"]
    return levels.Level(
        label=table["label"],
        opens_mev=table["opens_mev"],
        strength=strength,
        fermi=fermi,
        proton_mev=table.get("proton_mev", 0.0),
        gamma_mev=table.get("gamma_mev", 0.0),
        error_mev=tuple(table["error_mev"]),
        error=tuple(table["error"]),
    )


def _nucleus(name: str, key: str) -> Callable[[str], Interaction]:
    def built(option: str) -> Interaction:
        return nucleus_tables.reaction(_nuclei(name), key, option, couplings())

    return built


def couplings() -> nucleus_tables.Couplings:
    """Give the couplings that reactions of nuclei share."""
    tables = _tables("weak_couplings")
    return nucleus_tables.Couplings(
        tables["v_ud"], tables["axial_coupling"], tables["sin2_theta_w"]["at_zero"]
    )


def _nuclei(name: str) -> Mapping[str, Any]:
    return data.document(f"nuclei/{name}.toml")


# file and element of each reaction of a nucleus that is known by its strength
_NUCLEI: Mapping[str, tuple[str, str]] = MappingProxyType(
    {
        "argon-excited": ("argon", "Ar"),
        "argon-to-chlorine": ("argon", "Ar"),
        "argon-to-potassium": ("argon", "Ar"),
        "iodine-to-xenon": ("iodine", "I"),
        "iron-excited": ("iron", "Fe"),
        "iron-to-cobalt": ("iron", "Fe"),
        "iron-to-manganese": ("iron", "Fe"),
        "lead-excited": ("lead", "Pb"),
        "lead-to-bismuth": ("lead", "Pb"),
    }
)
_OTHERS: Mapping[str, Callable[[str], Interaction]] = MappingProxyType(
    {
        "carbon-12-excited": _carbon(carbon.excited),
        "carbon-12-to-boron-12": _carbon(carbon.to_boron),
        "carbon-12-to-nitrogen-12": _carbon(carbon.to_nitrogen),
        "carbon-13-excited": _levels("carbon-13-excited", levels.carbon_13_excited),
        "carbon-13-to-nitrogen-13": _levels(
            "carbon-13-to-nitrogen-13", levels.carbon_13_to_nitrogen
        ),
        "coherent-scattering": _coherent,
        "deuteron-breakup": _breakup,
        "deuteron-to-two-neutrons": _deuteron("to_two_neutrons", deuteron.to_two_neutrons),
        "deuteron-to-two-protons": _deuteron("to_two_protons", deuteron.to_two_protons),
        "electron-scattering": _electron,
        "inverse-beta-decay": _inverse_beta,
        "oxygen-16-excited": _oxygen(oxygen.excited),
        "oxygen-16-to-fluorine-16": _oxygen(oxygen.to_fluorine),
        "oxygen-16-to-nitrogen-16": _oxygen(oxygen.to_nitrogen),
        "oxygen-18-to-fluorine-18": _levels(
            "oxygen-18-to-fluorine-18", levels.oxygen_18_to_fluorine
        ),
        "proton-scattering": _proton,
    }
)
_BUILDERS: Mapping[str, Callable[[str], Interaction]] = MappingProxyType(
    dict(sorted({**_OTHERS, **{k: _nucleus(file, k) for k, (file, _) in _NUCLEI.items()}}.items()))
)
KEYS = tuple(_BUILDERS)
# target of each interaction, so that none has to be built where its target is not there
TARGETS: Mapping[str, str] = MappingProxyType(
    {
        **{key: symbol for key, (_, symbol) in _NUCLEI.items()},
        **dict.fromkeys((key for key in KEYS if key.startswith("carbon-12")), carbon.ISOTOPE),
        **dict.fromkeys((key for key in KEYS if key.startswith("carbon-13")), "C-13"),
        **dict.fromkeys((key for key in KEYS if key.startswith("oxygen-16")), oxygen.ISOTOPE),
        **dict.fromkeys((key for key in KEYS if key.startswith("deuteron")), deuteron.ISOTOPE),
        "coherent-scattering": EVERY_NUCLEUS,
        "electron-scattering": "electron",
        "inverse-beta-decay": "H-1",
        "oxygen-18-to-fluorine-18": "O-18",
        "proton-scattering": "H-1",
    }
)
