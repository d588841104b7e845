"""Against derivations and libraries from outside."""

import control
import mpmath
import numpy as np
import pytest
import scipy.linalg
import sympy

import ridemodes as rm

FREQUENCIES = np.array([0.05, 0.5, 3.0, 12.0, 60.0, 250.0])

# A vehicle without oil, unlike at every corner, centre of gravity off the centre line.
ODD = {
    "body": {
        "mass": 1320.0,
        "roll_inertia": 510.0,
        "pitch_inertia": 1990.0,
        "roll_pitch_product": 37.0,
        "cg_height": 0.55,
        "cg_offset": 0.06,
    },
    "front": {"distance": 1.21, "track": 1.49, "anti_roll_bar": {"rate": 8100.0}},
    "rear": {"distance": 1.44, "track": 1.53, "anti_roll_bar": {"rate": 4300.0}},
}
for place, (axle, side) in enumerate(
    (axle, side) for axle in ("front", "rear") for side in ("left", "right")
):
    ODD[axle][side] = {
        "unsprung_mass": 36.0 + place,
        "tyre": {"rate": 2.0e5 + 7e3 * place, "damping": 90.0 + 11 * place},
        "spring": {"rate": 2.1e4 + 900 * place, "motion_ratio": 0.8 + 0.03 * place},
        "damper": {"coefficient": 1500.0 + 70 * place, "motion_ratio": 0.9 - 0.02 * place},
    }


def test_matrices_follow_from_a_symbolic_lagrangian():
    """Kinetic energy, potential and dissipation function of the body and wheels, by SymPy."""
    names = "z theta phi w1 w2 w3 w4"
    q = sympy.Matrix(sympy.symbols(names))
    rate = sympy.Matrix(sympy.symbols(names.replace(" ", "d ") + "d"))
    x_mass, y_mass = sympy.symbols("x y")
    body = ODD["body"]
    # Velocity of a point of the body is ż − xθ̇ + yφ̇; integrated, x² gives I_yy, y² I_xx and xy P_xy
    # (a body whose height does not move with pitch and roll).
    square = sympy.expand((rate[0] - x_mass * rate[1] + y_mass * rate[2]) ** 2)
    moments = {
        (0, 0): body["mass"],
        (1, 0): 0,
        (0, 1): 0,
        (2, 0): body["pitch_inertia"],
        (0, 2): body["roll_inertia"],
        (1, 1): body["roll_pitch_product"],
    }
    kinetic = sum(
        coefficient * moments[powers]
        for powers, coefficient in sympy.Poly(square, x_mass, y_mass).terms()
    )
    potential, loss = sympy.Integer(0), sympy.Integer(0)
    deflections = []
    for place in range(4):
        axle = ODD["front" if place < 2 else "rear"]
        corner = axle["right" if place % 2 else "left"]
        x = axle["distance"] if place < 2 else -axle["distance"]
        y = (-0.5 if place % 2 else 0.5) * axle["track"] - body["cg_offset"]

        def deflection(v, x=x, y=y, place=place):
            return v[3 + place] - (v[0] - x * v[1] + y * v[2])

        spring, damper, tyre = corner["spring"], corner["damper"], corner["tyre"]
        kinetic += corner["unsprung_mass"] * rate[3 + place] ** 2
        potential += spring["rate"] * (spring["motion_ratio"] * deflection(q)) ** 2
        potential += tyre["rate"] * q[3 + place] ** 2
        loss += damper["coefficient"] * (damper["motion_ratio"] * deflection(rate)) ** 2
        loss += tyre["damping"] * rate[3 + place] ** 2
        deflections.append(deflection(q))
    for axle, first in (("front", 0), ("rear", 2)):
        roll = (deflections[first] - deflections[first + 1]) / ODD[axle]["track"]
        potential += ODD[axle]["anti_roll_bar"]["rate"] * roll**2
    linear = rm.Vehicle.from_dict(ODD).settle().linear()
    for energy, variables, ours in (
        (kinetic, rate, linear.mass),
        (potential, q, linear.stiffness),
        (loss, rate, linear.damping),
    ):
        theirs = np.array(sympy.hessian(energy / 2, list(variables)), dtype=float)
        np.testing.assert_allclose(ours, theirs, rtol=1e-12, atol=1e-12 * np.abs(theirs).max())


