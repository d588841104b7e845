//! Derivatives by every number.

use pyo3::exceptions::PyKeyError;
use pyo3::prelude::*;
use ridemodes::Sensitivities as Core;

use crate::arrays::{Flags, Kept, Real, vector};
use crate::errors::labelled;
use crate::modes::Modes;
use crate::table::{Table, result_class};

/// Derivatives of damped modes, four-motion tables and coupling with respect to every number of the vehicle.
///
/// The last axis follows `paths`. A number whose change would alter the coordinates (a throttle of zero) is
/// `excluded`, and a mode whose pole equals another's is `repeated`: their entries are NaN.
#[pyclass(frozen, module = "ridemodes")]
pub(crate) struct Sensitivities {
    core: Core,
    kept: [Kept; 9],
}

impl Sensitivities {
    pub(crate) fn new(core: Core) -> Self {
        Self { core, kept: Default::default() }
    }

    fn tables(&self) -> PyResult<ridemodes::Tables> {
        let seven = (0..self.core.modes.len()).filter(|&row| {
            let label = &self.core.modes.label[row];
            label.starts_with("body") || label.starts_with("wheel")
        });
        let mut tables: Vec<ridemodes::Table> = seven.map(|row| self.core.table(row)).collect();
        tables.push(self.core.motion_table());
        Ok(ridemodes::Tables(tables))
    }
}

result_class! {
    Sensitivities, Core;

    /// Paths of the numbers.
    #[getter]
    fn paths(&self) -> Vec<String> {
        self.core.paths.clone()
    }

    /// Values of the numbers, in SI.
    #[getter]
    fn values<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[0].real(py, || Ok(vector(&self.core.values)))
    }

    /// Units of the numbers.
    #[getter]
    fn units(&self) -> Vec<String> {
        self.core.units.clone()
    }

    /// Paths of numbers without a derivative.
    #[getter]
    fn excluded(&self) -> Vec<String> {
        self.core.excluded.clone()
    }

    /// The damped modes that are differentiated; their rows are those of the derivatives.
    #[getter]
    fn modes(&self) -> Modes {
        Modes::new(self.core.modes.clone())
    }

    /// Whether a mode's pole equals another's: only the sum of equal poles has a gradient.
    #[getter]
    fn repeated<'py>(&self, py: Python<'py>) -> PyResult<Flags<'py>> {
        self.kept[1].flags(py, &self.core.repeated)
    }

    /// Derivatives of the frequencies, modes x paths [Hz per unit of the number].
    #[getter]
    fn frequency<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[2].real(py, || Ok(self.core.frequency.clone()))
    }

    /// Derivatives of the damping ratios, modes x paths [1 per unit of the number].
    #[getter]
    fn damping_ratio<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[3].real(py, || Ok(self.core.damping_ratio.clone()))
    }

    /// Per cent of frequency per per cent of the number, modes x paths.
    #[getter]
    fn relative_frequency<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[4].real(py, || Ok(self.core.relative_frequency()))
    }

    /// Per cent of damping ratio per per cent of the number, modes x paths.
    #[getter]
    fn relative_damping_ratio<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[5].real(py, || Ok(self.core.relative_damping_ratio()))
    }

    /// Derivatives of the stiffness in the four motions, 4 x 4 x paths [N/m per unit].
    #[getter]
    fn stiffness<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[6].real(py, || Ok(self.core.stiffness.clone()))
    }

    /// Derivatives of the damping in the four motions, 4 x 4 x paths [N*s/m per unit].
    #[getter]
    fn damping<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[7].real(py, || Ok(self.core.damping.clone()))
    }

    /// Derivatives of the coupling of the oil at the wheels, 4 x 4 x paths [N/m per unit].
    #[getter]
    fn coupling<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[8].real(py, || Ok(self.core.coupling.clone()))
    }

    /// What moves a mode, as a table, the largest effect first.
    ///
    /// Parameters
    /// ----------
    /// label : str
    ///     Label of the mode, e.g. ``body roll``.
    ///
    /// Returns
    /// -------
    /// Table
    ///
    /// Raises
    /// ------
    /// KeyError
    ///     For a label that is not there.
    fn table(&self, label: &str) -> PyResult<Table> {
        match self.core.modes.rows(label).first() {
            Some(&row) => Ok(self.core.table(row).into()),
            None => Err(PyKeyError::new_err(format!(
                "no mode \"{label}\"; labels are {}",
                self.core.modes.label.join(", ")
            ))),
        }
    }

    /// What moves stiffness and damping of the four motions, as a table, the largest effect first.
    ///
    /// Returns
    /// -------
    /// Table
    fn motion_table(&self) -> Table {
        self.core.motion_table().into()
    }

    /// The derivatives as an `xarray.Dataset`.
    ///
    /// Returns
    /// -------
    /// xarray.Dataset
    #[pyo3(signature = () -> "xarray.Dataset")]
    fn to_xarray<'py>(slf: &Bound<'py, Self>) -> PyResult<Bound<'py, PyAny>> {
        labelled(slf, "sensitivities_to_xarray")
    }
}
