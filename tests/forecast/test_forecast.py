"""The forecast: numbers that must agree with each other, and what must always hold."""

from __future__ import annotations

import json
import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import quad

from tenkpc import Adiabatic, Burst, Detector, Equilibrated, Forecast, Unconverted, interactions
from tenkpc.constants import CM_PER_KPC
from tenkpc.errors import InputError

TANK = Detector.gallery("mere-tank")
ORDINARY = Burst.preset("ordinary-collapse")
SIMPLE = Burst.preset("equipartition")


@pytest.fixture(scope="module")
def forecast():
    """The gallery's tank, the ordinary burst, 10 kpc."""
    return Forecast(TANK, ORDINARY, distance="10 kpc")


def columns(frame):
    """Interactions of a binned table, without the width of its bins."""
    return frame.drop(columns=frame.columns[0])


def test_tables_agree_with_each_other(forecast):
    """Total, counts, breakdown and spectrum are sums of the same bins: 1e-9."""
    counted = forecast.counts["counted"]
    assert counted.sum() == pytest.approx(forecast.total, rel=1e-9)
    by_key = forecast.breakdown.groupby(level="interaction").sum()["counted"]
    assert by_key.to_numpy() == pytest.approx(counted.to_numpy(), rel=1e-9)
    spectrum = columns(forecast.spectrum()).sum()
    assert spectrum.to_numpy() == pytest.approx(counted.to_numpy(), rel=1e-9)


@pytest.mark.parametrize("bins", ["20 ms", "1 s", ["-30 ms", "5 ms", "1 s", "80 s"]])
def test_a_light_curve_holds_every_count(forecast, bins):
    """Bins of time add up to the total; 1e-4 since a light curve has time nodes of its own."""
    curve = columns(forecast.light_curve(bins))
    assert curve.sum().to_numpy() == pytest.approx(forecast.counts["counted"], rel=1e-4)


def test_bins_of_time_are_integrals_of_the_rate(forecast):
    """A bin across the first peak agrees with the same window asked for by itself: 1e-5."""
    curve = columns(forecast.light_curve(["0 s", "20 ms", "40 ms"]))
    window = forecast.within(time=("0 s", "20 ms")).counts["counted"]
    assert curve.iloc[0].to_numpy() == pytest.approx(window.to_numpy(), rel=1e-5)


def test_zero_is_an_edge_of_a_light_curve(forecast):
    """Bins of a width are multiples of it, so that bounce is an edge."""
    index = forecast.light_curve("70 ms").index
    assert 0.0 in index
    assert index[0] <= ORDINARY.start_s


def test_counts_by_neutrino_energy_add_up(forecast):
    """The spectrum over true energies holds the same counted events: 1e-5, two quadratures."""
    sums = columns(forecast.spectrum(of="neutrino")).sum()
    assert sums.to_numpy() == pytest.approx(forecast.counts["counted"].to_numpy(), rel=1e-5)


def test_bins_may_be_chosen(forecast):
    """Edges of the user's own are kept, with what lies below and above them in rows of its own."""
    frame = forecast.spectrum(bins=["10 MeV", "11 MeV", "20 MeV"])
    assert frame.index.tolist() == [0.0, 10.0, 11.0, 20.0]
    assert frame["width_mev"].tolist() == [10.0, 1.0, 9.0, math.inf]
    assert columns(frame).to_numpy().sum() == pytest.approx(forecast.total, rel=1e-6)
    assert frame.attrs["energy"] == "total"


def by_hand(detector, burst, key, species, low_mev):
    """Reactions of one species by adaptive quadrature of the plain formula, no conversion."""
    sigma = interactions.by_key(key).sigma
    targets = detector.targets(interactions.by_key(key).target)
    area = 4 * math.pi * (10 * CM_PER_KPC) ** 2
    place = ("nu_e", "anti_nu_e", "nu_x", "anti_nu_x").index(species)

    def integrand(energy):
        emitted = burst.emitted(np.array([energy]))[place, 0]
        return emitted / area * float(sigma(species, np.array(energy)))

    parts = [(low_mev, 20.0), (20.0, 60.0), (60.0, 200.0)]
    return targets * sum(quad(integrand, a, b, epsrel=1e-9)[0] for a, b in parts)


