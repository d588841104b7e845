//! The linear system: M, C and K as sums over a list of named elements.

mod assembly;
mod cache;
mod canonical;
mod coupling;
mod state_space;

use std::sync::Arc;

use nalgebra::{DMatrix, Matrix4xX};
use serde::{Deserialize, Serialize};

use crate::axes::{Corner, MECHANICAL_NAMES, PerCorner};
use crate::error::{Error, Result};
use crate::numerics::Scalar;
use crate::statics::{OperatingPoint, Positions};

pub(crate) use assembly::{SlowLines, assemble};
pub(crate) use cache::Cache;
pub(crate) use canonical::Canonical;
pub(crate) use coupling::QuasiStatic;
pub use state_space::StateSpace;

/// What an element is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum ElementKind {
    /// Unsprung mass.
    WheelMass,
    /// Tyre.
    Tyre,
    /// Suspension spring.
    Spring,
    /// Bump or rebound stop that is engaged.
    Stop,
    /// Turning of a spring's force by a motion ratio that changes.
    Geometry,
    /// Moment of the leaned body's weight, with the inertia of the same motion.
    Gravity,
    /// Anti-roll bar.
    AntiRollBar,
    /// Mechanical link between wheels.
    Link,
    /// Damper.
    Damper,
    /// Dry friction of seals and bushes, as a damper at its amplitude.
    Friction,
    /// Mount in series with a damper.
    Mount,
    /// Gas of an accumulator.
    Gas,
    /// Compressibility of oil.
    Oil,
    /// Turning of a cylinder's force by a motion ratio that changes.
    OilGeometry,
    /// Swell of hoses.
    Hose,
    /// Throttle.
    Throttle,
    /// Valve, as a throttle at its amplitude.
    Valve,
    /// Line: friction and inertia of its oil.
    Line,
}

impl ElementKind {
    /// Whether the element belongs to the oil network.
    pub fn is_hydraulic(self) -> bool {
        matches!(
            self,
            Self::Gas | Self::Oil | Self::OilGeometry | Self::Hose | Self::Throttle | Self::Valve | Self::Line
        )
    }

    /// Whether the element acts between wheel and body, mechanically.
    pub fn is_conventional(self) -> bool {
        matches!(
            self,
            Self::Spring
                | Self::Stop
                | Self::Geometry
                | Self::AntiRollBar
                | Self::Link
                | Self::Damper
                | Self::Friction
                | Self::Mount
        )
    }

    /// The kind in words.
    pub fn name(self) -> &'static str {
        match self {
            Self::WheelMass => "wheel mass",
            Self::Tyre => "tyre",
            Self::Spring => "spring",
            Self::Stop => "stop",
            Self::Geometry => "geometry",
            Self::Gravity => "gravity",
            Self::AntiRollBar => "anti-roll bar",
            Self::Link => "link",
            Self::Damper => "damper",
            Self::Friction => "friction",
            Self::Mount => "mount",
            Self::Gas => "gas",
            Self::Oil => "oil",
            Self::OilGeometry => "oil geometry",
            Self::Hose => "hose",
            Self::Throttle => "throttle",
            Self::Valve => "valve",
            Self::Line => "line",
        }
    }
}

/// A named element: it adds m·g gᵀ, c·g gᵀ and k·g gᵀ to mass, damping and stiffness.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct Element<T = f64> {
    /// Name, e.g. `front_left.spring` or `circuits.left.accumulators.main.gas`.
    pub name: Arc<str>,
    /// What it is.
    pub kind: ElementKind,
    /// Its row g over the coordinates.
    pub row: Vec<T>,
    /// Mass or inertance m.
    pub mass: T,
    /// Damping or resistance c.
    pub damping: T,
    /// Stiffness k (of a store of volume: its share of 1/C).
    pub stiffness: T,
    /// Wheel whose road height moves its other end.
    pub road: Option<Corner>,
}

/// A node of the oil with its pressure per coordinate.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub(crate) struct PressureRow<T = f64> {
    pub name: Arc<str>,
    /// Inflow over the coordinates [m³ per coordinate].
    pub inflow: Vec<T>,
    /// Compliance [m³/Pa].
    pub compliance: T,
}

/// Elements over the coordinates, in any scalar.
pub(crate) struct Assembly<T> {
    pub coordinates: Vec<Arc<str>>,
    /// Coordinates that are volumes moved through lines, and such that relax in gas.
    pub volumes: Vec<usize>,
    pub gases: Vec<usize>,
    pub body: [[T; 3]; 3],
    pub elements: Vec<Element<T>>,
    pub pressures: Vec<PressureRow<T>>,
    pub positions: Positions<T>,
    /// Circulations: the coordinate that stands for each, and its shape over all coordinates.
    pub circulations: Vec<(usize, Vec<f64>)>,
    /// A chamber whose flow some line carries whole, incompressible as it is.
    pub carried: Option<String>,
}

