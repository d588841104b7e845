//! Tables for people.

use pyo3::prelude::*;

/// Table with a title, headings that carry the units, and notes.
///
/// `print` shows it as text, Jupyter as HTML.
#[pyclass(frozen, eq, module = "ridemodes")]
#[derive(Clone, PartialEq)]
pub(crate) struct Table(pub ridemodes::Tables);

impl From<ridemodes::Table> for Table {
    fn from(table: ridemodes::Table) -> Self {
        Self(ridemodes::Tables(vec![table]))
    }
}

#[pymethods]
impl Table {
    fn __str__(&self) -> String {
        self.0.to_string()
    }

    fn __repr__(&self) -> String {
        self.0.to_string()
    }

    fn _repr_html_(&self) -> String {
        self.0.to_html()
    }

    #[pyo3(signature = () -> "tuple[object, tuple[bytes]]")]
    fn __reduce__<'py>(slf: &Bound<'py, Self>) -> PyResult<(Bound<'py, PyAny>, (Bound<'py, pyo3::types::PyBytes>,))> {
        let bytes = crate::convert::bytes(&slf.get().0)?;
        Ok((slf.get_type().getattr("_restore")?, (pyo3::types::PyBytes::new(slf.py(), &bytes),)))
    }

    #[staticmethod]
    fn _restore(data: &[u8]) -> PyResult<Self> {
        crate::convert::value(data).map(Self)
    }
}

/// The methods of a small class that wraps `core`: its own, and text, equality, copying and pickling.
macro_rules! plain_class {
    ($class:ident, $core:ty; $($own:tt)*) => {
        #[pymethods]
        impl $class {
            $($own)*

            fn __repr__(&self) -> PyResult<String> {
                self.text()
            }

            fn __eq__(&self, other: &Bound<'_, PyAny>) -> PyResult<bool> {
                match other.cast::<Self>() {
                    Ok(other) => $crate::convert::equal(&self.core, &other.get().core),
                    Err(_) => Ok(false),
                }
            }

            fn __copy__(slf: Py<Self>) -> Py<Self> {
                slf
            }

            // Nothing in it can change, so a deep copy is the thing itself.
            fn __deepcopy__(slf: Py<Self>, _memo: &Bound<'_, PyAny>) -> Py<Self> {
                slf
            }

            #[pyo3(signature = () -> "tuple[object, tuple[bytes]]")]
            fn __reduce__<'py>(slf: &Bound<'py, Self>) -> PyResult<(Bound<'py, PyAny>, (Bound<'py, pyo3::types::PyBytes>,))> {
                let bytes = $crate::convert::bytes(&slf.get().core)?;
                let restore = slf.get_type().getattr("_restore")?;
                Ok((restore, (pyo3::types::PyBytes::new(slf.py(), &bytes),)))
            }

            #[staticmethod]
            fn _restore(data: &[u8]) -> PyResult<Self> {
                Ok(Self::new($crate::convert::value::<$core>(data)?))
            }
        }
    };
}
pub(crate) use plain_class;

/// The methods of a result class that wraps `core`: its own, and text, HTML, equality, copying and pickling.
macro_rules! result_class {
    ($class:ident, $core:ty; $($own:tt)*) => {
        #[pymethods]
        impl $class {
            $($own)*

            fn __str__(&self) -> PyResult<String> {
                Ok(self.tables()?.to_string())
            }

            fn __repr__(&self) -> PyResult<String> {
                Ok(self.tables()?.to_string())
            }

            fn _repr_html_(&self) -> PyResult<String> {
                Ok(self.tables()?.to_html())
            }

            fn __eq__(&self, other: &Bound<'_, PyAny>) -> PyResult<bool> {
                match other.cast::<Self>() {
                    Ok(other) => $crate::convert::equal(&self.core, &other.get().core),
                    Err(_) => Ok(false),
                }
            }

            fn __copy__(slf: Py<Self>) -> Py<Self> {
                slf
            }

            // Nothing in it can change, so a deep copy is the thing itself.
            fn __deepcopy__(slf: Py<Self>, _memo: &Bound<'_, PyAny>) -> Py<Self> {
                slf
            }

            #[pyo3(signature = () -> "tuple[object, tuple[bytes]]")]
            fn __reduce__<'py>(slf: &Bound<'py, Self>) -> PyResult<(Bound<'py, PyAny>, (Bound<'py, pyo3::types::PyBytes>,))> {
                let bytes = $crate::convert::bytes(&slf.get().core)?;
                let restore = slf.get_type().getattr("_restore")?;
                Ok((restore, (pyo3::types::PyBytes::new(slf.py(), &bytes),)))
            }

            #[staticmethod]
            fn _restore(data: &[u8]) -> PyResult<Self> {
                Ok(Self::new($crate::convert::value::<$core>(data)?))
            }
        }
    };
}
pub(crate) use result_class;
