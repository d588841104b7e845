"""Derivatives by path, as Python sees them; the core holds each against central differences."""

import numpy as np
import pytest


def test_a_step_goes_where_the_derivative_says(roadster):
    linear = roadster.settle().linear()
    found = linear.sensitivities()
    place = found.paths.index("layout.accumulators.main.precharge")
    step = 1e-4 * found.values[place]
    moved = roadster.with_values({found.paths[place]: found.values[place] + step}).settle().linear()
    row = found.modes.rows("body roll")[0]
    change = moved.modes().frequency[row] - found.modes.frequency[row]
    assert change == pytest.approx(step * found.frequency[row, place], rel=1e-3)
    change = moved.motions().stiffness[2, 2] - linear.motions().stiffness[2, 2]
    assert change == pytest.approx(step * found.stiffness[2, 2, place], rel=1e-3)
    change = moved.coupling - linear.coupling
    np.testing.assert_allclose(change, step * found.coupling[:, :, place], rtol=1e-3)


def test_shapes_and_exclusions(car):
    found = car.settle().linear().sensitivities()
    modes, paths = len(found.modes.frequency), len(found.paths)
    assert found.frequency.shape == found.damping_ratio.shape == (modes, paths)
    assert found.stiffness.shape == found.damping.shape == found.coupling.shape == (4, 4, paths)
    assert found.paths == [parameter.path for parameter in car.parameters()]
    out = np.isin(found.paths, found.excluded)
    assert np.isnan(found.frequency[:, out]).all()
    assert not np.isnan(found.frequency[np.ix_(~found.repeated, ~out)]).any()


def test_the_table_is_sorted_by_effect(roadster):
    found = roadster.settle().linear().sensitivities()
    lines = str(found.table("body roll")).splitlines()
    assert lines[0].startswith("What moves body roll")
    effects = [
        max(abs(float(cell)) for cell in line.split()[1:3])
        for line in lines[3:]
        if "." in line.split()[0] and line.split()[0].islower()
    ]
    assert len(effects) > 15
    assert effects == sorted(effects, reverse=True)
    with pytest.raises(KeyError, match="body roll"):
        found.table("no such")
