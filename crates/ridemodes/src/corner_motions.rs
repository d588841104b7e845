//! Stiffness and damping of the suspension in heave, pitch, roll and warp.

use nalgebra::{Matrix2, Matrix3, Matrix4, Matrix4x3, SMatrix, Vector4};
use serde::{Deserialize, Serialize};

use crate::axes::{CORNERS, MOTION_NAMES, MOTIONS};
use crate::error::{Error, Result};
use crate::system::{Element, ElementKind, LinearSystem};

/// A 4 × 4 property of the suspension in the four motions, conventional part and oil apart.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct MotionMatrix {
    /// Springs, bars, links, dampers.
    pub conventional: Matrix4<f64>,
    /// Oil and gas.
    pub oil: Matrix4<f64>,
    /// Their sum.
    pub total: Matrix4<f64>,
    /// Off-diagonals of the sum, η_ij = K_ij/√(K_ii K_jj); 0 on the diagonal and where a K_ii is 0.
    pub cross: Matrix4<f64>,
}

impl MotionMatrix {
    fn new(conventional: Matrix4<f64>, oil: Matrix4<f64>) -> Self {
        let total = conventional + oil;
        let cross = Matrix4::from_fn(|i, j| {
            let scale = total[(i, i)] * total[(j, j)];
            if i == j || scale <= 0.0 { 0.0 } else { total[(i, j)] / scale.sqrt() }
        });
        Self { conventional, oil, total, cross }
    }
}

/// Rotational stiffness of the suspension about the roll axis, axle by axle [N·m/rad].
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
pub struct RollStiffness {
    /// Moment at the front axle per angle of body roll.
    pub front: f64,
    /// Moment at the rear axle.
    pub rear: f64,
    /// Both.
    pub total: f64,
}

/// The suspension in the four motions, at vanishing frequency (oil free to flow, gas by its exponent).
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct Motions {
    /// Stiffness TᵀK_δT/4 [N/m].
    pub stiffness: MotionMatrix,
    /// Damping TᵀC_δT/4 [N·s/m].
    pub damping: MotionMatrix,
    /// Stiffness of the suspension at the wheels, K_δ (4 × 4) [N/m]: column i is what wheel i sees.
    pub at_wheels: Matrix4<f64>,
    /// Damping at the wheels, C_δ (4 × 4) [N·s/m].
    pub damping_at_wheels: Matrix4<f64>,
    /// Stiffness at the ground with the body free and tyres in series, K_gg (4 × 4) [N/m].
    pub at_ground: Matrix4<f64>,
    /// Warp stiffness with the body free to follow, at the wheels [N/m].
    pub warp_free_wheels: f64,
    /// The same at the ground, tyres in series [N/m].
    pub warp_free_ground: f64,
    /// K_warp/K_roll of the sums.
    pub warp_to_roll: f64,
    /// Roll stiffness of the sum.
    pub roll: RollStiffness,
    /// Roll stiffness of the conventional part.
    pub roll_conventional: RollStiffness,
    /// Roll stiffness of the oil.
    pub roll_oil: RollStiffness,
    /// Undamped frequency of the front and the rear sprung mass alone on its axle, tyres in series [Hz].
    pub ride_frequency: [f64; 2],
    /// Where the body turns in its bounce mode, ahead of the centre of gravity [m]; infinite for pure bounce.
    pub bounce_centre: f64,
    /// Where it turns in its pitch mode [m].
    pub pitch_centre: f64,
    /// Names of the elements that hold or damp a motion.
    pub elements: Vec<String>,
    /// Stiffness each of them adds to the diagonal of the four motions (elements × 4) [N/m].
    pub element_stiffness: Vec<[f64; 4]>,
    /// Damping each of them adds (elements × 4) [N·s/m].
    pub element_damping: Vec<[f64; 4]>,
    /// What the engineer should know.
    pub warnings: Vec<String>,
    /// What is taken for granted, e.g. that a slow line is shut.
    pub assumptions: Vec<String>,
}

/// Couplings above this are warned of.
const NOTABLE_CROSS: f64 = 0.05;

fn patterns() -> Matrix4<f64> {
    Matrix4::from_fn(|i, j| MOTIONS[j][i])
}