@pytest.mark.parametrize(
    ("key", "species", "low"),
    [
        ("inverse-beta-decay", "anti_nu_e", 1.8061),
        ("electron-scattering", "nu_e", 1e-6),
        ("electron-scattering", "anti_nu_x", 1e-6),
    ],
)
def test_reactions_are_flux_times_cross_section_times_targets(key, species, low):
    """The first column agrees with adaptive quadrature of the plain formula: 1e-6."""
    forecast = Forecast(TANK, SIMPLE, distance="10 kpc", conversion=Unconverted())
    kinds = 2 if species.endswith("_x") else 1
    rows = forecast.breakdown.xs((key, species), level=("interaction", "species"))
    expected = kinds * by_hand(TANK, SIMPLE, key, species, low)
    assert rows["reactions"].sum() == pytest.approx(expected, rel=1e-6)


def test_a_time_dependent_burst_is_folded_at_each_time():
    """Reactions of the ordinary burst by nested quadrature over time and energy: 1e-4."""
    forecast = Forecast(TANK, ORDINARY, distance="10 kpc", conversion=Unconverted())
    sigma = interactions.by_key("inverse-beta-decay").sigma
    area = 4 * math.pi * (10 * CM_PER_KPC) ** 2

    def at(time):
        def integrand(energy):
            rate = ORDINARY.rate(np.array([time]), np.array([energy]))[1, 0, 0]
            return rate * float(sigma("anti_nu_e", np.array(energy)))

        return quad(integrand, 1.8061, 120.0, epsrel=1e-6, points=[15.0], limit=60)[0]

    window = (0.1, 0.3)
    expected = quad(at, *window, epsrel=1e-6)[0] * TANK.targets("H-1") / area
    found = forecast.within(time=("0.1 s", "0.3 s")).counts.loc["inverse-beta-decay", "reactions"]
    assert found == pytest.approx(expected, rel=1e-4)


def test_folding_averages_would_be_wrong(forecast):
    """Average spectra before folding and steep rows change: the fold is at each time instead."""
    edges = [f"{t} s" for t in (0, 0.1, 0.5, 1, 3, 10, 80)]
    curve = columns(forecast.light_curve(edges)).sum(axis=1).to_numpy()
    whole = forecast.within(time=("0 s", "80 s")).total
    assert curve.sum() == pytest.approx(whole, rel=1e-4)
    first = forecast.within(time=("0 s", "0.5 s")).within(energy_above="40 MeV").total
    late = forecast.within(time=("3 s", "80 s")).within(energy_above="40 MeV").total
    rates = (
        forecast.within(time=("0 s", "0.5 s")).total,
        forecast.within(time=("3 s", "80 s")).total,
    )
    assert first / late > 2 * rates[0] / rates[1]


@settings(max_examples=25)
@given(st.floats(0.01, 1e4), st.floats(0.01, 100))
def test_counts_are_linear_in_mass_and_fall_with_distance_squared(mass, distance):
    """Twice the mass counts twice, twice the distance a quarter: exact but for rounding."""
    base = Forecast(TANK, SIMPLE, distance="10 kpc").total
    scaled = TANK.replace({"volume.tank.mass": f"{mass!r} kt"})
    found = Forecast(scaled, SIMPLE, distance=f"{distance!r} kpc").total
    assert found == pytest.approx(base * mass / 40 * (10 / distance) ** 2, rel=1e-9)


@settings(max_examples=10)
@given(st.floats(0.1, 10))
def test_counts_are_linear_in_luminosity(factor):
    """A burst of twice the energy counts twice: 1e-9."""

    def burst(energy):
        each = dict.fromkeys(("nu_e", "anti_nu_e", "nu_x"), f"{energy!r} erg")
        mean = dict.fromkeys(("nu_e", "anti_nu_e", "nu_x"), "13 MeV")
        pinching = dict.fromkeys(("nu_e", "anti_nu_e", "nu_x"), 2.5)
        return Burst.integrated(energy=each, mean_energy=mean, pinching=pinching)

    one = Forecast(TANK, burst(4e52), distance="10 kpc").total
    assert Forecast(TANK, burst(4e52 * factor), distance="10 kpc").total == pytest.approx(
        one * factor, rel=1e-9
    )


@settings(max_examples=15)
@given(st.floats(0, 60), st.floats(0, 20))
def test_a_higher_cut_never_counts_more(cut, step):
    """Counts fall with the cut in observed energy, and no cut counts more than none."""
    base = Forecast(TANK, SIMPLE, distance="10 kpc")
    low = base.within(energy_above=f"{cut!r} MeV").total
    high = base.within(energy_above=f"{cut + step!r} MeV").total
    assert high <= low * (1 + 1e-9)
    assert low <= base.total * (1 + 1e-9)


