"""Free networks, valves, links, friction, slow and shut lines, against SciPy and NumPy."""

import copy
import pickle

import numpy as np
import pytest
from scipy import integrate, stats

import ridemodes as rm


@pytest.fixture
def sprayer() -> rm.Vehicle:
    return rm.example("field_sprayer")


def test_damper_table_is_its_power_at_the_amplitude(sprayer):
    # E[F v]/E[v²] by SciPy's quadrature and normal distribution.
    table = sprayer.to_dict()["front"]["both"]["damper"]
    sigma = table["amplitude"]

    def power(v):
        return np.interp(v, table["velocity"], table["force"]) * v * stats.norm.pdf(v, scale=sigma)

    # Beyond the table the law goes on straight; at 0.8 m/s that is 6.7 σ away.
    total, _ = integrate.quad(power, -0.8, 0.8, points=[-0.1, 0.0, 0.1], epsabs=1e-12)
    lin = sprayer.settle().linear()
    damper = next(e for e in lin.elements if e.name == "front_left.damper")
    assert damper.kind == "damper"
    assert damper.damping == pytest.approx(total / sigma**2, rel=1e-9)


def test_check_valve_is_its_power_at_the_amplitude(sprayer):
    valve = sprayer.to_dict()["circuits"]["left"]["accumulators"]["main"]["valve"]
    throttle, opened, cracks = (
        valve[k] for k in ("throttle", "open_resistance", "cracking_pressure")
    )
    sigma = valve["amplitude"]

    def drop(flow):
        # Backward the throttle alone; forward both, above the cracking pressure.
        both = (flow + cracks / opened) / (1 / throttle + 1 / opened)
        return both if flow > cracks / throttle else throttle * flow

    def power(flow):
        return drop(flow) * flow * stats.norm.pdf(flow, scale=sigma)

    total, _ = integrate.quad(
        power, -9 * sigma, 9 * sigma, points=[0.0, cracks / throttle], epsabs=0, epsrel=1e-11
    )
    lin = sprayer.settle().linear()
    element = next(e for e in lin.elements if e.name == "circuits.left.accumulators.main.valve")
    assert element.kind == "valve"
    assert element.damping == pytest.approx(total / sigma**2, rel=1e-9)


def test_bleed_is_shut_to_vibration_and_named(sprayer):
    shut = sprayer.with_values({"lines.bleed.closed": True})
    with_bleed, without = sprayer.settle().linear(), shut.settle().linear()
    np.testing.assert_array_equal(with_bleed.coupling, without.coupling)
    np.testing.assert_array_equal(with_bleed.motions().stiffness, without.motions().stiffness)
    np.testing.assert_array_equal(
        with_bleed.modes(damped=False).pole, without.modes(damped=False).pole
    )
    (line,) = with_bleed.point.slow_lines
    assert line.name == "lines.bleed"
    assert line.resistance == pytest.approx(9e11)
    # With the wheels free to follow, the balance is slower than with the wheels held.
    space = with_bleed.state_space()
    slowest = max(np.linalg.eigvals(space.A).real)
    assert 0.1 < -slowest * line.time_constant < 1.0
    for text in (str(with_bleed.motions()), str(with_bleed.modes(damped=False)), str(with_bleed)):
        assert f"time constant is {line.time_constant:.3f} s" in text
    assert any("lines.bleed" in one for one in with_bleed.modes().assumptions)


def test_lock_traps_oil_and_says_so(sprayer):
    locked = sprayer.with_setting("locked")
    state = locked.settle()
    trapped = [part for part in state.closed_off if not part.accumulators]
    assert len(trapped) == 2
    assert all(part.pressure == pytest.approx(70e5) for part in trapped)
    assert "trapped" in str(state)
    stiff, soft = (car.settle().linear().motions().stiffness_oil[2, 2] for car in (locked, sprayer))
    assert stiff > 20 * soft
    # b bᵀ/C of each side with the trapped oil's compliance.
    bore, rod = 0.055, 0.032
    full, annulus = np.pi / 4 * bore**2, np.pi / 4 * (bore**2 - rod**2)
    b = np.array([[full, -annulus, full, -annulus], [-annulus, full, -annulus, full]])
    expected = sum(
        np.outer(row, row) / part.compliance for row, part in zip(b, trapped, strict=True)
    )
    np.testing.assert_allclose(locked.settle().linear().coupling, expected, rtol=1e-11)


