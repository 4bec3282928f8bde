"""Ionisation and neutron counters: what they see, and what makes no sense for them."""

from __future__ import annotations

import numpy as np
import pytest

from tenkpc import Burst, Detector, Forecast, Unconverted, interactions
from tenkpc.constants import ELECTRON_MASS_MEV
from tenkpc.errors import FileError, InputError

BURST = Burst.preset("equipartition")


def detector(formula, response, more=""):
    """A kilotonne of something."""
    volume = f'title = "T"\n[[volume]]\nname = "v"\nmass = "1 kt"\nformula = "{formula}"\n'
    return Detector.parse(f"{volume}[response]\n{response}\n{more}")


def forecast(formula, response, more=""):
    """Forecast it without conversion."""
    made = detector(formula, response, more)
    return Forecast(made, BURST, distance="10 kpc", conversion=Unconverted())


def ionisation(containment):
    """Forecast argon whose gammas are seen in part."""
    return forecast("Ar", f'medium = "ionisation"\ngamma_containment = {containment}')


def test_contained_gammas_make_a_line_of_the_neutrino():
    """With all gammas the bound part is E − ΔM: its mean energy is that of the reacting neutrinos.

    The mass difference is 1.5044 MeV; energies of bins within their width.
    """
    made = ionisation(1.0)
    observed, true = (
        made.spectrum(of=of, bins="0.5 MeV")["argon-to-potassium"].iloc[:-1]
        for of in ("observed", "neutrino")
    )
    frame = made.breakdown.xs("argon-to-potassium", level="interaction")
    lost = frame["counted"].groupby(level="final_state").sum()["gamma rays, neutron"]
    middle = observed.index.to_numpy() + 0.25
    mean, mean_true = ((middle * s).sum() / s.sum() for s in (observed, true))
    # a neutron costs its separation energy of 7.8 MeV and some 2 MeV of motion
    share = lost / frame["counted"].sum()
    assert mean_true - mean == pytest.approx(1.5044 + 9.3 * share, abs=0.1)


def test_without_gammas_electrons_alone_are_seen():
    """Their energies are lower by the excitation, and gamma rays of the neutral current unseen."""
    whole, half, none = (ionisation(share) for share in (1.0, 0.5, 0.0))

    def mean(made):
        column = made.spectrum(bins="0.5 MeV")["argon-to-potassium"].iloc[:-1]
        return ((column.index.to_numpy() + 0.25) * column).sum() / column.sum()

    assert mean(whole) > mean(half) > mean(none)
    # mean excitation of the bound part, of an independent calculation: 4.4 MeV with all of it
    assert mean(whole) - mean(none) == pytest.approx(4.1, abs=0.4)
    assert none.counts.loc["argon-excited", "counted"] == 0
    assert whole.counts.loc["argon-excited", "counted"] > 10
    seen = set(none.breakdown.xs("argon-to-potassium", level="interaction")["seen_as"])
    assert seen == {"single electron", "electron, then neutron capture"}


def test_positrons_bring_their_annihilation_gammas():
    """As far as gammas are contained."""
    for share in (0.0, 0.4, 1.0):
        response = ionisation(share).detector.volumes[0].response
        expected = 5.0 + 2 * ELECTRON_MASS_MEV * share
        assert response.visible("positron", 5.0) == pytest.approx(expected)
        gamma = response.visible("gamma", 5.0)
        assert gamma == (pytest.approx(5 * share) if share else None)


@pytest.mark.parametrize("efficiency", [1.0, 0.36, 0.0])
def test_a_counter_counts_events_with_at_least_one_neutron(efficiency):
    """Of n neutrons 1 − (1 − ε)^n are events, n ε the mean number registered; live time on top."""
    made = forecast(
        "Pb", f'medium = "neutron-counter"\nneutron_efficiency = {efficiency}\nlive_fraction = 0.9'
    )
    frame = made.breakdown.xs("lead-to-bismuth", level="interaction").droplevel(
        ["volume", "species"]
    )
    rows = {"gamma rays": 0, "gamma rays, neutron": 1, "gamma rays, two neutrons": 2}
    for label, neutrons in rows.items():
        row = frame.loc[[label]].sum(numeric_only=True)
        assert row["counted"] == pytest.approx(
            row["reactions"] * 0.9 * (1 - (1 - efficiency) ** neutrons), abs=1e-12
        )
        assert row["neutrons"] == pytest.approx(
            row["reactions"] * 0.9 * efficiency * neutrons, abs=1e-12
        )
    assert made.counts["neutrons"].sum() == pytest.approx(made.breakdown["neutrons"].sum())
    reactions, above, counted = made.chain
    assert reactions == above
    assert counted == pytest.approx(made.total)


