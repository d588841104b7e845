"""The operating point against SciPy, CoolProp and hand balances."""

import copy
import pickle

import numpy as np
import pytest
from CoolProp.CoolProp import PropsSI
from scipy import optimize

import ridemodes as rm

G = 9.80665


@pytest.fixture
def car() -> rm.Vehicle:
    return rm.example("roadster")


def gas_car(kind: str, precharge: float, pressure: float) -> rm.Vehicle:
    data = rm.example("roadster").to_dict()
    main = data["layout"]["accumulators"]["main"]
    main.update(gas=kind, precharge=precharge, throttle=0.0)
    data["layout"]["pressure"] = pressure
    # Softer springs leave room for what the oil carries.
    return rm.Vehicle.from_dict(data)


@pytest.mark.parametrize("temperature", [253.15, 293.15, 343.15])
@pytest.mark.parametrize("pressure", [60e5, 150e5, 240e5])
def test_nitrogen_is_coolprops(temperature, pressure):
    """Gas volume and both rates: density, isothermal and isentropic compressibility of CoolProp."""
    precharge = 40e5
    car = gas_car("nitrogen", precharge, 100e5)
    state = car.settle(temperature=temperature, pressure={"left": pressure, "right": pressure})
    rho_charge = PropsSI("D", "P", precharge, "T", 293.15, "Nitrogen")
    rho = PropsSI("D", "P", pressure, "T", temperature, "Nitrogen")
    volume = car.value("layout.accumulators.main.volume")
    np.testing.assert_allclose(state.gas_volume, volume * rho_charge / rho, rtol=1e-9)
    # k_s = ρ a²/p from the speed of sound.
    sound = PropsSI("A", "P", pressure, "T", temperature, "Nitrogen")
    fast = rho * sound**2 / pressure
    gas = next(
        e for e in state.linear().elements if e.name == "circuits.left.accumulators.main.gas"
    )
    line = next(
        e
        for e in state.linear().elements
        if e.name == "circuits.left.accumulators.main.line.oil_far"
    )
    # Stores at a node share k = C_s/C_n²; with the line's half of oil the gas is C_n less that.
    total = np.sqrt(gas.stiffness + line.stiffness)  # 1/√C_n
    compliance = gas.stiffness / total**4
    assert compliance == pytest.approx(state.gas_volume[0] / (fast * pressure), rel=1e-8)


def test_fast_squeeze_of_nitrogen_is_an_isentrope():
    car = gas_car("nitrogen", 40e5, 100e5)
    state, slow = car.settle(vertical=12.0, fast=True), car.settle()
    start, end = slow.pressure[0], state.pressure[0]
    entropy = PropsSI("S", "P", start, "T", 293.15, "Nitrogen")
    ratio = PropsSI("D", "P", start, "T", 293.15, "Nitrogen") / PropsSI(
        "D", "P", end, "S", entropy, "Nitrogen"
    )
    assert end > 1.002 * start
    assert state.gas_volume[0] / slow.gas_volume[0] == pytest.approx(ratio, rel=1e-9)


