"""Gauss-Legendre nodes and weights, worked out once."""

from __future__ import annotations

from functools import lru_cache

import numpy as np
from numpy.polynomial.legendre import leggauss
from numpy.typing import NDArray

Floats = NDArray[np.float64]


@lru_cache(maxsize=32)
def gauss(order: int) -> tuple[Floats, Floats]:
    """Nodes and weights of Gauss-Legendre quadrature on [0, 1], not to be written to."""
    x, w = leggauss(order)
    nodes, weights = 0.5 * (x + 1.0), 0.5 * w
    nodes.setflags(write=False)
    weights.setflags(write=False)
    return nodes, weights
