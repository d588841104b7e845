//! Frequency responses.

use pyo3::prelude::*;

use crate::arrays::{Complex, Kept, Real, vector};
use crate::errors::labelled;
use crate::table::{Table, result_class};

/// Responses of outputs to inputs, outputs x inputs x frequencies, for motions e^(j 2 pi f t).
#[pyclass(frozen, module = "ridemodes")]
pub(crate) struct FrequencyResponse {
    core: ridemodes::FrequencyResponse,
    kept: [Kept; 2],
}

impl FrequencyResponse {
    pub(crate) fn new(core: ridemodes::FrequencyResponse) -> Self {
        Self { core, kept: Default::default() }
    }

    fn tables(&self) -> PyResult<ridemodes::Tables> {
        Ok(ridemodes::Tables(vec![self.core.table()]))
    }
}

result_class! {
    FrequencyResponse, ridemodes::FrequencyResponse;

    /// Frequencies [Hz].
    #[getter]
    fn frequency<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[0].real(py, || Ok(vector(&self.core.frequency)))
    }

    /// Names of the outputs.
    #[getter]
    fn outputs(&self) -> Vec<String> {
        self.core.outputs.clone()
    }

    /// Units of the outputs.
    #[getter]
    fn output_units(&self) -> Vec<String> {
        self.core.output_units.clone()
    }

    /// Names of the inputs.
    #[getter]
    fn inputs(&self) -> Vec<String> {
        self.core.inputs.clone()
    }

    /// Units of the inputs.
    #[getter]
    fn input_units(&self) -> Vec<String> {
        self.core.input_units.clone()
    }

    /// Complex responses, outputs x inputs x frequencies.
    #[getter]
    fn response<'py>(&self, py: Python<'py>) -> PyResult<Complex<'py>> {
        self.kept[1].complex(py, || Ok(self.core.response.clone()))
    }

    /// The same with the road in heave, pitch, roll and warp in place of the four wheels.
    ///
    /// Returns
    /// -------
    /// FrequencyResponse
    fn in_motions(&self) -> Self {
        Self::new(self.core.in_motions())
    }

    /// Largest gain of each output to each road input, and where it is, as a table.
    ///
    /// Returns
    /// -------
    /// Table
    fn table(&self) -> Table {
        self.core.table().into()
    }

    /// The responses as an `xarray.Dataset`.
    ///
    /// Returns
    /// -------
    /// xarray.Dataset
    #[pyo3(signature = () -> "xarray.Dataset")]
    fn to_xarray<'py>(slf: &Bound<'py, Self>) -> PyResult<Bound<'py, PyAny>> {
        labelled(slf, "response_to_xarray")
    }
}
