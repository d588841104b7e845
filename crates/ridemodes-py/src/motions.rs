//! The four motions.

use pyo3::prelude::*;
use ridemodes::Motions as Core;
use ridemodes::ndarray::Array2;

use crate::arrays::{Kept, Real, matrix, vector};
use crate::errors::labelled;
use crate::table::{Table, result_class};

/// The suspension in heave, pitch, roll and warp, at vanishing frequency.
///
/// Matrices are 4 x 4 in the order of `names`; of the corners in the order front left, front right, rear
/// left, rear right.
#[pyclass(frozen, module = "ridemodes")]
pub(crate) struct Motions {
    core: Core,
    kept: [Kept; 16],
}

impl Motions {
    pub(crate) fn new(core: Core) -> Self {
        Self { core, kept: Default::default() }
    }

    fn tables(&self) -> PyResult<ridemodes::Tables> {
        Ok(self.core.tables())
    }
}

result_class! {
    Motions, Core;

    /// Names of the motions: heave, pitch, roll, warp.
    #[getter]
    fn names(&self) -> Vec<&'static str> {
        ridemodes::MOTION_NAMES.to_vec()
    }

    /// Stiffness of conventional part and oil together, 4 x 4 [N/m].
    #[getter]
    fn stiffness<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[0].real(py, || Ok(matrix(&self.core.stiffness.total)))
    }

    /// Stiffness of springs and bars, 4 x 4 [N/m].
    #[getter]
    fn stiffness_conventional<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[1].real(py, || Ok(matrix(&self.core.stiffness.conventional)))
    }

    /// Stiffness of oil and gas, 4 x 4 [N/m].
    #[getter]
    fn stiffness_oil<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[2].real(py, || Ok(matrix(&self.core.stiffness.oil)))
    }

    /// Off-diagonals of the stiffness over the root of the diagonals, 4 x 4 [1]; diagonal zero.
    #[getter]
    fn stiffness_cross<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[3].real(py, || Ok(matrix(&self.core.stiffness.cross)))
    }

    /// Damping of dampers and oil together, 4 x 4 [N*s/m].
    #[getter]
    fn damping<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[4].real(py, || Ok(matrix(&self.core.damping.total)))
    }

    /// Damping of the dampers, 4 x 4 [N*s/m].
    #[getter]
    fn damping_conventional<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[5].real(py, || Ok(matrix(&self.core.damping.conventional)))
    }

    /// Damping of throttles and lines, 4 x 4 [N*s/m].
    #[getter]
    fn damping_oil<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[6].real(py, || Ok(matrix(&self.core.damping.oil)))
    }

    /// Off-diagonals of the damping over the root of the diagonals, 4 x 4 [1]; diagonal zero.
    #[getter]
    fn damping_cross<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[7].real(py, || Ok(matrix(&self.core.damping.cross)))
    }

    /// Stiffness of the suspension at the wheels, 4 x 4 [N/m]; column i is what raising wheel i meets.
    #[getter]
    fn at_wheels<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[8].real(py, || Ok(matrix(&self.core.at_wheels)))
    }

    /// Damping of the suspension at the wheels, 4 x 4 [N*s/m].
    #[getter]
    fn damping_at_wheels<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[9].real(py, || Ok(matrix(&self.core.damping_at_wheels)))
    }

    /// Stiffness at the ground with the body free and tyres in series, 4 x 4 [N/m].
    #[getter]
    fn at_ground<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[10].real(py, || Ok(matrix(&self.core.at_ground)))
    }

    /// Warp stiffness with the body free to follow, at the wheels [N/m].
    #[getter]
    fn warp_free_wheels(&self) -> f64 {
        self.core.warp_free_wheels
    }

    /// Warp stiffness with the body free to follow, at the ground, tyres in series [N/m].
    #[getter]
    fn warp_free_ground(&self) -> f64 {
        self.core.warp_free_ground
    }

    /// Warp over roll stiffness [1].
    #[getter]
    fn warp_to_roll(&self) -> f64 {
        self.core.warp_to_roll
    }

    /// Moment per angle of body roll at the front axle, the rear axle and in total [N*m/rad].
    #[getter]
    fn roll_stiffness<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[11].real(py, || Ok(roll(&self.core.roll)))
    }

    /// The conventional part of `roll_stiffness` [N*m/rad].
    #[getter]
    fn roll_stiffness_conventional<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[12].real(py, || Ok(roll(&self.core.roll_conventional)))
    }

    /// The oil's part of `roll_stiffness` [N*m/rad].
    #[getter]
    fn roll_stiffness_oil<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[13].real(py, || Ok(roll(&self.core.roll_oil)))
    }

    /// Undamped frequency of front and rear on their axles alone, tyres in series [Hz].
    #[getter]
    fn ride_frequency(&self) -> (f64, f64) {
        self.core.ride_frequency.into()
    }

    /// Where the body turns in its bounce mode, ahead of the centre of gravity [m]; infinite for pure bounce.
    #[getter]
    fn bounce_centre(&self) -> f64 {
        self.core.bounce_centre
    }

    /// Where the body turns in its pitch mode, ahead of the centre of gravity [m].
    #[getter]
    fn pitch_centre(&self) -> f64 {
        self.core.pitch_centre
    }

    /// Names of the elements that hold or damp a motion.
    #[getter]
    fn elements(&self) -> Vec<String> {
        self.core.elements.clone()
    }

    /// Stiffness each element adds to the motions, elements x 4 [N/m].
    #[getter]
    fn element_stiffness<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[14].real(py, || Ok(rows(&self.core.element_stiffness)))
    }

    /// Damping each element adds to the motions, elements x 4 [N*s/m].
    #[getter]
    fn element_damping<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[15].real(py, || Ok(rows(&self.core.element_damping)))
    }

    /// Couplings above 5 %.
    #[getter]
    fn warnings(&self) -> Vec<String> {
        self.core.warnings.clone()
    }

    /// What is taken for granted, e.g. that a slow line is shut.
    #[getter]
    fn assumptions(&self) -> Vec<String> {
        self.core.assumptions.clone()
    }

    /// Everything as a table, for people.
    ///
    /// Returns
    /// -------
    /// Table
    fn table(&self) -> Table {
        Table(self.core.tables())
    }

    /// The matrices as an `xarray.Dataset` with units.
    ///
    /// Returns
    /// -------
    /// xarray.Dataset
    #[pyo3(signature = () -> "xarray.Dataset")]
    fn to_xarray<'py>(slf: &Bound<'py, Self>) -> PyResult<Bound<'py, PyAny>> {
        labelled(slf, "motions_to_xarray")
    }

    /// Stiffness and damping of each motion as a `pandas.DataFrame`.
    ///
    /// Returns
    /// -------
    /// pandas.DataFrame
    #[pyo3(signature = () -> "pandas.DataFrame")]
    fn to_dataframe<'py>(slf: &Bound<'py, Self>) -> PyResult<Bound<'py, PyAny>> {
        labelled(slf, "motions_to_dataframe")
    }
}

fn roll(roll: &ridemodes::RollStiffness) -> numpy::ndarray::Array1<f64> {
    vector(&[roll.front, roll.rear, roll.total])
}

fn rows(rows: &[[f64; 4]]) -> Array2<f64> {
    Array2::from_shape_fn((rows.len(), 4), |(i, j)| rows[i][j])
}
