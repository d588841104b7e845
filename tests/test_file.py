"""Files, dictionaries, paths and what is refused."""

import copy
import json
import pickle
import tomllib

import numpy as np
import pytest

import ridemodes as rm


def test_round_trips_are_exact(car, tmp_path):
    for name in ("car.toml", "car.json"):
        car.save(tmp_path / name)
        assert rm.load(tmp_path / name) == car
        assert rm.load(str(tmp_path / name)).to_dict() == car.to_dict()
    assert rm.loads(car.to_toml()) == car == rm.loads(car.to_json())
    assert rm.Vehicle.from_dict(car.to_dict()) == car
    assert json.loads(car.to_json()) == car.to_dict() == tomllib.loads(car.to_toml())
    assert car.to_dict()["format"] == 1
    assert (
        list(tmp_path.iterdir()) == [tmp_path / "car.json", tmp_path / "car.toml"]
        or len(list(tmp_path.iterdir())) == 2
    )


def test_values_by_path_round_trip(car):
    for parameter in car.parameters():
        assert car.value(parameter.path) == parameter.value
        least, largest = parameter.bounds
        assert least <= parameter.value <= largest
        assert parameter.meaning
        assert parameter.unit
    same = car.with_values({p.path: p.value for p in car.parameters()})
    assert same == car


def faulty():
    data = rm.example("roadster").to_dict()
    data["body"]["mass"] = -5
    data["front"]["both"]["cylinder"]["rod"] = "30 mm"
    data["rear"]["both"]["spring"]["rate"] = float("nan")
    data["rear"]["track"] = np.inf
    data["oil"]["densty"] = 3
    data["layout"]["pressure"] = "30 bar"
    del data["front"]["distance"]
    data["front"]["both"]["damper"]["coefficient"] = [1]
    data["seats"] = [1]
    data["layout"]["kind"] = "rol"
    data["front"]["track"] = "1.5 kg"
    return data


def test_every_fault_at_once():
    with pytest.raises(rm.InvalidInput) as caught:
        rm.Vehicle.from_dict(faulty())
    found = {violation.path: violation for violation in caught.value.violations}
    assert len(found) == len(caught.value.violations) == 11
    expected = {
        "body.mass": ("-5", "kg", "greater than 0"),
        "front.both.cylinder.rod": ("0.03", "m", "less than the bore"),
        "rear.both.spring.rate": ('"NaN"', "N/m", "finite"),
        "rear.track": ('"inf"', "m", "finite"),
        "oil.densty": ("3", "", "unknown key"),
        "layout.pressure": ('"30 bar"', "Pa", "abs or gauge"),
        "front.distance": ("", "m", "missing"),
        "front.both.damper.coefficient": ("a list", "N*s/m", "must be a number"),
        "seats": ("a list", "", "keyed by names"),
        "layout.kind": ('"rol"', "", "one of roll"),
        "front.track": ('"1.5 kg"', "m", "does not measure"),
    }
    for path, (value, unit, rule) in expected.items():
        assert found[path].value == value
        assert found[path].unit == unit
        assert rule in found[path].rule
        assert path in str(caught.value)
    assert "density" in found["oil.densty"].hint
    assert "31.01325" in found["layout.pressure"].hint
    again = pickle.loads(pickle.dumps(caught.value))
    assert again.violations == caught.value.violations
    assert str(again) == str(caught.value)


@pytest.mark.parametrize(
    "value", [float("nan"), float("inf"), None, True, 1j, [1.0], {}, "fast", np.array([1.0, 2.0])]
)
def test_what_is_no_number_is_refused_by_name(roadster, value):
    data = copy.deepcopy(roadster.to_dict())
    data["body"]["mass"] = value
    with pytest.raises(rm.InvalidInput, match=r"body\.mass"):
        rm.Vehicle.from_dict(data)
    with pytest.raises(rm.InvalidInput, match=r"body\.mass"):
        roadster.with_values({"body.mass": value})


@pytest.mark.parametrize(
    "value", [1100, np.float32(1100), np.int64(1100), np.array(1100.0), "1.1 t"]
)
def test_numbers_of_any_kind_are_taken(roadster, value):
    assert roadster.with_values({"body.mass": value}).value("body.mass") == 1100.0


@pytest.mark.parametrize("value", [np.True_, np.array(True), np.complex128(1100)])
# NumPy warns of the imaginary part it drops.
@pytest.mark.filterwarnings("ignore:Casting complex values")
def test_numpys_truth_and_complex_values_are_refused_as_pythons_are(roadster, value):
    with pytest.raises(rm.InvalidInput, match=r"body\.mass"):
        roadster.with_values({"body.mass": value})


