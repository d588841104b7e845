//! Sweeps and decoupling.

use pyo3::prelude::*;

use crate::arrays::{Complex, Kept, Real, vector};
use crate::errors::labelled;
use crate::modes::Modes;
use crate::table::{Table, result_class};

/// Modes along a sweep of one number, followed by shape.
///
/// Arrays are branches x values, NaN where a branch is not there: a pair that turns into two real poles goes on as
/// one of them, and the other begins a branch.
#[pyclass(frozen, module = "ridemodes")]
pub(crate) struct Sweep {
    core: ridemodes::Sweep,
    kept: [Kept; 6],
}

impl Sweep {
    pub(crate) fn new(core: ridemodes::Sweep) -> Self {
        Self { core, kept: Default::default() }
    }

    fn tables(&self) -> PyResult<ridemodes::Tables> {
        Ok(ridemodes::Tables(vec![self.core.table()]))
    }
}

result_class! {
    Sweep, ridemodes::Sweep;

    /// Path that is varied.
    #[getter]
    fn path(&self) -> &str {
        &self.core.path
    }

    /// Unit of the values.
    #[getter]
    fn unit(&self) -> &str {
        &self.core.unit
    }

    /// Values, in SI.
    #[getter]
    fn values<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[0].real(py, || Ok(vector(&self.core.values)))
    }

    /// Label of each branch where it begins.
    #[getter]
    fn label(&self) -> Vec<String> {
        self.core.label.clone()
    }

    /// Poles, branches x values [rad/s].
    #[getter]
    fn pole<'py>(&self, py: Python<'py>) -> PyResult<Complex<'py>> {
        self.kept[1].complex(py, || Ok(self.core.pole.clone()))
    }

    /// Natural frequencies, branches x values [Hz].
    #[getter]
    fn frequency<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[2].real(py, || Ok(self.core.frequency.clone()))
    }

    /// Damping ratios, branches x values [1].
    #[getter]
    fn damping_ratio<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[3].real(py, || Ok(self.core.damping_ratio.clone()))
    }

    /// Row of each branch in `modes`, branches x values, as floats; NaN where it is not there.
    #[getter]
    fn row<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        let number = |&row: &i64| if row < 0 { f64::NAN } else { row as f64 };
        self.kept[4].real(py, || Ok(self.core.row.map(number)))
    }

    /// Least likeness met from step to step on each branch, 1 for the same shape.
    #[getter]
    fn likeness<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[5].real(py, || Ok(vector(&self.core.likeness)))
    }

    /// The modes at each value.
    #[getter]
    fn modes(&self) -> Vec<Modes> {
        self.core.modes.iter().cloned().map(Modes::new).collect()
    }

    /// Frequency and damping at the ends, as a table.
    ///
    /// Returns
    /// -------
    /// Table
    fn table(&self) -> Table {
        self.core.table().into()
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