def network(car):
    """Node compliances, chambers and lines of a vehicle, worked out from its numbers alone."""
    value = car.value
    t, air = value("temperature"), value("atmosphere")
    cold, hot = value("oil.kinematic_viscosity"), value("oil.kinematic_viscosity_hot")
    # ASTM D341 (from memory)
    law = [np.log10(np.log10(nu * 1e6 + 0.7)) for nu in (cold, hot)]
    slope = (law[1] - law[0]) / (np.log10(373.15) - np.log10(313.15))
    nu = (10**10 ** (law[0] + slope * (np.log10(t) - np.log10(313.15))) - 0.7) * 1e-6
    density = value("oil.density") / (1 + value("oil.expansion") * (t - 288.15))
    data = car.to_dict()
    nodes, lines, chambers = [], [], []

    def compress(pressure):
        fraction = value("oil.air_fraction") * air / pressure
        return 1 / value("oil.bulk_modulus") + fraction / (value("oil.air_exponent") * pressure)

    def branch(path, hub, given, pressure):
        nodes.append(0.0)
        end = len(nodes) - 1
        resistance, inertance = value(f"{path}.throttle"), 0.0
        if "line" in given:
            length, bore = value(f"{path}.line.length"), value(f"{path}.line.bore")
            area = np.pi / 4 * bore**2
            resistance += 128 * nu * density * length / (np.pi * bore**4)
            factor = {"plug": 1.0, "developed": 4 / 3, "none": 0.0}[given["line"]["inertia"]]
            inertance = factor * density * length / area
            for node in (hub, end):
                nodes[node] += area * length / 2 * compress(pressure)
        lines.append((hub, end, resistance, inertance))
        return end

    layout = data.get("layout")
    for name in car.circuits:
        base = f"circuits.{name}"
        pressure = value(f"{base}.pressure")
        nodes.append(value(f"{base}.volume") * compress(pressure))
        hub = len(nodes) - 1
        for corner, (axle, side) in enumerate(
            (a, s) for a in ("front", "rear") for s in ("left", "right")
        ):
            for end in ("bump", "rebound"):
                path = f"{base}.chambers.{axle}_{side}_{end}"
                try:
                    value(f"{path}.throttle")
                except rm.InvalidInput:
                    continue
                given = (
                    layout["ports"][f"{axle}_{end}"]
                    if layout
                    else data["circuits"][name]["chambers"][f"{axle}_{side}_{end}"]
                )
                node = branch(path, hub, given, pressure)
                cylinder = f"{axle}.{side}.cylinder"
                area = np.pi / 4 * value(f"{cylinder}.bore") ** 2
                if end == "rebound":
                    area -= np.pi / 4 * value(f"{cylinder}.rod") ** 2
                nodes[node] += area * value(f"{cylinder}.stroke") / 2 * compress(pressure)
                sign = 1 if end == "bump" else -1
                chambers.append((node, corner, sign * area * value(f"{cylinder}.motion_ratio")))
        given = layout["accumulators"] if layout else data["circuits"][name]["accumulators"]
        for key in given:
            path = f"{base}.accumulators.{key}"
            node = branch(path, hub, given[key], pressure)
            charged, at = value(f"{path}.precharge"), value(f"{path}.precharge_temperature")
            if "gas_volume" in given[key]:
                gas = value(f"{path}.gas_volume")
            else:
                gas = value(f"{path}.volume") * charged / pressure * t / at
            nodes[node] += gas / (value(f"{path}.exponent") * pressure)
    return np.array(nodes), lines, chambers