/// Mass, damping and stiffness over the coordinates, at an operating point.
///
/// Coordinates are deviations: body z [m], pitch and roll [rad], four wheels [m], then volumes moved
/// through lines [m³] and inner coordinates, by name. All matrices are symmetric; the mass matrix
/// may be singular.
#[derive(Clone, Debug, Serialize, Deserialize, PartialEq)]
pub struct LinearSystem {
    pub(crate) point: OperatingPoint,
    pub(crate) coordinates: Vec<String>,
    volumes: Vec<usize>,
    gases: Vec<usize>,
    gravity: bool,
    pub(crate) elements: Vec<Element>,
    pub(crate) pressures: Vec<PressureRow>,
    pub(crate) positions: Positions<f64>,
    /// Mass block of the body over z, pitch and roll.
    pub(crate) body: [[f64; 3]; 3],
    pub(crate) mass: DMatrix<f64>,
    pub(crate) damping: DMatrix<f64>,
    pub(crate) stiffness: DMatrix<f64>,
    pub(crate) circulations: Vec<(usize, Vec<f64>)>,
    carried: Option<String>,
    #[serde(skip)]
    quasi_static: Cache<Result<QuasiStatic>>,
    #[serde(skip)]
    damped: Cache<Result<Canonical>>,
    #[serde(skip)]
    shut: Cache<Result<Box<LinearSystem>>>,
}

impl OperatingPoint {
    /// The linear system about this operating point.
    pub fn linear(&self) -> Result<LinearSystem> {
        LinearSystem::new(self, SlowLines::Flow, false)
    }

    /// The same with the moment of the leaned body's weight, K_φφ − m g h′, and the inertia of the same motion about the
    /// roll axis, M_φφ + m h′².
    pub fn linear_with_gravity(&self) -> Result<LinearSystem> {
        LinearSystem::new(self, SlowLines::Flow, true)
    }
}

// Σ s g gᵀ over the elements, with the body's mass as the one block.
fn sum<T: Scalar>(
    assembly: &Assembly<T>,
    scalar: impl Fn(&Element<T>) -> T,
    body: Option<&[[T; 3]; 3]>,
) -> DMatrix<f64> {
    let n = assembly.coordinates.len();
    let mut matrix = DMatrix::zeros(n, n);
    if let Some(body) = body {
        for i in 0..3 {
            for j in 0..3 {
                matrix[(i, j)] = body[i][j].value();
            }
        }
    }
    for element in &assembly.elements {
        let s = scalar(element).value();
        if s == 0.0 {
            continue;
        }
        for i in 0..n {
            let g = element.row[i].value();
            if g != 0.0 {
                for j in 0..=i {
                    matrix[(i, j)] += s * g * element.row[j].value();
                }
            }
        }
    }
    matrix.fill_upper_triangle_with_lower_triangle();
    matrix
}

impl LinearSystem {
    fn new(point: &OperatingPoint, slow: SlowLines, gravity: bool) -> Result<Self> {
        let car = &point.car;
        let at = point.at(car.numbers());
        let payload = &point.condition.payload;
        let assembly: Assembly<f64> = assemble(car.structure(), car.numbers(), &at, payload, slow, gravity)?;
        let mass = sum(&assembly, |element| element.mass, Some(&assembly.body));
        let damping = sum(&assembly, |element| element.damping, None);
        let stiffness = sum(&assembly, |element| element.stiffness, None);
        Ok(Self {
            point: point.clone(),
            coordinates: assembly.coordinates.iter().map(ToString::to_string).collect(),
            volumes: assembly.volumes,
            gases: assembly.gases,
            gravity,
            elements: assembly.elements,
            pressures: assembly.pressures,
            positions: assembly.positions,
            body: assembly.body,
            mass,
            damping,
            stiffness,
            circulations: assembly.circulations,
            carried: assembly.carried,
            quasi_static: Cache::default(),
            damped: Cache::default(),
            shut: Cache::default(),
        })
    }

    /// The system with slow lines shut, which is itself where there are none.
    pub(crate) fn with_slow_lines_shut(&self) -> Result<&Self> {
        if self.point.slow_lines.is_empty() {
            return Ok(self);
        }
        let shut = self.shut.get(|| Self::new(&self.point, SlowLines::Shut, self.gravity).map(Box::new));
        shut.as_ref().map(|shut| &**shut).map_err(Clone::clone)
    }

