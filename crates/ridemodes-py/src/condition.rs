//! What a vehicle stands under.

use std::collections::BTreeMap;

use pyo3::exceptions::{PyTypeError, PyValueError};
use pyo3::prelude::*;
use pyo3::types::PyDict;
use ridemodes::{Condition, Fault as FaultCore, Payload as PayloadCore};

use crate::table::plain_class;

/// A point mass carried by the body.
///
/// Parameters
/// ----------
/// mass : float
///     Mass [kg].
/// x : float
///     Ahead of the body's centre of gravity [m].
/// y : float
///     To the left of it [m].
/// z : float
///     Above it [m].
#[pyclass(frozen, module = "ridemodes")]
pub(crate) struct Payload {
    core: PayloadCore,
}

impl Payload {
    fn new(core: PayloadCore) -> Self {
        Self { core }
    }

    fn text(&self) -> PyResult<String> {
        let PayloadCore { mass, x, y, z } = self.core;
        Ok(format!("Payload({mass}, x={x}, y={y}, z={z})"))
    }
}

plain_class! {
    Payload, PayloadCore;

    #[new]
    #[pyo3(signature = (mass, x=0.0, y=0.0, z=0.0))]
    fn create(mass: f64, x: f64, y: f64, z: f64) -> Self {
        Self { core: PayloadCore { mass, x, y, z } }
    }

    /// Mass [kg].
    #[getter]
    fn mass(&self) -> f64 {
        self.core.mass
    }

    /// Ahead of the body's centre of gravity [m].
    #[getter]
    fn x(&self) -> f64 {
        self.core.x
    }

    /// To the left of the body's centre of gravity [m].
    #[getter]
    fn y(&self) -> f64 {
        self.core.y
    }

    /// Above the body's centre of gravity [m].
    #[getter]
    fn z(&self) -> f64 {
        self.core.z
    }
}

/// Something that has failed: it changes the data a state is solved from.
#[pyclass(frozen, module = "ridemodes")]
pub(crate) struct Fault {
    core: FaultCore,
}

impl Fault {
    pub(crate) fn new(core: FaultCore) -> Self {
        Self { core }
    }

    fn text(&self) -> PyResult<String> {
        Ok(format!("Fault({})", self.core.name()))
    }
}

plain_class! {
    Fault, FaultCore;

    /// A burst line: the circuit's oil is at the pressure of the air.
    ///
    /// Parameters
    /// ----------
    /// circuit : str
    ///     Name of the circuit.
    ///
    /// Returns
    /// -------
    /// Fault
    #[staticmethod]
    fn burst(circuit: String) -> Self {
        Self::new(FaultCore::Burst(circuit))
    }

    /// An accumulator without its charge: oil fills it, and nothing gives.
    ///
    /// Parameters
    /// ----------
    /// accumulator : str
    ///     Its path, e.g. ``circuits.left.accumulators.main``.
    ///
    /// Returns
    /// -------
    /// Fault
    #[staticmethod]
    fn lost_precharge(accumulator: String) -> Self {
        Self::new(FaultCore::LostPrecharge(accumulator))
    }

    /// A way that is shut: a port, an accumulator's, or a line.
    ///
    /// Parameters
    /// ----------
    /// way : str
    ///     Its path, e.g. ``circuits.left.chambers.front_left_bump``.
    ///
    /// Returns
    /// -------
    /// Fault
    #[staticmethod]
    fn closed(way: String) -> Self {
        Self::new(FaultCore::Closed(way))
    }

    /// Entrained air in the oil.
    ///
    /// Parameters
    /// ----------
    /// fraction : float
    ///     Volume of air per volume of oil at atmospheric pressure.
    ///
    /// Returns
    /// -------
    /// Fault
    #[staticmethod]
    fn air(fraction: f64) -> Self {
        Self::new(FaultCore::Air(fraction))
    }

    /// Years of service without a check of the charge, at each accumulator's ``yearly_loss``.
    ///
    /// Parameters
    /// ----------
    /// years : float
    ///     Years.
    ///
    /// Returns
    /// -------
    /// Fault
    #[staticmethod]
    fn years(years: f64) -> Self {
        Self::new(FaultCore::Years(years))
    }

    /// The fault in words.
    #[getter]
    fn name(&self) -> String {
        self.core.name()
    }
}