@pytest.mark.parametrize("name", ["roadster", "delivery_van", "forest_truck"])
def test_dynamic_coupling_is_the_nodal_impedance(name):
    """D(s) = Bᵀ [s C + N (R + sI)⁻¹ Nᵀ]⁻¹ s B with the network built here from the numbers."""
    car = rm.example(name)
    compliance, lines, chambers = network(car)
    ours = car.settle().linear().dynamic_coupling(FREQUENCIES)
    for place, f in enumerate(FREQUENCIES):
        s = 2j * np.pi * f
        pool = list(range(len(compliance)))
        for start, end, resistance, inertance in lines:
            if resistance == inertance == 0:
                pool[end] = pool[start]
        kept = sorted(set(pool))
        index = [kept.index(p) for p in pool]
        y = np.zeros((len(kept), len(kept)), complex)
        b = np.zeros((len(kept), 4))
        for node, c in enumerate(compliance):
            y[index[node], index[node]] += s * c
        for start, end, resistance, inertance in lines:
            if resistance == inertance == 0:
                continue
            n = np.zeros(len(kept))
            n[index[start]] -= 1
            n[index[end]] += 1
            y += np.outer(n, n) / (resistance + s * inertance)
        for node, corner, area in chambers:
            b[index[node], corner] += area
        # A node that nothing compresses is taken out by its row as it stands.
        theirs = s * b.T @ np.linalg.solve(y, b)
        np.testing.assert_allclose(
            ours[:, :, place], theirs, rtol=0, atol=1e-9 * np.abs(theirs).max()
        )


@pytest.mark.parametrize("name", ["roadster", "delivery_van", "forest_truck"])
def test_coupling_is_that_of_circuits_at_one_pressure(name):
    """K_hyd(0) = Σ b bᵀ/ΣC over the circuits."""
    car = rm.example(name)
    compliance, lines, chambers = network(car)
    hubs = sorted({start for start, *_ in lines})
    circuit = {end: start for start, end, *_ in lines} | {hub: hub for hub in hubs}
    total = np.zeros((4, 4))
    for hub in hubs:
        b = np.zeros(4)
        for node, corner, area in chambers:
            if circuit[node] == hub:
                b[corner] += area
        total += np.outer(b, b) / sum(compliance[node] for node in circuit if circuit[node] == hub)
    linear = car.settle().linear()
    np.testing.assert_allclose(linear.coupling, total, rtol=0, atol=1e-12 * np.abs(total).max())
    np.testing.assert_array_equal(linear.dynamic_coupling(0.0)[:, :, 0], linear.coupling)


def test_undamped_modes_are_scipys(car):
    """`scipy.linalg.eigh` of K and M, with the massless volumes condensed here."""
    linear = car.settle().linear()
    # A slow line is shut: its volume stands still.
    slow = [line.name for line in linear.point.slow_lines]
    kept = [name not in slow for name in linear.coordinates]
    mass, k = (matrix[np.ix_(kept, kept)] for matrix in (linear.mass, linear.stiffness))
    heavy = np.diagonal(mass) > 0
    m = mass[np.ix_(heavy, heavy)]
    if not heavy.all():
        light = ~heavy
        inner = np.linalg.solve(k[np.ix_(light, light)], k[np.ix_(light, heavy)])
        k = k[np.ix_(heavy, heavy)] - k[np.ix_(heavy, light)] @ inner
    else:
        k = k[np.ix_(heavy, heavy)]
    theirs = np.sqrt(scipy.linalg.eigh(k, m, eigvals_only=True)) / (2 * np.pi)
    np.testing.assert_allclose(linear.modes(damped=False).frequency, theirs, rtol=1e-8)


def test_poles_are_scipys(car):
    """`scipy.linalg.eigvals` of the state space, and of the pencil of the matrices themselves."""
    linear = car.settle().linear()
    ours = linear.modes().pole
    ours = np.concatenate([ours, ours[ours.imag > 0].conj()])
    n = len(linear.coordinates)
    # Metres and cubic metres are made comparable, else QZ loses digits.
    unit = 1 / np.sqrt(np.diagonal(linear.stiffness))
    unit = np.outer(unit, unit)
    pencil = scipy.linalg.eigvals(
        np.block(
            [[np.zeros((n, n)), np.eye(n)], [-unit * linear.stiffness, -unit * linear.damping]]
        ),
        np.block([[np.eye(n), np.zeros((n, n))], [np.zeros((n, n)), unit * linear.mass]]),
    )
    pencil = pencil[np.isfinite(pencil)]
    for theirs, digits in ((np.linalg.eigvals(linear.state_space().A), 1e-8), (pencil, 1e-5)):
        distance = np.abs(ours[:, None] - theirs[None, :]).min(axis=1)
        # What SciPy rounds is relative to its largest pole.
        assert (distance <= digits * np.abs(ours) + 1e-13 * np.abs(ours).max()).all()
    assert len(ours) == len(linear.state_space().A)


