"""Names that keep off each other, foot lines, axes that were given."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from matplotlib import pyplot as plt
from matplotlib.text import Text

from tenkpc.errors import InputError
from tenkpc.show import marks

SHARES = st.lists(st.floats(0.0, 1.0), max_size=10)


def overlaps(axes):
    """Pairs of names that cover each other."""
    axes.figure.canvas.draw()
    boxes = [Text.get_window_extent(name) for name in axes.texts]  # without their lines
    return [(a, b) for n, a in enumerate(boxes) for b in boxes[n + 1 :] if a.overlaps(b)]


@given(heights=SHARES)
def test_heights_are_moved_apart_and_stay_inside(heights):
    """At least the distance between neighbours, in the order they had, from 0 to 1."""
    moved = marks.apart(np.array(heights), 0.1)
    order = np.argsort(heights, kind="stable")
    # rounding of sums of ten numbers below one
    assert np.all(np.diff(moved[order]) >= 0.1 - 1e-12)
    assert np.all((moved >= 0) & (moved <= 1 + 1e-12))


@given(heights=SHARES)
def test_heights_that_are_far_enough_apart_stay(heights):
    """Nothing moves without need, and moving twice is moving once."""
    once = marks.apart(np.array(heights), 0.1)
    assert marks.apart(once, 0.1) == pytest.approx(once)


def test_a_pair_is_moved_to_both_sides_and_leaves_others_alone():
    """Two that coincide go half of the distance each; a third far away does not move."""
    assert marks.apart(np.array([0.5, 0.9, 0.5]), 0.1) == pytest.approx([0.45, 0.9, 0.55])


@pytest.mark.parametrize("scale", ["linear", "log"])
def test_ten_names_at_the_right_do_not_touch(scale):
    """Ten curves that end close together have names in their order, each tied to its end."""
    _, axes = plt.subplots(layout="constrained")
    axes.set_yscale(scale)
    axes.set_ylim(0.1, 10)
    ends = [(1.0, 1.0 + 0.02 * n) for n in range(10)]
    marks.names_at_right(axes, [f"curve {n}" for n in range(10)], ends)
    assert overlaps(axes) == []
    heights = [Text.get_window_extent(name).y0 for name in axes.texts]
    assert np.all(np.diff(heights) > 0)
    assert [text.xy for text in axes.texts] == ends


def test_ten_names_in_a_column_do_not_touch():
    """Ten points close together have their names below each other."""
    _, axes = plt.subplots(layout="constrained")
    points = [(0.1 + 0.01 * n, 0.5 - 0.02 * n) for n in range(10)]
    marks.names_in_column(axes, [f"area {n}" for n in range(10)], points)
    assert overlaps(axes) == []


def test_foot_lines_keep_their_words_and_have_about_one_length():
    """A line that is too long is broken in two that both hold a fair part of it."""
    line = " ".join(["word"] * 25)
    broken = marks.wrapped(line)
    assert broken.replace("\n", " ") == line
    first, second = broken.split("\n")
    assert 0.5 < len(second) / len(first) <= 1
    assert marks.wrapped("short") == "short"


def test_the_wrong_number_of_axes_is_refused():
    """The sentence says how many are drawn on and how many were given."""
    _, axes = plt.subplots(1, 3)
    with pytest.raises(InputError, match="draws on 2 axes, found 3"):
        marks.given_axes(axes, 2, "a picture")
    assert marks.given_axes(axes[0], 1, "a picture") == [axes[0]]
