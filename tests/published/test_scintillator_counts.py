"""Events in liquid scintillator from the literature.

F. An et al. (JUNO Collaboration), J. Phys. G 43 (2016) 030401, arXiv:1507.05613, table of a
typical burst, and J.-S. Lu, Y.-F. Li and S. Zhou, Phys. Rev. D 94 (2016) 023006, arXiv:1605.07803;
J. F. Beacom, W. M. Farr and P. Vogel, Phys. Rev. D 66 (2002) 033001, arXiv:hep-ph/0205220; G. Bruno
et al. (LVD Collaboration), proceedings of 2017, table I. All but the last from memory.
"""

from __future__ import annotations

import math

import numpy as np
import pytest

from tenkpc import Burst, Detector, Forecast, Unconverted
from tenkpc.constants import CM_PER_KPC, FERMI_CONSTANT_PER_MEV2, HBAR_C_MEV_CM, MEV_PER_ERG

SPECIES = ("nu_e", "anti_nu_e", "nu_x")


def detector(mass, composition, *, birks, density, threshold=""):
    """A perfect scintillator of one volume."""
    cut = f'threshold = "{threshold}"' if threshold else ""
    return Detector.parse(
        f"""
        title = "plain scintillator"
        [[volume]]
        name = "vessel"
        mass = "{mass}"
        density = "{density} g/cm^3"
        {composition}
        [response]
        medium = "scintillator"
        birks = "{birks} cm/MeV"
        {cut}
        """
    )


def forecast(made, burst):
    """10 kpc, no conversion."""
    return Forecast(made, burst, distance="10 kpc", conversion=Unconverted())


# 20 kt with 12 % of hydrogen; pinching 3, the same mean energy for all kinds, 5e52 erg each: counts
# for 12 and 14 MeV, the relative size of rounding in the published number
JUNO = {
    ("inverse-beta-decay", "positron and neutron"): (4.3e3, 5.0e3, 0.012),
    ("electron-scattering", "recoil electron"): (3.6e2, 3.6e2, 0.014),
    ("carbon-12-excited", None): (1.7e2, 3.2e2, 0.03),
    ("carbon-12-to-nitrogen-12", "nitrogen ground state"): (47, 94, 0.011),
    ("carbon-12-to-boron-12", "boron ground state"): (60, 110, 0.05),
}
HYDROGEN = "mass_fractions = { H = 0.12, C = 0.88 }"
# the fluence in these papers has the prefactor 3.5e13 MeV/cm² where 5e52 erg at 10 kpc, over one
# steradian, are 3.28e13: from memory, and a threefold coincidence below speaks for it
TRUE_PREFACTOR = 5e52 * MEV_PER_ERG / (10 * CM_PER_KPC) ** 2
EXCESS = 3.5e13 / TRUE_PREFACTOR


def ratios(place):
    """Ours over published, channel by channel."""
    burst = Burst.integrated(
        energy=dict.fromkeys(SPECIES, "5e52 erg"),
        mean_energy=dict.fromkeys(SPECIES, ("12 MeV", "14 MeV")[place]),
        pinching=dict.fromkeys(SPECIES, 3.0),
    )
    made = detector("20 kt", HYDROGEN, birks=0.0098, density=0.86)
    reactions = forecast(made, burst).breakdown["reactions"]
    found = {}
    for (key, state), row in JUNO.items():
        mine = reactions.xs(key, level="interaction")
        mine = mine if state is None else mine.xs(state, level="final_state")
        found[key] = mine.sum() / row[place]
    return found


@pytest.mark.parametrize("place", [0, 1], ids=["12 MeV", "14 MeV"])
def test_20_kt_with_the_fluence_as_published(place):
    """All channels within 4 %, or rounding, once the prefactor is the published one."""
    for (key, _), ratio in zip(JUNO, ratios(place).values(), strict=True):
        rounding = next(row[2] for (k, _), row in JUNO.items() if k == key)
        assert ratio * EXCESS == pytest.approx(1.0, abs=0.03 + rounding), key


def test_the_prefactor_explains_one_common_factor():
    """6.8 % of fluence: inverse beta decay and electrons are low by it, alike to 1 %."""
    assert pytest.approx(1.068, abs=0.001) == EXCESS
    for place in (0, 1):
        found = ratios(place)
        both = found["inverse-beta-decay"], found["electron-scattering"]
        assert max(both) - min(both) < 0.012
        assert np.mean(both) == pytest.approx(1 / EXCESS, abs=0.025)


