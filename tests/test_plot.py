"""Pictures: each takes an axes and returns what it drew."""

import numpy as np
import pytest
from matplotlib import pyplot

import ridemodes as rm


@pytest.fixture
def ax():
    figure, axes = pyplot.subplots()
    yield axes
    pyplot.close(figure)


def test_each_draws_into_the_axes_given(car, ax):
    linear = car.settle().linear()
    modes, motions = linear.modes(), linear.motions()
    calls = [
        lambda: rm.plot.mode_shape(modes, "body roll", ax=ax),
        lambda: rm.plot.mode_shape(modes, 0, ax=ax),
        lambda: rm.plot.motion_stiffness(motions, ax=ax),
        lambda: rm.plot.motion_damping(motions, ax=ax),
        lambda: rm.plot.coupling(linear, ax=ax),
        lambda: rm.plot.poles(modes, ax=ax),
        lambda: rm.plot.sweep(car.sweep("body.mass", [900.0, 1000.0]), ax=ax),
        lambda: rm.plot.sweep(car.sweep("body.mass", [900.0, 1000.0]), ax=ax, damping=True),
    ]
    for call in calls:
        ax.clear()
        artists = call()
        assert artists
        assert all(artist.axes is ax for artist in artists)
        ax.figure.canvas.draw()


def test_bars_are_the_stiffness(roadster, ax):
    motions = roadster.settle().linear().motions()
    bars = [a for a in rm.plot.motion_stiffness(motions, ax=ax) if hasattr(a, "get_height")]
    heights = np.array([bar.get_height() for bar in bars]).reshape(2, 4)
    np.testing.assert_allclose(heights.sum(axis=0), np.diagonal(motions.stiffness) / 1e3)


def test_the_seven_modes_in_one_figure(roadster):
    figure = rm.plot.mode_shapes(roadster.settle().linear().modes())
    titles = [ax.get_title().splitlines()[0] for ax in figure.axes if ax.get_title()]
    assert len(titles) == 7
    pyplot.close(figure)


def test_an_unknown_label_names_the_known(roadster, ax):
    with pytest.raises(KeyError, match="body roll"):
        rm.plot.mode_shape(roadster.settle().linear().modes(), "no such", ax=ax)
