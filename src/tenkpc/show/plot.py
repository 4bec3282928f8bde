"""Pictures of bursts and forecasts.

Every function takes ``ax=None``, draws on those axes or on new ones, and returns them; none
shows a window. There is no box of keys: names stand beside their curves.
"""

from __future__ import annotations

from tenkpc.show.counts import spectrum
from tenkpc.show.rates import light_curve
from tenkpc.show.reach import counts_versus_distance, interaction_probability
from tenkpc.show.source import burst, fluence

__all__ = [
    "burst",
    "counts_versus_distance",
    "fluence",
    "interaction_probability",
    "light_curve",
    "spectrum",
]
