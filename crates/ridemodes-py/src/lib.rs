//! Python binding of `ridemodes`: extract, detach, call one core function, wrap.

mod arrays;
mod condition;
mod convert;
mod errors;
mod frequency;
mod linear;
mod modes;
mod motions;
mod point;
mod readings;
mod sensitivities;
mod studies;
mod table;
mod vehicle;

/// Compiled core of ridemodes.
#[pyo3::pymodule]
mod _core {
    use pyo3::prelude::*;

    #[pymodule_export]
    use crate::condition::{Fault, Payload};
    #[pymodule_export]
    use crate::frequency::FrequencyResponse;
    #[pymodule_export]
    use crate::linear::{Element, LinearSystem, StateSpace};
    #[pymodule_export]
    use crate::modes::Modes;
    #[pymodule_export]
    use crate::motions::Motions;
    #[pymodule_export]
    use crate::point::{ClosedOff, Limit, OperatingPoint, SlowLine};
    #[pymodule_export]
    use crate::readings::{Readings, WheelRates};
    #[pymodule_export]
    use crate::sensitivities::Sensitivities;
    #[pymodule_export]
    use crate::studies::{Decoupling, Sweep};
    #[pymodule_export]
    use crate::table::Table;
    #[pymodule_export]
    use crate::vehicle::{Parameter, Vehicle, example, examples, load, loads, schema};

    /// Version of the compiled core.
    #[pymodule_export]
    const VERSION: &str = env!("CARGO_PKG_VERSION");

    /// What every result has to be read with.
    #[pymodule_export]
    const CAUTION: &str = ridemodes::CAUTION;

    #[pymodule_init]
    fn init(py: Python<'_>) -> PyResult<()> {
        // Loads NumPy's C interface here, so that an interrupt cannot meet it half loaded later.
        crate::arrays::touch(py)
    }
}
