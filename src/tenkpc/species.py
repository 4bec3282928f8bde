"""The four species of a burst and how many neutrino kinds each stands for.

Every array of fluxes or spectra is of ONE neutrino kind. ``nu_x`` is each of the muon and the
tau neutrino, ``anti_nu_x`` each of their antineutrinos; the multiplicity is applied once, in
the fold, and nowhere else.
"""

from __future__ import annotations

import numpy as np

from tenkpc.errors import UnknownNameError

SPECIES = ("nu_e", "anti_nu_e", "nu_x", "anti_nu_x")
NU_E, ANTI_NU_E, NU_X, ANTI_NU_X = range(4)

MULTIPLICITY = np.array([1.0, 1.0, 2.0, 2.0])
MULTIPLICITY.setflags(write=False)

SYMBOLS = {"nu_e": "νe", "anti_nu_e": "ν̄e", "nu_x": "νx", "anti_nu_x": "ν̄x"}


def index(name: str) -> int:
    """Place of a species in every array that has a species axis."""
    try:
        return SPECIES.index(name)
    except ValueError:
        kind = "species"
        raise UnknownNameError(kind, name, SPECIES) from None
