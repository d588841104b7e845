//! Arrays as they leave for Python: NumPy, read-only, made once.

use numpy::ndarray::{Array, Dimension};
use numpy::{Element, IntoPyArray, PyArray1, PyArrayDyn, PyArrayMethods};
use pyo3::inspect::PyStaticExpr;
use pyo3::prelude::*;
use pyo3::sync::PyOnceLock;
use pyo3::{type_hint_identifier, type_hint_subscript};
use ridemodes::Complex64;
use ridemodes::nalgebra::{Dim, Matrix, RawStorage};

/// Loads NumPy's C interface.
pub(crate) fn touch(py: Python<'_>) -> PyResult<()> {
    PyArray1::<f64>::zeros(py, [1], false);
    Ok(())
}

macro_rules! array_type {
    ($name:ident, $doc:literal, $module:literal, $scalar:literal) => {
        #[doc = $doc]
        pub(crate) struct $name<'py>(pub Bound<'py, PyAny>);

        impl<'py> IntoPyObject<'py> for $name<'py> {
            type Target = PyAny;
            type Output = Bound<'py, PyAny>;
            type Error = std::convert::Infallible;
            const OUTPUT_TYPE: PyStaticExpr = type_hint_subscript!(
                type_hint_identifier!("numpy.typing", "NDArray"),
                type_hint_identifier!($module, $scalar)
            );

            fn into_pyobject(self, _: Python<'py>) -> Result<Self::Output, Self::Error> {
                Ok(self.0)
            }
        }
    };
}

array_type!(Real, "An array of real numbers.", "numpy", "float64");
array_type!(Complex, "An array of complex numbers.", "numpy", "complex128");
array_type!(Flags, "An array of truth values.", "numpy", "bool_");
array_type!(Names, "An array of names.", "numpy", "str_");

/// An iterator over arrays of real numbers.
pub(crate) struct Reals<'py>(pub Bound<'py, PyAny>);

impl<'py> IntoPyObject<'py> for Reals<'py> {
    type Target = PyAny;
    type Output = Bound<'py, PyAny>;
    type Error = std::convert::Infallible;
    const OUTPUT_TYPE: PyStaticExpr =
        type_hint_subscript!(type_hint_identifier!("collections.abc", "Iterator"), <Real<'py>>::OUTPUT_TYPE);

    fn into_pyobject(self, _: Python<'py>) -> Result<Self::Output, Self::Error> {
        Ok(self.0)
    }
}

/// An array that is made at first access and then handed out again.
pub(crate) struct Kept(PyOnceLock<Py<PyAny>>);

impl Default for Kept {
    fn default() -> Self {
        Self(PyOnceLock::new())
    }
}

impl Kept {
    fn get<'py, T: Element, D: Dimension>(
        &self,
        py: Python<'py>,
        make: impl FnOnce() -> PyResult<Array<T, D>>,
    ) -> PyResult<Bound<'py, PyAny>> {
        let kept = self.0.get_or_try_init(py, || PyResult::Ok(read_only(py, make()?)?.unbind()))?;
        Ok(kept.bind(py).clone())
    }

    pub(crate) fn real<'py, D: Dimension>(
        &self,
        py: Python<'py>,
        make: impl FnOnce() -> PyResult<Array<f64, D>>,
    ) -> PyResult<Real<'py>> {
        self.get(py, make).map(Real)
    }

    pub(crate) fn complex<'py, D: Dimension>(
        &self,
        py: Python<'py>,
        make: impl FnOnce() -> PyResult<Array<Complex64, D>>,
    ) -> PyResult<Complex<'py>> {
        self.get(py, make).map(Complex)
    }

    pub(crate) fn flags<'py>(&self, py: Python<'py>, flags: &[bool]) -> PyResult<Flags<'py>> {
        self.get(py, || Ok(Array::from(flags.to_vec()))).map(Flags)
    }

    pub(crate) fn names<'py>(&self, py: Python<'py>, names: &[String]) -> PyResult<Names<'py>> {
        let make = || {
            let array = py.import("numpy")?.call_method1("array", (names, "str"))?;
            array.call_method1("setflags", (false,))?;
            PyResult::Ok(array.unbind())
        };
        Ok(Names(self.0.get_or_try_init(py, make)?.bind(py).clone()))
    }
}

/// A NumPy array that owns its data and cannot be written to.
pub(crate) fn read_only<T: Element, D: Dimension>(py: Python<'_>, array: Array<T, D>) -> PyResult<Bound<'_, PyAny>> {
    let array: Bound<'_, PyArrayDyn<T>> = array.into_dyn().into_pyarray(py);
    array.try_readwrite()?.make_nonwriteable();
    Ok(array.into_any())
}

/// A nalgebra matrix as rows × columns.
pub(crate) fn matrix<T: Copy, R: Dim, C: Dim, S: RawStorage<T, R, C>>(
    matrix: &Matrix<T, R, C, S>,
) -> Array<T, numpy::Ix2> {
    Array::from_shape_fn(matrix.shape(), |(i, j)| matrix[(i, j)])
}

/// A slice as an array.
pub(crate) fn vector<T: Clone>(values: &[T]) -> Array<T, numpy::Ix1> {
    Array::from(values.to_vec())
}