@pytest.mark.parametrize("mass", ["40 kton", "40 kiloton", "40000 tonne", "4e7 kg", "0.04 Mt"])
def test_masses_are_interchangeable(mass):
    """One mass in other units is the same detector."""
    base = Forecast(TANK, SIMPLE, distance="10 kpc").total
    other = TANK.replace({"volume.tank.mass": mass})
    assert Forecast(other, SIMPLE, distance="10 kpc").total == pytest.approx(base, rel=1e-12)


@pytest.mark.parametrize("distance", ["10000 pc", "0.01 Mpc", "3.0856775814913674e20 m"])
def test_distances_are_interchangeable(distance):
    """One distance in other units gives the same counts."""
    base = Forecast(TANK, SIMPLE, distance="10 kpc").total
    assert Forecast(TANK, SIMPLE, distance=distance).total == pytest.approx(base, rel=1e-9)


def test_a_light_year_is_a_distance_too():
    """32 615.6 light years are 10 kpc, to the six digits given (IAU definitions)."""
    base = Forecast(TANK, SIMPLE, distance="10 kpc").total
    found = Forecast(TANK, SIMPLE, distance="32615.6 ly").total
    assert found == pytest.approx(base, rel=1e-5)


def test_a_scan_over_distance_has_slope_minus_two(forecast):
    """Counts fall with the square of the distance, column by column."""
    frame = forecast.versus_distance("0.1 kpc", "1 Mpc")
    slope = np.diff(np.log(frame["total"])) / np.diff(np.log(frame.index))
    assert slope == pytest.approx(-2)
    assert frame.loc[10.0, "total"] == pytest.approx(forecast.total)


def test_without_threshold_every_reaction_is_counted():
    """The real cross sections through cells and through their totals: 1e-6, the quadrature's."""
    plain = TANK.replace({"response": {"medium": "cherenkov"}})
    frame = Forecast(plain, ORDINARY, distance="10 kpc").breakdown
    frame = frame[frame["seen_as"] != "not seen"]
    assert frame["counted"].to_numpy() == pytest.approx(frame["reactions"].to_numpy(), rel=1e-6)


def test_the_page_only_offers_commands_that_the_shell_understands(forecast):
    """What the shell cannot be told is named instead of a command that would mislead."""
    fewer = Forecast(TANK, SIMPLE, distance="1 kpc", interactions={"inverse-beta-decay": False})
    assert "--only electron-scattering" in " ".join(repr(fewer).split())
    for other in (
        forecast.replace({"volume.tank.mass": "20 kt"}),
        forecast.within(energy_above="9 MeV"),
        Forecast(Detector.parse(TANK.text), ORDINARY, distance="1 kpc"),
    ):
        assert "the shell has no words for" in " ".join(repr(other).split())


def test_another_forecast_leaves_the_first_alone(forecast):
    """`at`, `within` and `replace` give new forecasts, each as if it had been asked for."""
    before = forecast.total
    assert forecast.at("20 kpc").total == pytest.approx(before / 4)
    changed = forecast.replace({"response.threshold": "8 MeV", "burst.core.rise_time": "60 ms"})
    assert changed.total < before == forecast.total
    assert changed.detector.response.threshold_mev == 8.0


def test_interactions_are_switched_scaled_and_given_options():
    """A switch removes a row, a factor multiplies it, an option is another cross section."""
    base = Forecast(TANK, SIMPLE, distance="10 kpc").counts["counted"]

    def other(value):
        chosen = {"electron-scattering": value}
        return Forecast(TANK, SIMPLE, distance="10 kpc", interactions=chosen).counts["counted"]

    assert "electron-scattering" not in other(False).index
    assert other(1.5)["electron-scattering"] == pytest.approx(1.5 * base["electron-scattering"])
    assert other("tree")["electron-scattering"] != pytest.approx(base["electron-scattering"])
    assert other("tree")["inverse-beta-decay"] == base["inverse-beta-decay"]
    in_file = Detector.parse(TANK.text + "\n[interactions]\nelectron-scattering = 1.5\n")
    found = Forecast(in_file, SIMPLE, distance="10 kpc").counts["counted"]
    assert found.to_numpy() == pytest.approx(other(1.5).to_numpy())


def test_chance_and_cross_sections_are_separate_lines(forecast):
    """The Poisson interval is about ± √N; cross sections add in quadrature over interactions."""
    interval = forecast.chance
    assert interval.high - interval.low == pytest.approx(2 * math.sqrt(forecast.total), rel=0.02)
    counts = forecast.counts
    falls = counts["counted"] - counts["cross_section_low"]
    assert forecast.cross_section_error[0] == pytest.approx(math.sqrt((falls**2).sum()))


def test_the_chain_only_loses(forecast):
    """Reactions, above threshold, counted: each at most the one before."""
    reactions, above, counted = forecast.chain
    assert reactions > above > counted == pytest.approx(forecast.total)


