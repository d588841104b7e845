//! Readings and wheel rates.

use pyo3::prelude::*;

use crate::arrays::{Kept, Real, vector};
use crate::table::{Table, result_class};

/// What a chassis engineer reads off a state.
#[pyclass(frozen, module = "ridemodes")]
pub(crate) struct Readings {
    core: ridemodes::Readings,
    kept: [Kept; 5],
}

impl Readings {
    pub(crate) fn new(core: ridemodes::Readings) -> Self {
        Self { core, kept: Default::default() }
    }

    fn tables(&self) -> PyResult<ridemodes::Tables> {
        let name = if self.core.fast { "fast" } else { "slow" };
        Ok(ridemodes::Tables(vec![ridemodes::Readings::table(&[(name, &self.core)])]))
    }
}

result_class! {
    Readings, ridemodes::Readings;

    /// Whether the changes are fast.
    #[getter]
    fn fast(&self) -> bool {
        self.core.fast
    }

    /// Names of the circuits.
    #[getter]
    fn circuits(&self) -> Vec<String> {
        self.core.circuits.clone()
    }

    /// The readings as a table.
    ///
    /// Returns
    /// -------
    /// Table
    fn table(&self) -> PyResult<Table> {
        self.tables().map(Table)
    }

    /// Roll per lateral acceleration [rad per m/s^2].
    #[getter]
    fn roll_gradient(&self) -> f64 {
        self.core.roll_gradient
    }

    /// Pitch per deceleration in braking, nose down positive [rad per m/s^2].
    #[getter]
    fn braking_gradient(&self) -> f64 {
        self.core.braking_gradient
    }

    /// Pitch per acceleration in drive, nose up positive [rad per m/s^2].
    #[getter]
    fn driving_gradient(&self) -> f64 {
        self.core.driving_gradient
    }

    /// Front share of the lateral load transfer.
    #[getter]
    fn front_transfer(&self) -> f64 {
        self.core.front_transfer
    }

    /// Ground twist h (times 1, -1, -1, 1) at which the first wheel lifts [m].
    #[getter]
    fn twist_at_lift(&self) -> f64 {
        self.core.twist_at_lift
    }

    /// Lateral acceleration at which the first wheel lifts [m/s^2].
    #[getter]
    fn lateral_at_lift(&self) -> f64 {
        self.core.lateral_at_lift
    }

    /// Slope across at which the first wheel lifts [rad].
    #[getter]
    fn slope_at_lift(&self) -> f64 {
        self.core.slope_at_lift
    }

    /// Cross weight of the tyre loads, (FR + RL) over all.
    #[getter]
    fn cross_weight(&self) -> f64 {
        self.core.cross_weight
    }

    /// All that the tyres carry, as a mass [kg].
    #[getter]
    fn mass(&self) -> f64 {
        self.core.mass
    }

    /// Lift of the body at 5 m/s^2 of lateral acceleration [m].
    #[getter]
    fn lift_in_corner(&self) -> f64 {
        self.core.lift_in_corner
    }

    /// Change of each tyre load per ground twist [N/m].
    #[getter]
    fn load_per_twist<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[0].real(py, || Ok(vector(&self.core.load_per_twist)))
    }

    /// Change of tyre loads (rows) per height under each wheel (columns), 4 x 4 [N/m].
    #[getter]
    fn load_per_height<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[1].real(py, || Ok(self.core.load_per_height.clone()))
    }

    /// Change of each pressure per lateral acceleration [Pa per m/s^2].
    #[getter]
    fn pressure_per_lateral<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[2].real(py, || Ok(vector(&self.core.pressure_per_lateral)))
    }

    /// Change of each pressure per deceleration in braking [Pa per m/s^2].
    #[getter]
    fn pressure_per_braking<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[3].real(py, || Ok(vector(&self.core.pressure_per_braking)))
    }

    /// Undamped frequency of the front and the rear sprung mass alone [Hz].
    #[getter]
    fn ride_frequency<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[4].real(py, || Ok(vector(&self.core.ride_frequency)))
    }
}

/// Forces and rates of the suspension over its travel; rows are `patterns`.
#[pyclass(frozen, module = "ridemodes")]
pub(crate) struct WheelRates {
    core: ridemodes::WheelRates,
    kept: [Kept; 3],
}

impl WheelRates {
    pub(crate) fn new(core: ridemodes::WheelRates) -> Self {
        Self { core, kept: Default::default() }
    }

    fn tables(&self) -> PyResult<ridemodes::Tables> {
        Ok(ridemodes::Tables(vec![self.core.table()]))
    }
}

result_class! {
    WheelRates, ridemodes::WheelRates;

    /// Names of the rows: the four motions, then one wheel of each axle.
    #[getter]
    fn patterns(&self) -> Vec<&'static str> {
        ridemodes::PATTERN_NAMES.to_vec()
    }

    /// Whether the gas exchanges no heat.
    #[getter]
    fn fast(&self) -> bool {
        self.core.fast
    }

    /// Travel of each wheel of the pattern, bump positive [m].
    #[getter]
    fn travel<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[0].real(py, || Ok(vector(&self.core.travel)))
    }

    /// Force per wheel along the pattern, 6 x travels [N].
    #[getter]
    fn force<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[1].real(py, || Ok(self.core.force.clone()))
    }

    /// Tangent rate per wheel along the pattern, 6 x travels [N/m].
    #[getter]
    fn rate<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[2].real(py, || Ok(self.core.rate.clone()))
    }

    /// Rates over travel as a table.
    ///
    /// Returns
    /// -------
    /// Table
    fn table(&self) -> Table {
        self.core.table().into()
    }
}
