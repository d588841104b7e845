//! Sweeps and decoupling.

use std::sync::OnceLock;

use pyo3::exceptions::PyRuntimeError;
use pyo3::prelude::*;
use serde::{Deserialize, Serialize};

use crate::arrays::{Complex, Kept, Real, vector};
use crate::errors::{labelled, raise};
use crate::modes::Modes;
use crate::table::{Table, result_class};

/// What a sweep is made of; its modes follow.
#[derive(Clone, PartialEq, Serialize, Deserialize)]
pub(crate) struct SweepCore {
    pub car: ridemodes::Vehicle,
    pub condition: ridemodes::Condition,
    pub states: ridemodes::States,
}

/// States and modes along a sweep of one number or one load, modes followed by shape.
///
/// Arrays of states are values x columns, NaN where a state does not settle (see `status`). Arrays of modes are
/// branches x values, NaN where a branch is not there: a pair that turns into two real poles goes on as one of them,
/// and the other begins a branch. Modes are computed when they are first asked for.
#[pyclass(frozen, module = "ridemodes")]
pub(crate) struct Sweep {
    core: SweepCore,
    followed: OnceLock<ridemodes::Result<ridemodes::Sweep>>,
    kept: [Kept; 16],
}

impl Sweep {
    pub(crate) fn new(core: SweepCore) -> Self {
        Self { core, followed: OnceLock::new(), kept: Default::default() }
    }

    fn followed(&self, py: Python<'_>) -> PyResult<&ridemodes::Sweep> {
        let SweepCore { car, condition, states } = &self.core;
        if self.followed.get().is_none() {
            let result = py.detach(|| car.sweep_under(&states.path, &states.values, condition));
            // Another thread may have been first; both are the same.
            let _ = self.followed.set(result);
        }
        match self.followed.get() {
            Some(Ok(modes)) => Ok(modes),
            Some(Err(error)) => Err(raise(error.clone())),
            None => Err(PyRuntimeError::new_err("the modes of the sweep are not there")),
        }
    }

    fn tables(&self) -> PyResult<ridemodes::Tables> {
        let mut tables = vec![self.core.states.table()];
        if let Ok(modes) = Python::attach(|py| self.followed(py)) {
            tables.push(modes.table());
        }
        Ok(ridemodes::Tables(tables))
    }
}

result_class! {
    Sweep, SweepCore;

    /// Path or keyword that is varied.
    #[getter]
    fn path(&self) -> &str {
        &self.core.states.path
    }

    /// Unit of the values.
    #[getter]
    fn unit(&self) -> &str {
        &self.core.states.unit
    }

    /// Values, in SI.
    #[getter]
    fn values<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[0].real(py, || Ok(vector(&self.core.states.values)))
    }

    /// Heave [m], pitch [rad] and roll [rad], values x 3.
    #[getter]
    fn attitude<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[6].real(py, || Ok(self.core.states.attitude.clone()))
    }

    /// Suspension deflections, values x 4 [m].
    #[getter]
    fn deflection<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[7].real(py, || Ok(self.core.states.deflection.clone()))
    }

    /// Tyre loads, values x 4 [N].
    #[getter]
    fn tyre_load<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[8].real(py, || Ok(self.core.states.tyre_load.clone()))
    }

    /// Absolute pressures, values x circuits [Pa].
    #[getter]
    fn pressure<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[9].real(py, || Ok(self.core.states.pressure.clone()))
    }

    /// Gas volumes, values x circuits [m^3].
    #[getter]
    fn gas_volume<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[10].real(py, || Ok(self.core.states.gas_volume.clone()))
    }

    /// Share of the lateral load transfer that the front axle takes; NaN without any.
    #[getter]
    fn front_transfer<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[11].real(py, || Ok(vector(&self.core.states.front_transfer)))
    }

    /// Roll per lateral acceleration at each state [rad per m/s^2].
    #[getter]
    fn roll_gradient<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[13].real(py, || Ok(vector(&self.core.states.roll_gradient)))
    }

    /// Pitch per longitudinal acceleration at each state, nose down positive [rad per m/s^2].
    #[getter]
    fn pitch_gradient<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[14].real(py, || Ok(vector(&self.core.states.pitch_gradient)))
    }

    /// Pressure per lateral acceleration at each state, values x circuits [Pa per m/s^2].
    #[getter]
    fn pressure_per_lateral<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[15].real(py, || Ok(self.core.states.pressure_per_lateral.clone()))
    }

    /// Cross weight of the tyre loads, (FR + RL) over all.
    #[getter]
    fn cross_weight<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[12].real(py, || Ok(vector(&self.core.states.cross_weight)))
    }

    /// Names of the circuits.
    #[getter]
    fn circuits(&self) -> Vec<String> {
        self.core.states.circuits.clone()
    }

    /// Names of the limits that are passed, at each value.
    #[getter]
    fn passed(&self) -> Vec<Vec<String>> {
        self.core.states.passed.clone()
    }

    /// ``solved``, or the name of the error, at each value.
    #[getter]
    fn status(&self) -> Vec<String> {
        self.core.states.status.clone()
    }

    /// Label of each branch where it begins.
    #[getter]
    fn label(&self, py: Python<'_>) -> PyResult<Vec<String>> {
        Ok(self.followed(py)?.label.clone())
    }

    /// Poles, branches x values [rad/s].
    #[getter]
    fn pole<'py>(&self, py: Python<'py>) -> PyResult<Complex<'py>> {
        self.kept[1].complex(py, || Ok(self.followed(py)?.pole.clone()))
    }

    /// Natural frequencies, branches x values [Hz].
    #[getter]
    fn frequency<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[2].real(py, || Ok(self.followed(py)?.frequency.clone()))
    }

    /// Damping ratios, branches x values [1].
    #[getter]
    fn damping_ratio<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[3].real(py, || Ok(self.followed(py)?.damping_ratio.clone()))
    }

    /// Row of each branch in `modes`, branches x values, as floats; NaN where it is not there.
    #[getter]
    fn row<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        let number = |&row: &i64| if row < 0 { f64::NAN } else { row as f64 };
        self.kept[4].real(py, || Ok(self.followed(py)?.row.map(number)))
    }

    /// Least likeness met from step to step on each branch, 1 for the same shape.
    #[getter]
    fn likeness<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[5].real(py, || Ok(vector(&self.followed(py)?.likeness)))
    }

    /// The modes at each value.
    #[getter]
    fn modes(&self, py: Python<'_>) -> PyResult<Vec<Modes>> {
        Ok(self.followed(py)?.modes.iter().cloned().map(Modes::new).collect())
    }

    /// Frequency and damping at the ends, as a table.
    ///
    /// Returns
    /// -------
    /// Table
    fn table(&self) -> PyResult<Table> {
        self.tables().map(Table)
    }

    /// The branches as an `xarray.Dataset`.
    ///
    /// Returns
    /// -------
    /// xarray.Dataset
    #[pyo3(signature = () -> "xarray.Dataset")]
    fn to_xarray<'py>(slf: &Bound<'py, Self>) -> PyResult<Bound<'py, PyAny>> {
        labelled(slf, "sweep_to_xarray")
    }
}