def test_balance_by_scipy(car):
    """Heave and pitch of the like-sided vehicle under a vertical load, by SciPy from the data."""
    data = car.to_dict()
    load = 6.0
    state = car.settle(vertical=load)
    front, rear = data["front"]["both"], data["rear"]["both"]
    a, b = data["front"]["distance"], data["rear"]["distance"]
    body = data["body"]["mass"]
    layout, oil = data["layout"], data["oil"]
    p0, atm = layout["pressure"], 101325.0
    main = layout["accumulators"]["main"]

    def area(cylinder, rod):
        return np.pi / 4 * (cylinder["bore"] ** 2 - (cylinder["rod"] ** 2 if rod else 0.0))

    # Per circuit: a bump and a rebound chamber on either axle; by symmetry both circuits are alike.
    net = [
        (area(c, False) - area(c, True)) * c["motion_ratio"]
        for c in (front["cylinder"], rear["cylinder"])
    ]
    oil_volume = layout["volume"] + np.pi / 4 * main["line"]["bore"] ** 2 * main["line"]["length"]
    for corner in (front, rear):
        oil_volume += (
            sum(area(corner["cylinder"], rod) for rod in (0, 1)) * corner["cylinder"]["stroke"] / 2
        )
    charge = main["volume"] * main["precharge"]

    def pressure(d_front, d_rear):
        def excess(p):
            gas = charge / p - charge / p0
            squeeze = (p - p0) / oil["bulk_modulus"] + oil["air_fraction"] * atm / 1.4 * (
                1 / p0 - 1 / p
            )
            return gas - oil_volume * squeeze + net[0] * d_front + net[1] * d_rear

        return optimize.brentq(excess, 1e5, 1e8, xtol=1e-6, rtol=1e-15)

    loads = body * G * np.array([b, a]) / (a + b) / 2
    rates = [c["spring"]["rate"] * c["spring"]["motion_ratio"] ** 2 for c in (front, rear)]

    def balance(x):
        z, pitch = x[:2]
        wheels = x[2:]
        delta = wheels - (z - np.array([a, -b]) * pitch)
        rise = pressure(*delta) - p0
        force = loads + np.array(rates) * delta + np.array(net) * rise
        unsprung = np.array([front["unsprung_mass"], rear["unsprung_mass"]])
        tyre = (loads + unsprung * G) - np.array(
            [front["tyre"]["rate"], rear["tyre"]["rate"]]
        ) * wheels
        return np.concatenate(
            [
                [2 * force.sum() - body * (G + load), 2 * (-a * force[0] + b * force[1])],
                tyre - force - unsprung * (G + load),
            ]
        )

    solved = optimize.root(balance, np.zeros(4), tol=1e-12, method="hybr")
    np.testing.assert_allclose(state.attitude[:2], solved.x[:2], rtol=1e-8, atol=1e-10)
    np.testing.assert_allclose(state.wheels[[0, 2]], solved.x[2:], rtol=1e-8, atol=1e-10)


def test_state_is_a_minimum_of_the_potential(car):
    """The slope of the tyre loads is symmetric, as of a potential, and softer slowly."""
    slow, fast = car.readings(), car.readings(fast=True)
    np.testing.assert_allclose(slow.load_per_height, slow.load_per_height.T, rtol=1e-6, atol=1e-3)
    assert fast.roll_gradient < slow.roll_gradient
    # A raised wheel is a quarter of each motion: rows sum to nothing, for the weight stays.
    np.testing.assert_allclose(slow.load_per_height.sum(axis=0), 0.0, atol=1.0)


def test_readings_are_the_states(car):
    readings = car.readings(temperature=310.0)
    h = 0.5
    roll = [car.settle(lateral=s * h, temperature=310.0).attitude[2] for s in (1, -1)]
    assert readings.roll_gradient == pytest.approx((roll[0] - roll[1]) / (2 * h), rel=1e-3)
    above = car.settle(lateral=readings.lateral_at_lift + 0.01, temperature=310.0)
    below = car.settle(lateral=readings.lateral_at_lift - 0.05, temperature=310.0)
    assert min(above.tyre_load) == 0.0
    assert min(below.tyre_load) > 0.0
    assert "roll gradient deg/g" in str(car.readings_table())
    assert "without oil" in str(car.readings_table())


def test_wheel_rates_start_at_the_motions(car):
    fast = car.wheel_rates([-0.03, 0.0, 0.03], fast=True)
    motions = car.settle().linear().motions()
    np.testing.assert_allclose(fast.rate[:4, 1], motions.stiffness.diagonal(), rtol=1e-9)
    # The rate is the slope of the force.
    h = 1e-5
    force = car.wheel_rates([0.03 - h, 0.03 + h], fast=True).force
    np.testing.assert_allclose((force[:, 1] - force[:, 0]) / (2 * h), fast.rate[:, 2], rtol=1e-6)


