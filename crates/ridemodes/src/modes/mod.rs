//! Undamped and damped modes with their shapes, shares and labels.

mod damped;
mod labels;
mod shares;
mod undamped;

use ndarray::Array2;
use num_complex::Complex64;
use serde::{Deserialize, Serialize};

use crate::axes::MOTION_NAMES;
use crate::error::Result;
use crate::system::{ElementKind, LinearSystem};

/// Names of the seven mechanical motions and the oil, in the order of `Modes::share`.
pub const SHARE_NAMES: [&str; 8] =
    ["body heave", "body pitch", "body roll", "wheel heave", "wheel pitch", "wheel roll", "wheel warp", "oil"];

/// Names of the columns of `Modes::motion_share`.
pub const MOTION_SHARE_NAMES: [&str; 5] = ["heave", "pitch", "roll", "warp", "oil"];

/// Which damping and which oil the modes are taken with.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Default, Serialize, Deserialize)]
pub enum ModeKind {
    /// All damping, every state.
    #[default]
    Damped,
    /// No damping; oil flows freely and acts by its quasi-static coupling, gas is isothermal where it relaxes.
    Undamped,
    /// No damping and no flow in any line: oil acts by what is trapped at its nodes.
    Locked,
}

impl ModeKind {
    /// The kind in words.
    pub fn name(self) -> &'static str {
        match self {
            Self::Damped => "damped",
            Self::Undamped => "undamped, oil flowing freely",
            Self::Locked => "undamped, lines locked",
        }
    }
}

/// Modes of a linear system, one row for each pole in the closed upper half-plane, by ascending
/// frequency.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct Modes {
    /// With or without damping.
    pub kind: ModeKind,
    /// Poles λ [rad/s].
    pub pole: Vec<Complex64>,
    /// Natural frequency |λ|/2π [Hz].
    pub frequency: Vec<f64>,
    /// Damping ratio −Re λ/|λ|.
    pub damping_ratio: Vec<f64>,
    /// Label, e.g. `body heave`, `oil 1`, `relaxation 1`.
    pub label: Vec<String>,
    /// Whether the label is a near tie with another mode's.
    pub unclear: Vec<bool>,
    /// Shapes over the coordinates (modes × coordinates); the component of most kinetic energy is 1.
    pub shape: Array2<Complex64>,
    /// Share of kinetic energy in seven motions and the oil (modes × 8), rows sum to 1.
    pub share: Array2<f64>,
    /// The same in heave, pitch, roll, warp and the oil (modes × 5).
    pub motion_share: Array2<f64>,
    /// Share of strain energy in each element (modes × elements).
    pub strain: Array2<f64>,
    /// Share of dissipation in each element (modes × elements); zero without damping.
    pub dissipation: Array2<f64>,
    /// Names of the coordinates.
    pub coordinates: Vec<String>,
    /// Names of the elements.
    pub elements: Vec<String>,
    /// What each element is.
    pub element_kinds: Vec<ElementKind>,
    /// Corner positions from the centre of gravity, x and y [m].
    pub positions: [[f64; 4]; 2],
    /// What is taken for granted, e.g. that a slow line is shut.
    pub assumptions: Vec<String>,
}

/// A pole with its shape over all coordinates, before it is labelled.
pub(crate) struct RawMode {
    pub pole: Complex64,
    pub shape: Vec<Complex64>,
}

impl LinearSystem {
    /// Modes with all damping: every pole, complex shapes, real relaxation modes too.
    ///
    /// # Errors
    /// [`Error::Singular`](crate::Error::Singular) where a motion is free.
    pub fn modes(&self) -> Result<Modes> {
        self.modes_of(ModeKind::Damped)
    }

    /// Modes of a kind; see [`ModeKind`].
    ///
    /// # Errors
    /// [`Error::Singular`](crate::Error::Singular) where a motion is free.
    pub fn modes_of(&self, kind: ModeKind) -> Result<Modes> {
        match kind {
            ModeKind::Undamped => {
                let (modes, labels) = self.undamped()?;
                Ok(Modes::new(self, kind, modes, labels))
            }
            ModeKind::Locked => {
                let locked = self.with_slow_lines_shut()?.locked()?;
                let modes = undamped::solve(&locked)?;
                let labels = labels::undamped(&locked, &modes);
                Ok(Modes::new(&locked, kind, modes, labels))
            }
            ModeKind::Damped => {
                let (reference, names) = self.undamped()?;
                let modes = damped::solve(self)?;
                let labels = labels::damped(self, &modes, &reference, &names);
                Ok(Modes::new(self, kind, modes, labels))
            }
        }
    }
}