/// What each number could do, alone, to decouple two motions in stiffness; the smallest change first.
#[pyclass(frozen, module = "ridemodes")]
pub(crate) struct Decoupling {
    core: ridemodes::Decoupling,
    kept: [Kept; 4],
}

impl Decoupling {
    pub(crate) fn new(core: ridemodes::Decoupling) -> Self {
        Self { core, kept: Default::default() }
    }

    fn tables(&self) -> PyResult<ridemodes::Tables> {
        Ok(ridemodes::Tables(vec![self.core.table()]))
    }

    fn column<'py>(&self, py: Python<'py>, place: usize, of: fn(&ridemodes::Remedy) -> f64) -> PyResult<Real<'py>> {
        self.kept[place].real(py, || Ok(vector(&self.core.remedies.iter().map(of).collect::<Vec<f64>>())))
    }
}

result_class! {
    Decoupling, ridemodes::Decoupling;

    /// The two motions.
    #[getter]
    fn motions(&self) -> (String, String) {
        self.core.motions.clone().into()
    }

    /// Coupling of the vehicle as it is [1].
    #[getter]
    fn cross(&self) -> f64 {
        self.core.cross
    }

    /// Paths of the numbers that move the coupling.
    #[getter]
    fn paths(&self) -> Vec<String> {
        self.core.remedies.iter().map(|remedy| remedy.path.clone()).collect()
    }

    /// Units of the numbers.
    #[getter]
    fn units(&self) -> Vec<String> {
        self.core.remedies.iter().map(|remedy| remedy.unit.clone()).collect()
    }

    /// Values of the numbers as they are, in SI.
    #[getter]
    fn values<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.column(py, 0, |remedy| remedy.value)
    }

    /// Values that decouple, in SI; NaN where none within the range does.
    #[getter]
    fn solutions<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.column(py, 1, |remedy| remedy.solution.unwrap_or(f64::NAN))
    }

    /// Coupling that each number reaches: zero at a solution, else the least it can [1].
    #[getter]
    fn least<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.column(py, 2, |remedy| remedy.cross)
    }

    /// Values at which that is met, in SI.
    #[getter]
    fn least_at<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.column(py, 3, |remedy| remedy.at)
    }

    /// What each number could do, as a table.
    ///
    /// Returns
    /// -------
    /// Table
    fn table(&self) -> Table {
        self.core.table().into()
    }
}
