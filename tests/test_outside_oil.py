"""The oil in the matrices, against a derivation from areas, compliances and lines."""

import numpy as np
import pytest
import scipy.linalg

import ridemodes as rm

KINDS = ("gas", "oil", "hose", "line", "throttle", "valve")
OILY = [name for name in rm.examples() if rm.example(name).circuits]

# Two circuits, unlike everywhere, at 40 °C, where the viscosity is the given one.
HYDRAULIC = {
    "temperature": 313.15,
    "body": {
        "mass": 1490.0,
        "roll_inertia": 610.0,
        "pitch_inertia": 2250.0,
        "roll_pitch_product": -21.0,
        "cg_height": 0.58,
        "cg_offset": -0.04,
    },
    "oil": {
        "density": 872.0,
        "bulk_modulus": 1.3e9,
        "kinematic_viscosity": 31e-6,
        "kinematic_viscosity_hot": 5.2e-6,
        "expansion": 7e-4,
        "air_fraction": 0.0,
    },
    "front": {"distance": 1.33, "track": 1.52},
    "rear": {"distance": 1.27, "track": 1.55},
    "circuits": {
        "one": {
            "pressure": 42e5,
            "volume": 7e-5,
            "chambers": {
                "front_left_bump": {
                    "throttle": 3e8,
                    "line": {"length": 0.9, "bore": 0.011, "inertia": "plug"},
                },
                "front_right_rebound": {"throttle": 2e8},
                "rear_right_rebound": {"throttle": 3.5e8},
                "rear_left_bump": {
                    "throttle": 1e8,
                    "line": {"length": 2.1, "bore": 0.012, "inertia": "developed"},
                },
            },
            "accumulators": {
                "ball": {
                    "gas_volume": 3.1e-4,
                    "precharge": 25e5,
                    "exponent": 1.3,
                    "throttle": 6e8,
                    "line": {"length": 0.4, "bore": 0.010, "inertia": "plug"},
                }
            },
        },
        "two": {
            "pressure": 37e5,
            "volume": 9e-5,
            "chambers": {
                "front_right_bump": {"throttle": 4e8},
                "front_left_rebound": {"throttle": 2.5e8},
                "rear_left_rebound": {"throttle": 1.5e8},
                "rear_right_bump": {
                    "throttle": 2e8,
                    "line": {"length": 1.7, "bore": 0.009, "inertia": "none"},
                },
            },
            "accumulators": {
                "ball": {
                    "gas_volume": 2.2e-4,
                    "precharge": 22e5,
                    "exponent": 1.25,
                    "throttle": 5e8,
                }
            },
        },
    },
}
for place, corner in enumerate(("front_left", "front_right", "rear_left", "rear_right")):
    axle, side = corner.split("_")
    HYDRAULIC[axle][side] = {
        "unsprung_mass": 41.0 + place,
        "tyre": {"rate": 2.1e5 + 5e3 * place, "damping": 110.0 + 9 * place},
        "spring": {"rate": 2.2e4 + 800 * place, "motion_ratio": 0.9 + 0.02 * place},
        "damper": {"coefficient": 1600.0 + 60 * place, "motion_ratio": 0.95 - 0.02 * place},
        "cylinder": {
            "bore": 0.030 + 0.001 * place,
            "rod": 0.014,
            "motion_ratio": 0.85 + 0.03 * place,
            "stroke": 0.18 + 0.01 * place,
        },
    }


def without_oil(data):
    """The same vehicle, its cylinders and circuits left out."""
    bare = {key: value for key, value in data.items() if key not in ("circuits", "oil")}
    for axle in ("front", "rear"):
        bare[axle] = {
            key: {k: v for k, v in value.items() if k != "cylinder"}
            if isinstance(value, dict)
            else value
            for key, value in data[axle].items()
        }
    return bare


