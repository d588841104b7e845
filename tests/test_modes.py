"""Modes and motions, from their arrays."""

import numpy as np
import pytest

import ridemodes as rm

T = np.array([[1, 1, 1, 1], [-1, -1, 1, 1], [1, -1, 1, -1], [1, -1, -1, 1]]).T
SEVEN = ["body heave", "body pitch", "body roll"]
SEVEN += ["wheel heave", "wheel pitch", "wheel roll", "wheel warp"]


def test_rows_are_ordered_and_shares_sum_to_one(car):
    modes = car.settle().linear().modes()
    assert (np.diff(modes.frequency) >= 0).all()
    assert (modes.pole.imag >= 0).all()
    assert (modes.pole.real < 0).all()
    np.testing.assert_allclose(modes.frequency, np.abs(modes.pole) / (2 * np.pi), rtol=1e-14)
    np.testing.assert_allclose(
        modes.damping_ratio, -modes.pole.real / np.abs(modes.pole), rtol=1e-14
    )
    for share in (modes.share, modes.motion_share, modes.strain_share, modes.dissipation_share):
        np.testing.assert_allclose(share.sum(axis=1), 1, rtol=0, atol=1e-9)


def test_seven_labels_one_to_one(car):
    modes = car.settle().linear().modes()
    for label in SEVEN:
        assert len(modes.rows(label)) == 1
    others = [label for label in modes.label if label not in SEVEN]
    assert all(label.split()[0] in ("oil", "relaxation") for label in others)
    assert len(set(others)) == len(others)


def test_quotients_of_the_shapes(car):
    """|λ|² = ψᴴKψ/ψᴴMψ and 2ζ|λ| = ψᴴCψ/ψᴴMψ of every pole that is not real."""
    linear = car.settle().linear()
    modes = linear.modes()
    largest = np.abs(modes.pole[modes.pole.imag > 0]).max()
    for row in np.flatnonzero(modes.pole.imag > 0):
        shape = modes.shape[row]
        mass, loss, strain = (
            (shape.conj() @ matrix @ shape).real
            for matrix in (linear.mass, linear.damping, linear.stiffness)
        )
        size = np.abs(modes.pole[row])
        assert strain / mass == pytest.approx(size**2, rel=1e-7, abs=1e-14 * largest**2)
        ratio = modes.damping_ratio[row]
        assert loss / mass == pytest.approx(2 * ratio * size, rel=1e-6)


@pytest.mark.parametrize("damped", [True, False])
def test_shares_are_those_of_the_shapes(car, damped):
    """Kinetic Re(ā_i (M_a a)_i)/aᴴM_a a, strain and dissipation |row·ψ|² of each element."""
    linear = car.settle().linear()
    modes = linear.modes(damped=damped)
    n = len(linear.coordinates)
    turn = np.eye(n)
    turn[3:7, 3:7] = T
    mass = turn.T @ linear.mass @ turn
    assert modes.elements == [element.name for element in linear.elements]
    for row, shape in enumerate(modes.shape):
        a = np.linalg.solve(turn, shape)
        kinetic = (a.conj() * (mass @ a)).real
        share = np.append(kinetic[:7], kinetic[7:].sum()) / kinetic.sum()
        np.testing.assert_allclose(modes.share[row], share, rtol=0, atol=1e-9)
        grouped = [*(share[:3] + share[3:6]), share[6], share[7]]
        np.testing.assert_allclose(modes.motion_share[row], grouped, rtol=0, atol=1e-9)
        for name, found in (
            ("stiffness", modes.strain_share[row]),
            ("damping", modes.dissipation_share[row]),
        ):
            each = [getattr(e, name) * abs(e.row @ shape) ** 2 for e in linear.elements]
            if name == "damping" and not damped:
                each = np.zeros(len(each))
            else:
                each = np.array(each) / sum(each)
            np.testing.assert_allclose(found, each, rtol=0, atol=1e-9)


def test_undamped_rows(car):
    """Without damping: poles on the axis, real shapes, ascending, each of the seven once."""
    modes = car.settle().linear().modes(damped=False)
    assert (modes.pole.real == 0).all()
    assert (modes.damping_ratio == 0).all()
    assert (modes.shape.imag == 0).all()
    assert (modes.frequency > 0).all()
    assert (np.diff(modes.frequency) >= 0).all()
    assert [len(modes.rows(label)) for label in SEVEN] == [1] * 7


def test_matrices_are_the_sums_of_the_elements(car):
    linear = car.settle().linear()
    for name in ("mass", "damping", "stiffness"):
        total = sum(getattr(e, name) * np.outer(e.row, e.row) for e in linear.elements)
        matrix = getattr(linear, name).copy()
        if name == "mass":
            value = car.value
            matrix[0, 0] -= value("body.mass")
            matrix[1, 1] -= value("body.pitch_inertia")
            matrix[2, 2] -= value("body.roll_inertia")
            matrix[1, 2] += value("body.roll_pitch_product")
            matrix[2, 1] += value("body.roll_pitch_product")
        np.testing.assert_allclose(matrix, total, rtol=1e-12, atol=1e-12 * np.abs(total).max())