/// TᵀXT/4: a corner matrix in the four motions.
pub(crate) fn in_motions(at_wheels: &Matrix4<f64>) -> Matrix4<f64> {
    let t = patterns();
    (t.transpose() * at_wheels * t) / 4.0
}

impl LinearSystem {
    /// Stiffness and damping of the suspension in the four motions. Slow lines are shut.
    ///
    /// # Errors
    /// [`Error::Singular`](crate::Error::Singular) where the body is free.
    pub fn motions(&self) -> Result<Motions> {
        self.with_slow_lines_shut()?.all_motions()
    }

    fn all_motions(&self) -> Result<Motions> {
        let still = self.quasi_static()?;
        let oil = |element: &Element| element.kind.is_hydraulic();
        let conventional = |element: &Element| !element.kind.is_hydraulic();
        let k_conventional = still.sum(self, |element| element.stiffness, conventional);
        let k_oil = still.sum(self, |element| element.stiffness, oil);
        let c_conventional = still.sum(self, |element| element.damping, conventional);
        let c_oil = still.sum(self, |element| element.damping, oil);
        let stiffness = MotionMatrix::new(in_motions(&k_conventional), in_motions(&k_oil));
        let damping = MotionMatrix::new(in_motions(&c_conventional), in_motions(&c_oil));
        let at_wheels = k_conventional + k_oil;
        let (x, y) = self.positions();
        let j = Matrix4x3::from_fn(|i, k| [1.0, -x.0[i], y.0[i]][k]);
        let tyres = Matrix4::from_diagonal(&Vector4::from_fn(|i, _| {
            self.elements
                .iter()
                .find(|element| element.kind == ElementKind::Tyre && element.road == Some(CORNERS[i]))
                .map_or(0.0, |tyre| tyre.stiffness)
        }));
        let at_ground = at_ground(&at_wheels, &tyres, &j)?;
        // Body free: K_δ − K_δ J (JᵀK_δJ)⁻¹ JᵀK_δ
        let body: Matrix3<f64> = j.transpose() * at_wheels * j;
        let inverse = body.cholesky().ok_or_else(free_body)?.inverse();
        let free = at_wheels - at_wheels * j * inverse * j.transpose() * at_wheels;
        let warp = Vector4::from(MOTIONS[3]);
        let of_warp = |matrix: &Matrix4<f64>| (warp.transpose() * matrix * warp)[0] / 4.0;
        let roll = |matrix: &Matrix4<f64>| {
            // Moment of an axle: Σ y_i F_i with F = K_δ δ and δ = −y φ
            let force = matrix * Vector4::from(y.0);
            let axle = |corners: [usize; 2]| corners.iter().map(|&i| y.0[i] * force[i]).sum::<f64>();
            let (front, rear) = (axle([0, 1]), axle([2, 3]));
            RollStiffness { front, rear, total: front + rear }
        };
        let (bounce_centre, pitch_centre) = centres(self, &at_wheels, &tyres, x.as_array());
        let mut elements = Vec::new();
        let (mut element_stiffness, mut element_damping) = (Vec::new(), Vec::new());
        for element in self.elements.iter().filter(|element| {
            (element.kind.is_hydraulic() || element.kind.is_conventional())
                && (element.stiffness != 0.0 || element.damping != 0.0)
        }) {
            let travel = Vector4::from(still.row(element));
            let in_motion: [f64; 4] = std::array::from_fn(|m| travel.dot(&Vector4::from(MOTIONS[m])).powi(2) / 4.0);
            elements.push(element.name.to_string());
            element_stiffness.push(in_motion.map(|square| element.stiffness * square));
            element_damping.push(in_motion.map(|square| element.damping * square));
        }
        let mut warnings = Vec::new();
        for (name, matrix) in [("stiffness", &stiffness), ("damping", &damping)] {
            for i in 0..4 {
                for k in i + 1..4 {
                    if matrix.cross[(i, k)].abs() > NOTABLE_CROSS {
                        warnings.push(format!(
                            "{name}: {} and {} are coupled by {:.1} %",
                            MOTION_NAMES[i],
                            MOTION_NAMES[k],
                            100.0 * matrix.cross[(i, k)]
                        ));
                    }
                }
            }
        }
        Ok(Motions {
            warp_to_roll: stiffness.total[(3, 3)] / stiffness.total[(2, 2)],
            roll: roll(&at_wheels),
            roll_conventional: roll(&k_conventional),
            roll_oil: roll(&k_oil),
            ride_frequency: ride_frequency(self, &at_wheels, &tyres),
            bounce_centre,
            pitch_centre,
            warp_free_wheels: of_warp(&free),
            warp_free_ground: of_warp(&at_ground),
            damping_at_wheels: c_conventional + c_oil,
            stiffness,
            damping,
            at_wheels,
            at_ground,
            elements,
            element_stiffness,
            element_damping,
            warnings,
            assumptions: self.point.assumptions(true),
        })
    }
}

