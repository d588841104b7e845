//! The vehicle.

use std::collections::BTreeMap;
use std::path::PathBuf;

use pyo3::prelude::*;
use pyo3::types::{PyDict, PyMapping};
use ridemodes::Vehicle as Core;
use serde_json::Value;

use crate::condition::{Fault, Given};
use crate::convert::{numbers, python, tree};
use crate::errors::raise;
use crate::point::OperatingPoint;
use crate::readings::{Readings, WheelRates};
use crate::studies::{Decoupling, Sweep, SweepCore};
use crate::table::Table;

/// Reads a vehicle file.
///
/// Parameters
/// ----------
/// path : str or os.PathLike
///     A `.toml` or `.json` file.
///
/// Returns
/// -------
/// Vehicle
///
/// Raises
/// ------
/// InvalidInput
///     With every violation at once.
/// ParseError
///     Where the text is not TOML or JSON.
/// OSError
///     Where the file cannot be read.
#[pyfunction]
pub(crate) fn load(py: Python<'_>, path: PathBuf) -> PyResult<Vehicle> {
    py.detach(|| Core::load(path)).map(Vehicle).map_err(raise)
}

/// Reads a vehicle from the text of a file, TOML or JSON.
///
/// Parameters
/// ----------
/// text : str
///     JSON if it begins with ``{``, else TOML.
///
/// Returns
/// -------
/// Vehicle
///
/// Raises
/// ------
/// InvalidInput
///     With every violation at once.
/// ParseError
///     Where the text is not TOML or JSON.
#[pyfunction]
pub(crate) fn loads(py: Python<'_>, text: &str) -> PyResult<Vehicle> {
    py.detach(|| Core::from_text(text)).map(Vehicle).map_err(raise)
}

/// One of the example vehicles, all of them inventions.
///
/// Parameters
/// ----------
/// name : str
///     One of `examples()`.
///
/// Returns
/// -------
/// Vehicle
///
/// Raises
/// ------
/// InvalidInput
///     For a name that is not known, with the nearest ones.
#[pyfunction]
pub(crate) fn example(py: Python<'_>, name: &str) -> PyResult<Vehicle> {
    py.detach(|| Core::example(name)).map(Vehicle).map_err(raise)
}

/// Names of the example vehicles.
///
/// Returns
/// -------
/// list of str
#[pyfunction]
pub(crate) fn examples() -> Vec<&'static str> {
    Core::examples()
}

/// JSON Schema of the vehicle file (draft 2020-12), generated from the core's tables of fields.
///
/// Returns
/// -------
/// dict
///     Every number carries its SI unit at ``unit``.
#[pyfunction]
#[pyo3(signature = () -> "dict[str, object]")]
pub(crate) fn schema(py: Python<'_>) -> PyResult<Bound<'_, PyAny>> {
    python(py, &ridemodes::spec::json_schema())
}

/// A number of a vehicle, as `Vehicle.parameters` lists it.
#[pyclass(frozen, eq, module = "ridemodes")]
#[derive(Clone, PartialEq)]
pub(crate) struct Parameter {
    /// Path, e.g. ``front.both.spring.rate``.
    #[pyo3(get)]
    path: String,
    /// Value in SI.
    #[pyo3(get)]
    value: f64,
    /// SI unit, ``1`` if none.
    #[pyo3(get)]
    unit: String,
    /// What it means.
    #[pyo3(get)]
    meaning: String,
    /// Least and largest value.
    #[pyo3(get)]
    bounds: (f64, f64),
}

#[pymethods]
impl Parameter {
    #[new]
    fn new(path: String, value: f64, unit: String, meaning: String, bounds: (f64, f64)) -> Self {
        Self { path, value, unit, meaning, bounds }
    }

    fn __repr__(&self) -> String {
        format!("Parameter({} = {} [{}]: {})", self.path, self.value, self.unit, self.meaning)
    }

    #[pyo3(signature = () -> "tuple[type[Parameter], tuple[object, ...]]")]
    fn __reduce__<'py>(slf: &Bound<'py, Self>) -> PyResult<Bound<'py, PyAny>> {
        let own = slf.get();
        let arguments = (&own.path, own.value, &own.unit, &own.meaning, own.bounds);
        Ok((slf.get_type(), arguments).into_pyobject(slf.py())?.into_any())
    }
}

