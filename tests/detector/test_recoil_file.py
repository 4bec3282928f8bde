"""Detector files of recoil detectors: whose energy it is, quenching, yields, thresholds."""

from __future__ import annotations

import numpy as np
import pytest

from tenkpc import Burst, Detector, Forecast, Unconverted
from tenkpc.detector.quenching import Plain
from tenkpc.errors import FileError, InputError, UnitError

HEAD = 'title = "Recoils"\n[[volume]]\nname = "main"\nmass = "1 t"\nformula = "Xe"\n'
BURST = Burst.preset("equipartition")


def detector(response, *, head=HEAD, folder="."):
    """Read a recoil detector with some lines of response."""
    return Detector.parse(f'{head}[response]\nmedium = "recoil"\n{response}\n', folder=folder)


def counted(response, **inputs):
    """Forecast it."""
    made = detector(response, **inputs)
    return Forecast(made, BURST, distance="10 kpc", conversion=Unconverted()).total


@pytest.mark.parametrize(
    ("response", "words"),
    [
        ('threshold = "3 keV"', "does not say whose energy it is; write keVnr.*or keVee"),
        ('threshold = { value = "3 keV" }', "does not say whose energy it is"),
        ('threshold = { value = "3 keVnr", of = "recoil" }', "the unit says it"),
        ('energy = "visible"\nthreshold = "3 keVee"', "quenching: is missing"),
        ('threshold = "3 keVee"', "quenching: is missing"),
        ('threshold = "3 keVnr"\nresolution = { noise = "1 keVee" }', "energies are in keVnr here"),
        ('threshold = "3 keVnr"\nresolution = { noise = "1 keV" }', "does not say whose"),
        (
            'efficiency = { points = [["1 keV", 0.2], ["3 keVnr", 0.9]], beyond = "hold" }',
            "points.*'1 keV' does not say",
        ),
        ('threshold = "0 electrons"', "expected at least 1"),
        ('threshold = "4 electrons"', "charge_yield: is missing: a threshold in electrons"),
        ('threshold = "1 photoelectron"', "light_yield: is missing"),
        ('charge_yield = "5 electrons/keV"', "electrons or photoelectrons per keVnr or keVee"),
        ('charge_yield = "5 photoelectrons/keVnr"', "is in electrons; found"),
        ('charge_yield = "x electrons/keVnr"', "expected a number above zero"),
        ('charge_yield = "7 electrons/keVee"\nthreshold = "3 electrons"', "quenching: is missing"),
        ('threshold = "3 keVnr"\nlindhard_k = 0.15', 'belongs to quenching = "lindhard"'),
        ('quenching = "lindhardt"', "did you mean 'lindhard'"),
        ('birks = "0.01 cm/MeV"', "does not belong to a recoil, which has charge_yield"),
        ('energy = "total"', "a recoil reports recoil or visible energy"),
        ("energy = []", "energy"),
        ("energy = { value = 3 }", "energy"),
        ('threshold = "3 MeVnr"\nlight_yield = 3', "expected a number of electrons"),
    ],
)
def test_mistakes_are_named(response, words):
    """Plain keV, a kind that does not fit, quanta without a yield."""
    with pytest.raises(FileError, match=f"(?s){words}"):
        detector(response)


def test_other_media_have_no_such_units():
    """A label where there is one kind of energy only."""
    text = Detector.gallery("mere-tank").text.replace('"6 MeV", 0.55', '"6 MeVee", 0.55')
    assert "MeVee" in text
    with pytest.raises(FileError, match="has no label 'ee' here"):
        Detector.parse(text)


def test_backgrounds_say_whose_energy_it_is():
    """Their shapes are in the observed kind too."""
    lines = '[[background]]\nname = "b"\nrate = "1 /day"\nshape = "exponential"\nmean = '
    assert detector(f'threshold = "3 keVnr"\n{lines}"2 keVnr"').backgrounds[0].rate_hz > 0
    for mean, words in (("2 keV", "does not say whose"), ("2 keVee", "energies are in keVnr here")):
        with pytest.raises(FileError, match=f"background.b.mean: .*{words}"):
            detector(f'threshold = "3 keVnr"\n{lines}"{mean}"')


def test_the_threshold_says_which_kind_is_observed():
    """Without a word about energy the unit of the threshold decides, and nuclei are the default."""
    kinds = {
        'threshold = "3 keVnr"': "recoil",
        'threshold = "3 keVee"\nquenching = "lindhard"': "visible",
        "": "recoil",
    }
    for response, kind in kinds.items():
        assert detector(response).response.kind == kind


def test_a_threshold_of_the_other_kind_is_the_same_cut():
    """At perfect resolution, 1 keVee before resolution is Q(T) T = 1 keV of each isotope, 1e-5."""
    both = 'quenching = "lindhard"\nthreshold = "1 keVee"\n'
    observed, beside = counted(both), counted(f'energy = "recoil"\n{both}')
    assert beside == pytest.approx(observed, rel=1e-5)
    assert counted('quenching = "none"\nthreshold = "1 keVee"') == pytest.approx(
        counted('threshold = "1 keVnr"'), rel=1e-6
    )
    assert observed < 0.6 * counted('threshold = "1 keVnr"')


