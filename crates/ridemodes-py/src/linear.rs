//! The linear system, its elements and its state space.

use pyo3::exceptions::{PyIndexError, PyValueError};
use pyo3::prelude::*;
use ridemodes::{LinearSystem as Core, ModeKind};

use crate::arrays::{Complex, Kept, Real, Reals, matrix, read_only, vector};
use crate::convert::frequencies;
use crate::errors::{labelled, raise};
use crate::frequency::FrequencyResponse;
use crate::modes::Modes;
use crate::motions::Motions;
use crate::point::OperatingPoint;
use crate::sensitivities::Sensitivities;
use crate::table::{Table, result_class};

/// A named element: it adds ``mass``, ``damping`` and ``stiffness`` times ``outer(row, row)`` to the matrices.
#[pyclass(frozen, module = "ridemodes")]
pub(crate) struct Element {
    core: ridemodes::Element,
    row: Kept,
}

impl Element {
    fn new(core: ridemodes::Element) -> Self {
        Self { core, row: Kept::default() }
    }

    fn text(&self) -> String {
        let e = &self.core;
        format!(
            "Element({}: {}, mass {:.4e}, damping {:.4e}, stiffness {:.4e})",
            e.name,
            e.kind.name(),
            e.mass,
            e.damping,
            e.stiffness
        )
    }
}

#[pymethods]
impl Element {
    /// Name, e.g. ``front_left.spring``.
    #[getter]
    fn name(&self) -> &str {
        &self.core.name
    }

    /// What it is, e.g. ``spring`` or ``gas``.
    #[getter]
    fn kind(&self) -> &'static str {
        self.core.kind.name()
    }

    /// Row over the coordinates.
    #[getter]
    fn row<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.row.real(py, || Ok(vector(&self.core.row)))
    }

    /// Mass or inertance.
    #[getter]
    fn mass(&self) -> f64 {
        self.core.mass
    }

    /// Damping or resistance.
    #[getter]
    fn damping(&self) -> f64 {
        self.core.damping
    }

    /// Stiffness; of a store of volume its share of one over the node's compliance.
    #[getter]
    fn stiffness(&self) -> f64 {
        self.core.stiffness
    }

    /// Wheel whose road height moves its other end.
    #[getter]
    fn road(&self) -> Option<&'static str> {
        self.core.road.map(ridemodes::Corner::name)
    }

    fn __repr__(&self) -> String {
        self.text()
    }

    fn __eq__(&self, other: &Bound<'_, PyAny>) -> PyResult<bool> {
        match other.cast::<Self>() {
            Ok(other) => crate::convert::equal(&self.core, &other.get().core),
            Err(_) => Ok(false),
        }
    }

    #[pyo3(signature = () -> "tuple[object, tuple[bytes]]")]
    fn __reduce__<'py>(slf: &Bound<'py, Self>) -> PyResult<(Bound<'py, PyAny>, (Bound<'py, pyo3::types::PyBytes>,))> {
        let bytes = crate::convert::bytes(&slf.get().core)?;
        Ok((slf.get_type().getattr("_restore")?, (pyo3::types::PyBytes::new(slf.py(), &bytes),)))
    }

    #[staticmethod]
    fn _restore(data: &[u8]) -> PyResult<Self> {
        crate::convert::value(data).map(Self::new)
    }
}

/// Mass, damping and stiffness over the coordinates, at an operating point.
///
/// Coordinates are deviations: body z [m], pitch and roll [rad], four wheels [m], then volumes moved through
/// lines [m^3] and inner coordinates, by name.
#[pyclass(frozen, module = "ridemodes")]
pub(crate) struct LinearSystem {
    core: Core,
    kept: [Kept; 7],
}

impl LinearSystem {
    pub(crate) fn new(core: Core) -> Self {
        Self { core, kept: Default::default() }
    }

    fn tables(&self) -> PyResult<ridemodes::Tables> {
        Ok(ridemodes::Tables(vec![self.core.table(), self.core.coupling_table().map_err(raise)?]))
    }
}

