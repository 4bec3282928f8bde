"""The only sum: a flux on the grid's nodes times a compiled tensor."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from tenkpc.species import MULTIPLICITY

Floats = NDArray[np.float64]

# times (or design points) folded at once: the block stays in the cache of one core
BLOCK = 2000


def fold(flux: Floats, species: NDArray[np.intp], tensor: Floats) -> Floats:
    """Counts by row, time and column.

    N[row, time, column] = Σ_nodes m_s F_s(time, node) K[row, node, column], s the row's
    species and m its multiplicity: the one place where a species stands for more than one
    neutrino kind.

    Parameters
    ----------
    flux
        flux of ONE neutrino kind at the nodes, shape (species, times, nodes), in cm⁻² MeV⁻¹
        times whatever the result is per (s⁻¹ for rates).
    species
        index of each row's species, shape (rows,).
    tensor
        compiled events per fluence, shape (rows, nodes, columns), cm² MeV.

    Returns
    -------
    ndarray
        shape (rows, times, columns).
    """
    times = flux.shape[1]
    counts = np.empty((len(species), times, tensor.shape[2]))
    for start in range(0, times, BLOCK):
        block = slice(start, start + BLOCK)
        for row, index in enumerate(species):
            np.matmul(flux[index, block], tensor[row], out=counts[row, block])
    counts *= MULTIPLICITY[species][:, None, None]
    return counts
