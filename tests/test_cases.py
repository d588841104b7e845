"""The reference cases that the Rust tests read, read from Python.

Their format stands at the head of `crates/ridemodes/tests/cases.rs`; sources stand in the files.
"""

import tomllib
from pathlib import Path

import numpy as np
import pytest

import ridemodes as rm

FOLDER = Path(__file__).parent.parent / "crates" / "ridemodes" / "tests" / "cases"
CORNERS = ["front_left", "front_right", "rear_left", "rear_right"]
MOTIONS = ["heave", "pitch", "roll", "warp"]
SUFFIX = {"conventional": "_conventional", "oil": "_oil", "total": ""}
KINDS = {
    "damped": {},
    "undamped": {"damped": False},
    "locked": {"damped": False, "locked": True},
}


def cases():
    for path in sorted(FOLDER.glob("*.toml")):
        file = tomllib.loads(path.read_text(encoding="utf-8"))
        for case in file["case"]:
            yield pytest.param(
                file.get("vehicles", {}), case, id=f"{path.stem}: {case['name']}".replace(" ", "_")
            )


def build(vehicles, case):
    if "vehicle" in case:
        car = rm.Vehicle.from_dict(case["vehicle"])
    elif case["base"] in vehicles:
        car = rm.Vehicle.from_dict(vehicles[case["base"]])
    else:
        car = rm.example(case["base"])
    return car.with_values(case["values"]) if "values" in case else car


def mode(linear, kind, quantity, expectation):
    modes = linear.modes(**KINDS[kind])
    row = modes.rows(expectation["label"])[expectation.get("row", 0)]
    if quantity == "shape_ratio":
        above, below = (modes.coordinates.index(name) for name in expectation["of"])
        return (modes.shape[row, above] / modes.shape[row, below]).real
    if quantity == "omega":
        return 2 * np.pi * modes.frequency[row]
    return getattr(modes, quantity)[row]


def find(car, expectation):
    what, _, rest = expectation["what"].partition(".")
    of = expectation.get("of", [])
    state = car.settle()
    linear = state.linear()
    if what == "value":
        return car.value(of[0])
    if what == "states":
        return len(linear.state_space().A)
    if what == "coupling":
        return linear.coupling[CORNERS.index(of[0]), CORNERS.index(of[1])]
    if what in KINDS:
        return mode(linear, what, rest, expectation)
    if what == "element":
        [element] = [element for element in linear.elements if element.name == of[0]]
        return getattr(element, rest)
    if what == "settle":
        names = state.circuits if rest in ("pressure", "gas_volume") else CORNERS
        return getattr(state, rest)[names.index(of[0])]
    assert what == "motions"
    motions = linear.motions()
    if rest.startswith("roll"):
        stiffness = getattr(motions, rest.replace("roll", "roll_stiffness"))
        return stiffness[["front", "rear", "total"].index(of[0])]
    matrix, part = rest.split(".")
    table = getattr(motions, matrix + SUFFIX[part])
    return table[MOTIONS.index(of[0]), MOTIONS.index(of[1])]


@pytest.mark.parametrize(("vehicles", "case"), list(cases()))
def test_case(vehicles, case):
    assert case["source"]
    if "violations" in case:
        with pytest.raises(rm.InvalidInput) as caught:
            build(vehicles, case)
        found = list(caught.value.violations)
        for expected in case["violations"]:
            [match] = [
                violation
                for violation in found
                if violation.path == expected["path"]
                and expected["rule"] in violation.rule
                and expected.get("hint", "") in violation.hint
            ]
            found.remove(match)
        assert found == []
    elif "singular" in case:
        with pytest.raises(rm.Singular, match=case["singular"]):
            build(vehicles, case).settle().linear().modes()
    for expectation in case.get("expect", []):
        found = find(build(vehicles, case), expectation)
        allowed = expectation.get("atol", 0.0) + expectation.get("rtol", 0.0) * abs(
            expectation["value"]
        )
        assert abs(found - expectation["value"]) <= allowed, expectation
