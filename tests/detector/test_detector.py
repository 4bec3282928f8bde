"""Detector files: what they mean, what they may leave out, and what is wrong with them."""

from __future__ import annotations

import pytest

from tenkpc import Detector
from tenkpc.constants import ELECTRON_MASS_MEV
from tenkpc.detector import gallery
from tenkpc.errors import FileError, InputError

PLAIN = """
title = "plain"

[[volume]]
name = "tank"
mass = "2 kt"
formula = "H2O"

[response]
medium = "cherenkov"
"""

EIGHT_MISTAKES = """title = "eight"

[[volume]]
name = "tank"
mass = "25 kpc"
formula = "H20"

[response]
medium = "cherenkof"
treshold = "5 MeV"
resolution = { stochastic = "wide" }
efficiency = 95
live_fraction = -0.1

[interactions]
inverse-beta-decy = false
"""


def response(lines):
    """Response of a plain tank with further lines in its last table."""
    return Detector.parse(PLAIN + lines).response


def test_what_is_left_out_is_perfect():
    """No threshold, no resolution, every event kept, always live; total energy by default."""
    plain = response("")
    assert (plain.kind, plain.threshold_mev, plain.live_fraction) == ("total", 0.0, 1.0)
    assert plain.efficiency.values == (1.0,)
    assert plain.event_offset_mev == ELECTRON_MASS_MEV


def test_a_threshold_may_name_another_kind_of_energy():
    """5 MeV kinetic is 5.511 MeV total, and the other way round."""
    of_kinetic = response('threshold = { value = "5 MeV", of = "kinetic" }')
    assert of_kinetic.threshold_mev == pytest.approx(5.511, abs=1e-4)
    of_total = response('energy = "kinetic"\nthreshold = { value = "5 MeV", of = "total" }')
    assert of_total.threshold_mev == pytest.approx(4.489, abs=1e-4)


def test_resolution_terms_have_names():
    """Stochastic, constant and noise terms, added linearly where the file says so."""
    text = 'resolution = { stochastic = 0.3, constant = 0.02, noise = "1 MeV", combine = "linear" }'
    width = response(text).resolution
    assert (width.stochastic, width.constant, width.noise_mev, width.linear) == (0.3, 0.02, 1, True)


def test_an_efficiency_may_be_a_number_points_or_a_table(tmp_path):
    """Per cent, points in the file, points in a table beside it; of observed or true energy."""
    assert response('efficiency = "94 %"').efficiency.values == (0.94,)
    points = 'efficiency = { points = [["1 MeV", 0.2], ["3 MeV", "95 %"]], beyond = "hold" }'
    assert response(points).efficiency.knots_mev == (1.0, 3.0)
    (tmp_path / "eff.csv").write_text("energy_mev,efficiency\n1,0.2\n3,0.95\n")
    path = tmp_path / "tank.toml"
    path.write_text(PLAIN + 'efficiency = { file = "eff.csv", of = "true", beyond = "zero" }')
    made = Detector.load(path)
    assert made.response.true_efficiency.values == (0.2, 0.95)
    assert made.response.true_efficiency.zero_outside
    assert made.response.efficiency.values == (1.0,)
    assert dict(made.document.tables)["eff.csv"].startswith("energy_mev")


@pytest.mark.parametrize(
    ("points", "message"),
    [
        ('[["1 MeV", 0.2], ["3 MeV", 0.9]]', "say what holds beyond"),
        ('[["3 MeV", 0.2], ["1 MeV", 0.9]]', "ascending"),
        ("[]", "ascending"),
    ],
)
def test_points_that_make_no_curve_are_refused(points, message):
    """A table outside its range is a mistake unless the file says what holds there."""
    with pytest.raises(FileError, match=message):
        response(f"efficiency = {{ points = {points} }}")


def test_points_may_start_at_the_threshold():
    """Nothing below the threshold is asked of a curve in observed energy."""
    made = response(
        'threshold = "5 MeV"\nefficiency = { points = [["5 MeV", 0.2], ["200 MeV", 0.9]] }'
    )
    assert made.efficiency.knots_mev == (5.0, 200.0)


def test_eight_mistakes_are_reported_in_one_go():
    """Each with its line and path; nothing hides behind a misspelt medium."""
    with pytest.raises(FileError) as caught:
        Detector.parse(EIGHT_MISTAKES)
    found = {(p.line, p.path) for p in caught.value.problems}
    assert found == {
        (5, "volume.tank.mass"),
        (6, "volume.tank.formula"),
        (9, "response.medium"),
        (10, "response.treshold"),
        (11, "response.resolution.stochastic"),
        (12, "response.efficiency"),
        (13, "response.live_fraction"),
        (16, "interactions.inverse-beta-decy"),
    }


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"volume.tank.mass": "3 ton"}, "tonne"),
        ({"volume.tank.material": "light water"}, "give one of"),
        ({"volume.tank.formula": "C18H3O0x"}, "formula|symbol"),
        ({"interactions.electron-scattering": "radiativ"}, "did you mean 'radiative'"),
        ({"interactions.electron-scattering": -1.0}, "positive factor"),
        ({"interactions.inverse-beta-decay": "tree"}, "there are: none"),
        ({"response.energy": "visible"}, "reports total or kinetic energy"),
        ({"response.energy": "visble"}, "did you mean 'visible'"),
        ({"response.birks": "0.01 cm/MeV"}, "does not belong to a cherenkov"),
        ({"volume": []}, "at least one volume"),
    ],
)
def test_changes_are_checked_like_files(change, message):
    """What a file may not say, a change may not either."""
    with pytest.raises(InputError, match=message):
        Detector.parse(PLAIN).replace(change)


def test_equal_files_are_equal_detectors():
    """Detectors compare by what they say, so that compiled ones are found again."""
    one, other = Detector.parse(PLAIN), Detector.parse(PLAIN, origin="elsewhere")
    assert one == other
    assert hash(one) == hash(other)
    assert one.replace({"volume.tank.mass": "3 kt"}) != one


def test_several_volumes_add_up():
    """Masses and targets are those of all volumes, and each is described."""
    second = '\n[[volume]]\nname = "rim"\nmass = "1 kt"\nmass_fractions = { H = 0.2, C = 0.8 }\n'
    made = Detector.parse(PLAIN + second)
    assert made.mass_kg == pytest.approx(3e6)
    parts = sum(volume.targets("H-1") for volume in made.volumes)
    assert made.targets("H-1") == parts
    words = made.describe()
    assert "tank: H2O" in words
    assert "C-12 nuclei" in words


@pytest.mark.parametrize("name", gallery.names())
def test_the_gallery_loads_and_describes_itself(name):
    """Each invented detector has a title, a line about it and free protons or electrons."""
    made = Detector.gallery(name)
    assert made.title
    assert made.about.startswith("Invented example")
    assert made.targets("electron") > 0
    assert "electrons" in made.describe()


def test_unknown_gallery_names_get_the_nearest():
    """A slip is answered with the name that was meant."""
    with pytest.raises(InputError, match="did you mean 'mere-tank'"):
        Detector.gallery("mere-tnk")