def test_python_control_damps_the_same(roadster):
    """python-control's `damp` on the state space."""
    linear = roadster.settle().linear()
    frequency, ratio, _ = control.damp(control.ss(*linear.state_space()), doprint=False)
    modes = linear.modes()
    for f, zeta in zip(modes.frequency, modes.damping_ratio, strict=True):
        near = np.argmin(np.abs(frequency / (2 * np.pi) - f))
        assert frequency[near] / (2 * np.pi) == pytest.approx(f, rel=1e-9)
        assert ratio[near] == pytest.approx(zeta, rel=1e-7)


def test_state_space_responds_as_the_matrices(car):
    """C (sI − A)⁻¹ B + D by python-control against (K + sC + s²M)⁻¹ (G + sG_c)."""
    linear = car.settle().linear()
    space = linear.state_space()
    system = control.ss(*space)
    for f in (0.3, 1.4, 9.0, 30.0):
        s = 2j * np.pi * f
        dynamic = linear.stiffness + s * linear.damping + s**2 * linear.mass
        drive = linear.road_stiffness + s * linear.road_damping
        scale = np.sqrt(np.abs(np.diagonal(dynamic)))
        shape = (
            np.linalg.solve(dynamic / np.outer(scale, scale), drive / scale[:, None])
            / scale[:, None]
        )
        transfer = system(s)
        transfer = transfer[:, :4] + s * transfer[:, 4:]
        tyre = np.diagonal(linear.road_stiffness[3:7]) + s * np.diagonal(linear.road_damping[3:7])
        expected = np.vstack(
            [s**2 * shape[:3], linear.deflection @ shape, tyre[:, None] * (np.eye(4) - shape[3:7])]
        )
        for rows in (slice(0, 3), slice(3, 7), slice(7, 11)):
            limit = 1e-7 * np.abs(expected[rows]).max()
            np.testing.assert_allclose(transfer[rows], expected[rows], rtol=0, atol=limit)


def poles_in_forty_digits(linear):
    """Poles of μ²K + μC + M with μ = 1/λ, from the elements, by mpmath."""
    n = len(linear.coordinates)
    with mpmath.workdps(40):
        matrices = {name: mpmath.zeros(n) for name in ("mass", "damping", "stiffness")}
        for element in linear.elements:
            row = [(i, mpmath.mpf(float(g))) for i, g in enumerate(element.row) if g]
            for name, matrix in matrices.items():
                scalar = mpmath.mpf(getattr(element, name))
                for i, a in row:
                    for j, b in row:
                        matrix[i, j] += scalar * a * b
        value = linear.point.vehicle.value
        matrices["mass"][0, 0] += value("body.mass")
        matrices["mass"][1, 1] += value("body.pitch_inertia")
        matrices["mass"][2, 2] += value("body.roll_inertia")
        matrices["mass"][1, 2] -= value("body.roll_pitch_product")
        matrices["mass"][2, 1] -= value("body.roll_pitch_product")
        inverse = matrices["stiffness"] ** -1
        companion = mpmath.zeros(2 * n)
        companion[:n, n:] = mpmath.eye(n)
        companion[n:, :n] = -(inverse * matrices["mass"])
        companion[n:, n:] = -(inverse * matrices["damping"])
        found = mpmath.eig(companion, left=False, right=False)
        return np.array([complex(1 / mu) for mu in found if abs(mu) > mpmath.mpf(10) ** -18])


@pytest.mark.parametrize("name", ["roadster", "delivery_van"])
def test_every_pole_has_all_its_digits(name):
    """Slow body modes beside oil that relaxes ten thousand times as fast."""
    linear = rm.example(name).settle().linear()
    theirs = poles_in_forty_digits(linear)
    for pole in linear.modes().pole:
        assert np.abs(theirs - pole).min() < 1e-14 * abs(pole)
