"""The burst as a value: equality, changes, limits in time, and its summary."""

import math

import numpy as np
import pint
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tenkpc.errors import FileError, InputError
from tenkpc.source.burst import Burst

ENERGY = {"nu_e": "5e52 erg", "anti_nu_e": "4e52 erg", "nu_x": "3e52 erg"}
MEAN = {"nu_e": "11 MeV", "anti_nu_e": "13 MeV", "nu_x": "14 MeV"}
PINCHING = {"nu_e": 2.8, "anti_nu_e": 2.6, "nu_x": 0.7}
TEMPERATURE = {"nu_e": "3.5 MeV", "anti_nu_e": "4 MeV", "nu_x": "4.5 MeV"}
DEGENERACY = {"nu_e": 1.0, "anti_nu_e": 0.0, "nu_x": 0}


@pytest.mark.parametrize("name", Burst.presets())
def test_equal_by_content(name: str) -> None:
    """A burst equals, and hashes like, one made from its own text; a changed one differs."""
    burst = Burst.preset(name)
    again = Burst.parse(burst.text, origin="elsewhere")
    assert again == burst
    assert hash(again) == hash(burst)
    assert burst.replace({"title": "another"}) != burst


def test_replace_by_name() -> None:
    """Key paths go by the name of the component, and changes add up."""
    burst = Burst.preset("ordinary-collapse")
    changed = burst.replace({"core.mean_energy.nu_e": "13 MeV"}).replace(
        {"core.rise_time": "40 ms"}
    )
    assert changed.components[1].mean_energy_mev == (13.0, 12.5, 14.5, 14.5)
    assert changed.components[1].rise_time_s == pytest.approx(0.04)
    assert changed.components[0] == burst.components[0]
    assert changed.text == burst.text
    assert [path for path, _ in changed.document.changes] == [
        "component.core.mean_energy.nu_e",
        "component.core.rise_time",
    ]
    assert burst.components[1].mean_energy_mev[0] == 10.0


def test_replace_takes_quantities() -> None:
    """A quantity of any registry means the same as the text."""
    burst = Burst.preset("ordinary-collapse")
    quantity = pint.UnitRegistry().Quantity(40, "ms")
    assert burst.replace({"core.rise_time": quantity}) == burst.replace({"core.rise_time": "40 ms"})


@pytest.mark.parametrize(
    ("path", "value", "words"),
    [
        ("cores.rise_time", "40 ms", "did you mean 'core'"),
        ("core.rise_tme", "40 ms", "did you mean 'rise_time'"),
        ("core.rise_time", "40 MeV", "rise_time"),
        ("core.mean_energy.nu_e", 13, "MeV"),
        ("strat", "0 s", "did you mean 'start'"),
        ("end", "-1 s", "must be later than start"),
    ],
)
def test_bad_changes(path: str, value: object, words: str) -> None:
    """A change that a burst file could not hold is refused as the file would be."""
    with pytest.raises(FileError, match=words):
        Burst.preset("ordinary-collapse").replace({path: value})


def test_integrated_pinched() -> None:
    """Energies per kind, mean energies and pinchings come out as they went in."""
    burst = Burst.integrated(energy=ENERGY, mean_energy=MEAN, pinching=PINCHING)
    summary = burst.summary()
    assert summary.energy_erg == pytest.approx((5e52, 4e52, 3e52, 3e52), rel=1e-12)
    assert summary.mean_energy_mev == pytest.approx((11, 13, 14, 14), rel=1e-12)
    assert summary.pinching == pytest.approx((2.8, 2.6, 0.7, 0.7), rel=1e-11)
    assert summary.total_energy_erg == pytest.approx(2.1e53, rel=1e-12)
    assert Burst.parse(burst.text) == burst


def test_integrated_thermal() -> None:
    """A temperature is not a mean energy: without degeneracy the mean is 3.1514 times it."""
    burst = Burst.integrated(energy=ENERGY, temperature=TEMPERATURE, degeneracy=DEGENERACY)
    mean = burst.summary().mean_energy_mev
    assert mean[1] / 4.0 == pytest.approx(3.151374, abs=5e-7)
    assert mean[0] / 3.5 == pytest.approx(3.324458, abs=5e-7)
    assert Burst.parse(burst.text) == burst


def test_one_way_to_give_a_spectrum() -> None:
    """A temperature beside a mean energy is refused."""
    with pytest.raises(FileError, match="in one way only"):
        Burst.integrated(
            energy=ENERGY, mean_energy=MEAN, pinching=PINCHING, temperature=TEMPERATURE
        )


