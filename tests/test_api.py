"""Habits of the interface: labels, copies, pickles, documents."""

import concurrent.futures
import copy
import importlib.metadata
import inspect
import multiprocessing
import pickle
import subprocess
import sys

import numpy as np
import pytest

import ridemodes as rm


def results(car):
    """One of every class."""
    state = car.settle()
    linear = state.linear()
    return [
        car,
        car.parameters()[0],
        state,
        linear,
        linear.elements[0],
        linear.motions(),
        linear.modes(),
        linear.modes(damped=False),
        linear.state_space(),
        linear.motions().table(),
        linear.sensitivities(),
        car.sweep("body.mass", car.value("body.mass") * np.array([0.9, 1.0, 1.1])),
        car.decoupling("heave", "pitch"),
    ]


def arrays(result):
    """Names of the array attributes."""
    names = [name for name in dir(result) if not name.startswith("_")]
    return [name for name in names if isinstance(getattr(result, name), np.ndarray)]


def test_pickles_and_copies_are_equal(car):
    for result in results(car):
        assert pickle.loads(pickle.dumps(result)) == result
        assert copy.deepcopy(result) == result
        assert copy.copy(result) == result
        assert result != 3
        assert type(result).__module__ == "ridemodes"


def test_other_vehicles_differ(roadster):
    other = roadster.with_values({"body.mass": 1081.0})
    for one, two in zip(results(roadster), results(other), strict=True):
        # The mass moves neither of these.
        if not isinstance(one, rm.Parameter | rm.Element | rm.Table | rm.Decoupling):
            assert one != two


def test_arrays_are_read_only_and_kept(roadster):
    kept = {rm.OperatingPoint: 9, rm.LinearSystem: 7, rm.Motions: 16, rm.StateSpace: 4}
    kept |= {rm.Modes: 11, rm.Element: 1}
    for result in results(roadster):
        for name in arrays(result):
            array = getattr(result, name)
            assert not array.flags.writeable
            with pytest.raises(ValueError, match="read-only"):
                array[...] = 0
        same = [name for name in arrays(result) if getattr(result, name) is getattr(result, name)]
        assert len(same) >= kept.get(type(result), 0)


def test_tables_show_units_as_text_and_html(roadster):
    for result in results(roadster):
        text = str(result)
        assert text
        assert repr(result)
        if hasattr(result, "_repr_html_"):
            html = result._repr_html_()
            assert html.startswith("<table>")
            assert html.count("<table>") == html.count("</table>")
    assert "frequency Hz" in str(roadster.settle().linear().modes())
    assert "N·m/deg" in str(roadster.settle().linear().motions())
    assert "bar gauge" in str(roadster.settle())


def public():
    """Every public class and function, and the members of the classes."""
    for name in rm.__all__:
        thing = getattr(rm, name)
        if not callable(thing):
            continue
        yield name, thing
        if inspect.isclass(thing) and thing.__module__ == "ridemodes":
            for member in vars(thing):
                if not member.startswith("_"):
                    yield f"{name}.{member}", getattr(thing, member)
    for name, thing in vars(rm.plot).items():
        if inspect.isfunction(thing) and not name.startswith("_"):
            yield f"plot.{name}", thing


def test_everything_public_is_documented():
    found = dict(public())
    assert len(found) > 100
    for name, thing in found.items():
        document = inspect.getdoc(thing)
        assert document, name
        if "." not in name or not callable(thing):
            continue
        try:
            parameters = inspect.signature(thing).parameters
        except ValueError:
            continue
        for parameter in parameters:
            if parameter not in ("self", "cls"):
                assert f"{parameter} : " in document, f"{name}({parameter})"


def test_functions_have_the_sections_of_numpydoc():
    """numpydoc's style guide: Returns, Raises and so on, each underlined."""
    for name in ("example", "examples", "load", "loads", "schema"):
        function = getattr(rm, name)
        document = inspect.getdoc(function)
        assert "Returns\n-------" in document, name
        parameters = inspect.signature(function).parameters
        assert ("Parameters\n----------" in document) == bool(parameters), name
        for parameter in parameters:
            assert f"{parameter} : " in document, f"{name}({parameter})"
    for name, thing in public():
        # All methods but `save` return something.
        if "." in name and callable(thing) and not name.startswith("plot."):
            document = inspect.getdoc(thing)
            assert "Returns\n-------" in document or name == "Vehicle.save", name


