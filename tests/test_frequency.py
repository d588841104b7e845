"""Frequency responses against NumPy's plain solve and the state space."""

import pickle

import numpy as np
import pytest

import ridemodes as rm

F = np.array([0.05, 0.7, 1.3, 4.0, 12.0, 40.3, 180.0, 400.0])


@pytest.fixture(params=rm.examples())
def linear(request) -> rm.LinearSystem:
    return rm.example(request.param).settle().linear()


def test_plain_solve(linear):
    """(K + sC + s²M) u = (G + s G_c) r at each frequency, by NumPy in units of the coordinates."""
    answer = linear.frequency_response(F)
    assert answer.response.shape == (len(answer.outputs), len(answer.inputs), len(F))
    k, c, m = linear.stiffness, linear.damping, linear.mass
    rows = [answer.outputs.index(f"deflection.{name}") for name in ("front_left", "rear_right")]
    lever = linear.deflection[[0, 3]]
    heave = answer.outputs.index("body_acceleration.z")
    for place, s in enumerate(2j * np.pi * F):
        unit = 1 / np.sqrt(np.diag(k) + abs(s) * np.diag(c) + abs(s) ** 2 * np.diag(m))
        dynamic = (k + s * c + s**2 * m) * np.outer(unit, unit)
        drive = (linear.road_stiffness + s * linear.road_damping) * unit[:, None]
        moved = np.linalg.solve(dynamic, drive) * unit[:, None]
        found, expected = answer.response[rows, :4, place], lever @ moved
        assert np.abs(found - expected).max() <= 1e-10 * np.abs(expected).max()
        found, expected = answer.response[heave, :4, place], s**2 * moved[0]
        assert np.abs(found - expected).max() <= 1e-10 * np.abs(expected).max()


def test_state_space(linear):
    """C (sI − A)⁻¹ B + D, with the road's height and velocity as inputs."""
    A, B, C, D = space = linear.state_space()
    answer = linear.frequency_response(F)
    shared = [name for name in space.outputs if name in answer.outputs]
    assert len(shared) == len(space.outputs)
    rows = [answer.outputs.index(name) for name in shared]
    for place, s in enumerate(2j * np.pi * F):
        road = B[:, :4] + s * B[:, 4:]
        expected = C @ np.linalg.solve(s * np.eye(len(A)) - A, road) + D[:, :4] + s * D[:, 4:]
        found = answer.response[rows, :4, place]
        limit = 1e-6 * np.abs(expected).max(axis=1, keepdims=True) + 1e-9
        assert (np.abs(found - expected) <= limit).all()


def test_volume_put_in_raises_pressure_and_body():
    linear = rm.example("roadster").settle().linear()
    answer = linear.frequency_response([0.0, 1e-4])
    inputs, outputs = answer.inputs, answer.outputs
    volume = inputs.index("volume.circuits.left")
    pressures = [
        outputs.index(name) for name in outputs if name.startswith("pressure.circuits.left")
    ]
    at_rest = answer.response[pressures, volume, 0]
    # At rest a circuit has one pressure.
    np.testing.assert_allclose(at_rest, at_rest[0], rtol=1e-9)
    assert at_rest[0].real > 0
    # Reciprocity of a symmetric system: pressure per force on the body is heave per volume put in,
    # sign reversed.
    pressure = answer.response[outputs.index("pressure.circuits.left"), inputs.index("body.z"), 1]
    acceleration = answer.response[outputs.index("body_acceleration.z"), volume, 1]
    heave = acceleration / (2j * np.pi * 1e-4) ** 2
    assert pressure == pytest.approx(-heave, rel=1e-6)
    assert answer.input_units[volume] == "m^3"


def test_road_in_motions_is_the_sum_over_wheels():
    answer = rm.example("delivery_van").settle().linear().frequency_response([1.0, 9.0])
    motions = answer.in_motions()
    assert motions.inputs[:4] == ["road.heave", "road.pitch", "road.roll", "road.warp"]
    pattern = np.array([1, -1, 1, -1])
    expected = np.einsum("owk,w->ok", answer.response[:, :4], pattern)
    np.testing.assert_allclose(motions.response[:, 2], expected, rtol=1e-13)


def test_grid_places_itself_about_sharp_poles():
    linear = rm.example("field_sprayer").settle().linear()
    answer = linear.frequency_response()
    assert 0.05 <= answer.frequency[0] < answer.frequency[-1] <= 50.0
    assert (np.diff(answer.frequency) > 0).all()
    for pole in linear.modes().pole:
        f = pole.imag / 2 / np.pi
        if 0.1 < f < 45.0:
            assert np.abs(answer.frequency - f).min() <= abs(pole.real) / 2 / np.pi
    assert pickle.loads(pickle.dumps(answer)) == answer
    assert "largest gains" in str(answer)
    data = answer.to_xarray()
    assert data.response.dims == ("output", "input", "frequency")
    assert data.frequency.attrs["units"] == "Hz"


def test_seat_is_a_point_of_the_body():
    car = rm.example("roadster")
    answer = car.settle().linear().frequency_response([2.0])
    seat = {
        axis: answer.response[answer.outputs.index(f"seat_acceleration.driver.{axis}"), :4, 0]
        for axis in "xyz"
    }
    z, pitch, roll = (
        answer.response[answer.outputs.index(f"body_acceleration.{name}"), :4, 0]
        for name in ("z", "pitch", "roll")
    )
    x, y, h = -0.35, 0.36, 0.42 - 0.47
    np.testing.assert_allclose(seat["z"], z - x * pitch + y * roll, rtol=1e-12)
    np.testing.assert_allclose(seat["x"], h * pitch, rtol=1e-12)
    np.testing.assert_allclose(seat["y"], -h * roll, rtol=1e-12)
