"""The sum over the nodes: multiplicity once, blocks without a trace."""

from __future__ import annotations

import numpy as np
import pytest

from tenkpc.forecast.fold import BLOCK, fold
from tenkpc.species import MULTIPLICITY

rng = np.random.default_rng(5)


def test_the_fold_is_the_plain_sum_with_multiplicity():
    """Each row counts its own species, times the kinds that the species stands for."""
    flux, tensor = rng.random((4, 3, 10)), rng.random((5, 10, 2))
    species = np.array([0, 1, 2, 3, 2])
    expected = np.einsum("rtn,rnc->rtc", flux[species], tensor)
    expected *= MULTIPLICITY[species][:, None, None]
    assert fold(flux, species, tensor) == pytest.approx(expected)


def test_blocks_leave_no_trace():
    """More times than a block holds give what each time gives alone."""
    flux, tensor = rng.random((4, BLOCK + 7, 4)), rng.random((1, 4, 1))
    whole = fold(flux, np.array([1]), tensor)
    for time in (0, BLOCK - 1, BLOCK, BLOCK + 6):
        alone = fold(flux[:, time : time + 1], np.array([1]), tensor)
        assert whole[:, time] == pytest.approx(alone[:, 0])
