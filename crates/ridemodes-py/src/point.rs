//! The operating point.

use pyo3::prelude::*;
use ridemodes::{ClosedOff as ClosedOffCore, Limit as LimitCore, OperatingPoint as Core, SlowLine as SlowLineCore};

use crate::arrays::{Kept, Real, vector};
use crate::errors::{labelled, raise};
use crate::linear::LinearSystem;
use crate::table::{Table, plain_class, result_class};
use crate::vehicle::Vehicle;

/// A slow line between two parts of the oil.
#[pyclass(frozen, module = "ridemodes")]
pub(crate) struct SlowLine {
    core: SlowLineCore,
}

impl SlowLine {
    fn new(core: SlowLineCore) -> Self {
        Self { core }
    }

    fn text(&self) -> PyResult<String> {
        let line = &self.core;
        Ok(format!("SlowLine({}: {:.4e} Pa*s/m^3, {:.4} s)", line.name, line.resistance, line.time_constant))
    }
}

plain_class! {
    SlowLine, SlowLineCore;

    /// Path of the line, e.g. ``lines.balance``.
    #[getter]
    fn name(&self) -> &str {
        &self.core.name
    }

    /// Its resistance [Pa*s/m^3].
    #[getter]
    fn resistance(&self) -> f64 {
        self.core.resistance
    }

    /// Time in which a difference of pressure falls to 1/e with the wheels held [s].
    #[getter]
    fn time_constant(&self) -> f64 {
        self.core.time_constant
    }
}

/// Oil on one side of a line that is shut.
#[pyclass(frozen, module = "ridemodes")]
pub(crate) struct ClosedOff {
    core: ClosedOffCore,
}

impl ClosedOff {
    fn new(core: ClosedOffCore) -> Self {
        Self { core }
    }

    fn text(&self) -> PyResult<String> {
        let part = &self.core;
        Ok(format!("ClosedOff({} by {}: {:.4e} Pa)", part.nodes.join(", "), part.lines.join(", "), part.pressure))
    }
}

plain_class! {
    ClosedOff, ClosedOffCore;

    /// Lines whose closing bounds it.
    #[getter]
    fn lines(&self) -> Vec<String> {
        self.core.lines.clone()
    }

    /// Its nodes.
    #[getter]
    fn nodes(&self) -> Vec<String> {
        self.core.nodes.clone()
    }

    /// Its accumulators.
    #[getter]
    fn accumulators(&self) -> Vec<String> {
        self.core.accumulators.clone()
    }

    /// Absolute pressure [Pa].
    #[getter]
    fn pressure(&self) -> f64 {
        self.core.pressure
    }

    /// Compliance of all that it holds [m^3/Pa].
    #[getter]
    fn compliance(&self) -> f64 {
        self.core.compliance
    }
}

/// A limit with the margin to it.
#[pyclass(frozen, module = "ridemodes")]
pub(crate) struct Limit {
    core: LimitCore,
}

impl Limit {
    fn new(core: LimitCore) -> Self {
        Self { core }
    }

    fn text(&self) -> PyResult<String> {
        let LimitCore { name, value, limit, unit, .. } = &self.core;
        let word = if self.core.is_passed() { "passed" } else { "kept" };
        Ok(format!("Limit({name}: {value:.5e} against {limit:.5e} {unit}, {word})"))
    }
}

plain_class! {
    Limit, LimitCore;

    /// What it limits, e.g. ``front_left.lift_off``.
    #[getter]
    fn name(&self) -> &str {
        &self.core.name
    }

    /// Where the state stands.
    #[getter]
    fn value(&self) -> f64 {
        self.core.value
    }

    /// Where the limit is.
    #[getter]
    fn limit(&self) -> f64 {
        self.core.limit
    }

    /// Unit of both.
    #[getter]
    fn unit(&self) -> &str {
        &self.core.unit
    }

    /// How far the state is from it; negative once it is passed.
    #[getter]
    fn margin(&self) -> f64 {
        self.core.margin
    }

    /// Whether the state is beyond it.
    #[getter]
    fn passed(&self) -> bool {
        self.core.is_passed()
    }
}

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
    friction: Kept,
    wheels: Kept,
    stop_load: Kept,
    piston_travel: Kept,
    oil_added: Kept,
    cavity: Kept,
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
            friction: Kept::default(),
            wheels: Kept::default(),
            stop_load: Kept::default(),
            piston_travel: Kept::default(),
            oil_added: Kept::default(),
            cavity: Kept::default(),
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

    /// Heights of the wheels from the design condition [m].
    #[getter]
    fn wheels<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.wheels.real(py, || Ok(vector(self.core.wheels.as_array())))
    }

    /// Share of the corner loads that the stops carry, at the wheel [N].
    #[getter]
    fn stop_load<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.stop_load.real(py, || Ok(vector(self.core.stop_load.as_array())))
    }

    /// Travel of the pistons from mid-stroke, bump positive [m]; NaN without a cylinder.
    #[getter]
    fn piston_travel<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.piston_travel.real(py, || Ok(vector(self.core.piston_travel.as_array())))
    }

    /// Oil volume added to each circuit since the design condition [m^3].
    #[getter]
    fn oil_added<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.oil_added.real(py, || Ok(vector(&self.core.oil_added)))
    }

    /// Volume of the cavity in each circuit where oil has torn off [m^3].
    #[getter]
    fn cavity<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.cavity.real(py, || Ok(vector(&self.core.cavity)))
    }

    /// Margins to what limits the suspension, by name.
    #[getter]
    fn limits(&self) -> std::collections::BTreeMap<String, Limit> {
        self.core.limits.iter().map(|limit| (limit.name.clone(), Limit::new(limit.clone()))).collect()
    }

    /// Front share of the lateral load transfer; NaN without any.
    #[getter]
    fn front_transfer(&self) -> f64 {
        self.core.front_transfer()
    }

    /// Cross weight of the tyre loads, (FR + RL) over all.
    #[getter]
    fn cross_weight(&self) -> f64 {
        self.core.cross_weight()
    }

    /// Limits that are passed.
    #[getter]
    fn passed(&self) -> Vec<Limit> {
        self.core.limits.iter().filter(|limit| limit.is_passed()).cloned().map(Limit::new).collect()
    }

    /// Lines that only balance slowly.
    #[getter]
    fn slow_lines(&self) -> Vec<SlowLine> {
        self.core.slow_lines.iter().cloned().map(SlowLine::new).collect()
    }

    /// What lines that are shut have closed off.
    #[getter]
    fn closed_off(&self) -> Vec<ClosedOff> {
        self.core.closed_off.iter().cloned().map(ClosedOff::new).collect()
    }

    /// Dry friction of damper and cylinder at each wheel, plus or minus [N].
    #[getter]
    fn friction<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.friction.real(py, || Ok(vector(self.core.friction.as_array())))
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
    /// Parameters
    /// ----------
    /// gravity : bool
    ///     Whether the moment of the leaned body's weight is taken in, with roll about the roll axis; off, these are
    ///     the classical seven degrees of freedom.
    ///
    /// Returns
    /// -------
    /// LinearSystem
    ///
    /// Raises
    /// ------
    /// Singular
    ///     Where incompressible oil has nowhere to go.
    #[pyo3(signature = (gravity=false))]
    fn linear(&self, py: Python<'_>, gravity: bool) -> PyResult<LinearSystem> {
        let linear = || if gravity { self.core.linear_with_gravity() } else { self.core.linear() };
        py.detach(linear).map(LinearSystem::new).map_err(raise)
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
