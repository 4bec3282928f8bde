"""How energies of a kind are written, and the bins they are sorted into.

Recoil detectors know two kinds of energy that differ by a factor of five, so each has a unit of
its own: keVnr is the kinetic energy of the nucleus that recoils, keVee that of an electron which
would give the same signal (common practice). Neither is a unit of pint.
"""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Scale:
    """A unit of energy, and bins in it.

    Attributes
    ----------
    unit
        how the unit is written.
    mev
        what one of it is in MeV.
    bin_width_mev, last_edge_mev
        bins unless others are asked for, MeV.
    label
        letters that tell the unit from plain keV; empty where there are none.
    """

    unit: str
    mev: float
    bin_width_mev: float
    last_edge_mev: float
    label: str = ""

    def words(self, energy_mev: float) -> str:
        """Print an energy."""
        return f"{energy_mev / self.mev:.4g} {self.unit}"


MEV = Scale("MeV", 1.0, bin_width_mev=2.0, last_edge_mev=100.0)
RECOIL = Scale("keVnr", 1e-3, bin_width_mev=1e-3, last_edge_mev=0.1, label="nr")
ELECTRON_EQUIVALENT = Scale("keVee", 1e-3, bin_width_mev=2.5e-4, last_edge_mev=0.025, label="ee")