def test_motions_are_the_corner_matrices_turned(car):
    linear = car.settle().linear()
    motions = linear.motions()
    np.testing.assert_allclose(motions.stiffness, T.T @ motions.at_wheels @ T / 4, atol=1e-7)
    np.testing.assert_allclose(motions.damping, T.T @ motions.damping_at_wheels @ T / 4, atol=1e-8)
    np.testing.assert_allclose(motions.stiffness_oil, T.T @ linear.coupling @ T / 4, atol=1e-7)
    sides = motions.stiffness_conventional + motions.stiffness_oil
    np.testing.assert_allclose(motions.stiffness, sides, rtol=1e-14)
    diagonal = np.diagonal(motions.stiffness)
    np.testing.assert_allclose(
        motions.stiffness_cross,
        motions.stiffness / np.sqrt(np.outer(diagonal, diagonal)) - np.eye(4),
        atol=1e-14,
    )
    each = np.array(motions.element_stiffness).sum(axis=0)
    np.testing.assert_allclose(each, diagonal, rtol=1e-9)


def test_parts_on_one_axle_cannot_tell_roll_from_warp(roadster):
    conventional = np.diagonal(roadster.settle().linear().motions().stiffness_conventional)
    assert conventional[0] == pytest.approx(conventional[1], rel=1e-13)
    assert conventional[2] == pytest.approx(conventional[3], rel=1e-13)


def half_car(mass, radius, front, rear, front_axle_rate, rear_axle_rate):
    """A half car as a whole one on tyres of a million times the springs."""

    def corner(rate):
        return {
            "unsprung_mass": 1e-3,
            "tyre": {"rate": 1e6 * rate},
            "spring": {"rate": rate / 2},
        }

    inertia = mass * radius**2
    return rm.Vehicle.from_dict(
        {
            "body": {
                "mass": mass,
                "roll_inertia": inertia,
                "pitch_inertia": inertia,
                "cg_height": 0.5,
            },
            "front": {"distance": front, "track": 1.5, "both": corner(front_axle_rate)},
            "rear": {"distance": rear, "track": 1.5, "both": corner(rear_axle_rate)},
        }
    )


POUND, FOOT = 0.45359237, 0.3048
POUND_FORCE = POUND * 9.80665


@pytest.mark.parametrize(
    ("car", "omega", "digits"),
    [
        # S. S. Rao, Mechanical Vibrations, automobile in bounce and pitch (from memory)
        ((1000.0, 0.9, 1.0, 1.5, 18e3, 22e3), (5.8593, 9.4341), 2e-5),
        # W. T. Thomson, Theory of Vibration with Applications, coupled modes (from memory)
        (
            (
                3220 * POUND,
                4 * FOOT,
                4.5 * FOOT,
                5.5 * FOOT,
                2400 * POUND_FORCE / FOOT,
                2600 * POUND_FORCE / FOOT,
            ),
            (6.90, 9.06),
            2e-3,
        ),
    ],
)
def test_textbook_half_cars(car, omega, digits):
    modes = half_car(*car).settle().linear().modes(damped=False)
    found = sorted(
        2 * np.pi * modes.frequency[modes.rows(label)[0]] for label in ("body heave", "body pitch")
    )
    np.testing.assert_allclose(found, omega, rtol=digits)


def test_quarter_car():
    """Barton and Fieldhouse, Automotive Chassis Engineering, 2018, p. 209: 1.25 and 10.9 Hz."""
    # Four equal corners and a body whose inertias put its masses over the wheels.
    half_base, half_track = 1.3, 0.75
    mass = 4 * 317.5
    corner = {"unsprung_mass": 45.4, "tyre": {"rate": 192e3}, "spring": {"rate": 22e3}}
    axle = {"distance": half_base, "track": 2 * half_track, "both": corner}
    car = rm.Vehicle.from_dict(
        {
            "body": {
                "mass": mass,
                "roll_inertia": mass * half_track**2,
                "pitch_inertia": mass * half_base**2,
                "cg_height": 0.5,
            },
            "front": axle,
            "rear": axle,
        }
    )
    found = car.settle().linear().modes(damped=False).frequency
    np.testing.assert_allclose(found[:3], 7.87 / (2 * np.pi), rtol=2e-3)
    np.testing.assert_allclose(found[4:], 68.73 / (2 * np.pi), rtol=5e-4)
    # The body has no warp, so in warp the wheels hop between tyres and springs that stand still.
    assert found[3] == pytest.approx(np.sqrt((22e3 + 192e3) / 45.4) / (2 * np.pi), rel=1e-12)


def test_preload_follows_from_pressure(roadster):
    state = roadster.settle()
    rod = np.pi / 4 * roadster.value("front.both.cylinder.rod") ** 2
    share = rod * roadster.value("front.both.cylinder.motion_ratio")
    pressure = roadster.value("layout.pressure") - roadster.value("atmosphere")
    assert state.oil_load[0] == pytest.approx(share * pressure, rel=1e-12)
    total = state.oil_load + state.spring_load
    np.testing.assert_allclose(total, state.corner_load, rtol=1e-14)
    weight = roadster.value("body.mass") * 9.80665
    assert state.corner_load.sum() == pytest.approx(weight, rel=1e-14)