    /// The system with every line locked: volumes stay where they are.
    pub(crate) fn locked(&self) -> Result<Self> {
        if let Some(chamber) = &self.carried {
            return Err(Error::Singular {
                matrix: "compliance of the oil with its lines locked".into(),
                motion: format!(
                    "incompressible oil locks the chamber {chamber}; give the oil a bulk modulus and a volume"
                ),
            });
        }
        let keep: Vec<usize> = (0..self.coordinates.len()).filter(|i| !self.volumes.contains(i)).collect();
        let matrix = |full: &DMatrix<f64>| DMatrix::from_fn(keep.len(), keep.len(), |i, j| full[(keep[i], keep[j])]);
        let row = |full: &Vec<f64>| keep.iter().map(|&i| full[i]).collect::<Vec<f64>>();
        Ok(Self {
            point: self.point.clone(),
            coordinates: keep.iter().map(|&i| self.coordinates[i].clone()).collect(),
            volumes: Vec::new(),
            gases: (0..keep.len()).filter(|&i| self.gases.contains(&keep[i])).collect(),
            gravity: self.gravity,
            elements: self
                .elements
                .iter()
                .map(|element| Element { row: row(&element.row), ..element.clone() })
                .collect(),
            pressures: self
                .pressures
                .iter()
                .map(|pressure| PressureRow { inflow: row(&pressure.inflow), ..pressure.clone() })
                .collect(),
            positions: self.positions,
            body: self.body,
            mass: matrix(&self.mass),
            damping: matrix(&self.damping),
            stiffness: matrix(&self.stiffness),
            circulations: Vec::new(),
            carried: None,
            quasi_static: Cache::default(),
            damped: Cache::default(),
            shut: Cache::default(),
        })
    }

    /// Whether the moment of the leaned body's weight is taken in.
    pub fn has_gravity(&self) -> bool {
        self.gravity
    }

    /// The operating point it is taken at.
    pub fn point(&self) -> &OperatingPoint {
        &self.point
    }

    /// Names of the coordinates: the seven mechanical ones, then volumes and inner ones by name.
    pub fn coordinates(&self) -> &[String] {
        &self.coordinates
    }

    /// Unit of each coordinate.
    pub fn coordinate_units(&self) -> Vec<&'static str> {
        let unit = |index: usize| match index {
            1 | 2 => "rad",
            _ if self.volumes.contains(&index) || self.gases.contains(&index) => "m^3",
            _ => "m",
        };
        (0..self.coordinates.len()).map(unit).collect()
    }

    /// Coordinates that are volumes moved through lines.
    pub(crate) fn volumes(&self) -> &[usize] {
        &self.volumes
    }

    /// The elements that the matrices are made of.
    pub fn elements(&self) -> &[Element] {
        &self.elements
    }

    /// Mass matrix M.
    pub fn mass(&self) -> &DMatrix<f64> {
        &self.mass
    }

    /// Damping matrix C.
    pub fn damping(&self) -> &DMatrix<f64> {
        &self.damping
    }

    /// Stiffness matrix K.
    pub fn stiffness(&self) -> &DMatrix<f64> {
        &self.stiffness
    }

    /// Force on the coordinates per road height under each wheel (n × 4) [N/m].
    pub fn road_stiffness(&self) -> DMatrix<f64> {
        self.road(|element| element.stiffness)
    }

    /// Force on the coordinates per road velocity under each wheel (n × 4) [N·s/m].
    pub fn road_damping(&self) -> DMatrix<f64> {
        self.road(|element| element.damping)
    }

    fn road(&self, scalar: impl Fn(&Element) -> f64) -> DMatrix<f64> {
        let mut matrix = DMatrix::zeros(self.coordinates.len(), 4);
        for element in &self.elements {
            if let Some(corner) = element.road {
                for (i, g) in element.row.iter().enumerate() {
                    matrix[(i, corner.index())] += scalar(element) * g;
                }
            }
        }
        matrix
    }

    /// Suspension deflections over the coordinates, δ = L u (4 × n), bump positive.
    pub fn deflection(&self) -> Matrix4xX<f64> {
        let mut l = Matrix4xX::zeros(self.coordinates.len());
        for i in 0..4 {
            // δ = w − (z − xθ + yφ)
            l[(i, 0)] = -1.0;
            l[(i, 1)] = self.positions.x.0[i];
            l[(i, 2)] = -self.positions.y.0[i];
            l[(i, 3 + i)] = 1.0;
        }
        l
    }

    /// Names and absolute pressures of the nodes that have compliance are the rows of the pressure
    /// output; these are their names.
    pub fn pressure_names(&self) -> Vec<&str> {
        self.pressures.iter().map(|row| &*row.name).collect()
    }

    /// Pressure rise of each compliant node per coordinate [Pa].
    pub(crate) fn pressure(&self) -> DMatrix<f64> {
        DMatrix::from_fn(self.pressures.len(), self.coordinates.len(), |i, j| {
            self.pressures[i].inflow[j] / self.pressures[i].compliance
        })
    }

    pub(crate) fn canonical(&self) -> Result<&Canonical> {
        self.damped.get(|| Canonical::new(self, true)).as_ref().map_err(Clone::clone)
    }

    pub(crate) fn quasi_static(&self) -> Result<&QuasiStatic> {
        self.quasi_static.get(|| QuasiStatic::new(self)).as_ref().map_err(Clone::clone)
    }

    pub(crate) fn positions(&self) -> (&PerCorner<f64>, &PerCorner<f64>) {
        (&self.positions.x, &self.positions.y)
    }
}