def assembled(data):
    """M, C, K over [q; v] with W = [B L | N]: diag(M, I), diag(C, R), diag(K, 0) + Wᵀ C_n⁻¹ W."""
    oil = data["oil"]
    density = oil["density"] / (1 + oil["expansion"] * (data["temperature"] - 288.15))
    # Merritt, Hydraulic Control Systems, 1967 (from memory): C = V/β, p A/V for a chamber;
    # Hagen and Poiseuille: R = 128 μL/(πd⁴); inertance ρL/A, 4/3 of it for developed flow.
    compliance, areas, ends, names, resistance, inertance = [], [], [], [], [], []

    def line(hub, node, given, name):
        r, i = given["throttle"], 0.0
        if "line" in given:
            length, bore = given["line"]["length"], given["line"]["bore"]
            section = np.pi / 4 * bore**2
            r += 128 * oil["kinematic_viscosity"] * density * length / (np.pi * bore**4)
            kinds = {"plug": 1.0, "developed": 4 / 3, "none": 0.0}
            i = kinds[given["line"]["inertia"]] * density * length / section
            for end in (hub, node):
                compliance[end] += section * length / 2 / oil["bulk_modulus"]
        ends.append((hub, node))
        names.append(name)
        resistance.append(r)
        inertance.append(i)

    corners = ["front_left", "front_right", "rear_left", "rear_right"]
    for name, circuit in data["circuits"].items():
        hub = len(compliance)
        compliance.append(circuit["volume"] / oil["bulk_modulus"])
        for chamber, given in circuit["chambers"].items():
            corner, _, kind = chamber.rpartition("_")
            axle, side = corner.split("_")
            cylinder = data[axle][side]["cylinder"]
            area = np.pi / 4 * cylinder["bore"] ** 2
            if kind == "rebound":
                area -= np.pi / 4 * cylinder["rod"] ** 2
            node = len(compliance)
            compliance.append(area * cylinder["stroke"] / 2 / oil["bulk_modulus"])
            sign = 1 if kind == "bump" else -1
            areas.append((node, corners.index(corner), sign * area * cylinder["motion_ratio"]))
            line(hub, node, given, f"circuits.{name}.chambers.{chamber}")
        for accumulator, given in circuit["accumulators"].items():
            node = len(compliance)
            compliance.append(given["gas_volume"] / (given["exponent"] * circuit["pressure"]))
            line(hub, node, given, f"circuits.{name}.accumulators.{accumulator}")
    bare = rm.Vehicle.from_dict(without_oil(data)).settle().linear()
    body = -np.array(
        [
            [1.0, -x, y - data["body"]["cg_offset"]]
            for x, y in (
                (side_x, sign * data[axle]["track"] / 2)
                for axle, side_x in (
                    ("front", data["front"]["distance"]),
                    ("rear", -data["rear"]["distance"]),
                )
                for sign in (1, -1)
            )
        ]
    )
    b = np.zeros((len(compliance), 4))
    for node, corner, area in areas:
        b[node, corner] = area
    n = np.zeros((len(compliance), len(ends)))
    for column, (start, end) in enumerate(ends):
        n[start, column], n[end, column] = -1, 1
    w = np.hstack([b @ np.hstack([body, np.eye(4)]), n])
    k = scipy.linalg.block_diag(bare.stiffness, np.zeros((len(ends),) * 2))
    k += w.T @ (w / np.array(compliance)[:, None])
    m = scipy.linalg.block_diag(bare.mass, np.diag(inertance))
    c = scipy.linalg.block_diag(bare.damping, np.diag(resistance))
    return names, m, c, k


def test_whole_matrices_of_a_vehicle_with_oil():
    names, *theirs = assembled(HYDRAULIC)
    linear = rm.Vehicle.from_dict(HYDRAULIC).settle().linear()
    assert sorted(names) == linear.coordinates[7:]
    order = [*range(7), *(7 + names.index(name) for name in linear.coordinates[7:])]
    for ours, matrix in zip((linear.mass, linear.damping, linear.stiffness), theirs, strict=True):
        matrix = matrix[np.ix_(order, order)]
        # An entry is as large as the diagonal allows: metres and cubic metres side by side.
        scale = np.sqrt(np.abs(np.diagonal(matrix)))
        limit = 1e-12 * np.outer(scale, scale) + 1e-12 * np.abs(matrix)
        assert (np.abs(ours - matrix) <= limit + 1e-300).all()


def test_number_of_states():
    """2·(7 + lines with inertia) + lines without."""
    names, m, *_ = assembled(HYDRAULIC)
    heavy = int((np.diagonal(m)[7:] > 0).sum())
    space = rm.Vehicle.from_dict(HYDRAULIC).settle().linear().state_space()
    assert 0 < heavy < len(names)
    assert len(space.A) == 2 * (7 + heavy) + len(names) - heavy