def test_bar_is_refused_with_both_readings(roadster):
    """Atmosphere 1.01325 bar (standard atmosphere)."""
    with pytest.raises(rm.InvalidInput) as caught:
        roadster.with_values({"layout.pressure": "30 bar"})
    [violation] = caught.value.violations
    assert violation.path == "layout.pressure"
    assert '"30 bar abs" is 30 bar absolute' in violation.hint
    assert '"30 bar gauge" is 31.01325 bar absolute' in violation.hint
    for text, pascal in (("30 bar abs", 30e5), ("30 bar gauge", 3101325.0)):
        assert roadster.with_values({"layout.pressure": text}).value("layout.pressure") == pascal


def test_text_with_a_unit_is_a_number(roadster):
    """Definitions of the units (SI brochure; pound and inch of 1959)."""
    for path, text, number in (
        ("front.track", "1480 mm", 1.48),
        ("body.mass", "2400 lb", 2400 * 0.45359237),
        ("temperature", "25 degC", 298.15),
        ("front.both.cylinder.bore", "1 in", 0.0254),
        ("layout.volume", "60 cm^3", 60e-6),
    ):
        found = roadster.with_values({path: text}).value(path)
        assert found == pytest.approx(number, rel=1e-15)


def test_data_that_holds_itself_is_refused(roadster):
    data = roadster.to_dict()
    data["body"]["self"] = data
    with pytest.raises(RecursionError):
        rm.Vehicle.from_dict(data)


def test_a_side_splits_its_pair(roadster):
    one = roadster.with_values({"front.left.spring.rate": "24 N/mm"})
    assert one.value("front.left.spring.rate") == 24e3
    assert one.value("front.right.spring.rate") == roadster.value("front.both.spring.rate")
    with pytest.raises(rm.InvalidInput, match="differ"):
        one.value("front.both.spring.rate")
    both = one.with_values({"front.both.spring.rate": 25e3})
    assert both.value("front.both.spring.rate") == 25e3
    with pytest.raises(rm.InvalidInput, match="same number"):
        roadster.with_values({"front.both.spring.rate": 1.0, "front.left.spring.rate": 2.0})
    with pytest.raises(rm.InvalidInput, match=r"front\.both\.spring\.rate"):
        roadster.with_values({"front.both.spring.rat": 1.0})


def test_settings(roadster):
    firm = roadster.with_setting("firm")
    assert firm.value("layout.accumulators.main.throttle") == 14e8
    assert roadster.settings == ["firm", "soft"]
    with pytest.raises(rm.InvalidInput, match="firm"):
        roadster.with_setting("frim")


def test_texts_that_are_no_file():
    with pytest.raises(rm.ParseError) as caught:
        rm.loads("[body]\nmass = ")
    assert caught.value.line == 2
    assert caught.value.column > 1
    again = pickle.loads(pickle.dumps(caught.value))
    assert (again.line, again.column) == (caught.value.line, caught.value.column)
    with pytest.raises(rm.ParseError):
        rm.loads("{")
    with pytest.raises(rm.InvalidInput, match="newer than this library"):
        rm.loads("format = 2\nwhatever = 1")


def test_files_that_cannot_be_read(tmp_path, roadster):
    with pytest.raises(FileNotFoundError):
        rm.load(tmp_path / "no.toml")
    with pytest.raises(OSError, match="no_such_folder"):
        roadster.save(tmp_path / "no_such_folder" / "car.toml")


def test_free_motion_is_named():
    bare = rm.example("roadster_without_oil")
    rates = [p.path for p in bare.parameters() if p.path.endswith("spring.rate")]
    free = bare.with_values(dict.fromkeys(rates, 0.0)).settle().linear()
    with pytest.raises(rm.Singular, match="body heave") as caught:
        free.modes()
    assert "free" in caught.value.motion
    assert isinstance(caught.value, ArithmeticError)
    assert pickle.loads(pickle.dumps(caught.value)).motion == caught.value.motion


def test_errors_have_a_base():
    for error in (rm.InvalidInput, rm.ParseError, rm.Singular, rm.NotConverged):
        assert issubclass(error, rm.RidemodesError)
    failed = rm.NotConverged("message", "what", 3, 0.5, [1.0])
    again = pickle.loads(pickle.dumps(failed))
    assert (again.what, again.iterations, again.residual, again.last) == ("what", 3, 0.5, [1.0])