result_class! {
    LinearSystem, Core;

    /// The operating point it is taken at.
    #[getter]
    fn point(&self) -> OperatingPoint {
        OperatingPoint::new(self.core.point().clone())
    }

    /// Names of the coordinates.
    #[getter]
    fn coordinates(&self) -> Vec<String> {
        self.core.coordinates().to_vec()
    }

    /// Units of the coordinates.
    #[getter]
    fn coordinate_units(&self) -> Vec<&'static str> {
        self.core.coordinate_units()
    }

    /// The elements that the matrices are made of, the body's mass apart.
    #[getter]
    fn elements(&self) -> Vec<Element> {
        self.core.elements().iter().cloned().map(Element::new).collect()
    }

    /// Mass matrix, n x n.
    #[getter]
    fn mass<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[0].real(py, || Ok(matrix(self.core.mass())))
    }

    /// Damping matrix, n x n.
    #[getter]
    fn damping<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[1].real(py, || Ok(matrix(self.core.damping())))
    }

    /// Stiffness matrix, n x n.
    #[getter]
    fn stiffness<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[2].real(py, || Ok(matrix(self.core.stiffness())))
    }

    /// Force on the coordinates per road height under each wheel, n x 4.
    #[getter]
    fn road_stiffness<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[3].real(py, || Ok(matrix(&self.core.road_stiffness())))
    }

    /// Force on the coordinates per road velocity under each wheel, n x 4.
    #[getter]
    fn road_damping<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[4].real(py, || Ok(matrix(&self.core.road_damping())))
    }

    /// Suspension deflections over the coordinates, 4 x n, bump positive.
    #[getter]
    fn deflection<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[5].real(py, || Ok(matrix(&self.core.deflection())))
    }

    /// Quasi-static coupling of the oil at the wheels, 4 x 4 [N/m]: force against bump per bump.
    #[getter]
    fn coupling<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.kept[6].real(py, || Ok(matrix(&self.core.coupling().map_err(raise)?)))
    }

    /// Dynamic coupling of the oil at the wheels.
    ///
    /// Parameters
    /// ----------
    /// frequency : float or array_like
    ///     Frequencies [Hz]; 0 gives `coupling`.
    ///
    /// Returns
    /// -------
    /// numpy.ndarray
    ///     Complex, 4 x 4 x frequencies [N/m]: stiffness as real part, damping times angular frequency as
    ///     imaginary part.
    ///
    /// Raises
    /// ------
    /// Singular
    ///     At an undamped resonance of the oil.
    #[pyo3(signature = (frequency: "numpy.typing.ArrayLike") -> "numpy.typing.NDArray[numpy.complex128]")]
    fn dynamic_coupling<'py>(&self, py: Python<'py>, frequency: &Bound<'py, PyAny>) -> PyResult<Complex<'py>> {
        let frequency = frequencies(frequency)?;
        let result = py.detach(|| self.core.dynamic_coupling(&frequency)).map_err(raise)?;
        read_only(py, result).map(Complex)
    }

    /// Response to the road under each wheel, to force and moments on the body and to volume put into the nodes.
    ///
    /// Outputs are body accelerations, accelerations of the seats, deflections, changes of tyre load (compression
    /// positive), pressures of the nodes and flows of the lines. Every equation is solved as it stands at each frequency.
    ///
    /// Parameters
    /// ----------
    /// frequency : float or array_like, optional
    ///     Frequencies [Hz]; left out, a grid from 0.05 to 50 Hz that lies closer about every pole.
    ///
    /// Returns
    /// -------
    /// FrequencyResponse
    ///
    /// Raises
    /// ------
    /// Singular
    ///     At an undamped resonance.
    #[pyo3(signature = (frequency: "numpy.typing.ArrayLike | None" = None) -> "FrequencyResponse")]
    fn frequency_response(&self, py: Python<'_>, frequency: Option<&Bound<'_, PyAny>>) -> PyResult<FrequencyResponse> {
        let given = frequency.map(frequencies).transpose()?;
        let respond = || {
            let grid = given.map_or_else(|| self.core.frequency_grid(0.05, 50.0), Ok)?;
            self.core.frequency_response(&grid)
        };
        py.detach(respond).map(FrequencyResponse::new).map_err(raise)
    }

    /// Stiffness and damping in heave, pitch, roll and warp.
    ///
    /// Returns
    /// -------
    /// Motions
    ///
    /// Raises
    /// ------
    /// Singular
    ///     Where nothing holds the body.
    fn motions(&self, py: Python<'_>) -> PyResult<Motions> {
        py.detach(|| self.core.motions()).map(Motions::new).map_err(raise)
    }

    /// The modes.
    ///
    /// Parameters
    /// ----------
    /// damped : bool
    ///     With all damping and every state; otherwise without damping, the oil flowing freely.
    /// locked : bool
    ///     Without damping: with no flow in any line.
    ///
    /// Returns
    /// -------
    /// Modes
    ///
    /// Raises
    /// ------
    /// Singular
    ///     Where a motion is free; the error names it.
    #[pyo3(signature = (*, damped = true, locked = false))]
    fn modes(&self, py: Python<'_>, damped: bool, locked: bool) -> PyResult<Modes> {
        let kind = match (damped, locked) {
            (true, false) => ModeKind::Damped,
            (false, false) => ModeKind::Undamped,
            (false, true) => ModeKind::Locked,
            (true, true) => return Err(PyValueError::new_err("locked lines have no damping: give damped=False")),
        };
        py.detach(|| self.core.modes_of(kind)).map(Modes::new).map_err(raise)
    }

    /// Derivatives of modes, motions and coupling with respect to every number of the vehicle, all at once.
    ///
    /// Returns
    /// -------
    /// Sensitivities
    ///
    /// Raises
    /// ------
    /// Singular
    ///     Where a motion is free.
    fn sensitivities(&self, py: Python<'_>) -> PyResult<Sensitivities> {
        py.detach(|| self.core.sensitivities()).map(Sensitivities::new).map_err(raise)
    }

    /// The system as state space, for `scipy.signal` or python-control.
    ///
    /// Returns
    /// -------
    /// StateSpace
    ///     Unpacks to ``A, B, C, D``.
    fn state_space(&self, py: Python<'_>) -> PyResult<StateSpace> {
        py.detach(|| self.core.state_space()).map(StateSpace::new).map_err(raise)
    }

    /// Coordinates and coupling as a table.
    ///
    /// Returns
    /// -------
    /// Table
    fn table(&self) -> PyResult<Table> {
        self.tables().map(Table)
    }

    /// The coupling of the oil as a table.
    ///
    /// Returns
    /// -------
    /// Table
    fn coupling_table(&self) -> PyResult<Table> {
        Ok(self.core.coupling_table().map_err(raise)?.into())
    }

    /// The matrices as an `xarray.Dataset`.
    ///
    /// Returns
    /// -------
    /// xarray.Dataset
    #[pyo3(signature = () -> "xarray.Dataset")]
    fn to_xarray<'py>(slf: &Bound<'py, Self>) -> PyResult<Bound<'py, PyAny>> {
        labelled(slf, "linear_to_xarray")
    }
}