@pytest.mark.parametrize(("place", "published"), [(0, 6.0e2), (1, 1.2e3)])
def test_quenched_protons_in_20_kt(place, published):
    """Above 0.2 MeV of light: 15 %, since the paper's quenching is not known here."""
    burst = Burst.integrated(
        energy=dict.fromkeys(SPECIES, "5e52 erg"),
        mean_energy=dict.fromkeys(SPECIES, ("12 MeV", "14 MeV")[place]),
        pinching=dict.fromkeys(SPECIES, 3.0),
    )
    made = detector("20 kt", HYDROGEN, birks=0.0098, density=0.86, threshold="0.2 MeV")
    found = forecast(made, burst).counts.loc["proton-scattering", "counted"]
    assert found * EXCESS == pytest.approx(published, rel=0.15)


THERMAL = Burst.integrated(
    energy=dict.fromkeys(SPECIES, "5e52 erg"),
    temperature={"nu_e": "3.5 MeV", "anti_nu_e": "5 MeV", "nu_x": "8 MeV"},
    degeneracy=dict.fromkeys(SPECIES, 0.0),
)
# 1 kt of CH₂ without threshold and above 0.2 MeV of light: nu_e, anti_nu_e, four x kinds
BEACOM = {"nu_e": (57, 3), "anti_nu_e": (80, 17), "nu_x": (487, 253)}


def protons(threshold):
    """Recoil protons of the paper's detector by species, the x kinds together."""
    made = detector("1 kt", 'formula = "CH2"', birks=0.015, density=0.78, threshold=threshold)
    rows = forecast(made, THERMAL).breakdown["counted"].xs("proton-scattering", level="interaction")
    by_species = rows.groupby(level="species").sum()
    return {
        "nu_e": by_species["nu_e"],
        "anti_nu_e": by_species["anti_nu_e"],
        "nu_x": by_species["nu_x"] + by_species["anti_nu_x"],
    }


def test_recoil_protons_in_1_kt():
    """Rows and total without threshold: 14 %, one common factor and weak magnetism.

    The paper counts fewer protons than 1 kt of CH₂ has, by about a tenth (0.90 kt would explain
    it; its number was not read), and leaves weak magnetism out, which tells neutrinos from
    antineutrinos by 3 to 8 % here.
    """
    found = protons("")
    for species, (published, _) in BEACOM.items():
        assert found[species] == pytest.approx(published, rel=0.14)
    assert sum(found.values()) == pytest.approx(624, rel=0.12)


def test_the_flavour_pattern_is_that_of_the_leading_form():
    """With the paper's own cross section the rows differ from it by one factor, to 1.5 %.

    σ = G_F² E²/π (c_V² + 3 c_A²) at leading order; its ratios to the published rows agree.
    """
    energy, weight = np.polynomial.legendre.leggauss(400)
    energy, weight = 100 * (1 + energy), 100 * weight
    fluence = THERMAL.emitted(energy) / (4 * math.pi * (10 * CM_PER_KPC) ** 2)
    vector, axial = 0.5 - 2 * 0.23863, 1.2754 / 2
    mass = 938.272
    # to first order in recoil: ∫ dT (G_F² M/π) [(1 − MT/2E²) c_V² + (1 + MT/2E²) c_A²]
    highest = 2 * energy**2 / (mass + 2 * energy)
    square = vector**2 + axial**2
    tilt = (axial**2 - vector**2) * mass * highest**2 / (4 * energy**2)
    sigma = FERMI_CONSTANT_PER_MEV2**2 * HBAR_C_MEV_CM**2 * mass / math.pi
    sigma = sigma * (square * highest + tilt)
    targets = detector("1 kt", 'formula = "CH2"', birks=0.015, density=0.78).targets("H-1")
    counts = targets * (fluence * sigma) @ weight * np.array([1, 1, 4, 0])
    found = [count / BEACOM[species][0] for species, count in zip(SPECIES, counts, strict=False)]
    assert found == pytest.approx([np.mean(found)] * 3, rel=0.015)
    assert np.mean(found) == pytest.approx(1.10, abs=0.02)


def test_the_share_above_the_threshold():
    """273 of 624 have more than 0.2 MeV of light: the clean check of quenching, 2 %."""
    above, all_ = protons("0.2 MeV"), protons("")
    assert sum(above.values()) / sum(all_.values()) == pytest.approx(273 / 624, rel=0.02)
    for species, (_, published) in BEACOM.items():
        # rows of 3 and 17 events are rounded to whole numbers
        assert above[species] == pytest.approx(published, rel=0.14, abs=1.1)


def test_other_channels_in_1_kt():
    """About 310 inverse beta decays and 60 gammas of carbon, as recalled: 15 %."""
    made = detector("1 kt", 'formula = "CH2"', birks=0.015, density=0.78)
    reactions = forecast(made, THERMAL).counts["reactions"]
    assert reactions["inverse-beta-decay"] == pytest.approx(310, rel=0.15)
    assert reactions["carbon-12-excited"] == pytest.approx(60, rel=0.15)


