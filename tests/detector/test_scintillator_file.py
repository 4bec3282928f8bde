"""Detector files of scintillators: light of protons, kinds of energy, backgrounds, errors."""

from __future__ import annotations

import numpy as np
import pytest

from tenkpc import Detector
from tenkpc.constants import ELECTRON_MASS_MEV
from tenkpc.errors import FileError

HALL = Detector.gallery("brine-hall")
TEXT = HALL.text


def changed(old, new):
    """Read the gallery's file with one line written otherwise."""
    assert old in TEXT
    return Detector.parse(TEXT.replace(old, new, 1))


def test_the_gallery_file_says_what_it_means():
    """Kinds of energy, light of each particle, backgrounds per second, errors."""
    response = HALL.volumes[0].response
    assert response.kind == "visible"
    assert response.event_offset_mev == 0.0
    assert response.visible("positron", 3.0) == pytest.approx(3.0 + 2 * ELECTRON_MASS_MEV)
    assert response.visible("gamma", 3.0) == 3.0
    assert response.visible("alpha", 3.0) is None
    assert 0.15 < response.visible("proton", 1.0) < 0.3
    assert [source.name for source in HALL.backgrounds] == ["outside gammas", "cosmogenic decays"]
    assert HALL.backgrounds[0].rate_hz == pytest.approx(40 / 86400)
    assert (HALL.mass_error, HALL.efficiency_error, HALL.scale_error) == (0.01, 0.015, 0.005)
    assert HALL.quenching == "Birks' law with 0.0104 cm/MeV"


def test_birks_comes_in_two_dimensions():
    """Per length with a density, or per area without: the same light."""
    per_area = changed('"0.0104 cm/MeV"', f'"{0.0104 * 0.86!r} g/cm^2/MeV"')
    for kinetic in (0.5, 2.0, 8.0):
        expected = HALL.volumes[0].response.visible("proton", kinetic)
        assert per_area.volumes[0].response.visible("proton", kinetic) == pytest.approx(
            expected, rel=1e-9
        )


def test_volumes_of_other_materials_have_a_light_of_their_own():
    """Two hydrocarbons of different density share all but the light of protons."""
    second = '[[volume]]\nname = "shell"\nmass = "1 kt"\nformula = "CH2"\ndensity = "0.7 g/cm^3"\n'
    made = Detector.parse(TEXT.replace("[response]", f"{second}\n[response]", 1))
    inner, outer = (volume.response for volume in made.volumes)
    assert inner.threshold_mev == outer.threshold_mev
    assert inner.visible("proton", 2.0) < outer.visible("proton", 2.0)
    same = second.replace(
        'formula = "CH2"\ndensity = "0.7 g/cm^3"', 'material = "linear alkylbenzene"'
    )
    made = Detector.parse(TEXT.replace("[response]", f"{same}\n[response]", 1))
    assert made.volumes[0].response is made.volumes[1].response


def test_a_table_of_light(tmp_path):
    """Columns of kinetic and visible energy, read both ways; its end has to be said."""
    (tmp_path / "light.csv").write_text("kinetic_mev,visible_mev\n0.5,0.1\n1,0.25\n10,6\n")
    text = TEXT.replace('birks = "0.0104 cm/MeV"', 'quenching = { file = "light.csv" }')
    with pytest.raises(FileError, match=r'ends at 10 MeV.*beyond = "extend"'):
        Detector.parse(text, folder=str(tmp_path))
    text = text.replace('"light.csv" }', '"light.csv", beyond = "extend" }')
    made = Detector.parse(text, folder=str(tmp_path))
    assert made.volumes[0].response.visible("proton", 0.25) == pytest.approx(0.05)
    slope = (6 - 0.25) / 9
    assert made.volumes[0].response.visible("proton", 20.0) == pytest.approx(6 + 10 * slope)
    assert made.quenching == "table light.csv"
    (tmp_path / "light.csv").write_text("kinetic_mev,visible_mev\n1,0.5\n2,0.4\n")
    with pytest.raises(FileError, match="ascend from zero"):
        Detector.parse(text, folder=str(tmp_path))


