//! The operating point.

use pyo3::prelude::*;
use ridemodes::OperatingPoint as Core;

use crate::arrays::{Kept, Real, vector};
use crate::errors::{labelled, raise};
use crate::linear::LinearSystem;
use crate::table::{Table, result_class};
use crate::vehicle::Vehicle;

/// Where and under which loads the vehicle stands.
///
/// Corners come in the order front left, front right, rear left, rear right; circuits by name.
#[pyclass(frozen, module = "ridemodes")]
pub(crate) struct OperatingPoint {
    pub core: Core,
    attitude: Kept,
    deflection: Kept,
    tyre_load: Kept,
    corner_load: Kept,
    oil_load: Kept,
    spring_load: Kept,
    spring_preload: Kept,
    pressure: Kept,
    gas_volume: Kept,
}

impl OperatingPoint {
    pub(crate) fn new(core: Core) -> Self {
        Self {
            core,
            attitude: Kept::default(),
            deflection: Kept::default(),
            tyre_load: Kept::default(),
            corner_load: Kept::default(),
            oil_load: Kept::default(),
            spring_load: Kept::default(),
            spring_preload: Kept::default(),
            pressure: Kept::default(),
            gas_volume: Kept::default(),
        }
    }

    fn tables(&self) -> PyResult<ridemodes::Tables> {
        Ok(self.core.tables())
    }
}

result_class! {
    OperatingPoint, Core;

    /// The vehicle that stands there.
    #[getter]
    fn vehicle(&self) -> Vehicle {
        Vehicle(self.core.vehicle().clone())
    }

    /// Heave z [m], pitch [rad] and roll [rad] from the design condition.
    #[getter]
    fn attitude<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.attitude.real(py, || Ok(vector(&self.core.attitude)))
    }

    /// Suspension deflections from the design condition, bump positive [m].
    #[getter]
    fn deflection<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.deflection.real(py, || Ok(vector(self.core.deflection.as_array())))
    }

    /// Vertical tyre loads [N].
    #[getter]
    fn tyre_load<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.tyre_load.real(py, || Ok(vector(self.core.tyre_load.as_array())))
    }

    /// Sprung corner loads [N].
    #[getter]
    fn corner_load<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.corner_load.real(py, || Ok(vector(self.core.corner_load.as_array())))
    }

    /// Share of the corner loads that the oil carries, at the wheel [N].
    #[getter]
    fn oil_load<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.oil_load.real(py, || Ok(vector(self.core.oil_load.as_array())))
    }

    /// Share of the corner loads that the springs carry, at the wheel [N].
    #[getter]
    fn spring_load<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.spring_load.real(py, || Ok(vector(self.core.spring_load.as_array())))
    }

    /// Forces in the springs themselves [N].
    #[getter]
    fn spring_preload<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.spring_preload.real(py, || Ok(vector(self.core.spring_preload.as_array())))
    }

    /// Names of the circuits.
    #[getter]
    fn circuits(&self) -> Vec<String> {
        self.core.circuits.clone()
    }

    /// Absolute pressure of each circuit [Pa].
    #[getter]
    fn pressure<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.pressure.real(py, || Ok(vector(&self.core.pressure)))
    }

    /// Gas volume of each circuit [m^3].
    #[getter]
    fn gas_volume<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.gas_volume.real(py, || Ok(vector(&self.core.gas_volume)))
    }

    /// Absolute pressure of the air around [Pa].
    #[getter]
    fn atmosphere(&self) -> f64 {
        self.core.atmosphere
    }

    /// Temperature of gas and oil [K].
    #[getter]
    fn temperature(&self) -> f64 {
        self.core.temperature
    }

    /// What the engineer should know, e.g. a spring that would have to pull.
    #[getter]
    fn warnings(&self) -> Vec<String> {
        self.core.warnings.clone()
    }

    /// The linear system about this operating point.
    ///
    /// Returns
    /// -------
    /// LinearSystem
    ///
    /// Raises
    /// ------
    /// Singular
    ///     Where incompressible oil has nowhere to go.
    fn linear(&self, py: Python<'_>) -> PyResult<LinearSystem> {
        py.detach(|| self.core.linear()).map(LinearSystem::new).map_err(raise)
    }

    /// Corner loads and circuits as a table.
    ///
    /// Returns
    /// -------
    /// Table
    fn table(&self) -> Table {
        Table(self.core.tables())
    }

    /// The corners and circuits as an `xarray.Dataset` with units.
    ///
    /// Returns
    /// -------
    /// xarray.Dataset
    #[pyo3(signature = () -> "xarray.Dataset")]
    fn to_xarray<'py>(slf: &Bound<'py, Self>) -> PyResult<Bound<'py, PyAny>> {
        labelled(slf, "point_to_xarray")
    }

    /// The corners as a `pandas.DataFrame`.
    ///
    /// Returns
    /// -------
    /// pandas.DataFrame
    #[pyo3(signature = () -> "pandas.DataFrame")]
    fn to_dataframe<'py>(slf: &Bound<'py, Self>) -> PyResult<Bound<'py, PyAny>> {
        labelled(slf, "point_to_dataframe")
    }
}
