//! Modes.

use pyo3::exceptions::{PyIndexError, PyKeyError};
use pyo3::prelude::*;
use ridemodes::Modes as Core;

use crate::arrays::{Complex, Flags, Kept, Names, Real, vector};
use crate::errors::labelled;
use crate::table::{Table, result_class};

/// Modes of a linear system, one row for each pole in the closed upper half-plane, by ascending frequency.
#[pyclass(frozen, sequence, module = "ridemodes")]
pub(crate) struct Modes {
    pub core: Core,
    kept: [Kept; 11],
}

impl Modes {
    pub(crate) fn new(core: Core) -> Self {
        Self { core, kept: Default::default() }
    }

    fn tables(&self) -> PyResult<ridemodes::Tables> {
        Ok(ridemodes::Tables(vec![self.core.table()]))
    }
}

/// A row by number or by label.
#[derive(FromPyObject)]
pub(crate) enum Row {
    Number(isize),
    Label(String),
}

result_class! {
    Modes, Core;

    /// In words, whether the modes are damped and what the oil does.
    #[getter]
    fn kind(&self) -> &'static str {
        self.core.kind.name()
    }

    /// Poles [rad/s].
    #[getter]
    fn pole<'py>(&self, py: Python<'py>) -> PyResult<Complex<'py>> {
        self.kept[0].complex(py, || Ok(vector(&self.core.pole)))
    }

    /// Natural frequencies, the pole's magnitude over 2 pi [Hz].
    #[getter]
    fn frequency<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[1].real(py, || Ok(vector(&self.core.frequency)))
    }

    /// Damping ratios [1].
    #[getter]
    fn damping_ratio<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[2].real(py, || Ok(vector(&self.core.damping_ratio)))
    }

    /// Labels: seven mechanical motions, ``oil 1`` and so on, ``relaxation 1`` and so on.
    ///
    /// A pair of poles gone real carries its label twice.
    #[getter]
    fn label<'py>(&self, py: Python<'py>) -> PyResult<Names<'py>> {
        self.kept[3].names(py, &self.core.label)
    }

    /// Whether the label is a near tie with another mode's.
    #[getter]
    fn unclear<'py>(&self, py: Python<'py>) -> PyResult<Flags<'py>> {
        self.kept[4].flags(py, &self.core.unclear)
    }

    /// Shapes, modes x coordinates; the component of most kinetic energy is 1.
    #[getter]
    fn shape<'py>(&self, py: Python<'py>) -> PyResult<Complex<'py>> {
        self.kept[5].complex(py, || Ok(self.core.shape.clone()))
    }

    /// Shares of kinetic energy, modes x 8 in the order of `share_names`; rows sum to 1.
    #[getter]
    fn share<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[6].real(py, || Ok(self.core.share.clone()))
    }

    /// Names of the columns of `share`.
    #[getter]
    fn share_names(&self) -> Vec<&'static str> {
        ridemodes::SHARE_NAMES.to_vec()
    }

    /// Shares of kinetic energy in heave, pitch, roll, warp and the oil, modes x 5; rows sum to 1.
    #[getter]
    fn motion_share<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[7].real(py, || Ok(self.core.motion_share.clone()))
    }

    /// Names of the columns of `motion_share`.
    #[getter]
    fn motion_share_names(&self) -> Vec<&'static str> {
        ridemodes::MOTION_SHARE_NAMES.to_vec()
    }

    /// Shares of strain energy, modes x elements.
    #[getter]
    fn strain_share<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[8].real(py, || Ok(self.core.strain.clone()))
    }

    /// Shares of dissipation, modes x elements; zero without damping.
    #[getter]
    fn dissipation_share<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[9].real(py, || Ok(self.core.dissipation.clone()))
    }

    /// What is taken for granted, e.g. that a slow line is shut.
    #[getter]
    fn assumptions(&self) -> Vec<String> {
        self.core.assumptions.clone()
    }

    /// Names of the coordinates, the columns of `shape`.
    #[getter]
    fn coordinates(&self) -> Vec<String> {
        self.core.coordinates.clone()
    }

    /// Names of the elements, the columns of `strain_share` and `dissipation_share`.
    #[getter]
    fn elements(&self) -> Vec<String> {
        self.core.elements.clone()
    }

    /// Positions of the corners from the centre of gravity, x forward and y left, 2 x 4 [m].
    #[getter]
    fn positions<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[10].real(py, || Ok(ridemodes::ndarray::arr2(&self.core.positions)))
    }

    fn __len__(&self) -> usize {
        self.core.len()
    }

    /// Rows that carry a label, ascending in frequency.
    ///
    /// Parameters
    /// ----------
    /// label : str
    ///     E.g. ``body roll``.
    ///
    /// Returns
    /// -------
    /// list of int
    ///     One row, two of an overdamped motion, none for an unknown label.
    fn rows(&self, label: &str) -> Vec<usize> {
        self.core.rows(label)
    }

    /// Where a mode's strain energy and dissipation are, as a table, the largest first.
    ///
    /// Parameters
    /// ----------
    /// row : int or str
    ///     Row, or label (of an overdamped motion its slower pole).
    ///
    /// Returns
    /// -------
    /// Table
    ///
    /// Raises
    /// ------
    /// IndexError
    ///     For a row that is not there.
    /// KeyError
    ///     For a label that is not there.
    #[pyo3(signature = (row: "int | str") -> "Table")]
    fn energy_table(&self, row: Row) -> PyResult<Table> {
        let count = self.core.len();
        let row = match row {
            Row::Number(number) => {
                let from_end = if number < 0 { number + count as isize } else { number };
                usize::try_from(from_end)
                    .ok()
                    .filter(|row| *row < count)
                    .ok_or_else(|| PyIndexError::new_err(format!("row {number} of {count} modes")))?
            }
            Row::Label(label) => *self.core.rows(&label).first().ok_or_else(|| {
                PyKeyError::new_err(format!("no mode \"{label}\"; labels are {}", self.core.label.join(", ")))
            })?,
        };
        Ok(self.core.energy_table(row).into())
    }

    /// The modes as a table for people: the seven mechanical ones first, then oil, then relaxation.
    ///
    /// Returns
    /// -------
    /// Table
    fn table(&self) -> Table {
        self.core.table().into()
    }

    /// The modes as an `xarray.Dataset` with units.
    ///
    /// Returns
    /// -------
    /// xarray.Dataset
    #[pyo3(signature = () -> "xarray.Dataset")]
    fn to_xarray<'py>(slf: &Bound<'py, Self>) -> PyResult<Bound<'py, PyAny>> {
        labelled(slf, "modes_to_xarray")
    }

    /// Frequencies, damping and shares as a `pandas.DataFrame`.
    ///
    /// Returns
    /// -------
    /// pandas.DataFrame
    #[pyo3(signature = () -> "pandas.DataFrame")]
    fn to_dataframe<'py>(slf: &Bound<'py, Self>) -> PyResult<Bound<'py, PyAny>> {
        labelled(slf, "modes_to_dataframe")
    }
}
