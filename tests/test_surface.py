"""The public surface: names at the root, and how much of the world an import drags in."""

from __future__ import annotations

import subprocess
import sys

import pytest

import tenkpc

NAMES = ["Adiabatic", "Burst", "Detector", "Equilibrated", "Forecast", "Survival", "Unconverted"]


def test_the_root_has_these_names_and_no_others():
    """Seven names, sorted, each of which can be had."""
    assert tenkpc.__all__ == NAMES == sorted(NAMES)
    assert dir(tenkpc) == [*NAMES, "__version__"]
    assert all(getattr(tenkpc, name).__name__ == name for name in NAMES)
    with pytest.raises(AttributeError, match="forecast_all"):
        tenkpc.forecast_all  # noqa: B018


def loaded_by(code):
    """Modules that a fresh process holds after some code."""
    program = f"{code}\nimport sys\nprint(' '.join(sys.modules))"
    run = subprocess.run(
        [sys.executable, "-c", program], capture_output=True, text=True, check=True
    )
    return set(run.stdout.split())


def test_importing_the_package_loads_nothing_heavy():
    """Names are loaded when they are first used."""
    assert not loaded_by("import tenkpc") & {"numpy", "scipy", "pandas", "pint", "pydantic"}


def test_a_page_needs_no_frames():
    """Printing a forecast loads neither pandas nor matplotlib nor the slow parts of scipy."""
    code = (
        "from tenkpc import *\n"
        "f = Forecast(Detector.gallery('mere-tank'), Burst.preset('ordinary-collapse'),"
        " distance='10 kpc')\n"
        "repr(f)"
    )
    heavy = {"pandas", "matplotlib", "scipy.interpolate", "scipy.stats", "scipy.integrate"}
    assert not loaded_by(code) & heavy