@pytest.mark.parametrize("name", OILY)
def test_dynamic_coupling_is_the_schur_complement(name):
    """Lᵀ D L = A_qq − A_qv A_vv⁻¹ A_vq of the oil's own A = K + sC + s²M."""
    linear = rm.example(name).settle().linear()
    oil = [e for e in linear.elements if e.kind in KINDS]
    slow = [line.name for line in linear.point.slow_lines]
    volumes = [
        i
        for i, (unit, name) in enumerate(
            zip(linear.coordinate_units, linear.coordinates, strict=True)
        )
        if unit == "m^3" and name not in slow
    ]
    f = np.array([0.05, 0.5, 3.0, 12.0, 60.0, 250.0])
    ours = linear.dynamic_coupling(f)
    lever = linear.deflection[:, :7]
    for place, s in enumerate(2j * np.pi * f):
        a = sum((e.stiffness + s * e.damping + s**2 * e.mass) * np.outer(e.row, e.row) for e in oil)
        across = a[np.ix_(volumes, range(7))]
        theirs = a[:7, :7] - across.T @ np.linalg.solve(a[np.ix_(volumes, volumes)], across)
        limit = 1e-9 * np.abs(theirs).max()
        np.testing.assert_allclose(lever.T @ ours[:, :, place] @ lever, theirs, rtol=0, atol=limit)


@pytest.mark.parametrize("name", OILY)
def test_coupling_and_its_damping_are_the_limit(name):
    """D(jω) → K_hyd(0) + jω C_hyd(0): what is left falls with the square of the frequency."""
    linear = rm.example(name).settle().linear()
    motions = np.array([[1, 1, 1, 1], [-1, -1, 1, 1], [1, -1, 1, -1], [1, -1, -1, 1]]).T
    f = np.array([1e-3, 1e-2])
    dynamic = linear.dynamic_coupling(f)
    far = np.abs(dynamic.real - linear.coupling[:, :, None]).max(axis=(0, 1))
    assert far[0] < 1e-6 * np.abs(linear.coupling).max()
    assert far[1] == pytest.approx(100 * far[0], rel=1e-2)
    slope = dynamic[:, :, 0].imag / (2 * np.pi * f[0])
    theirs = motions.T @ slope @ motions / 4
    np.testing.assert_allclose(
        linear.motions().damping_oil, theirs, rtol=0, atol=1e-6 * np.abs(theirs).max()
    )


@pytest.mark.parametrize("name", OILY)
def test_oil_only_takes_energy(name):
    """D is symmetric, C_hyd(ω) positive semidefinite: lines are passive (common practice)."""
    dynamic = rm.example(name).settle().linear().dynamic_coupling(np.geomspace(1e-3, 1e3, 61))
    for matrix in np.moveaxis(dynamic, -1, 0):
        size = np.abs(matrix).max()
        np.testing.assert_allclose(matrix, matrix.T, rtol=0, atol=1e-12 * size)
        assert np.linalg.eigvalsh(matrix.imag).min() > -1e-12 * size


@pytest.mark.parametrize("name", rm.examples())
def test_no_frequency_gives_nan_unannounced(name):
    linear = rm.example(name).settle().linear()
    try:
        found = linear.dynamic_coupling([1e160])
    except (ValueError, ArithmeticError):
        return
    assert np.isfinite(found).all()


@pytest.mark.parametrize(
    ("path", "number", "beyond"),
    [
        ("layout.accumulators.main.throttle", 1e15, 7e18),
        ("front.both.damper.coefficient", 1e8, 1.5e15),
    ],
)
def test_what_is_all_but_locked_stays_passive(roadster, path, number, beyond):
    """`numpy.linalg.eigvals` of the state space; a passive vehicle has no growing motion."""
    linear = roadster.with_values({path: number}).settle().linear()
    pole = linear.modes().pole
    ours = np.concatenate([pole, pole[pole.imag > 0].conj()])
    theirs = np.linalg.eigvals(linear.state_space().A)
    assert (pole.imag >= 0).all()
    assert (pole.real <= 0).all()
    assert len(ours) == len(theirs)
    for own in ours[np.abs(ours) > 1]:
        assert np.abs(theirs - own).min() < 1e-4 * abs(own)
    # Beyond that rounding would decide, so such numbers are refused.
    with pytest.raises(rm.InvalidInput, match="at most"):
        roadster.with_values({path: beyond})


def test_no_load_is_infinite_unannounced(roadster):
    with pytest.raises(rm.InvalidInput, match="warp_preload"):
        roadster.with_values({"body.warp_preload": -1e308})