def test_lindhard_of_each_nucleus():
    """K from Z and A of the nucleus that recoils, or one for all as given."""
    head = HEAD.replace('"Xe"', '"CsI"')
    made = detector('threshold = "1 keVee"\nquenching = "lindhard"', head=head)
    light = made.volumes[0].response.light
    assert set(light) == {"Cs-133", "I-127"}
    assert light["I-127"].visible(0.01) > light["Cs-133"].visible(0.01)
    given = detector('threshold = "1 keVee"\nquenching = "lindhard"\nlindhard_k = 0.1', head=head)
    assert given.volumes[0].response.light["I-127"].visible(0.01) < light["I-127"].visible(0.01)
    assert "k 0.1" in given.quenching
    plain = detector('threshold = "1 keVnr"')
    assert all(isinstance(light, Plain) for light in plain.volumes[0].response.light.values())


def test_tables(tmp_path):
    """Light against recoil energy, and yields; ends have to be said."""
    (tmp_path / "light.csv").write_text("recoil_kev,visible_kev\n1,0.2\n10,2.5\n")
    with pytest.raises(FileError, match=r"ends at 0\.01 MeV and recoils have up to 20 MeV"):
        detector('energy = "visible"\nquenching = { file = "light.csv" }', folder=str(tmp_path))
    made = detector(
        'energy = "visible"\nquenching = { file = "light.csv", beyond = "extend" }',
        folder=str(tmp_path),
    )
    assert made.volumes[0].response.light["Xe-132"].visible(0.0005) == pytest.approx(0.0001)
    (tmp_path / "charge.csv").write_text("recoil_kev,quanta_per_kev\n0.7,6\n10,4\n")
    text = 'threshold = "4 electrons"\ncharge_yield = { file = "charge.csv" }'
    with pytest.raises(FileError, match=r'0\.7 to 10 keV only.*"hold" or "zero"'):
        detector(text, folder=str(tmp_path))
    totals = [
        counted(text.replace('csv" }', f'csv", beyond = "{beyond}" }}'), folder=str(tmp_path))
        for beyond in ("zero", "hold")
    ]
    assert 0 < totals[0] < totals[1]


def test_fewer_registered_quanta_are_fewer_events():
    """A share registered, and a number that fluctuates, both move the counts as they should."""
    base = 'threshold = "4 electrons"\ncharge_yield = { value = "6 electrons/keVnr"'
    whole, half = counted(f"{base} }}"), counted(f"{base}, registered = 0.5 }}")
    assert 0 < half < whole
    fixed = counted(f'{base} }}\nfluctuation = "binomial"')
    step = counted('threshold = "0.5833333 keVnr"')
    # all registered and the number fixed: a ramp from 3/6 to 4/6 keV, about its middle
    assert fixed == pytest.approx(step, rel=2e-3)


def test_the_page_says_whose_energy():
    """KeVnr in the sentence, keV on the axis, quanta in words."""
    words = " ".join(repr(forecast('threshold = "1.5 keVnr"')).split())
    assert "observed above 1.5 keVnr." in words
    assert "recoil" in words
    words = " ".join(
        repr(forecast('threshold = "4 electrons"\ncharge_yield = "6 electrons/keVnr"')).split()
    )
    assert "observed with at least 4 electrons." in words
    text = forecast(
        'threshold = "1.5 keVnr"\nresolution = { stochastic = 0.3, noise = "0.1 keVnr" }'
    ).explain()
    assert "0.3/√(E/keVnr) ⊕ 0.1 keVnr/E" in text


def forecast(response):
    """Forecast a detector with some lines of response."""
    return Forecast(detector(response), BURST, distance="10 kpc")


def test_cuts_and_bins_say_whose_energy():
    """A bare keV is refused as a cut; the wrong letters are refused as bins too."""
    made = forecast('threshold = "1 keVnr"')
    assert made.within(energy_above="2 keVnr").total < made.total
    for wrong in ("2 keV", "2 keVee"):
        with pytest.raises(InputError, match="reports energies in keVnr"):
            made.within(energy_above=wrong)
    assert len(made.spectrum(bins="2 keV")) == 51
    with pytest.raises(InputError, match="reports energies in keVnr"):
        made.spectrum(bins="2 keVee")
    tank = Forecast(Detector.gallery("mere-tank"), BURST, distance="10 kpc")
    with pytest.raises((InputError, UnitError)):
        tank.within(energy_above="2 MeVee")
    assert made.spectrum().index[1] == pytest.approx(1e-3)
    frame = made.breakdown
    assert set(frame["seen_as"]) == {"nuclear recoil", "not seen"}
    assert np.count_nonzero(frame["counted"]) == 9 * 4
