"""Sweeps and decoupling from Python; the core tests their physics."""

import numpy as np
import pytest

import ridemodes as rm


def test_a_sweep_follows_branches(roadster):
    values = np.linspace(250, 1400, 24)
    sweep = roadster.sweep("body.roll_inertia", values)
    np.testing.assert_array_equal(sweep.values, values)
    roll, heave = sweep.label.index("body roll"), sweep.label.index("body heave")
    assert sweep.frequency[roll, 0] > sweep.frequency[heave, 0]
    assert sweep.frequency[roll, -1] < sweep.frequency[heave, -1]
    for place, modes in enumerate(sweep.modes):
        rows = sweep.row[:, place].astype(int)
        np.testing.assert_array_equal(modes.frequency[rows], sweep.frequency[:, place])
    np.testing.assert_allclose(np.abs(sweep.pole) / (2 * np.pi), sweep.frequency, rtol=1e-14)
    data = sweep.to_xarray()
    assert data["value"].attrs == {"units": "kg*m^2", "long_name": "body.roll_inertia"}
    assert data["frequency"].attrs["units"] == "Hz"


def test_a_sweep_refuses_what_cannot_be(roadster):
    with pytest.raises(rm.InvalidInput, match=r"body\.mass"):
        roadster.sweep("body.mas", [1.0])
    with pytest.raises(rm.InvalidInput) as caught:
        roadster.sweep("body.mass", [-1.0, 1000.0, np.nan])
    assert len(caught.value.violations) == 2
    with pytest.raises(TypeError, match="values"):
        roadster.sweep("body.mass", ["heavy"])


def test_decoupling_is_solved(roadster):
    found = roadster.decoupling("heave", "pitch")
    assert found.motions == ("heave", "pitch")
    solved = np.isfinite(found.solutions)
    assert solved.any()
    for place in np.flatnonzero(solved):
        car = roadster.with_values({found.paths[place]: found.solutions[place]})
        assert abs(car.settle().linear().motions().stiffness_cross[0, 1]) < 1e-12
    assert (np.abs(found.least[~solved]) <= abs(found.cross) * (1 + 1e-12)).all()
    assert "front.both.spring.rate" in str(found)
    with pytest.raises(rm.InvalidInput, match="pitch"):
        roadster.decoupling("heave", "picth")
