"""Columns ranked by counts, and the panel of factors."""

from __future__ import annotations

import numpy as np
import pytest
from matplotlib import pyplot as plt
from pandas import DataFrame

from tenkpc.show import ranking


def test_many_ways_of_being_seen_are_named_in_part():
    """Of nine columns six have their names, the others are one."""
    frame = DataFrame({"width": [1.0, 1.0], **{f"w{n}": [9.0 - n, 1.0] for n in range(9)}})
    names, parts = ranking.ranked(frame)
    assert names == ["w0", "w1", "w2", "w3", "w4", "w5", "3 smaller"]
    assert parts.sum() == pytest.approx(frame.drop(columns="width").to_numpy().sum())


def test_six_ways_are_named_and_background_is_none_of_them():
    """Up to six have their own names, the largest first, and none is called smaller."""
    frame = DataFrame({"width": [1.0], "background": [99.0], **{f"w{n}": [n] for n in range(7)}})
    names, parts = ranking.ranked(frame)
    assert names == ["w6", "w5", "w4", "w3", "w2", "w1"]
    assert parts[:, 0] == pytest.approx([6, 5, 4, 3, 2, 1])


def test_factors_are_drawn_only_where_counts_are(heights):
    """A bin that holds less than a thousandth of the counts has no factor, however large."""
    _, axes = plt.subplots()
    own, other = np.array([10.0, 5.0, 1e-3]), np.array([11.0, 4.0, 9.0])
    ranking.factors(axes, [("other", other)], own, np.arange(4.0))
    (drawn,) = heights(axes)
    assert drawn == pytest.approx([1.1, 0.8, np.nan], nan_ok=True)
    assert axes.get_ylim()[1] < 1.3
    (name,) = axes.texts
    assert name.get_text() == "other"
    assert name.xy == pytest.approx((2.0, 0.8))