fn free_body() -> Error {
    Error::Singular { matrix: "stiffness".into(), motion: "the body is free: nothing holds it on its wheels".into() }
}

// K_gg = K_t − GᵀK⁻¹G over body and wheels, G = [0; K_t]
fn at_ground(at_wheels: &Matrix4<f64>, tyres: &Matrix4<f64>, j: &Matrix4x3<f64>) -> Result<Matrix4<f64>> {
    let mut k = SMatrix::<f64, 7, 7>::zeros();
    k.fixed_view_mut::<3, 3>(0, 0).copy_from(&(j.transpose() * at_wheels * j));
    k.fixed_view_mut::<3, 4>(0, 3).copy_from(&(-(j.transpose() * at_wheels)));
    k.fixed_view_mut::<4, 3>(3, 0).copy_from(&(-(at_wheels * j)));
    k.fixed_view_mut::<4, 4>(3, 3).copy_from(&(at_wheels + tyres));
    let mut g = SMatrix::<f64, 7, 4>::zeros();
    g.fixed_view_mut::<4, 4>(3, 0).copy_from(tyres);
    let solved = k.cholesky().ok_or_else(free_body)?.solve(&g);
    Ok(tyres - g.transpose() * solved)
}

// √(k/m)/2π of an axle: its wheels moved alike, tyres in series, the sprung mass it carries.
fn ride_frequency(system: &LinearSystem, at_wheels: &Matrix4<f64>, tyres: &Matrix4<f64>) -> [f64; 2] {
    let loads = &system.point.corner_load.0;
    [[0, 1], [2, 3]].map(|[a, b]| {
        let suspension = at_wheels[(a, a)] + at_wheels[(b, b)] + 2.0 * at_wheels[(a, b)];
        let tyre = tyres[(a, a)] + tyres[(b, b)];
        let mass = (loads[a] + loads[b]) / crate::units::STANDARD_GRAVITY;
        (suspension * tyre / (suspension + tyre) / mass).sqrt() / (2.0 * std::f64::consts::PI)
    })
}

// Nodes of the two undamped modes of heave and pitch on springs and tyres in series, wheels without mass:
// z − xθ = 0 at x = z/θ. Bounce is the mode with more of its energy in heave.
fn centres(system: &LinearSystem, at_wheels: &Matrix4<f64>, tyres: &Matrix4<f64>, x: &[f64; 4]) -> (f64, f64) {
    let Some(inverse) = (at_wheels + tyres).try_inverse() else { return (f64::NAN, f64::NAN) };
    let series = tyres - tyres * inverse * tyres;
    let ones = Vector4::repeat(1.0);
    let arm = -Vector4::from(*x);
    let (m, i) = (system.mass[(0, 0)], system.mass[(1, 1)]);
    // Mass-scaled coordinates √m z, √I θ.
    let k = Matrix2::new(
        (ones.transpose() * series * ones)[0] / m,
        (ones.transpose() * series * arm)[0] / (m * i).sqrt(),
        (arm.transpose() * series * ones)[0] / (m * i).sqrt(),
        (arm.transpose() * series * arm)[0] / i,
    );
    let eigen = k.symmetric_eigen();
    let node = |mode: usize| {
        let (z, pitch) = (eigen.eigenvectors[(0, mode)] / m.sqrt(), eigen.eigenvectors[(1, mode)] / i.sqrt());
        if pitch == 0.0 { f64::INFINITY } else { z / pitch }
    };
    let bounce = usize::from(eigen.eigenvectors[(0, 1)].abs() > eigen.eigenvectors[(0, 0)].abs());
    (node(bounce), node(1 - bounce))
}
