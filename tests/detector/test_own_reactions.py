"""Reactions of a user's own: tables of cross sections and nuclei, checked and counted once."""

from __future__ import annotations

import numpy as np
import pytest

from tenkpc import Burst, Detector, Forecast, Unconverted, data, interactions
from tenkpc.detector.nucleus_file import NucleusKeys
from tenkpc.errors import FileError, UnknownNameError
from tenkpc.textfiles import parse

HEAD = (
    'title = "T"\n[[volume]]\nname = "v"\nmass = "1 kt"\nformula = "Ar"\n'
    '[response]\nmedium = "ionisation"\n'
)
TABLE = """
[[interaction]]
key = "my-argon"
equation = "νe + Ar → e⁻ + K"
target = "Ar"
species = ["nu_e"]
file = "sigma.csv"
energy = { column = "E", unit = "MeV" }
sigma = { column = "xs", unit = "1e-42 cm^2" }
lead = "electron"
cost = "3.8 MeV"
error = "factor 1.3"
source = "a thesis"
replaces = ["argon-to-potassium"]
"""
NUCLEUS = """
[[nucleus]]
file = "nucleus.toml"
replaces = ["argon-excited", "argon-to-chlorine", "argon-to-potassium"]
"""
BURST = Burst.preset("equipartition")
BUILT_IN = interactions.by_key("argon-to-potassium")


def write_table(folder, unit=1e-42, energies=None):
    """Write the package's own cross section on argon as a user's table."""
    energy = np.linspace(3.8374, 100, 300) if energies is None else energies
    lines = (f"{e},{s / unit}" for e, s in zip(energy, BUILT_IN.sigma("nu_e", energy), strict=True))
    (folder / "sigma.csv").write_text("E,xs\n" + "\n".join(lines))


def own_nucleus(**changes):
    """Text of the package's argon under keys of one's own."""
    text = data.text("nuclei/argon.toml")
    for key in ("argon-to-potassium", "argon-to-chlorine", "argon-excited"):
        text = text.replace(key, f"own-{key}")
    for old, new in changes.values():
        assert old in text
        text = text.replace(old, new, 1)
    return text


def detector(text, folder):
    """Read a detector with further tables."""
    return Detector.parse(HEAD + text, folder=str(folder))


def counts(made, **inputs):
    """Forecast it without conversion."""
    return Forecast(made, BURST, distance="10 kpc", conversion=Unconverted(), **inputs)


def test_a_table_counts_like_what_it_was_made_of(tmp_path):
    """The package's cross section written down and read again: 1e-4, and its error as a factor."""
    write_table(tmp_path)
    frame = counts(detector(TABLE, tmp_path)).counts
    plain = counts(detector("", tmp_path)).counts
    assert "argon-to-potassium" not in frame.index
    row, expected = frame.loc["my-argon"], plain.loc["argon-to-potassium"]
    assert row["reactions"] == pytest.approx(expected["reactions"], rel=1e-4)
    assert row["cross_section_high"] == pytest.approx(1.3 * row["counted"], rel=1e-6)
    assert row["cross_section_low"] == pytest.approx(row["counted"] / 1.3, rel=1e-6)


@pytest.mark.parametrize("unit", ["cm^2", "fm^2", "1e-38 cm^2", "pb", "m^2"])
def test_units_of_the_table(unit, tmp_path):
    """Whatever unit is declared, the cross section is the same."""
    worth = {"cm^2": 1.0, "fm^2": 1e-26, "1e-38 cm^2": 1e-38, "pb": 1e-36, "m^2": 1e4}
    write_table(tmp_path, unit=worth[unit])
    made = detector(TABLE.replace("1e-42 cm^2", unit), tmp_path).reaction("my-argon")
    energy = np.array([10.0, 20.0, 40.0])
    assert made.sigma("nu_e", energy) == pytest.approx(BUILT_IN.sigma("nu_e", energy), rel=1e-4)