/// A four-wheeled vehicle at its design condition.
///
/// Immutable; made by `load`, `loads`, `example` or `Vehicle.from_dict`. Two vehicles are equal when their
/// files would be.
#[pyclass(frozen, module = "ridemodes")]
#[derive(Clone)]
pub(crate) struct Vehicle(pub Core);

#[pymethods]
impl Vehicle {
    /// Builds a vehicle from the data of its file.
    ///
    /// Parameters
    /// ----------
    /// data : mapping
    ///     The tables of the file; numbers in SI, or text with a unit.
    ///
    /// Returns
    /// -------
    /// Vehicle
    ///
    /// Raises
    /// ------
    /// InvalidInput
    ///     With every violation at once.
    #[staticmethod]
    #[pyo3(signature = (data: "collections.abc.Mapping[str, object]") -> "Vehicle")]
    fn from_dict(py: Python<'_>, data: &Bound<'_, PyMapping>) -> PyResult<Self> {
        let tree = tree(data, 0)?;
        py.detach(|| Core::from_value(&tree)).map(Self).map_err(raise)
    }

    /// The data of the file, in SI.
    ///
    /// Returns
    /// -------
    /// dict
    #[pyo3(signature = () -> "dict[str, object]")]
    fn to_dict<'py>(&self, py: Python<'py>) -> PyResult<Bound<'py, PyAny>> {
        python(py, &self.0.to_value())
    }

    /// The file as TOML, in SI.
    ///
    /// Returns
    /// -------
    /// str
    fn to_toml(&self) -> String {
        self.0.to_toml()
    }

    /// The file as JSON, in SI.
    ///
    /// Returns
    /// -------
    /// str
    fn to_json(&self) -> String {
        self.0.to_json()
    }

    /// Writes a file in SI; it is replaced as a whole or not at all.
    ///
    /// Parameters
    /// ----------
    /// path : str or os.PathLike
    ///     JSON if it ends with ``.json``, else TOML.
    ///
    /// Raises
    /// ------
    /// OSError
    ///     Where the file cannot be written.
    fn save(&self, py: Python<'_>, path: PathBuf) -> PyResult<()> {
        py.detach(|| self.0.save(path)).map_err(raise)
    }

    /// Name given in the file.
    #[getter]
    fn name(&self) -> Option<&str> {
        self.0.name()
    }

    /// Description given in the file.
    #[getter]
    fn description(&self) -> Option<&str> {
        self.0.description()
    }

    /// Names of the settings in the file.
    #[getter]
    fn settings(&self) -> Vec<&str> {
        self.0.settings()
    }

    /// Names of the circuits.
    #[getter]
    fn circuits(&self) -> Vec<&str> {
        self.0.circuits()
    }

    /// Every number once, as the file gives it, ordered by path.
    ///
    /// Returns
    /// -------
    /// list of Parameter
    fn parameters(&self) -> Vec<Parameter> {
        let wrap = |p: ridemodes::Parameter| Parameter {
            path: p.path,
            value: p.value,
            unit: p.unit.to_owned(),
            meaning: p.meaning.to_owned(),
            bounds: (p.bounds.least, p.bounds.largest),
        };
        self.0.parameters().into_iter().map(wrap).collect()
    }

    /// The number at a path.
    ///
    /// One side of a pair, or one circuit of a layout, can be read too.
    ///
    /// Parameters
    /// ----------
    /// path : str
    ///     E.g. ``front.left.tyre.rate``.
    ///
    /// Returns
    /// -------
    /// float
    ///     In SI.
    ///
    /// Raises
    /// ------
    /// InvalidInput
    ///     For an unknown path, with the nearest ones.
    fn value(&self, path: &str) -> PyResult<f64> {
        self.0.value(path).map_err(raise)
    }

    /// A vehicle with other numbers at some paths.
    ///
    /// Setting one side of a pair, or one circuit of a layout, splits it.
    ///
    /// Parameters
    /// ----------
    /// values : mapping of str to float or str
    ///     By path: SI numbers, or text with a unit.
    ///
    /// Returns
    /// -------
    /// Vehicle
    ///
    /// Raises
    /// ------
    /// InvalidInput
    ///     With every violation at once; unknown paths name the nearest ones.
    #[pyo3(signature = (values: "collections.abc.Mapping[str, float | str]") -> "Vehicle")]
    fn with_values(&self, py: Python<'_>, values: &Bound<'_, PyMapping>) -> PyResult<Self> {
        let Value::Object(changes) = tree(values, 0)? else { return Ok(self.clone()) };
        py.detach(|| self.0.with_changes(changes)).map(Self).map_err(raise)
    }

    /// The vehicle with a named setting of its file applied.
    ///
    /// Parameters
    /// ----------
    /// name : str
    ///     One of `settings`.
    ///
    /// Returns
    /// -------
    /// Vehicle
    ///
    /// Raises
    /// ------
    /// InvalidInput
    ///     For a name that is not known.
    fn with_setting(&self, py: Python<'_>, name: &str) -> PyResult<Self> {
        py.detach(|| self.0.with_setting(name)).map(Self).map_err(raise)
    }

    /// Names of the load cases in the file.
    #[getter]
    fn cases(&self) -> Vec<&str> {
        self.0.cases()
    }

    /// The operating point; without arguments that of the design condition.
    ///
    /// Parameters
    /// ----------
    /// lateral : float
    ///     Acceleration to the left [m/s^2].
    /// longitudinal : float
    ///     Acceleration forward [m/s^2].
    /// vertical : float
    ///     Acceleration upwards, added to gravity [m/s^2].
    /// payload : Payload or list of Payload, optional
    ///     Point masses carried.
    /// temperature : float, optional
    ///     Temperature of gas and oil [K].
    /// heights : sequence of 4 floats, optional
    ///     Height of the ground under each wheel [m].
    /// downforce : (float, float), optional
    ///     Aerodynamic load front and rear, downwards [N].
    /// side_slope : float
    ///     Slope of the ground across, left side higher [rad].
    /// grade : float
    ///     Slope of the ground ahead, uphill [rad].
    /// spring_seat : sequence of 4 floats, optional
    ///     Lift of the spring seats, which compresses the springs [m of spring travel].
    /// oil : mapping of str to float, optional
    ///     Oil added per circuit [m^3]; springs are held, the height follows.
    /// pressure : mapping of str to float, optional
    ///     Pressure that circuits are brought to [Pa, absolute]; springs are held, height and oil follow.
    /// levelled : bool
    ///     Whether every circuit's chambers are brought back to their design volume; the oil that takes is found.
    /// fault : Fault or list of Fault, optional
    ///     What has failed.
    /// fast : bool
    ///     Whether the gas exchanges no heat from the standing vehicle (without accelerations, slopes, heights and
    ///     aerodynamic load) to this state; slow lines are shut then.
    ///
    /// Returns
    /// -------
    /// OperatingPoint
    ///
    /// Raises
    /// ------
    /// InvalidInput
    ///     With everything that is wrong with the condition.
    /// NotConverged
    ///     Where no equilibrium is found; with the last state.
    #[expect(clippy::too_many_arguments, reason = "one keyword each")]
    #[pyo3(signature = (*, lateral=0.0, longitudinal=0.0, vertical=0.0,
        payload: "Payload | collections.abc.Sequence[Payload] | None" = None, temperature=None,
        heights: "collections.abc.Sequence[float] | None" = None,
        downforce: "tuple[float, float] | None" = None, side_slope=0.0, grade=0.0,
        spring_seat: "collections.abc.Sequence[float] | None" = None,
        oil: "dict[str, float] | None" = None, pressure: "dict[str, float] | None" = None, levelled=false,
        fault: "Fault | collections.abc.Sequence[Fault] | None" = None, fast=false) -> "OperatingPoint")]
    fn settle(
        &self,
        py: Python<'_>,
        lateral: f64,
        longitudinal: f64,
        vertical: f64,
        payload: Option<Bound<'_, PyAny>>,
        temperature: Option<f64>,
        heights: Option<[f64; 4]>,
        downforce: Option<(f64, f64)>,
        side_slope: f64,
        grade: f64,
        spring_seat: Option<[f64; 4]>,
        oil: Option<BTreeMap<String, f64>>,
        pressure: Option<BTreeMap<String, f64>>,
        levelled: bool,
        fault: Option<Bound<'_, PyAny>>,
        fast: bool,
    ) -> PyResult<OperatingPoint> {
        let numbers = [lateral, longitudinal, vertical, side_slope, grade];
        let given = Given {
            numbers,
            temperature,
            payload,
            heights,
            downforce,
            spring_seat,
            oil,
            pressure,
            levelled,
            fault,
            fast,
        };
        let condition = given.condition()?;
        py.detach(|| self.0.settle_under(&condition)).map(OperatingPoint::new).map_err(raise)
    }

    /// The operating point of a load case of the file.
    ///
    /// Parameters
    /// ----------
    /// name : str
    ///     One of `cases`.
    ///
    /// Returns
    /// -------
    /// OperatingPoint
    ///
    /// Raises
    /// ------
    /// InvalidInput
    ///     For a name that is not known.
    /// NotConverged
    ///     Where no equilibrium is found.
    fn settle_case(&self, py: Python<'_>, name: &str) -> PyResult<OperatingPoint> {
        py.detach(|| self.0.settle_case(name)).map(OperatingPoint::new).map_err(raise)
    }

    /// Varies one number, or one load, and follows the states and every mode by shape.
    ///
    /// Modes are computed when they are first asked for.
    ///
    /// Parameters
    /// ----------
    /// path : str
    ///     Path of the number, or a keyword of `settle`: ``lateral``, ``temperature``, ``heights.front_left``,
    ///     ``heights.twist`` (h times 1, -1, -1, 1), ``downforce.front``, ``payload.mass`` (of the first),
    ///     ``oil.left`` and the like.
    /// values : array_like
    ///     Its values, in SI, in the order to be followed.
    /// **condition : keywords of settle
    ///     Further keywords of `settle` that hold all along.
    ///
    /// Returns
    /// -------
    /// Sweep
    ///
    /// Raises
    /// ------
    /// InvalidInput
    ///     For an unknown path, or values out of their bounds; nothing is computed then.
    #[pyo3(signature = (path, values: "numpy.typing.ArrayLike", **condition: "typing.Any") -> "Sweep")]
    fn sweep(
        &self,
        py: Python<'_>,
        path: &str,
        values: &Bound<'_, PyAny>,
        condition: Option<&Bound<'_, PyDict>>,
    ) -> PyResult<Sweep> {
        let values = numbers(values)?;
        let condition = Given::from_keywords(condition, "sweep")?.condition()?;
        let states = py.detach(|| self.0.states(path, &values, &condition)).map_err(raise)?;
        Ok(Sweep::new(SweepCore { car: self.0.clone(), condition, states }))
    }

    /// What a chassis engineer reads off a state: gradients, load transfer, twist, wheel lift.
    ///
    /// Parameters
    /// ----------
    /// **condition : keywords of settle
    ///     The state they are read about; ``fast=True`` for changes without heat exchange.
    ///
    /// Returns
    /// -------
    /// Readings
    ///
    /// Raises
    /// ------
    /// NotConverged
    ///     Where no equilibrium is found.
    #[pyo3(signature = (**condition: "typing.Any") -> "Readings")]
    fn readings(&self, py: Python<'_>, condition: Option<&Bound<'_, PyDict>>) -> PyResult<Readings> {
        let condition = Given::from_keywords(condition, "readings")?.condition()?;
        py.detach(|| self.0.readings(&condition)).map(Readings::new).map_err(raise)
    }

    /// Readings of slow and fast changes, with oil and without, side by side.
    ///
    /// Parameters
    /// ----------
    /// **condition : keywords of settle
    ///     The state they are read about.
    ///
    /// Returns
    /// -------
    /// Table
    #[pyo3(signature = (**condition: "typing.Any") -> "Table")]
    fn readings_table(&self, py: Python<'_>, condition: Option<&Bound<'_, PyDict>>) -> PyResult<Table> {
        let base = Given::from_keywords(condition, "readings_table")?.condition()?;
        py.detach(|| {
            let slow = self.0.readings(&ridemodes::Condition { fast: false, ..base.clone() })?;
            let fast = self.0.readings(&ridemodes::Condition { fast: true, ..base.clone() })?;
            let bare = self.0.without_oil().and_then(|car| {
                let bare = ridemodes::Condition {
                    fast: false,
                    oil: Default::default(),
                    pressure: Default::default(),
                    levelled: false,
                    faults: Vec::new(),
                    ..base.clone()
                };
                car.readings(&bare)
            });
            let mut columns = vec![("slow", &slow), ("fast", &fast)];
            if let Ok(bare) = &bare {
                columns.push(("without oil", bare));
            }
            Ok(ridemodes::Readings::table(&columns))
        })
        .map(Table::from)
        .map_err(raise)
    }

    /// Forces and rates of the suspension over its travel, in each motion and at one wheel of each axle.
    ///
    /// Parameters
    /// ----------
    /// travel : array_like
    ///     Travel of each wheel of the pattern, bump positive [m].
    /// fast : bool
    ///     Whether the gas exchanges no heat.
    ///
    /// Returns
    /// -------
    /// WheelRates
    ///
    /// Raises
    /// ------
    /// NotConverged
    ///     Where oil has nowhere to go.
    #[pyo3(signature = (travel: "numpy.typing.ArrayLike", fast=false) -> "WheelRates")]
    fn wheel_rates(&self, py: Python<'_>, travel: &Bound<'_, PyAny>, fast: bool) -> PyResult<WheelRates> {
        let travel = numbers(travel)?;
        py.detach(|| self.0.wheel_rates(&travel, fast)).map(WheelRates::new).map_err(raise)
    }

    /// The vehicle without oil and cylinders; springs carry all, at the same height.
    ///
    /// Returns
    /// -------
    /// Vehicle
    fn without_oil(&self, py: Python<'_>) -> PyResult<Self> {
        py.detach(|| self.0.without_oil()).map(Self).map_err(raise)
    }

    /// Every single fault the layout can have.
    ///
    /// Returns
    /// -------
    /// list of Fault
    fn faults(&self) -> Vec<Fault> {
        self.0.faults().into_iter().map(Fault::new).collect()
    }

    /// The state each single fault leaves the vehicle in, the worst first.
    ///
    /// Parameters
    /// ----------
    /// **condition : keywords of settle
    ///     What it stands under beside the fault.
    ///
    /// Returns
    /// -------
    /// Table
    #[pyo3(signature = (**condition: "typing.Any") -> "Table")]
    fn fault_table(&self, py: Python<'_>, condition: Option<&Bound<'_, PyDict>>) -> PyResult<Table> {
        let base = Given::from_keywords(condition, "fault_table")?.condition()?;
        Ok(py.detach(|| self.0.fault_table(&base)).into())
    }

    /// The load cases of the file, as one table.
    ///
    /// Returns
    /// -------
    /// Table
    fn case_table(&self, py: Python<'_>) -> Table {
        py.detach(|| self.0.case_table()).into()
    }

    /// For every number the value that would decouple two motions in stiffness, solved one number at a time.
    ///
    /// Parameters
    /// ----------
    /// first : str
    ///     One of heave, pitch, roll and warp.
    /// second : str
    ///     Another of them.
    ///
    /// Returns
    /// -------
    /// Decoupling
    ///
    /// Raises
    /// ------
    /// InvalidInput
    ///     For a name that is no motion.
    fn decoupling(&self, py: Python<'_>, first: &str, second: &str) -> PyResult<Decoupling> {
        py.detach(|| self.0.decoupling(first, second)).map(Decoupling::new).map_err(raise)
    }

    /// Every number with its path, value and unit, as a table.
    ///
    /// Returns
    /// -------
    /// Table
    fn table(&self) -> Table {
        self.0.table().into()
    }

    fn __str__(&self) -> String {
        self.0.table().to_string()
    }

    fn __repr__(&self) -> String {
        let circuits = match self.0.circuits()[..] {
            [] => "no oil".to_owned(),
            ref names => format!("circuits {}", names.join(", ")),
        };
        format!(
            "<Vehicle {}: {} numbers, {circuits}>",
            self.0.name().unwrap_or("without name"),
            self.0.parameters().len()
        )
    }

    fn _repr_html_(&self) -> String {
        self.0.table().to_html()
    }

    fn __eq__(&self, other: &Bound<'_, PyAny>) -> bool {
        other.cast::<Self>().is_ok_and(|other| self.0 == other.get().0)
    }

    fn __copy__(slf: Py<Self>) -> Py<Self> {
        slf
    }

    fn __deepcopy__(slf: Py<Self>, _memo: &Bound<'_, PyAny>) -> Py<Self> {
        slf
    }

    #[pyo3(signature = () -> "tuple[object, tuple[str]]")]
    fn __reduce__<'py>(slf: &Bound<'py, Self>) -> PyResult<(Bound<'py, PyAny>, (String,))> {
        Ok((slf.py().import("ridemodes")?.getattr("loads")?, (slf.get().0.to_json(),)))
    }
}
