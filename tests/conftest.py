"""Settings for every test: pictures without a screen, properties without a stop watch."""

from __future__ import annotations

import matplotlib as mpl
from hypothesis import settings

mpl.use("Agg")
settings.register_profile("patient", deadline=None)
settings.load_profile("patient")