def test_the_page_shows_both(tmp_path):
    """What the replaced interaction would have counted stands on the page; check prints both σ."""
    write_table(tmp_path)
    made = detector(TABLE, tmp_path)
    page = " ".join(repr(counts(made)).split())
    assert "replaced 81.3 of argon-to-potassium of the package" in page
    assert "my-argon: a thesis, a table of the user's own" in page
    lines = made.describe().splitlines()
    mine, theirs = (next(line for line in lines if key in line) for key in ("my-argon", "replaces"))
    assert mine.split()[-3:] == theirs.split()[-3:]


def test_a_record_holds_the_table(tmp_path):
    """From JSON the same total comes back, without the files."""
    write_table(tmp_path)
    made = counts(detector(TABLE, tmp_path))
    again = Forecast.from_json(made.to_json())
    assert again.total == pytest.approx(made.total, rel=1e-10)


def test_nothing_is_counted_twice(tmp_path):
    """The same events of the package have to be replaced or switched off."""
    write_table(tmp_path)
    alone = TABLE.replace('replaces = ["argon-to-potassium"]\n', "")
    with pytest.raises(FileError, match=r'as argon-to-potassium: say replaces = \["argon-to'):
        detector(alone, tmp_path)
    off = detector(f"{alone}\n[interactions]\nargon-to-potassium = false\n", tmp_path)
    assert counts(off).total == pytest.approx(counts(detector(TABLE, tmp_path)).total)
    with pytest.raises(FileError, match="is replaced, so it cannot be chosen here"):
        detector(f"{TABLE}\n[interactions]\nargon-to-potassium = true\n", tmp_path)
    with pytest.raises(FileError, match="'argon-to-potassium' is taken"):
        detector(alone.replace('"my-argon"', '"argon-to-potassium"'), tmp_path)


def test_own_keys_are_switched_and_scaled(tmp_path):
    """[interactions] and the argument know the file's own keys."""
    write_table(tmp_path)
    made = detector(TABLE, tmp_path)
    half = counts(made, interactions={"my-argon": 0.5}).counts.loc["my-argon", "counted"]
    assert half == pytest.approx(0.5 * counts(made).counts.loc["my-argon", "counted"])
    scaled = detector(f"{TABLE}\n[interactions]\nmy-argon = 0.5\n", tmp_path)
    assert counts(scaled).counts.loc["my-argon", "counted"] == pytest.approx(half)
    assert "my-argon" not in counts(made, interactions={"my-argon": False}).counts.index
    with pytest.raises(UnknownNameError, match="did you mean"):
        made.reaction("argon-to-potasium")


@pytest.mark.parametrize(
    ("old", "new", "words"),
    [
        ('"1e-42 cm^2"', '"1e-42 cm"', "sigma.unit: '1e-42 cm' is a length; expected an area"),
        ('"1e-42 cm^2"', '"cm^2"', "the largest cross section is .*is its unit"),
        ('unit = "MeV"', 'unit = "s"', "energy.unit: .* is a time; expected an energy"),
        ('unit = "MeV"', 'unit = "keV"', "outside the table|above zero at|ascending|expected"),
        ('column = "xs"', 'column = "sigma"', "sigma"),
        ('lead = "electron"', 'lead = "gamma"', "gamma: is missing"),
        ('lead = "electron"', 'lead = "neutron"', "neutrons: is missing"),
        ('lead = "electron"', 'lead = "muon"', "expected one of electron, positron"),
        ('cost = "3.8 MeV"\n', "", "cost: is missing"),
        ('cost = "3.8 MeV"', 'cost = "9 MeV"', "where no lepton can leave: it costs 9 MeV"),
        ('error = "factor 1.3"', 'error = "factor 1"', "expected an error above zero"),
        ('error = "factor 1.3"', "error = 3", "share between 0 and 1"),
        ('source = "a thesis"\n', "", "source: required key is missing"),
        ('target = "Ar"', 'target = "Xq"', "no element has the symbol 'Xq'"),
        ('target = "Ar"', 'target = "H2O"', "is no electron, element or isotope"),
        ('["argon-to-potassium"]', '["argon-to-potasium"]', "did you mean 'argon-to-potassium'"),
        ('species = ["nu_e"]', 'species = ["nu_mu"]', "expected one of nu_e"),
        ('source = "a', 'window = ["1 MeV", "50 MeV"]\nsource = "a', "window lies outside"),
        ('key = "my-argon"', 'key = "My Argon"', "key"),
    ],
)
def test_mistakes_are_named(old, new, words, tmp_path):
    """Units, columns, what leaves, targets, errors: each in a sentence with its path."""
    write_table(tmp_path)
    assert old in TABLE
    with pytest.raises(FileError, match=words):
        detector(TABLE.replace(old, new, 1), tmp_path)