def test_every_table_names_units(roadster):
    found = {type(result): result for result in results(roadster)}
    for kind, unit in (
        (rm.Vehicle, "kg*m^2"),
        (rm.OperatingPoint, "bar abs"),
        (rm.LinearSystem, "rad"),
        (rm.Motions, "N/mm"),
        (rm.Modes, "Hz"),
        (rm.StateSpace, "m/s^2"),
        (rm.Sweep, "kg"),
        (rm.Decoupling, "%"),
        (rm.Sensitivities, "%"),
    ):
        result = found[kind]
        assert unit in str(result), kind
        assert unit in result._repr_html_(), kind


def test_unknown_keywords_are_refused(roadster):
    linear = roadster.settle().linear()
    calls = [roadster.settle, linear.modes, linear.motions, linear.dynamic_coupling, rm.load]
    calls += [rm.loads, rm.example, rm.examples, rm.schema, rm.Vehicle.from_dict, roadster.save]
    calls += [roadster.value, roadster.with_values, roadster.with_setting, roadster.sweep]
    calls += [linear.state_space, linear.sensitivities, linear.modes().rows]
    for call in calls:
        with pytest.raises(TypeError):
            call(unheard_of=1)


def test_frequencies_are_checked(roadster):
    linear = roadster.settle().linear()
    assert linear.dynamic_coupling(3).shape == (4, 4, 1)
    assert linear.dynamic_coupling([1, 2.5]).shape == (4, 4, 2)
    strided = linear.dynamic_coupling(np.arange(8.0)[::2])
    np.testing.assert_array_equal(strided, linear.dynamic_coupling([0, 2, 4, 6]))
    for wrong in ([-1.0], [np.nan], [np.inf], [[1.0]]):
        with pytest.raises(ValueError, match="frequency"):
            linear.dynamic_coupling(wrong)
    for wrong in ("1", [1j], [True], None):
        with pytest.raises(TypeError, match="frequency"):
            linear.dynamic_coupling(wrong)


def roll_frequency(car):
    modes = car.settle().linear().modes()
    return float(modes.frequency[modes.rows("body roll")[0]])


@pytest.mark.parametrize("method", ["fork", "spawn"])
def test_works_in_another_process(roadster, method):
    context = multiprocessing.get_context(method)
    with concurrent.futures.ProcessPoolExecutor(1, mp_context=context) as pool:
        assert pool.submit(roll_frequency, roadster).result() == roll_frequency(roadster)


def test_works_in_threads(roadster):
    with concurrent.futures.ThreadPoolExecutor(4) as pool:
        found = set(pool.map(roll_frequency, [roadster] * 64))
    assert found == {roll_frequency(roadster)}


def test_data_sets_carry_units(roadster):
    linear = roadster.settle().linear()
    for result in (linear.point, linear, linear.motions(), linear.modes(), linear.sensitivities()):
        data = result.to_xarray()
        assert data.attrs["schema_version"] == 1
        for name, variable in data.variables.items():
            assert variable.attrs["units"], name
            assert variable.attrs["long_name"], name
    modes = linear.modes()
    frame = modes.to_dataframe()
    assert frame.loc["body roll", "frequency"] == modes.frequency[modes.rows("body roll")[0]]
    assert list(linear.motions().to_dataframe().index) == ["heave", "pitch", "roll", "warp"]
    assert len(linear.point.to_dataframe()) == 4
    assert modes.to_xarray()["frequency"].attrs["units"] == "Hz"


def test_rows_and_energy(roadster):
    modes = roadster.settle().linear().modes()
    assert modes.rows("no such") == []
    assert "throttle" in str(modes.energy_table("body roll"))
    assert modes.energy_table(-1) == modes.energy_table(len(modes) - 1)
    with pytest.raises(KeyError, match="body heave"):
        modes.energy_table("no such")
    with pytest.raises(IndexError):
        modes.energy_table(99)
    with pytest.raises(ValueError, match="damped=False"):
        roadster.settle().linear().modes(locked=True)


def test_import_is_light():
    # Its time is measured in the bench.
    heavy = "{'scipy', 'xarray', 'pandas', 'matplotlib', 'dask'}"
    code = f"import sys, ridemodes; print(*{heavy} & set(sys.modules))"
    run = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert run.stdout.strip() == ""


def test_versions_agree():
    assert rm.__version__ == importlib.metadata.version("ridemodes")
    assert "release to the road" in rm.CAUTION
    assert set(rm.__all__) <= set(dir(rm))
    with pytest.raises(AttributeError):
        _ = rm.no_such_name