pub(crate) fn mechanical_names() -> impl Iterator<Item = Arc<str>> {
    MECHANICAL_NAMES.into_iter().map(Arc::from)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::statics::{Condition, Payload};
    use crate::vehicle::Vehicle;

    // K at a state, volumes and inner coordinates condensed, against central differences of the nonlinear forces: at rest,
    // in a corner, on a stop, with a motion ratio that changes, with real nitrogen, with relaxation.
    #[test]
    fn stiffness_is_the_slope_of_the_forces() {
        let mut hard = Vehicle::example("roadster").unwrap().to_value();
        for axle in ["front", "rear"] {
            let corner = &mut hard[axle]["both"];
            corner["bump_stop"] = serde_json::json!({ "gap": 0.01, "rate": 4e4, "cubic": 3e7 });
            corner["spring"]["motion_ratio_slope"] = 0.8.into();
            corner["spring"]["cubic"] = 4e6.into();
            corner["cylinder"]["motion_ratio_slope"] = (-0.6).into();
        }
        let mut nitrogen = hard.clone();
        nitrogen["layout"]["accumulators"]["main"]["gas"] = "nitrogen".into();
        let mut relaxing = hard.clone();
        relaxing["layout"]["accumulators"]["main"]["relaxation_time"] = 5.0.into();
        let cars = [
            (Vehicle::example("roadster").unwrap(), true),
            (Vehicle::example("field_sprayer").unwrap(), true),
            (Vehicle::from_value(&hard).unwrap(), true),
            (Vehicle::from_value(&nitrogen).unwrap(), true),
            (Vehicle::from_value(&relaxing).unwrap(), false),
        ];
        for (car, fast) in &cars {
            for lateral in [0.0, 3.0, 5.5] {
                let condition = Condition {
                    lateral,
                    longitudinal: -2.0,
                    temperature: Some(305.0),
                    fast: *fast,
                    ..Condition::default()
                };
                let point = car.settle_under(&condition).unwrap();
                let lin = point.linear_with_gravity().unwrap();
                let lin = lin.with_slow_lines_shut().unwrap();
                let n = lin.coordinates().len();
                let unit: Vec<f64> = (0..n).map(|i| 1.0 / lin.stiffness()[(i, i)].abs().sqrt()).collect();
                let part = |rows: std::ops::Range<usize>, columns: std::ops::Range<usize>| {
                    let (first, left) = (rows.start, columns.start);
                    DMatrix::from_fn(rows.len(), columns.len(), |i, j| {
                        let (i, j) = (i + first, j + left);
                        lin.stiffness()[(i, j)] * unit[i] * unit[j]
                    })
                };
                let across = part(7..n, 0..7);
                let solved = part(7..n, 7..n).lu().solve(&across).unwrap();
                let condensed = part(0..7, 0..7) - across.transpose() * solved;
                let numeric = point.numeric_tangent(1e-5);
                let largest = numeric.iter().flatten().fold(0.0_f64, |most, entry| most.max(entry.abs()));
                for i in 0..7 {
                    for j in 0..7 {
                        let found = condensed[(i, j)] / (unit[i] * unit[j]);
                        let error = (found - numeric[i][j]).abs();
                        assert!(error <= 1e-7 * largest, "{lateral} {i} {j}: {found} against {}", numeric[i][j]);
                    }
                }
            }
        }
        // Payload: the same about the common centre of gravity, whose height is z less the lever of the attitude.
        let car = &cars[0].0;
        let payload = vec![Payload { mass: 120.0, x: -0.5, y: 0.3, z: 0.2 }];
        let lin = car.settle_under(&Condition { payload, ..Condition::default() }).unwrap().linear().unwrap();
        assert!((lin.mass()[(0, 0)] - 1200.0).abs() < 1e-9);
        let reduced = 120.0 * 1080.0 / 1200.0;
        assert!((lin.mass()[(2, 2)] - (390.0 + reduced * (0.09 + 0.04))).abs() < 1e-9);
        assert!((lin.mass()[(1, 1)] - (1480.0 + reduced * (0.25 + 0.04))).abs() < 1e-9);
        assert!((lin.mass()[(1, 2)] - (14.0 + reduced * 0.15)).abs() < 1e-9);
    }
}
