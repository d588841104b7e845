"""What a call from Python costs, beside the plain NumPy/SciPy script of the same work.

Both in one run. The script starts from the finished matrices, so that its share is the least it
could need: the state matrix, `scipy.linalg.eig` with vectors, undamped modes by `eigh`, and
kinetic, strain and dissipation shares in NumPy.
"""

import subprocess
import sys
import timeit

import numpy as np
import scipy.linalg

import ridemodes as rm


def best(call, number=200, repeat=7):
    """Least mean time of a call [s]."""
    call()
    return min(timeit.repeat(call, number=number, repeat=repeat)) / number


def plain(mass, damping, stiffness, rows, m, c, k, pattern):
    """Modes with vectors and shares, as an engineer would script them."""
    n = len(mass)
    inverse = np.linalg.inv(mass)
    state = np.block([[np.zeros((n, n)), np.eye(n)], [-inverse @ stiffness, -inverse @ damping]])
    poles, vectors = scipy.linalg.eig(state)
    upper = poles.imag >= 0
    poles, shapes = poles[upper], vectors[:n, upper].T
    order = np.argsort(abs(poles))
    poles, shapes = poles[order], shapes[order]
    _, undamped = scipy.linalg.eigh(stiffness, mass)
    likeness = abs(undamped.T @ mass @ shapes.T) ** 2
    momentum = shapes @ mass
    wheels = (shapes[:, 3:7] @ pattern / 4).conj() * (momentum[:, 3:7] @ pattern)
    kinetic = np.concatenate([(shapes[:, :3].conj() * momentum[:, :3]).real, wheels.real], axis=1)
    travel = abs(shapes @ rows.T) ** 2
    strain, loss = travel * k, travel * c
    return (
        poles,
        likeness,
        kinetic / kinetic.sum(axis=1, keepdims=True),
        strain / strain.sum(axis=1, keepdims=True),
        loss / loss.sum(axis=1, keepdims=True),
    )


def import_time():
    """Least own import time above NumPy's [s], of several processes."""
    code = (
        "import time, numpy; t = time.perf_counter(); import ridemodes; "
        "print(time.perf_counter() - t)"
    )
    run = [sys.executable, "-c", code]
    return min(float(subprocess.run(run, capture_output=True, check=True).stdout) for _ in range(7))


def main():
    """Print the table."""
    car = rm.example("roadster")
    text = car.to_toml()
    lin = car.settle().linear()
    elements = lin.elements
    pattern = np.array([[1, 1, 1, 1], [-1, -1, 1, 1], [1, -1, 1, -1], [1, -1, -1, 1]]).T
    arguments = (
        lin.mass,
        lin.damping,
        lin.stiffness,
        np.array([e.row for e in elements]),
        *(
            np.array([getattr(e, name) for e in elements])
            for name in ("mass", "damping", "stiffness")
        ),
        pattern,
    )
    value = {"front.both.spring.rate": 24e3}
    rows = [
        ("import ridemodes above numpy", import_time(), 20e-3),
        ("rm.loads(roadster)", best(lambda: rm.loads(text)), 300e-6),
        ("car.settle().linear()", best(lambda: car.settle().linear()), None),
        ("lin.motions()", best(lin.motions), None),
        ("lin.modes()", best(lin.modes), 150e-6),
        (
            "with_values → settle → linear → modes",
            best(lambda: car.with_values(value).settle().linear().modes()),
            200e-6,
        ),
    ]
    script = best(lambda: plain(*arguments))
    print(f"{'call':40} {'µs':>9} {'aim µs':>9}")
    for name, seconds, aim in rows:
        print(f"{name:40} {seconds * 1e6:9.1f} {f'{aim * 1e6:9.0f}' if aim else '':>9}")
    print(f"{'plain NumPy/SciPy modes and shares':40} {script * 1e6:9.1f}")
    print(f"lin.modes() is {script / rows[4][1]:.1f} times as fast as the script, in this run")


if __name__ == "__main__":
    main()
