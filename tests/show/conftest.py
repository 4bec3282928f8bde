"""Forecasts to draw, and figures closed after every test."""

from __future__ import annotations

import pytest
from matplotlib import pyplot as plt

from tenkpc import Burst, Detector, Forecast


def _forecast(name):
    return Forecast(Detector.gallery(name), Burst.preset("ordinary-collapse"), distance="10 kpc")


@pytest.fixture(scope="session")
def tank():
    """The gallery's tank of water and the ordinary burst."""
    return _forecast("mere-tank")


@pytest.fixture(scope="session")
def hall():
    """The gallery's scintillator and the ordinary burst."""
    return _forecast("brine-hall")


@pytest.fixture(autouse=True)
def _close():
    yield
    plt.close("all")


@pytest.fixture
def words_on():
    """Give every text of a figure."""
    return lambda figure: [text.get_text() for axes in figure.axes for text in axes.texts]


@pytest.fixture
def heights():
    """Give the heights of everything that is drawn as steps."""
    return lambda axes: [p.get_data().values for p in axes.patches if hasattr(p, "get_data")]


@pytest.fixture
def check_looks():
    """What holds for every picture: no box of keys, names inside the figure and readable."""

    def check(figure):
        figure.canvas.draw()
        width, height = figure.canvas.get_width_height()
        assert all(axes.get_legend() is None for axes in figure.axes)
        for axes in figure.axes:
            for text in axes.texts:
                assert text.get_fontsize() >= 7
                box = text.get_window_extent()
                assert box.x0 > -2, text.get_text()
                assert box.x1 < width + 2, text.get_text()
                assert box.y0 > -2, text.get_text()
                assert box.y1 < height + 2, text.get_text()

    return check
