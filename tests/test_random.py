"""Vehicles drawn at random by Hypothesis, the same ones in every run."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

import ridemodes as rm


def spread(low, high):
    return st.floats(low, high, allow_subnormal=False)


def corners(oil):
    parts = {
        "unsprung_mass": spread(25, 90),
        "tyre": st.fixed_dictionaries({"rate": spread(1.4e5, 4e5), "damping": spread(0, 400)}),
        "spring": st.fixed_dictionaries(
            {"rate": spread(1.2e4, 6e4), "motion_ratio": spread(0.6, 1.1)}
        ),
        "damper": st.fixed_dictionaries({"coefficient": spread(400, 4000)}),
    }
    if oil:
        parts["cylinder"] = st.fixed_dictionaries(
            {
                "bore": spread(0.024, 0.04),
                "rod": spread(0.010, 0.02),
                "motion_ratio": spread(0.7, 1.0),
                "stroke": spread(0.15, 0.25),
            }
        )
    return st.fixed_dictionaries(parts)


def axle(oil):
    return st.fixed_dictionaries(
        {
            "distance": spread(1.0, 1.8),
            "track": spread(1.3, 1.8),
            "anti_roll_bar": st.fixed_dictionaries({"rate": spread(0, 2e4)}),
            "left": corners(oil),
            "right": corners(oil),
        }
    )


def vehicles(oil):
    parts = {
        "body": st.fixed_dictionaries(
            {
                "mass": spread(800, 2500),
                "roll_inertia": spread(300, 900),
                "pitch_inertia": spread(1200, 4000),
                "roll_pitch_product": spread(-60, 60),
                "cg_height": spread(0.4, 0.9),
                "cg_offset": spread(-0.1, 0.1),
            }
        ),
        "front": axle(oil),
        "rear": axle(oil),
    }
    if oil:
        parts["oil"] = st.just(
            {"density": 865.0, "kinematic_viscosity": 15e-6, "kinematic_viscosity_hot": 3.8e-6}
        )
        store = {
            "gas_volume": spread(1e-4, 8e-4),
            "precharge": spread(10e5, 18e5),
            "throttle": spread(1e8, 2e9),
        }
        parts["layout"] = st.fixed_dictionaries(
            {
                "kind": st.sampled_from(["roll", "pitch", "diagonal"]),
                "pressure": spread(20e5, 60e5),
                "volume": spread(3e-5, 2e-4),
                "accumulators": st.fixed_dictionaries({"main": st.fixed_dictionaries(store)}),
            }
        )
    return st.fixed_dictionaries(parts).map(rm.Vehicle.from_dict)


EITHER = vehicles(oil=False) | vehicles(oil=True)


@given(EITHER)
def test_file_keeps_every_number(car):
    """The shortest decimal text of a float reads back the same (Steele and White, from memory)."""
    assert rm.loads(car.to_toml()) == car == rm.loads(car.to_json())
    assert rm.Vehicle.from_dict(car.to_dict()) == car


@given(EITHER)
def test_modes_keep_their_identities(car):
    """Definitions of λ, and seven labels one to one."""
    modes = car.settle().linear().modes()
    assert (modes.pole.real < 0).all()
    assert (modes.pole.imag >= 0).all()
    assert (np.diff(modes.frequency) >= 0).all()
    np.testing.assert_allclose(modes.share.sum(axis=1), 1, rtol=0, atol=1e-9)
    seven = ["body heave", "body pitch", "body roll"]
    seven += [f"wheel {motion}" for motion in ("heave", "pitch", "roll", "warp")]
    for label in seven:
        rows = modes.rows(label)
        real = modes.pole.imag[rows] == 0
        assert len(rows) == (2 if real.any() else 1)
        assert real.all() == real.any()


@given(EITHER)
def test_poles_are_those_of_the_state_space(car):
    """`numpy.linalg.eigvals`, both ways: none missing, none more."""
    linear = car.settle().linear()
    pole = linear.modes().pole
    ours = np.concatenate([pole, pole[pole.imag > 0].conj()])
    theirs = np.linalg.eigvals(linear.state_space().A)
    assert len(ours) == len(theirs)
    distance = np.abs(ours[:, None] - theirs[None, :])
    # What an eigenvalue solver rounds is relative to its largest; a near double pole loses half.
    limit = 1e-6 * np.abs(ours) + 1e-11 * np.abs(ours).max()
    assert (distance.min(axis=1) <= limit).all()
    assert (distance.min(axis=0) <= limit.max()).all()


@given(vehicles(oil=True))
def test_warp_preload_and_weight_balance(car):
    """Jᵀ F = [m g, 0, 0]: loads carry the weight and turn nothing; cross-weight is 50 %."""
    value = car.value
    load = car.settle().corner_load
    x = np.repeat([value("front.distance"), -value("rear.distance")], 2)
    half = np.repeat([value("front.track") / 2, value("rear.track") / 2], 2)
    y = half * np.array([1, -1, 1, -1]) - value("body.cg_offset")
    weight = value("body.mass") * 9.80665
    assert load.sum() == pytest.approx(weight, rel=1e-12)
    np.testing.assert_allclose([load @ x, load @ y], 0, atol=1e-9 * weight)
    assert load[1] + load[2] == pytest.approx(weight / 2, rel=1e-12)


@given(vehicles(oil=True))
def test_rank_of_the_coupling(car):
    """The oil couples the wheels by one rank for each circuit at most, and never pushes."""
    coupling = car.settle().linear().coupling
    size = np.abs(coupling).max()
    values = np.linalg.eigvalsh(coupling)
    assert values.min() > -1e-12 * size
    assert (values > 1e-12 * size).sum() <= len(car.circuits)