def test_the_page_says_what_was_asked(forecast):
    """The page names detector, burst, distance, conversion, threshold, rows and sources."""
    page = repr(forecast)
    words = ("Mere Tank", "ordinary collapse", "10 kpc", "normal ordering", "6 MeV", "chance")
    assert all(word in " ".join(page.split()) for word in words)
    assert "ν̄e + p → e⁺ + n" in page
    assert "Strumia" in page
    assert "tenkpc forecast mere-tank --burst ordinary-collapse" in page
    assert max(len(line) for line in page.splitlines()) <= 80  # 78 columns, 2 combining marks
    assert "<table" in forecast._repr_html_()


def test_the_explanation_names_every_assumption(forecast):
    """What was assumed stands with its value and where it is from."""
    words = " ".join(forecast.explain().split())
    for part in ("4e+07 kg light water", "free protons", "resolution", "live fraction 100 % (def"):
        assert part in words


def test_json_holds_the_numbers_and_the_inputs(forecast):
    """JSON has the very numbers of Python, and the text of detector and burst."""
    record = json.loads(forecast.to_json())
    assert record["total"] == forecast.total
    assert record["counts"]["inverse-beta-decay"]["counted"] == pytest.approx(
        forecast.counts.loc["inverse-beta-decay", "counted"], rel=1e-14
    )
    assert record["inputs"]["detector"]["text"] == TANK.text
    again = Forecast(
        Detector.parse(record["inputs"]["detector"]["text"]),
        Burst.parse(record["inputs"]["burst"]["text"]),
        distance=f"{record['inputs']['distance_kpc']!r} kpc",
    )
    assert again.total == pytest.approx(forecast.total, rel=1e-12)


def test_conversions_differ_and_keep_what_is_blind_to_flavour(forecast):
    """Conversion changes counts; equal spectra of all species are left as they are."""
    assert forecast.converted(Adiabatic("inverted")).total != pytest.approx(forecast.total)
    same = dict.fromkeys(("nu_e", "anti_nu_e", "nu_x"), "12 MeV")
    energy = dict.fromkeys(same, "5e52 erg")
    burst = Burst.integrated(energy=energy, mean_energy=same, pinching=dict.fromkeys(same, 3.0))
    totals = [
        Forecast(TANK, burst, distance="10 kpc", conversion=case).total
        for case in (Unconverted(), Adiabatic("normal"), Equilibrated())
    ]
    assert totals == pytest.approx([totals[0]] * 3, rel=1e-12)


@pytest.mark.parametrize(
    ("ask", "message"),
    [
        (lambda f: f.at("10"), "lacks its unit"),
        (lambda f: f.at(10), "expected a value with its unit"),
        (lambda f: f.at("10 s"), "is a time; expected a length"),
        (lambda f: f.at("0 kpc"), "more than zero"),
        (lambda f: f.within(time=("90 s", "95 s")), "no part"),
        (lambda f: f.within(time="1 s"), "first and a last"),
        (lambda f: f.spectrum(of="visible"), "observed"),
        (lambda f: f.spectrum(bins="1 eV"), "width between"),
        (lambda f: f.spectrum(bins=["3 MeV", "2 MeV"]), "ascending"),
        (lambda f: f.light_curve("1 ns"), "at most"),
        (lambda f: f.versus_distance("10 kpc", "1 kpc"), "more than"),
        (lambda f: f.replace({"volume.tnk.mass": "3 kt"}), "tank"),
        (lambda f: f.replace({"response.treshold": "3 MeV"}), "threshold"),
        (lambda f: f.at("1 kpc").within(energy_above="-1 MeV"), "zero or more"),
    ],
)
def test_what_cannot_be_used_is_said_plainly(forecast, ask, message):
    """Every refusal is an InputError that says what was expected."""
    with pytest.raises(InputError, match=message):
        ask(forecast)


def test_a_burst_without_a_time_profile_has_no_light_curve():
    """Asking for times of an integrated burst is refused, with the reason."""
    forecast = Forecast(TANK, SIMPLE, distance="10 kpc")
    with pytest.raises(InputError, match="no time profile"):
        forecast.light_curve("1 s")
    with pytest.raises(InputError, match="no time profile"):
        forecast.within(time=("0 s", "1 s"))


def test_unknown_interactions_are_refused():
    """A misspelt key is answered with the nearest one."""
    with pytest.raises(InputError, match="did you mean 'inverse-beta-decay'"):
        Forecast(TANK, SIMPLE, distance="1 kpc", interactions={"inverse-beta-decy": False})