def test_bad_tables(tmp_path):
    """Rows out of order, negative values, too few of them."""
    for rows in ("10,1\n5,1\n20,3", "5,1\n10,-1\n20,3", "5,1\n20,3", "5,0\n10,0\n20,0"):
        (tmp_path / "sigma.csv").write_text(f"E,xs\n{rows}\n")
        with pytest.raises(FileError, match="expected"):
            detector(TABLE, tmp_path)


def test_a_nucleus_of_ones_own_is_like_one_of_the_package(tmp_path):
    """The package's argon under other keys counts the same, in every final state."""
    (tmp_path / "nucleus.toml").write_text(own_nucleus())
    mine, plain = (counts(detector(text, tmp_path)) for text in (NUCLEUS, ""))
    assert mine.total == pytest.approx(plain.total, rel=1e-12)
    assert mine.counts.loc["own-argon-excited", "counted"] == pytest.approx(
        plain.counts.loc["argon-excited", "counted"]
    )


def test_a_nucleus_may_have_options(tmp_path):
    """A named option of one's own is chosen like any other."""
    options = (
        "relative_error = { energy_mev = [20.0], error = [0.2] }",
        "relative_error = { energy_mev = [20.0], error = [0.2] }\n"
        "options = { high = { bound = 1.0, unbound = 1.0 }, low = { bound = 0.5, unbound = 0.5 } }",
    )
    (tmp_path / "nucleus.toml").write_text(own_nucleus(options=options))
    key = "own-argon-to-potassium"
    high, low = (
        counts(detector(f'{NUCLEUS}\n[interactions]\n{key} = "{name}"\n', tmp_path))
        for name in ("high", "low")
    )
    ratio = low.counts.loc[key, "reactions"] / high.counts.loc[key, "reactions"]
    assert ratio == pytest.approx(0.5)
    with pytest.raises(FileError, match="did you mean 'high'"):
        detector(f'{NUCLEUS}\n[interactions]\n{key} = "hig"\n', tmp_path)
    with pytest.raises(FileError, match="no interaction has this key"):
        detector(f"{NUCLEUS}\n[interactions]\nown-argon-to-potasium = 2.0\n", tmp_path)


@pytest.mark.parametrize("name", data.names("nuclei"))
def test_files_of_the_package_are_such_files(name):
    """Every nucleus of the package passes the check of users' files."""
    parse(data.text(f"nuclei/{name}.toml"), NucleusKeys, name)


@pytest.mark.parametrize(
    ("old", "new", "words"),
    [
        ("fermi = [[4.384", "fermi = [[-4.384", "fermi.1.1: expected at least 0"),
        ('current = "positron"', 'current = "positon"', "did you mean 'positron'"),
        ("separation_mev = [7.80]", "separation_mev = [9.0, 7.8]", "of one and of two neutrons"),
        ('stands_for = "Ar"', 'stands_for = "Arg"', "Arg"),
        ("magnetic_dipole =", "magnetic_diple =", "did you mean 'magnetic_dipole'"),
        ("error = [0.2]", "error = [0.2, 0.3]", "as many values as there are energies"),
        ('current = "neutral"', 'current = "electron"', "belongs to the neutral current"),
        ("end_mev = 60.0", "end_mev = 600.0", "end_mev"),
        ('reactions = ["own-argon-excited"]', 'reactions = ["x"]', "'x' is no reaction"),
        ("[reactions.own-argon-excited]", "[reactions.Own_Argon]", "small letters"),
    ],
)
def test_mistakes_of_a_nucleus_are_named(old, new, words, tmp_path):
    """With the file of the nucleus, its line and the key path."""
    (tmp_path / "nucleus.toml").write_text(own_nucleus(change=(old, new)))
    with pytest.raises(FileError, match=words) as caught:
        detector(NUCLEUS, tmp_path)
    assert "nucleus.toml" in str(caught.value)
