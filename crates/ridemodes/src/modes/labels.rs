//! Names of modes, one to one.

use num_complex::Complex64;

use super::{RawMode, SHARE_NAMES, shares};
use crate::numerics::best_assignment;
use crate::system::LinearSystem;

pub(super) struct Labels {
    pub names: Vec<String>,
    pub unclear: Vec<bool>,
}

// Exchanging two labels that costs less than this share of energy is a near tie.
const NEAR_TIE: f64 = 0.1;

// Ties that are exact, as on a vehicle with like axles, go to the earlier motion at the lower
// frequency, whatever the rounding.
const TIE_BREAK: f64 = 1e-9;

/// The seven motions go to the modes with the largest total of kinetic shares; the rest is oil.
pub(super) fn undamped(system: &LinearSystem, modes: &[RawMode]) -> Labels {
    let share: Vec<[f64; 8]> = modes.iter().map(|mode| shares::kinetic(system, &mode.shape)).collect();
    let owner = best_assignment(7, modes.len(), |motion, mode| {
        share[mode][motion] - TIE_BREAK * (motion * (modes.len() - mode)) as f64
    });
    let mut labels = Labels { names: vec![String::new(); modes.len()], unclear: vec![false; modes.len()] };
    for (motion, &mode) in owner.iter().enumerate() {
        labels.names[mode] = SHARE_NAMES[motion].to_owned();
    }
    flag_near_ties(&mut labels, &share);
    number(&mut labels.names, |_| "oil");
    labels
}

// Flags two modes that could exchange their labels at little cost.
fn flag_near_ties(labels: &mut Labels, share: &[[f64; 8]]) {
    let motion = |name: &String| SHARE_NAMES[..7].iter().position(|known| known == name);
    let labelled: Vec<(usize, usize)> =
        labels.names.iter().enumerate().filter_map(|(mode, name)| Some((mode, motion(name)?))).collect();
    for (place, &(a, label_a)) in labelled.iter().enumerate() {
        for &(b, label_b) in &labelled[place + 1..] {
            let cost = share[a][label_a] + share[b][label_b] - share[a][label_b] - share[b][label_a];
            if label_a != label_b && cost < NEAR_TIE {
                labels.unclear[a] = true;
                labels.unclear[b] = true;
            }
        }
    }
}

/// Damped modes take the labels of the undamped modes they resemble, by shape and, where damping mixes
/// modes of nearly equal frequency anew, by their own share in the labelled motion. A motion with no
/// oscillating mode left is overdamped: two real poles carry its label.
pub(super) fn damped(system: &LinearSystem, modes: &[RawMode], reference: &[RawMode], labels: &Labels) -> Labels {
    let share: Vec<[f64; 8]> = modes.iter().map(|mode| shares::kinetic(system, &mode.shape)).collect();
    let motion: Vec<Option<usize>> =
        labels.names.iter().map(|name| SHARE_NAMES[..7].iter().position(|known| known == name)).collect();
    let likeness = |mode: usize, other: usize| {
        let own = motion[other].map_or(share[mode][7], |motion| share[mode][motion]);
        0.2 * assurance(system, &modes[mode].shape, &reference[other].shape) + 0.8 * own
    };
    let (oscillating, real): (Vec<usize>, Vec<usize>) = (0..modes.len()).partition(|&i| modes[i].pole.im > 0.0);
    let mut result = Labels { names: vec![String::new(); modes.len()], unclear: vec![false; modes.len()] };
    let mut left: Vec<usize> = (0..reference.len()).collect();
    let mut give = |mode: usize, other: usize, left: &mut Vec<usize>| {
        if !labels.names[other].starts_with("oil") {
            result.names[mode].clone_from(&labels.names[other]);
        }
        left.retain(|&i| i != other);
    };
    if oscillating.len() <= reference.len() {
        let chosen = best_assignment(oscillating.len(), reference.len(), |i, j| likeness(oscillating[i], j));
        for (i, j) in chosen.into_iter().enumerate() {
            give(oscillating[i], j, &mut left);
        }
    } else {
        let chosen = best_assignment(reference.len(), oscillating.len(), |j, i| likeness(oscillating[i], j));
        for (j, i) in chosen.into_iter().enumerate() {
            give(oscillating[i], j, &mut left);
        }
    }
    let mut free = real;
    for other in left.clone() {
        if labels.names[other].starts_with("oil") {
            continue;
        }
        // Of an overdamped motion λ₁λ₂ stays near ω²: shape and product choose its two poles.
        let omega = reference[other].pole.norm();
        let mut best: Option<(f64, usize, usize)> = None;
        for (a, &first) in free.iter().enumerate() {
            for &second in &free[a + 1..] {
                let product = (modes[first].pole.re * modes[second].pole.re).abs() / (omega * omega);
                let score = likeness(first, other).min(likeness(second, other)) * (-product.ln().abs()).exp();
                if best.is_none_or(|(most, ..)| score > most) {
                    best = Some((score, first, second));
                }
            }
        }
        if let Some((_, first, second)) = best {
            give(first, other, &mut left);
            give(second, other, &mut left);
            free.retain(|&i| i != first && i != second);
        }
    }
    flag_near_ties(&mut result, &share);
    number(&mut result.names, |i| if modes[i].pole.im > 0.0 { "oil" } else { "relaxation" });
    result
}

// Numbers the unnamed modes of each family in their order.
fn number(names: &mut [String], family: impl Fn(usize) -> &'static str) {
    let mut count = std::collections::HashMap::new();
    for (i, name) in names.iter_mut().enumerate() {
        if name.is_empty() {
            let next = count.entry(family(i)).or_insert(0);
            *next += 1;
            *name = format!("{} {next}", family(i));
        }
    }
}

/// Mass-weighted modal assurance criterion |φᴴMψ|²/(φᴴMφ ψᴴMψ), 0 to 1.
pub(crate) fn assurance(system: &LinearSystem, a: &[Complex64], b: &[Complex64]) -> f64 {
    let mass = system.mass();
    let form = |x: &[Complex64], y: &[Complex64]| -> Complex64 {
        let mut total = Complex64::new(0.0, 0.0);
        for (i, x) in x.iter().enumerate() {
            for (j, y) in y.iter().enumerate() {
                let m = mass[(i, j)];
                if m != 0.0 {
                    total += x.conj() * m * y;
                }
            }
        }
        total
    };
    let scale = form(a, a).re * form(b, b).re;
    if scale > 0.0 { form(a, b).norm_sqr() / scale } else { 0.0 }
}