def test_a_counter_has_a_light_curve_and_a_spectrum_of_neutrinos():
    """But no observed energies."""
    made = forecast("Pb", 'medium = "neutron-counter"\nneutron_efficiency = 0.4')
    assert "neutrons" not in forecast("Ar", 'medium = "ionisation"').counts.columns
    true = made.spectrum(of="neutrino").drop(columns="width_mev").sum().sum()
    assert true == pytest.approx(made.total, rel=1e-4)  # levels open inside bins
    for wrong in (lambda: made.spectrum(), lambda: made.within(energy_above="5 MeV")):
        with pytest.raises(InputError, match="counts neutrons and observes no energy"):
            wrong()
    timed = Forecast(made.detector, Burst.preset("ordinary-collapse"), distance="10 kpc")
    curve = timed.light_curve("50 ms").drop(columns="width_s").sum().sum()
    assert curve == pytest.approx(timed.total, rel=1e-4)


def test_heavy_water_with_counters():
    """Breakup is one neutron, the charged current of antineutrinos two."""
    made = forecast("D2O", 'medium = "neutron-counter"')
    seen = made.breakdown["seen_as"]
    assert set(seen.xs("deuteron-breakup", level="interaction")) == {"one neutron"}
    assert set(seen.xs("deuteron-to-two-neutrons", level="interaction")) == {"two neutrons"}
    assert made.counts.loc["deuteron-breakup", "counted"] == pytest.approx(294.6, rel=5e-3)


BACKGROUND = '[[background]]\nname = "rock"\nrate = "3 /hour"\n'


def test_backgrounds_of_a_counter_have_no_shape():
    """A rate alone; a shape is refused, and missed everywhere else."""
    made = forecast("Pb", 'medium = "neutron-counter"', BACKGROUND)
    assert made.background.loc["rock", "counted"] == pytest.approx(20 * 3 / 3600)
    with pytest.raises(FileError, match="observes no energy, so its background has no shape"):
        forecast("Pb", 'medium = "neutron-counter"', f'{BACKGROUND}shape = "constant"\n')
    with pytest.raises(FileError, match=r"background\.rock\.shape: is missing"):
        forecast("Ar", 'medium = "ionisation"', BACKGROUND)


@pytest.mark.parametrize(
    ("response", "words"),
    [
        ('medium = "neutron-counter"\nthreshold = "5 MeV"', "threshold: does not belong to a neut"),
        ('medium = "neutron-counter"\nresolution = { constant = 0.1 }', "resolution: does not"),
        ('medium = "neutron-counter"\nneutron_efficiency = 1.4', "share between 0 and 1"),
        ('medium = "ionisation"\ngamma_containment = "120 %"', "share between 0 and 1"),
        ('medium = "ionisation"\nneutron_efficiency = 0.4', "does not belong to an ionisation"),
        ('medium = "ionisation"\nenergy = "total"', "reports visible energy"),
        ('medium = "neutron-conter"', "did you mean 'neutron-counter'"),
    ],
)
def test_mistakes_are_named(response, words):
    """Keys of another medium, shares that are none."""
    with pytest.raises(FileError, match=words):
        detector("Pb", response)


@pytest.mark.parametrize("option", interactions.OPTIONS["lead-to-bismuth"])
def test_the_page_prints_the_other_option(option):
    """Beside the chosen number stands that of the other option, as it would be counted."""

    def made(chosen):
        return forecast(
            "Pb", 'medium = "neutron-counter"', f'[interactions]\nlead-to-bismuth = "{chosen}"\n'
        )

    (other,) = set(interactions.OPTIONS["lead-to-bismuth"]) - {option}
    count = made(other).counts.loc["lead-to-bismuth", "counted"]
    decimals = 0 if count >= 100 else 1
    page = " ".join(repr(made(option)).split())
    assert f"disputed {count:.{decimals}f} of lead-to-bismuth if {other.replace('-', ' ')}" in page


def test_every_assumption_is_named():
    """Efficiency of a counter and containment of gammas, given or not."""
    counter = forecast("Pb", 'medium = "neutron-counter"\nneutron_efficiency = 0.4')
    assert "kept by neutron efficiency" in " ".join(repr(counter).split())
    lines = {" ".join(line.split()) for line in counter.explain().splitlines()}
    assert "neutron efficiency 40 % (detector)" in lines
    assert not any(line.startswith("resolution") for line in lines)
    for key, words in (("", "100 % (default)"), ("gamma_containment = 0.3", "30 % (detector)")):
        text = forecast("Ar", f'medium = "ionisation"\n{key}').explain()
        assert f"gamma rays contained {words}" in {
            " ".join(line.split()) for line in text.splitlines()
        }


def test_a_frame_of_iron_is_a_volume_of_its_own():
    """The liquid and its frame have responses of their own; the page says what each counts."""
    made = Forecast(Detector.gallery("iron-stack"), BURST, distance="10 kpc")
    by_volume = made.breakdown["counted"].groupby(level="volume").sum()
    assert by_volume.sum() == pytest.approx(made.total)
    assert by_volume["plates"] > 0
    iron = made.breakdown.xs("iron-to-cobalt", level="interaction").index.get_level_values("volume")
    assert set(iron) == {"plates"}
    line = next(line for line in repr(made).splitlines() if line.startswith("of these"))
    assert "in counters" in line
    assert "in plates" in line
    assert np.all(made.breakdown["counted"] >= 0)
