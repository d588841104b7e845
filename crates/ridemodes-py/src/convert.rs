//! Python data to and from the tree of a file, and results to and from bytes.

use pyo3::exceptions::{PyRecursionError, PyTypeError, PyValueError};
use pyo3::prelude::*;
use pyo3::types::{PyBool, PyDict, PyInt, PyList, PyMapping, PyString, PyTuple};
use serde_json::{Map, Value};

const DEEPEST: usize = 64;

/// Python data as a tree. Numbers that are not finite become text, which the reader refuses by name.
pub(crate) fn tree(data: &Bound<'_, PyAny>, depth: usize) -> PyResult<Value> {
    if depth > DEEPEST {
        return Err(PyRecursionError::new_err("the data is nested too deeply for a vehicle"));
    }
    if data.is_none() {
        return Ok(Value::Null);
    }
    if let Ok(truth) = data.cast::<PyBool>() {
        return Ok(truth.is_true().into());
    }
    if let Ok(text) = data.cast::<PyString>() {
        return Ok(text.to_string_lossy().into_owned().into());
    }
    if let Ok(mapping) = data.cast::<PyMapping>() {
        let mut table = Map::new();
        for item in mapping.items()?.iter() {
            let (key, value): (Bound<'_, PyAny>, Bound<'_, PyAny>) = item.extract()?;
            table.insert(key.str()?.to_string_lossy().into_owned(), tree(&value, depth + 1)?);
        }
        return Ok(Value::Object(table));
    }
    if data.is_instance_of::<PyList>() || data.is_instance_of::<PyTuple>() {
        return data
            .try_iter()?
            .map(|item| tree(&item?, depth + 1))
            .collect::<PyResult<Vec<Value>>>()
            .map(Value::Array);
    }
    if let Ok(whole) = data.cast::<PyInt>()
        && let Ok(whole) = whole.extract::<i64>()
    {
        return Ok(whole.into());
    }
    // NumPy's scalars and whatever else converts to a float; NumPy would convert truth and complex values too.
    let kind = data.getattr("dtype").and_then(|dtype| dtype.getattr("kind")?.extract::<String>());
    if kind.is_ok_and(|kind| !matches!(kind.as_str(), "f" | "i" | "u")) {
        return Ok(format!("{} object", data.get_type().name()?).into());
    }
    if data.hasattr("__float__")?
        && let Ok(number) = data.extract::<f64>()
    {
        return Ok(serde_json::Number::from_f64(number).map_or_else(|| number.to_string().into(), Value::Number));
    }
    Ok(format!("{} object", data.get_type().name()?).into())
}

/// A tree as Python data.
pub(crate) fn python<'py>(py: Python<'py>, value: &Value) -> PyResult<Bound<'py, PyAny>> {
    Ok(match value {
        Value::Null => py.None().into_bound(py),
        Value::Bool(truth) => truth.into_pyobject(py)?.to_owned().into_any(),
        Value::Number(number) => match number.as_i64() {
            Some(whole) => whole.into_pyobject(py)?.into_any(),
            None => number.as_f64().into_pyobject(py)?.into_any(),
        },
        Value::String(text) => text.into_pyobject(py)?.into_any(),
        Value::Array(items) => {
            let items: Vec<_> = items.iter().map(|item| python(py, item)).collect::<PyResult<_>>()?;
            PyList::new(py, items)?.into_any()
        }
        Value::Object(table) => {
            let dict = PyDict::new(py);
            for (key, value) in table {
                dict.set_item(key, python(py, value)?)?;
            }
            dict.into_any()
        }
    })
}

/// Frequencies given as a number or anything NumPy takes for a one-dimensional array of finite numbers.
pub(crate) fn frequencies(data: &Bound<'_, PyAny>) -> PyResult<Vec<f64>> {
    let values = real_vector(data, "frequency")?;
    match values.iter().find(|value| !value.is_finite() || **value < 0.0) {
        Some(wrong) => {
            Err(PyValueError::new_err(format!("frequency must be finite and not negative [Hz], not {wrong}")))
        }
        None => Ok(values),
    }
}

/// Numbers of a sweep; what is not finite is refused by the core, with its path.
pub(crate) fn numbers(data: &Bound<'_, PyAny>) -> PyResult<Vec<f64>> {
    real_vector(data, "values")
}

fn real_vector(data: &Bound<'_, PyAny>, name: &str) -> PyResult<Vec<f64>> {
    let array = data.py().import("numpy")?.call_method1("asarray", (data,))?;
    let kind: String = array.getattr("dtype")?.getattr("kind")?.extract()?;
    if !matches!(kind.as_str(), "f" | "i" | "u") {
        return Err(PyTypeError::new_err(format!("{name} must be real numbers, not {}", array.getattr("dtype")?)));
    }
    let dimensions: usize = array.getattr("ndim")?.extract()?;
    if dimensions > 1 {
        return Err(PyValueError::new_err(format!(
            "{name} must be a number or one-dimensional, not {dimensions}-dimensional"
        )));
    }
    array.call_method0("ravel")?.call_method1("astype", ("float64",))?.call_method0("tolist")?.extract()
}

/// Bytes of a value, for pickling.
pub(crate) fn bytes<T: serde::Serialize>(value: &T) -> PyResult<Vec<u8>> {
    postcard::to_stdvec(value).map_err(|error| PyValueError::new_err(error.to_string()))
}

/// A value from its bytes.
pub(crate) fn value<T: serde::de::DeserializeOwned>(bytes: &[u8]) -> PyResult<T> {
    postcard::from_bytes(bytes).map_err(|error| PyValueError::new_err(format!("not a pickle of this version: {error}")))
}

/// Equality by value, NaN equal to NaN.
pub(crate) fn equal<T: serde::Serialize + PartialEq>(a: &T, b: &T) -> PyResult<bool> {
    Ok(a == b || bytes(a)? == bytes(b)?)
}
