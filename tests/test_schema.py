"""The JSON Schema, judged by a general-purpose validator (jsonschema)."""

import copy
import json
import subprocess
import sys
import tomllib
from pathlib import Path

import jsonschema
import pytest

import ridemodes as rm

DATA = Path(__file__).parent.parent / "crates" / "ridemodes" / "data"


@pytest.fixture(scope="module")
def validator():
    jsonschema.Draft202012Validator.check_schema(rm.schema())
    return jsonschema.Draft202012Validator(rm.schema())


@pytest.mark.parametrize("path", sorted(DATA.glob("*.toml")), ids=lambda path: path.stem)
def test_examples_are_valid_as_written_and_as_saved(validator, path):
    validator.validate(tomllib.loads(path.read_text(encoding="utf-8")))
    validator.validate(rm.load(path).to_dict())


@pytest.mark.parametrize(
    ("place", "value"),
    [
        (("body", "mass"), -1.0),
        (("body", "mass"), None),
        (("body", "weight"), 3.0),
        (("layout", "kind"), "rol"),
        (("layout", "pressure"), "30 bar"),
        (("front", "both", "spring"), 3.0),
        (("seats",), [1]),
        (("format",), 2),
    ],
)
def test_schema_and_reader_refuse_alike(validator, place, value):
    data = copy.deepcopy(rm.example("roadster").to_dict())
    table = data
    for key in place[:-1]:
        table = table[key]
    table[place[-1]] = value
    assert not validator.is_valid(data)
    with pytest.raises(rm.InvalidInput):
        rm.Vehicle.from_dict(data)


def test_every_parameter_has_its_unit_and_meaning_there(car):
    for parameter in car.parameters():
        node = rm.schema()
        for key in parameter.path.split("."):
            meaning = node.get("description")
            if key in node.get("properties", {}):
                node = node["properties"][key]
            else:
                node = node["items"] if key.isdigit() else node["additionalProperties"]
        assert node["unit"] == parameter.unit
        # An entry of a list has the meaning of the list.
        assert node.get("description", meaning) == parameter.meaning


def test_command_prints_it():
    command = [sys.executable, "-m", "ridemodes", "schema"]
    printed = subprocess.run(command, capture_output=True, text=True, check=True).stdout
    assert json.loads(printed) == rm.schema()