def test_nu_x_sets_both_and_says_so() -> None:
    """nu_x without anti_nu_x sets both, and a note says so; given both, there is no note."""
    burst = Burst.integrated(energy=ENERGY, mean_energy=MEAN, pinching=PINCHING)
    assert len(burst.notes) == 1
    assert "nu_x is given without anti_nu_x and sets both" in burst.notes[0]
    spelled = [{**table, "anti_nu_x": table["nu_x"]} for table in (ENERGY, MEAN, PINCHING)]
    full = Burst.integrated(energy=spelled[0], mean_energy=spelled[1], pinching=spelled[2])
    assert full.notes == ()
    assert full.components == burst.components


def test_sum_of_four() -> None:
    """A sum over the four x kinds is divided by four, and a note says so."""
    energy = {"nu_e": "5e52 erg", "anti_nu_e": "4e52 erg", "nu_x_sum_of_four": "12e52 erg"}
    burst = Burst.integrated(energy=energy, mean_energy=MEAN, pinching=PINCHING)
    plain = Burst.integrated(energy=ENERGY, mean_energy=MEAN, pinching=PINCHING)
    assert burst.components == plain.components
    assert any("divided by four" in note for note in burst.notes)


def test_bare_numbers_are_refused() -> None:
    """An energy without a unit is refused for each species, all together."""
    with pytest.raises(FileError) as caught:
        Burst.integrated(
            energy={"nu_e": 5e52, "anti_nu_e": 4e52, "nu_x": 3e52},
            mean_energy=MEAN,
            pinching=PINCHING,
        )
    assert {p.path for p in caught.value.problems} == {
        f"component.all.energy_each.{name}" for name in ("nu_e", "anti_nu_e", "nu_x")
    }


def test_each_kind_of_burst_refuses_the_other_question() -> None:
    """A rate is refused without times, and an integrated spectrum where there are times."""
    with pytest.raises(InputError, match="has no time profile"):
        Burst.preset("equipartition").rate([0.1], [10.0])
    with pytest.raises(InputError, match="has no time profile"):
        Burst.preset("equipartition").luminosity(0.1)
    with pytest.raises(InputError, match="has a time profile"):
        Burst.preset("ordinary-collapse").emitted([10.0])


def test_limits_in_time() -> None:
    """Before its start and after its end a burst emits nothing; mean energies are not numbers."""
    burst = Burst.preset("ordinary-collapse").replace({"end": "2 s"})
    assert not burst.rate([-1.0, 2.1], [10.0]).any()
    assert burst.rate([1.9], [10.0]).all()
    assert np.isnan(burst.mean_energy([-1.0, 2.1])).all()


def test_summary_warns() -> None:
    """A total or a mean energy that no core collapse has is told in a plain sentence."""
    tenth = {name: value.replace("e52", "e51") for name, value in ENERGY.items()}
    hot = {**MEAN, "nu_x": "40 MeV"}
    warnings = Burst.integrated(energy=tenth, mean_energy=hot, pinching=PINCHING).summary().warnings
    assert [w.split(" ")[0] for w in warnings] == ["All", "The", "The"]
    assert "2.1e+52 erg" in warnings[0]
    assert "mean energy of nu_x is 40 MeV" in warnings[1]


def test_summary_prints_within_78_columns() -> None:
    """The table fits a narrow terminal, warnings included, and repr is the same."""
    tenth = {name: value.replace("e52", "e51") for name, value in ENERGY.items()}
    summary = Burst.integrated(energy=tenth, mean_energy=MEAN, pinching=PINCHING).summary()
    assert repr(summary) == str(summary)
    assert max(len(line) for line in str(summary).splitlines()) <= 78
    assert "all six kinds: 2.1e+52 erg" in str(summary)


def test_silent_species() -> None:
    """A species without energy has no mean energy, and the rest is unaffected."""
    energy = {**ENERGY, "nu_x": "0 erg"}
    summary = Burst.integrated(energy=energy, mean_energy=MEAN, pinching=PINCHING).summary()
    assert math.isnan(summary.mean_energy_mev[2])
    assert summary.total_energy_erg == pytest.approx(9e52, rel=1e-12)


# each example reads a file twice; the clock of a shared machine proves nothing
@settings(deadline=None, max_examples=25)
@given(factor=st.floats(0.1, 10.0))
def test_linear_in_luminosity(factor: float) -> None:
    """Twice the luminosity is twice the energy and number, at the same mean energy."""
    burst = Burst.preset("ordinary-collapse")
    scaled = burst.replace(
        {
            "peak.peak_luminosity": f"{3.8e53 * factor!r} erg/s",
            **{
                f"core.accretion_luminosity_each.{name}": f"{value * factor!r} erg/s"
                for name, value in (("nu_e", 4.6e52), ("anti_nu_e", 4.3e52), ("nu_x", 2.2e52))
            },
            "core.cooling_scale": 2.724 * factor,
        }
    )
    one, many = burst.summary(), scaled.summary()
    assert many.number == pytest.approx([factor * n for n in one.number], rel=1e-9)
    assert many.mean_energy_mev == pytest.approx(one.mean_energy_mev, rel=1e-9)
