"""Dirac matrices for spin sums by explicit traces."""

from __future__ import annotations

from types import SimpleNamespace

import numpy as np
import pytest


@pytest.fixture(scope="session")
def dirac():
    """Gamma matrices in the Dirac representation, the metric, and contraction with a vector."""
    gamma0 = np.diag([1.0, 1, -1, -1]).astype(complex)
    pauli = np.array([[[0, 1], [1, 0]], [[0, -1j], [1j, 0]], [[1, 0], [0, -1]]])
    gamma = [gamma0] + [np.block([[np.zeros((2, 2)), s], [-s, np.zeros((2, 2))]]) for s in pauli]
    metric = np.diag([1.0, -1, -1, -1])
    return SimpleNamespace(
        gamma0=gamma0,
        gamma=gamma,
        gamma5=1j * gamma[0] @ gamma[1] @ gamma[2] @ gamma[3],
        metric=metric,
        slash=lambda momentum: sum(metric[i, i] * momentum[i] * gamma[i] for i in range(4)),
    )