# shares read on the opening page, iron of the structure (3 %) taken out
LVD = {
    "inverse-beta-decay": 0.88,
    "carbon-12-to-nitrogen-12": 0.015,
    "carbon-12-to-boron-12": 0.010,
    "carbon-12-excited": 0.020,
    "electron-scattering": 0.030,
}


def test_the_pattern_of_shares_in_1_kt():
    """A soft burst above 5 MeV: largest within 4 %, small ones within a factor 2.3 (burst unknown).

    The gammas of carbon leave small counters half of the time, which the file does not say.
    """
    burst = Burst.integrated(
        energy=dict.fromkeys(SPECIES, "5e52 erg"),
        mean_energy=dict.fromkeys(SPECIES, "14 MeV"),
        pinching=dict.fromkeys(SPECIES, 3.0),
    )
    composition = "mass_fractions = { H = 0.143, C = 0.857 }"
    made = detector("1 kt", composition, birks=0.0104, density=0.8, threshold="5 MeV")
    counted = forecast(made, burst).counts["counted"]
    shares = counted / counted.sum()
    assert shares["inverse-beta-decay"] == pytest.approx(LVD["inverse-beta-decay"] / 0.97, rel=0.04)
    for key in list(LVD)[1:]:
        assert 1 / 2.3 < shares[key] / (LVD[key] / 0.97) < 2.3


# a slow independent calculation: 1 kt of CH₂, pinching 3, 12, 14 and 16 MeV, 5e52 erg each
EXPECTED = {
    ("carbon-12-to-nitrogen-12", "nitrogen ground state"): 2.094,
    ("carbon-12-to-nitrogen-12", "unbound nitrogen, proton"): 0.282,
    ("carbon-12-to-boron-12", "boron ground state"): 4.720,
    ("carbon-12-to-boron-12", "unbound boron, neutron"): 0.663,
    ("carbon-12-excited", None): 1.356 + 2.187 + 14.699,
    ("carbon-13-to-nitrogen-13", "nitrogen ground state"): 0.356,
    ("carbon-13-to-nitrogen-13", "3.50 MeV level, proton"): 0.239,
    ("carbon-13-excited", None): 0.064 + 0.072 + 0.365,
}


def test_the_slow_calculation_of_carbon():
    """Counts of 1 kt to 5e-3: windows are lifted there, and three digits are given.

    Carbon-13 to 1.3 %: it is 1.07 % of carbon there and 1.06 % in the masses used here.
    """
    made = detector("1 kt", 'formula = "CH2"', birks=0.015, density=0.78)
    found = forecast(made, Burst.preset("equipartition")).breakdown["reactions"]
    for (key, state), expected in EXPECTED.items():
        mine = found.xs(key, level="interaction")
        mine = mine if state is None else mine.xs(state, level="final_state")
        within = 0.013 if "carbon-13" in key else 5e-3
        assert mine.sum() == pytest.approx(expected, rel=within, abs=6e-4), (key, state)


# the same calculation for recoil protons: without threshold, above 0.2 MeV of light with Birks'
# constants of 0.0096 and 0.015 cm/MeV at 0.78 g/cm³, of one kind each
PROTONS = {
    "nu_e": (67.3691, 6.8533, 3.9338),
    "anti_nu_e": (71.4249, 11.6645, 7.4099),
    "nu_x": (88.9476, 23.2667, 16.3591),
    "anti_nu_x": (80.2360, 19.3449, 13.3854),
}


@pytest.mark.parametrize(
    ("column", "birks", "threshold"),
    [(0, 0.0096, ""), (1, 0.0096, "0.2 MeV"), (2, 0.015, "0.2 MeV")],
)
def test_the_slow_calculation_of_protons(column, birks, threshold):
    """Rows by species to 5e-4: the slow one takes all hydrogen as protons."""
    made = detector("1 kt", 'formula = "CH2"', birks=birks, density=0.78, threshold=threshold)
    rows = forecast(made, Burst.preset("equipartition")).breakdown["counted"]
    found = rows.xs("proton-scattering", level="interaction").groupby(level="species").sum()
    for species, expected in PROTONS.items():
        kinds = 2 if species.endswith("nu_x") else 1
        assert found[species] / kinds == pytest.approx(expected[column], rel=5e-4)


def test_the_slow_calculation_of_strangeness():
    """All recoils with Δs = -0.035 lie between the totals for 0 and for -0.036, near the second."""
    made = detector("1 kt", 'formula = "CH2"', birks=0.0096, density=0.78)
    option = {"proton-scattering": "with-strangeness"}
    burst = Burst.preset("equipartition")
    strange = Forecast(
        made, burst, distance="10 kpc", conversion=Unconverted(), interactions=option
    )
    found = strange.counts.loc["proton-scattering", "counted"]
    expected = 477.161 + (504.467 - 477.161) * 35 / 36
    assert found == pytest.approx(expected, rel=5e-4)