/// State space: x' = A x + B u, y = C x + D u.
///
/// Inputs are four road heights [m] and their velocities [m/s]. Unpacks to ``A, B, C, D``.
#[pyclass(frozen, sequence, module = "ridemodes")]
pub(crate) struct StateSpace {
    core: ridemodes::StateSpace,
    kept: [Kept; 4],
}

impl StateSpace {
    fn new(core: ridemodes::StateSpace) -> Self {
        Self { core, kept: Default::default() }
    }

    fn tables(&self) -> PyResult<ridemodes::Tables> {
        Ok(ridemodes::Tables(vec![self.core.table()]))
    }

    fn part<'py>(&self, py: Python<'py>, part: usize) -> PyResult<Real<'py>> {
        let core = &self.core;
        self.kept[part].real(py, || Ok(matrix([&core.a, &core.b, &core.c, &core.d][part])))
    }
}

result_class! {
    StateSpace, ridemodes::StateSpace;

    /// State matrix, states x states.
    #[getter(A)]
    fn a<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.part(py, 0)
    }

    /// Input matrix, states x 8.
    #[getter(B)]
    fn b<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.part(py, 1)
    }

    /// Output matrix, outputs x states.
    #[getter(C)]
    fn c<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.part(py, 2)
    }

    /// Feedthrough, outputs x 8.
    #[getter(D)]
    fn d<'py>(&self, py: Python<'py>) -> PyResult<Real<'py>> {
        self.part(py, 3)
    }

    /// Names of the states.
    #[getter]
    fn states(&self) -> Vec<String> {
        self.core.states.clone()
    }

    /// Names of the inputs.
    #[getter]
    fn inputs(&self) -> Vec<String> {
        self.core.inputs.clone()
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

    fn __len__(&self) -> usize {
        4
    }

    fn __getitem__<'py>(&self, py: Python<'py>, index: isize) -> PyResult<Real<'py>> {
        match if index < 0 { index + 4 } else { index } {
            part @ 0..4 => self.part(py, part as usize),
            _ => Err(PyIndexError::new_err("a state space has A, B, C and D")),
        }
    }

    fn __iter__<'py>(&self, py: Python<'py>) -> PyResult<Reals<'py>> {
        let parts = (0..4).map(|part| self.part(py, part)).collect::<PyResult<Vec<_>>>()?;
        Ok(Reals(pyo3::types::PyTuple::new(py, parts)?.try_iter()?.into_any()))
    }
}