impl LinearSystem {
    // Slow lines are shut: their volumes stand still.
    fn undamped(&self) -> Result<(Vec<RawMode>, labels::Labels)> {
        let shut = self.with_slow_lines_shut()?;
        let mut modes = undamped::solve(shut)?;
        let labels = labels::undamped(shut, &modes);
        if !std::ptr::eq(shut, self) {
            for mode in &mut modes {
                mode.shape = self.spread(shut, &mode.shape);
            }
        }
        Ok((modes, labels))
    }

    // A shape over the coordinates of a system with fewer, over all of them.
    fn spread(&self, part: &Self, shape: &[Complex64]) -> Vec<Complex64> {
        let place = |name: &String| part.coordinates().iter().position(|known| known == name);
        self.coordinates().iter().map(|name| place(name).map_or(Complex64::ZERO, |i| shape[i])).collect()
    }
}

impl Modes {
    fn new(system: &LinearSystem, kind: ModeKind, mut modes: Vec<RawMode>, labels: labels::Labels) -> Self {
        for mode in &mut modes {
            shares::scale(system, &mut mode.shape);
        }
        let (count, n) = (modes.len(), system.coordinates().len());
        let share = Array2::from_shape_fn((count, 8), |_| 0.0);
        let mut result = Self {
            kind,
            pole: modes.iter().map(|mode| mode.pole).collect(),
            frequency: modes.iter().map(|mode| mode.pole.norm() / (2.0 * std::f64::consts::PI)).collect(),
            damping_ratio: modes
                .iter()
                // −Re λ/|λ|, and 0 rather than −0 without damping
                .map(|mode| 0.0 - mode.pole.re / mode.pole.norm())
                .collect(),
            label: labels.names,
            unclear: labels.unclear,
            shape: Array2::from_shape_fn((count, n), |(i, j)| modes[i].shape[j]),
            share,
            motion_share: Array2::zeros((count, 5)),
            strain: Array2::zeros((count, system.elements().len())),
            dissipation: Array2::zeros((count, system.elements().len())),
            coordinates: system.coordinates().to_vec(),
            elements: system.elements().iter().map(|element| element.name.to_string()).collect(),
            element_kinds: system.elements().iter().map(|element| element.kind).collect(),
            positions: [*system.positions().0.as_array(), *system.positions().1.as_array()],
            assumptions: system.point().assumptions(kind != ModeKind::Damped),
        };
        for (i, mode) in modes.iter().enumerate() {
            let kinetic = shares::kinetic(system, &mode.shape);
            for (j, &value) in kinetic.iter().enumerate() {
                result.share[(i, j)] = value;
            }
            for (j, value) in shares::motions(&kinetic).into_iter().enumerate() {
                result.motion_share[(i, j)] = value;
            }
            let strain = shares::elements(system, &mode.shape, |element| element.stiffness);
            let dissipation = shares::elements(system, &mode.shape, |element| element.damping);
            for (j, (strain, dissipation)) in strain.into_iter().zip(dissipation).enumerate() {
                result.strain[(i, j)] = strain;
                if kind == ModeKind::Damped {
                    result.dissipation[(i, j)] = dissipation;
                }
            }
        }
        result
    }

    /// Number of modes.
    pub fn len(&self) -> usize {
        self.pole.len()
    }

    /// Whether there is none.
    pub fn is_empty(&self) -> bool {
        self.pole.is_empty()
    }

    /// Rows in the order of tables for people: the seven mechanical motions, then oil, then relaxation.
    pub fn reading_order(&self) -> Vec<usize> {
        let rank = |row: &usize| {
            SHARE_NAMES[..7]
                .iter()
                .position(|name| *name == self.label[*row])
                .unwrap_or(if self.label[*row].starts_with("oil") { 7 } else { 8 })
        };
        let mut order: Vec<usize> = (0..self.len()).collect();
        order.sort_by_key(rank);
        order
    }

    /// Rows that carry a label, ascending in frequency.
    pub fn rows(&self, label: &str) -> Vec<usize> {
        (0..self.len()).filter(|&row| self.label[row] == label).collect()
    }

    /// The four-motion name that holds most of a mode's kinetic energy.
    pub fn main_motion(&self, row: usize) -> &'static str {
        let shares = self.motion_share.row(row);
        let best = (0..4).fold(0, |best, j| if shares[j] > shares[best] { j } else { best });
        MOTION_NAMES[best]
    }
}