def test_sweep_of_a_load_is_its_states(car):
    values = np.linspace(0.0, 6.0, 13)
    sweep = car.sweep("lateral", values, temperature=305.0)
    back = car.sweep("lateral", values[::-1], temperature=305.0)
    for row, value in enumerate(values):
        one = car.settle(lateral=value, temperature=305.0)
        np.testing.assert_allclose(sweep.attitude[row], one.attitude, atol=1e-9)
        np.testing.assert_allclose(sweep.tyre_load[row], one.tyre_load, rtol=1e-8)
        np.testing.assert_allclose(back.pressure[len(values) - 1 - row], one.pressure, rtol=1e-8)
    assert sweep.status == ["solved"] * len(values)
    # The slope at each state, against differences of the states.
    h = 1e-3
    for row in (0, 6, 11):
        pair = [car.settle(lateral=values[row] + s * h, temperature=305.0) for s in (1, -1)]
        roll = (pair[0].attitude[2] - pair[1].attitude[2]) / (2 * h)
        pressure = (pair[0].pressure - pair[1].pressure) / (2 * h)
        assert sweep.roll_gradient[row] == pytest.approx(roll, rel=1e-6)
        np.testing.assert_allclose(sweep.pressure_per_lateral[row], pressure, rtol=1e-6)
    pitch = [car.settle(longitudinal=a, temperature=305.0).attitude[1] for a in (h, 0.0)]
    assert sweep.pitch_gradient[0] == pytest.approx((pitch[0] - pitch[1]) / h, rel=1e-4)
    # Modes follow too: the squeezed circuit stiffens more than the other softens.
    rolls = sweep.frequency[sweep.label.index("body roll")]
    assert rolls[-1] > rolls[0]
    again = pickle.loads(pickle.dumps(sweep))
    assert again == sweep
    np.testing.assert_array_equal(again.frequency, sweep.frequency)
    with pytest.raises(rm.InvalidInput, match="no such path"):
        car.sweep("laterall", values)
    with pytest.raises(TypeError, match="unexpected keyword"):
        car.sweep("lateral", values, temprature=300.0)


def test_conditions_are_checked_as_a_whole(car):
    with pytest.raises(rm.InvalidInput) as caught:
        car.settle(
            lateral=1e4,
            temperature=40.0,
            payload=[rm.Payload(-5.0)],
            oil={"lefft": 1e-5},
            fault=rm.Fault.closed("lines.none"),
        )
    paths = [violation.path for violation in caught.value.violations]
    assert sorted(paths) == [
        "fault.closed",
        "lateral",
        "oil.lefft",
        "payload.0.mass",
        "temperature",
    ]
    with pytest.raises(rm.InvalidInput, match="NaN"):
        car.settle(lateral=float("nan"))
    with pytest.raises(TypeError):
        car.settle(laterall=1.0)


def test_no_equilibrium_is_a_typed_error(car):
    with pytest.raises(rm.NotConverged) as caught:
        car.settle(lateral=40.0)
    assert len(caught.value.last) == 7
    assert "wheels off the ground" in str(caught.value)


def test_limits_have_names_and_margins(car):
    state = car.settle(fault=rm.Fault.burst("left"))
    limit = state.limits["circuits.left.minimum_pressure"]
    assert limit.passed
    assert limit.margin == pytest.approx(101325.0 - 201325.0)
    assert limit in state.passed
    assert "Limits passed" in str(state)
    assert not any(one.passed for one in car.settle().limits.values())


@pytest.mark.parametrize(
    "one",
    [
        rm.Payload(75.0, x=-0.2, y=0.4),
        rm.Fault.years(5.0),
        rm.example("roadster").readings(),
        rm.example("roadster").wheel_rates([0.0, 0.01]),
        rm.example("roadster").settle(lateral=3.0, fast=True),
    ],
    ids=lambda one: type(one).__name__,
)
def test_results_are_values(one):
    assert pickle.loads(pickle.dumps(one)) == one
    assert copy.deepcopy(one) == one
    assert type(one).__name__ in repr(one) or len(repr(one)) > 40


def test_gravity_is_an_option_and_said(car):
    plain, leaned = car.settle().linear(), car.settle().linear(gravity=True)
    arm = 0.47 - (0.06 * 1.17 + 0.09 * 1.24) / 2.41
    moment = leaned.stiffness[2, 2] - plain.stiffness[2, 2]
    assert moment == pytest.approx(-1080 * G * arm, rel=1e-9)
    assert leaned.mass[2, 2] - plain.mass[2, 2] == pytest.approx(1080 * arm**2, rel=1e-9)
    assert "taken in" in str(leaned)
    assert "left out" in str(plain)


def test_faults_and_cases_in_tables(car):
    text = str(car.fault_table())
    assert text.index("lost precharge") < text.index("closed")
    sprayer = rm.example("field_sprayer")
    assert sprayer.cases
    table = str(sprayer.case_table())
    assert all(name in table for name in sprayer.cases)
    name = sprayer.cases[0]
    assert sprayer.settle_case(name).attitude.shape == (3,)
    with pytest.raises(rm.InvalidInput, match="no such load case"):
        sprayer.settle_case("none")