def test_flags_and_lists_go_round(sprayer, tmp_path):
    again = rm.Vehicle.from_dict(sprayer.to_dict())
    assert again == sprayer
    for name in ("car.toml", "car.json"):
        sprayer.save(tmp_path / name)
        assert rm.load(tmp_path / name) == sprayer
    assert sprayer.to_dict()["lines"]["bleed"]["slow"] is True
    assert sprayer.value("lines.bleed.slow") == 1.0
    assert pickle.loads(pickle.dumps(sprayer)) == sprayer
    # An entry of a list is a number by path; one side of a pair splits it.
    other = sprayer.with_values({"front.both.damper.force.3": "700 N"})
    assert other.value("front.left.damper.force.3") == 700.0
    split = sprayer.with_values({"front.left.damper.force.3": 650.0})
    assert split.value("front.right.damper.force.3") == 500.0
    listed = {p.path for p in sprayer.parameters()}
    assert "front.both.damper.force.3" in listed
    assert "lines.bleed.slow" not in listed  # no number
    with pytest.raises(rm.InvalidInput, match="true or false"):
        sprayer.with_values({"lines.bleed.slow": 0.5})
    with pytest.raises(rm.InvalidInput, match="not be less than the entry before"):
        sprayer.with_values({"front.both.damper.force.3": -10.0})


@pytest.mark.parametrize("part", ["slow_lines", "closed_off"])
def test_small_results_are_values(sprayer, part):
    state = sprayer.with_values({"lines.left_run.closed": True}).settle()
    one = getattr(state, part)[0]
    assert pickle.loads(pickle.dumps(one)) == one
    assert copy.deepcopy(one) == one
    assert type(one).__name__ in repr(one)


def test_link_is_its_row(sprayer):
    data = sprayer.to_dict()
    data["links"] = {
        "z": {
            "front_left": 1,
            "front_right": -1,
            "rear_left": -1,
            "rear_right": 1,
            "rate": 2e4,
            "inertance": 30.0,
        }
    }
    lin, plain = rm.Vehicle.from_dict(data).settle().linear(), sprayer.settle().linear()
    row = np.array([1, -1, -1, 1]) @ lin.deflection
    scale = abs(lin.stiffness).max()
    np.testing.assert_allclose(
        lin.stiffness - plain.stiffness, 2e4 * np.outer(row, row), atol=1e-12 * scale
    )
    np.testing.assert_allclose(lin.mass - plain.mass, 30.0 * np.outer(row, row), atol=1e-7)
    warp = lin.motions().stiffness_conventional[3, 3] - plain.motions().stiffness_conventional[3, 3]
    assert warp == pytest.approx(4 * 2e4, rel=1e-9)


def test_poles_against_numpy(sprayer):
    # The quadratic eigenproblem with NumPy alone: what has inertia, and what has none.
    lin = sprayer.settle().linear()
    n = len(lin.coordinates)
    scale = 1 / np.sqrt(np.diag(lin.stiffness))
    m, c, k = (scale[:, None] * matrix * scale for matrix in (lin.mass, lin.damping, lin.stiffness))
    light = np.diag(m) == 0
    heavy = ~light
    # x = [u, u̇ of the heavy]; C_ll u̇_l = −C_lh u̇_h − K_l u
    count = heavy.sum()
    a = np.zeros((n + count, n + count))
    rate = np.zeros((n, n + count))
    rate[np.ix_(heavy, range(n, n + count))] = np.eye(count)
    right = np.hstack([k[light], c[np.ix_(light, heavy)]])
    rate[light] = -np.linalg.solve(c[np.ix_(light, light)], right)
    a[:n] = rate
    force = np.hstack([k[heavy], np.zeros((count, count))]) + c[heavy] @ rate
    a[n:] = -np.linalg.solve(m[np.ix_(heavy, heavy)], force)
    expected = np.linalg.eigvals(a)
    expected = expected[expected.imag >= -1e-9]
    found = lin.modes().pole
    assert len(found) == len(expected)
    for pole in found:
        assert np.abs(expected - pole).min() <= 1e-7 * abs(pole) + 1e-8
