"""Results as labelled data sets of xarray and pandas."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

from ._core import VERSION

if TYPE_CHECKING:
    import pandas
    import xarray

    from ._core import (
        FrequencyResponse,
        LinearSystem,
        Modes,
        Motions,
        OperatingPoint,
        Sensitivities,
        Sweep,
    )

CORNERS = ["front_left", "front_right", "rear_left", "rear_right"]
SCHEMA_VERSION = 1


def _dataset(variables: dict[str, tuple[Any, ...]], coordinates: dict[str, Any]) -> xarray.Dataset:
    # Every variable and coordinate says its unit and meaning; "1" where there is no unit.
    try:
        import xarray
    except ImportError as error:
        raise ImportError("to_xarray needs xarray: pip install ridemodes[xarray]") from error
    attributes = {"schema_version": SCHEMA_VERSION, "ridemodes_version": VERSION}
    data = {
        name: (dimensions, values, {"units": unit, "long_name": meaning})
        for name, (dimensions, values, unit, meaning) in variables.items()
    }
    labels = {
        name: (name, np.asarray(values), {"units": "1", "long_name": name.replace("_", " ")})
        for name, values in coordinates.items()
    }
    return xarray.Dataset(data, labels, attributes)


def _frame(columns: dict[str, Any], index: Any, name: str) -> pandas.DataFrame:
    try:
        import pandas
    except ImportError as error:
        raise ImportError("to_dataframe needs pandas: pip install ridemodes[xarray]") from error
    return pandas.DataFrame(columns, index=pandas.Index(index, name=name))


def modes_to_xarray(modes: Modes) -> xarray.Dataset:
    """The modes as a data set over mode, coordinate, element and motion."""
    mode = ("mode",)
    return _dataset(
        {
            "label": (mode, modes.label, "1", "label"),
            "pole": (mode, modes.pole, "rad/s", "pole"),
            "frequency": (mode, modes.frequency, "Hz", "natural frequency"),
            "damping_ratio": (mode, modes.damping_ratio, "1", "damping ratio"),
            "unclear": (mode, modes.unclear, "1", "label is a near tie"),
            "shape": (("mode", "coordinate"), modes.shape, "1", "mode shape"),
            "share": (("mode", "part"), modes.share, "1", "share of kinetic energy"),
            "motion_share": (
                ("mode", "motion"),
                modes.motion_share,
                "1",
                "share of kinetic energy",
            ),
            "strain_share": (
                ("mode", "element"),
                modes.strain_share,
                "1",
                "share of strain energy",
            ),
            "dissipation_share": (
                ("mode", "element"),
                modes.dissipation_share,
                "1",
                "share of dissipation",
            ),
        },
        {
            "mode": np.arange(len(modes.frequency)),
            "coordinate": modes.coordinates,
            "part": modes.share_names,
            "motion": modes.motion_share_names,
            "element": modes.elements,
        },
    )


def modes_to_dataframe(modes: Modes) -> pandas.DataFrame:
    """Frequency, damping and motion shares, one row for each mode."""
    columns: dict[str, Any] = {
        "frequency": modes.frequency,
        "damping_ratio": modes.damping_ratio,
        "unclear": modes.unclear,
    }
    for name, share in zip(modes.motion_share_names, modes.motion_share.T, strict=True):
        columns[f"{name}_share"] = share
    return _frame(columns, modes.label, "mode")


def motions_to_xarray(motions: Motions) -> xarray.Dataset:
    """Stiffness and damping over the four motions and over the corners."""
    square = ("motion", "motion_")
    corners = ("corner", "corner_")
    parts = {
        name: (square, getattr(motions, name), unit, name.replace("_", " "))
        for what, unit in (("stiffness", "N/m"), ("damping", "N*s/m"))
        for name in (what, f"{what}_conventional", f"{what}_oil")
    }
    return _dataset(
        {
            **parts,
            "stiffness_cross": (square, motions.stiffness_cross, "1", "coupling of the stiffness"),
            "damping_cross": (square, motions.damping_cross, "1", "coupling of the damping"),
            "at_wheels": (corners, motions.at_wheels, "N/m", "stiffness at the wheels"),
            "at_ground": (corners, motions.at_ground, "N/m", "stiffness at the ground"),
            "roll_stiffness": (("axle",), motions.roll_stiffness, "N*m/rad", "roll stiffness"),
            "warp_to_roll": ((), motions.warp_to_roll, "1", "warp over roll stiffness"),
        },
        {
            "motion": motions.names,
            "motion_": motions.names,
            "corner": CORNERS,
            "corner_": CORNERS,
            "axle": ["front", "rear", "total"],
        },
    )


def motions_to_dataframe(motions: Motions) -> pandas.DataFrame:
    """Stiffness [N/m] and damping [N*s/m] of each motion, conventional part, oil and sum."""
    columns = {
        name: np.diagonal(getattr(motions, name))
        for what in ("stiffness", "damping")
        for name in (f"{what}_conventional", f"{what}_oil", what)
    }
    return _frame(columns, motions.names, "motion")


def point_to_xarray(point: OperatingPoint) -> xarray.Dataset:
    """Loads of the corners and state of the circuits."""
    corner, circuit = ("corner",), ("circuit",)
    return _dataset(
        {
            "deflection": (corner, point.deflection, "m", "suspension deflection, bump positive"),
            "tyre_load": (corner, point.tyre_load, "N", "vertical tyre load"),
            "corner_load": (corner, point.corner_load, "N", "sprung corner load"),
            "oil_load": (corner, point.oil_load, "N", "share carried by the oil"),
            "spring_load": (corner, point.spring_load, "N", "share carried by the spring"),
            "spring_preload": (corner, point.spring_preload, "N", "force in the spring"),
            "stop_load": (corner, point.stop_load, "N", "share carried by the stops"),
            "piston_travel": (corner, point.piston_travel, "m", "piston travel from mid-stroke"),
            "wheels": (corner, point.wheels, "m", "height of the wheel"),
            "oil_added": (circuit, point.oil_added, "m^3", "oil added"),
            "cavity": (circuit, point.cavity, "m^3", "cavity where oil has torn off"),
            "attitude": (("motion",), point.attitude, "m or rad", "heave, pitch, roll"),
            "pressure": (circuit, point.pressure, "Pa", "absolute pressure"),
            "gas_volume": (circuit, point.gas_volume, "m^3", "gas volume"),
        },
        {"corner": CORNERS, "circuit": point.circuits, "motion": ["heave", "pitch", "roll"]},
    )


def point_to_dataframe(point: OperatingPoint) -> pandas.DataFrame:
    """Loads of the corners [N] and deflections [m]."""
    names = ("tyre_load", "corner_load", "oil_load", "spring_load", "spring_preload", "deflection")
    return _frame({name: getattr(point, name) for name in names}, CORNERS, "corner")


def linear_to_xarray(linear: LinearSystem) -> xarray.Dataset:
    """Mass, damping and stiffness over the coordinates.

    The units of an entry follow from those of its two coordinates, which stand beside it.
    """
    square, road = ("coordinate", "coordinate_"), ("coordinate", "corner")
    entry = "SI by coordinate_unit"
    return _dataset(
        {
            "mass": (square, linear.mass, entry, "mass"),
            "damping": (square, linear.damping, entry, "damping"),
            "stiffness": (square, linear.stiffness, entry, "stiffness"),
            "road_stiffness": (road, linear.road_stiffness, entry, "force per road height"),
            "road_damping": (road, linear.road_damping, entry, "force per road velocity"),
            "coordinate_unit": (("coordinate",), linear.coordinate_units, "1", "coordinate unit"),
            "coupling": (("corner", "corner_"), linear.coupling, "N/m", "coupling of the oil"),
        },
        {
            "coordinate": linear.coordinates,
            "coordinate_": linear.coordinates,
            "corner": CORNERS,
            "corner_": CORNERS,
        },
    )


def sensitivities_to_xarray(found: Sensitivities) -> xarray.Dataset:
    """Derivatives over path and mode or motions; units are those named over `parameter_unit`."""
    mode, square = ("mode", "path"), ("motion", "motion_", "path")
    names = ["heave", "pitch", "roll", "warp"]
    return _dataset(
        {
            "value": (("path",), found.values, "SI by parameter_unit", "value of the number"),
            "parameter_unit": (("path",), found.units, "1", "unit of the number"),
            "label": (("mode",), found.modes.label, "1", "label"),
            "frequency": (mode, found.frequency, "Hz/parameter_unit", "d natural frequency"),
            "damping_ratio": (mode, found.damping_ratio, "1/parameter_unit", "d damping ratio"),
            "relative_frequency": (mode, found.relative_frequency, "1", "per cent per per cent"),
            "relative_damping_ratio": (
                mode,
                found.relative_damping_ratio,
                "1",
                "per cent per per cent",
            ),
            "stiffness": (square, found.stiffness, "(N/m)/parameter_unit", "d stiffness"),
            "damping": (square, found.damping, "(N*s/m)/parameter_unit", "d damping"),
            "coupling": (
                ("corner", "corner_", "path"),
                found.coupling,
                "(N/m)/parameter_unit",
                "d coupling",
            ),
        },
        {
            "path": found.paths,
            "mode": np.arange(len(found.frequency)),
            "motion": names,
            "motion_": names,
            "corner": CORNERS,
            "corner_": CORNERS,
        },
    )


def sweep_to_xarray(sweep: Sweep) -> xarray.Dataset:
    """Poles over branch and value; the coordinate of the values is called `value`."""
    table = ("branch", "value")
    corner, circuit = ("value", "corner"), ("value", "circuit")
    data = _dataset(
        {
            "attitude": (("value", "motion"), sweep.attitude, "m or rad", "heave, pitch, roll"),
            "deflection": (corner, sweep.deflection, "m", "suspension deflection"),
            "tyre_load": (corner, sweep.tyre_load, "N", "vertical tyre load"),
            "pressure": (circuit, sweep.pressure, "Pa", "absolute pressure"),
            "gas_volume": (circuit, sweep.gas_volume, "m^3", "gas volume"),
            "front_transfer": (("value",), sweep.front_transfer, "1", "front load transfer share"),
            "cross_weight": (("value",), sweep.cross_weight, "1", "cross weight"),
            "status": (("value",), sweep.status, "1", "how the state ended"),
            "label": (("branch",), sweep.label, "1", "label where the branch begins"),
            "pole": (table, sweep.pole, "rad/s", "pole"),
            "frequency": (table, sweep.frequency, "Hz", "natural frequency"),
            "damping_ratio": (table, sweep.damping_ratio, "1", "damping ratio"),
            "likeness": (("branch",), sweep.likeness, "1", "least likeness of the steps"),
        },
        {
            "branch": np.arange(len(sweep.label)),
            "value": sweep.values,
            "corner": CORNERS,
            "circuit": sweep.circuits,
            "motion": ["heave", "pitch", "roll"],
        },
    )
    data["value"].attrs.update({"units": sweep.unit or "1", "long_name": sweep.path})
    return data


def response_to_xarray(response: FrequencyResponse) -> xarray.Dataset:
    """Complex responses over output, input and frequency."""
    data = _dataset(
        {
            "response": (("output", "input", "frequency"), response.response, "SI", "response"),
            "output_unit": (("output",), response.output_units, "1", "unit of the output"),
            "input_unit": (("input",), response.input_units, "1", "unit of the input"),
        },
        {
            "output": response.outputs,
            "input": response.inputs,
            "frequency": response.frequency,
        },
    )
    data["frequency"].attrs.update({"units": "Hz", "long_name": "frequency"})
    return data
