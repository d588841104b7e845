//! The core's errors as the package's exceptions.

use pyo3::exceptions::{PyOSError, PyRuntimeError};
use pyo3::prelude::*;
use ridemodes::Error;

mod raised {
    pyo3::import_exception!(ridemodes.errors, InvalidInput);
    pyo3::import_exception!(ridemodes.errors, NotConverged);
    pyo3::import_exception!(ridemodes.errors, ParseError);
    pyo3::import_exception!(ridemodes.errors, Singular);
}

/// The exception that says what the core says.
pub(crate) fn raise(error: Error) -> PyErr {
    let message = error.to_string();
    match error {
        Error::InvalidInput { violations } => {
            let violations: Vec<_> =
                violations.into_iter().map(|v| (v.path, v.value, v.unit, v.rule, v.hint)).collect();
            raised::InvalidInput::new_err((message, violations))
        }
        Error::Parse { line, column, .. } => raised::ParseError::new_err((message, line, column)),
        Error::Singular { matrix, motion } => raised::Singular::new_err((message, matrix, motion)),
        Error::NotConverged { what, iterations, residual, last } => {
            raised::NotConverged::new_err((message, what, iterations, residual, last))
        }
        Error::File { path, cause, code: Some(code) } => PyOSError::new_err((code, cause, path)),
        Error::File { .. } => PyOSError::new_err(message),
        other => PyRuntimeError::new_err(other.to_string()),
    }
}

/// What a method of the package's Python part returns for a result.
pub(crate) fn labelled<'py>(slf: &Bound<'py, PyAny>, function: &str) -> PyResult<Bound<'py, PyAny>> {
    slf.py().import("ridemodes._labelled")?.call_method1(function, (slf,))
}