def test_no_quenching_has_to_be_written():
    """Without a word about protons a scintillator is refused; "none" is a word."""
    made = changed('birks = "0.0104 cm/MeV"', 'quenching = "none"')
    assert made.volumes[0].response.visible("proton", 3.0) == 3.0
    with pytest.raises(FileError, match=r"give birks .hydrocarbons., or quenching.*found neither"):
        changed('birks = "0.0104 cm/MeV"\n', "")
    with pytest.raises(FileError, match="found birks and quenching"):
        changed("birks =", 'quenching = "none"\nbirks =')
    with pytest.raises(FileError, match="expected one of lindhard, none"):
        changed('birks = "0.0104 cm/MeV"', 'quenching = "lots"')


@pytest.mark.parametrize(
    ("old", "new", "words"),
    [
        ('material = "linear alkylbenzene"', 'formula = "C16H18"', "density: is missing; birks in"),
        ('material = "linear alkylbenzene"', 'material = "light water"', "holds O: give quenching"),
        ('"0.0104 cm/MeV"', '"0.0104 MeV"', "expected a value in cm/MeV or g/cm.2/MeV"),
        ('"0.0104 cm/MeV"', '"-0.1 cm/MeV"', "expected 0 to 0.1 cm/MeV"),
        ('"0.0104 cm/MeV"', '"0.0104 m/MeV"', "expected 0 to 0.1 cm/MeV"),
        ('"0.0104 cm/MeV"', "0.0104", "expected a value with its unit"),
        ('energy = "visible"', 'energy = "total"', "a scintillator reports visible energy"),
        ('"0.25 MeV"', '{ value = "1 MeV", of = "kinetic" }', "threshold.of.*reports visible"),
        ('rate = "40 /day"', 'rate = "40 MeV"', "is an energy; expected a rate"),
        ('rate = "40 /day"', 'rate = "-40 /day"', "expected at least 0 1/s"),
        ('shape = "exponential"', 'shape = "gaussian"', "width: is missing"),
        ('shape = "exponential"', 'shape = "exponental"', "did you mean 'exponential'"),
        ('mean = "1.2 MeV"', 'mean = "1.2 MeV"\nindex = 2', "does not belong to the shape"),
        ('mean = "1.2 MeV"', 'mean = "0 MeV"', "expected a mean or width above zero"),
        ('name = "cosmogenic decays"', 'name = "outside gammas"', "two tables of background"),
        ('energy_scale = "0.5 %"', 'energyscale = "0.5 %"', "did you mean 'energy_scale'"),
        ('mass = "1 %"', 'mass = "120 %"', "share between 0 and 1"),
    ],
)
def test_mistakes_are_named(old, new, words):
    """Each in a sentence with its key."""
    with pytest.raises(FileError, match=words):
        changed(old, new)


@pytest.mark.parametrize(
    ("lines", "words"),
    [
        ('shape = "constant"\nfrom = "3 MeV"\nto = "1 MeV"', "expected from to be less than to"),
        ('shape = "constant"\nfrom = "0.1 MeV"\nto = "0.2 MeV"', "above the threshold of 0.25 MeV"),
        ('shape = "power"\nindex = -2\nfrom = "0 MeV"\nto = "2 MeV"', "a power starts above zero"),
        ('shape = "table"\nfile = "shape.csv"', "densities that are not negative"),
        ('shape = "constant"\nto = "2 MeV"', "from: is missing"),
    ],
)
def test_shapes_that_make_no_sense(tmp_path, lines, words):
    """Each in a sentence."""
    (tmp_path / "shape.csv").write_text("energy_mev,density\n0.3,1\n0.5,-1\n")
    text = TEXT.replace('shape = "exponential"\nmean = "1.2 MeV"', lines)
    with pytest.raises(FileError, match=words):
        Detector.parse(text, folder=str(tmp_path))


def test_a_rate_per_mass_is_of_the_whole_detector(tmp_path):
    """40 a day per kiloton, of 12 kt; and a shape from a table."""
    (tmp_path / "shape.csv").write_text("energy_mev,density\n0.1,1\n2,1\n4,0\n")
    new = 'rate = "40 /day"\nper = "1 kt"\nshape = "table"\nfile = "shape.csv"'
    old = 'rate = "40 /day"\nshape = "exponential"\nmean = "1.2 MeV"'
    made = Detector.parse(TEXT.replace(old, new), folder=str(tmp_path))
    source = made.backgrounds[0]
    assert source.rate_hz == pytest.approx(12 * 40 / 86400)
    found = source.spectrum_hz(np.array([0.0, 2.0, 4.0]), 0.0, 0.25)
    assert found == pytest.approx(source.rate_hz * np.array([1.75, 1.0, 0.0]) / 2.75)
    assert dict(made.document.tables).keys() == {"shape.csv"}