/// Keywords of `settle` as the core's condition.
#[derive(Default)]
pub(crate) struct Given<'py> {
    pub numbers: [f64; 5],
    pub temperature: Option<f64>,
    pub payload: Option<Bound<'py, PyAny>>,
    pub heights: Option<[f64; 4]>,
    pub downforce: Option<(f64, f64)>,
    pub spring_seat: Option<[f64; 4]>,
    pub oil: Option<BTreeMap<String, f64>>,
    pub pressure: Option<BTreeMap<String, f64>>,
    pub levelled: bool,
    pub fault: Option<Bound<'py, PyAny>>,
    pub fast: bool,
}

impl<'py> Given<'py> {
    /// Keywords given as a mapping; one that is not known is a TypeError, as Python's own.
    pub(crate) fn from_keywords(keywords: Option<&Bound<'py, PyDict>>, function: &str) -> PyResult<Self> {
        let mut given = Self::default();
        for (name, value) in keywords.into_iter().flat_map(|keywords| keywords.iter()) {
            let name: String = name.extract()?;
            match name.as_str() {
                "lateral" => given.numbers[0] = value.extract()?,
                "longitudinal" => given.numbers[1] = value.extract()?,
                "vertical" => given.numbers[2] = value.extract()?,
                "side_slope" => given.numbers[3] = value.extract()?,
                "grade" => given.numbers[4] = value.extract()?,
                "temperature" => given.temperature = value.extract()?,
                "payload" => given.payload = Some(value),
                "heights" => given.heights = value.extract()?,
                "downforce" => given.downforce = value.extract()?,
                "spring_seat" => given.spring_seat = value.extract()?,
                "oil" => given.oil = value.extract()?,
                "pressure" => given.pressure = value.extract()?,
                "levelled" => given.levelled = value.extract()?,
                "fault" => given.fault = Some(value),
                "fast" => given.fast = value.extract()?,
                _ => {
                    return Err(PyTypeError::new_err(format!(
                        "{function}() got an unexpected keyword argument '{name}'"
                    )));
                }
            }
        }
        Ok(given)
    }

    pub(crate) fn condition(self) -> PyResult<Condition> {
        let [lateral, longitudinal, vertical, side_slope, grade] = self.numbers;
        let (front, rear) = self.downforce.unwrap_or((0.0, 0.0));
        Ok(Condition {
            lateral,
            longitudinal,
            vertical,
            temperature: self.temperature,
            payload: many(self.payload.as_ref(), "payload", |one: &Bound<'_, Payload>| one.get().core)?,
            heights: self.heights.unwrap_or_default(),
            downforce: [front, rear],
            side_slope,
            grade,
            spring_seat: self.spring_seat.unwrap_or_default(),
            oil: self.oil.unwrap_or_default(),
            pressure: self.pressure.unwrap_or_default(),
            levelled: self.levelled,
            faults: many(self.fault.as_ref(), "fault", |one: &Bound<'_, Fault>| one.get().core.clone())?,
            fast: self.fast,
        })
    }
}

// One or several of a class.
fn many<'py, P: pyo3::PyTypeInfo, T>(
    given: Option<&Bound<'py, PyAny>>,
    name: &str,
    core: impl Fn(&Bound<'py, P>) -> T,
) -> PyResult<Vec<T>> {
    let Some(given) = given.filter(|given| !given.is_none()) else { return Ok(Vec::new()) };
    if let Ok(one) = given.cast::<P>() {
        return Ok(vec![core(one)]);
    }
    let items = given.try_iter().map_err(|_| PyTypeError::new_err(format!("{name} must be one or a list of them")))?;
    items
        .map(|item| {
            let item = item?;
            let one =
                item.cast::<P>().map_err(|_| PyValueError::new_err(format!("{name} holds a {}", item.get_type())))?;
            Ok(core(one))
        })
        .collect()
}
