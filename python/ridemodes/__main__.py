"""The command line: ``python -m ridemodes``."""

from __future__ import annotations

import argparse
import io
import json
import sys
from pathlib import Path

import ridemodes as rm


def demo(arguments: argparse.Namespace) -> int:
    """Run the main job on an example vehicle, print its tables and draw its pictures."""
    import matplotlib as mpl
    import numpy as np
    import scipy.linalg

    mpl.use("agg")
    car = rm.example("roadster")
    state = car.settle()
    linear = state.linear()
    modes, motions = linear.modes(), linear.motions()
    print(f"{car.name}: {car.description}\n")
    for table in (state.table(), modes.table(), linear.coupling_table(), motions.table()):
        print(table)
    ours = np.concatenate([modes.pole, modes.pole[modes.pole.imag > 0].conj()])
    theirs = scipy.linalg.eigvals(linear.state_space().A)
    distance = np.abs(ours[:, None] - theirs[None, :]).min(axis=1) / np.abs(ours)
    print(
        f"Poles beside SciPy's eigenvalues of the state matrix: {len(theirs)} of them, "
        f"largest relative difference {'below 1e-9' if distance.max() < 1e-9 else distance.max()}"
    )
    bare = rm.example("roadster_without_oil").settle().linear()
    roll = modes.frequency[modes.rows("body roll")[0]]
    plain = bare.modes()
    print(
        f"With the oil body roll is at {roll:.2f} Hz, without it at "
        f"{plain.frequency[plain.rows('body roll')[0]]:.2f} Hz; warp stays at "
        f"{1e-3 * motions.stiffness[3, 3]:.1f} N/mm, without it "
        f"{1e-3 * bare.motions().stiffness[3, 3]:.1f} N/mm\n"
    )
    from matplotlib import pyplot

    folder = Path(arguments.output)
    folder.mkdir(parents=True, exist_ok=True)
    figure, axes = pyplot.subplots(1, 2, figsize=(13, 4.2), layout="constrained")
    rm.plot.motion_stiffness(motions, ax=axes[0])
    rm.plot.coupling(linear, ax=axes[1])
    pictures = {"modes": rm.plot.mode_shapes(modes), "motions": figure}
    for name, picture in pictures.items():
        path = folder / f"ridemodes-demo-{name}.png"
        picture.savefig(path, dpi=110)
        print(f"wrote {path}")
    print(f"\n{rm.CAUTION}")
    return 0


def check(arguments: argparse.Namespace) -> int:
    """Say whether a file is a vehicle, or everything that is wrong with it."""
    car = rm.load(arguments.file)
    print(f"{arguments.file}: {car!r}")
    for warning in car.settle().warnings:
        print(f"warning: {warning}")
    return 0


def report(arguments: argparse.Namespace) -> int:
    """Print everything there is to say about a vehicle."""
    car = rm.load(arguments.file)
    state = car.settle()
    linear = state.linear()
    tables = [car.table(), state.table(), linear.coupling_table()]
    for table in [*tables, linear.motions().table(), linear.modes().table()]:
        print(table)
    print(rm.CAUTION)
    return 0


def examples(_: argparse.Namespace) -> int:
    """List the example vehicles."""
    for name in rm.examples():
        print(f"{name:22} {rm.example(name).description}")
    return 0


def schema(_: argparse.Namespace) -> int:
    """Print the JSON Schema of the vehicle file."""
    print(json.dumps(rm.schema(), indent=2))
    return 0


def new(arguments: argparse.Namespace) -> int:
    """Write an example vehicle to a file to start from."""
    path = Path(arguments.path)
    if path.exists():
        raise FileExistsError(17, "there is such a file already", str(path))
    rm.example(arguments.example).save(path)
    print(f"wrote {path}")
    return 0


def main(argv: list[str] | None = None) -> int:
    """Run a command; 0 when all is well, 1 where the input is at fault, 2 for wrong usage."""
    parser = argparse.ArgumentParser("ridemodes", description=rm.__doc__.splitlines()[0])
    commands = parser.add_subparsers(required=True, metavar="command")

    def add(run: object, *arguments: tuple[str, dict[str, str]]) -> None:
        text = (run.__doc__ or "").splitlines()[0]
        command = commands.add_parser(run.__name__, help=text, description=text)  # type: ignore[attr-defined]
        for name, options in arguments:
            command.add_argument(name, **options)  # type: ignore[arg-type]
        command.set_defaults(run=run)

    file = ("file", {"help": "vehicle file, .toml or .json"})
    add(demo, ("--output", {"default": ".", "help": "folder for the pictures"}))
    add(check, file)
    add(report, file)
    add(examples)
    add(schema)
    add(
        new,
        ("path", {"help": "file to write, .toml or .json"}),
        ("--example", {"default": "roadster", "help": "which example"}),
    )
    arguments = parser.parse_args(argv)
    for stream in (sys.stdout, sys.stderr):
        # An old code page has no ─ or ·: better a question mark than no table.
        if isinstance(stream, io.TextIOWrapper):
            stream.reconfigure(errors="replace")
    try:
        code: int = arguments.run(arguments)
    except (rm.RidemodesError, OSError) as error:
        print(error, file=sys.stderr)
        return 1
    return code


if __name__ == "__main__":
    sys.exit(main())
