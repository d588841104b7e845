//! What a law that is not linear amounts to at an amplitude: the coefficient that takes as much power.
//!
//! c = E[F v]/E[v²] (N6). For a Gaussian v of r.m.s. σ this is the mean slope E[F′] (Stein's identity), and for a
//! piecewise linear law the sum of its slopes, each with the chance of being on it (T. K. Caughey 1963, statistical
//! linearisation; from memory). For a sine of r.m.s. σ it is the describing function.

use std::f64::consts::{PI, SQRT_2};

use crate::numerics::Scalar;
use crate::spec::Motion;

/// A continuous law made of straight pieces: the slope below the first break, between breaks, above the last.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Pieces<T> {
    pub breaks: Vec<T>,
    pub slopes: Vec<T>,
}

impl<T: Scalar> Pieces<T> {
    /// The law through points; beyond its ends it goes on straight. Points from 0 upwards hold for both directions.
    pub(crate) fn through(x: &[T], y: &[T]) -> Self {
        let slope = |k: usize| (y[k + 1] - y[k]) / (x[k + 1] - x[k]);
        let last = x.len() - 1;
        let mut breaks: Vec<T> = x[1..last].to_vec();
        let mut slopes: Vec<T> = (0..last).map(slope).collect();
        if x[0].value() == 0.0 {
            breaks.splice(0..0, x[1..last].iter().rev().map(|&x| -x));
            slopes.splice(0..0, (1..last).rev().map(slope));
        }
        Self { breaks, slopes }
    }

    /// One slope below zero, another above.
    pub(crate) fn split(below: T, above: T) -> Self {
        Self { breaks: vec![T::zero()], slopes: vec![below, above] }
    }

    /// The equivalent coefficient at an r.m.s. amplitude.
    pub(crate) fn equivalent(&self, amplitude: T, motion: Motion) -> T {
        // (N7) c = Σ slope_k (W(x_k+1) − W(x_k)), with W rising from 0 to 1
        let mut total = self.slopes[0];
        for (k, &x) in self.breaks.iter().enumerate() {
            total += (self.slopes[k + 1] - self.slopes[k]) * (T::one() - weight_below(x / amplitude, motion));
        }
        total
    }
}

// Weight of what lies below x: the distribution function of a Gaussian, of a sine that of cos² over its phase.
fn weight_below<T: Scalar>(x: T, motion: Motion) -> T {
    match motion {
        Motion::Random => (x / SQRT_2).erf() * 0.5 + 0.5,
        Motion::Harmonic => {
            let sine = x / SQRT_2;
            if sine.value().abs() >= 1.0 {
                return T::constant(f64::from(sine.value() > 0.0));
            }
            // (N8) ½ + (t + sin t cos t)/π at sin t = x/x̂
            (sine.asin() + sine * (T::one() - sine.square()).sqrt()) / PI + 0.5
        }
    }
}

/// Of Δp = a Q|Q|: a √(8/π) σ on a random flow, 8 a Q̂/(3π) on a sine of peak Q̂ = √2 σ.
pub(crate) fn of_square_law<T: Scalar>(factor: T, amplitude: T, motion: Motion) -> T {
    match motion {
        Motion::Random => factor * amplitude * (8.0 / PI).sqrt(),
        Motion::Harmonic => factor * amplitude * (8.0 * SQRT_2 / (3.0 * PI)),
    }
}

/// Of dry friction F: √(2/π) F/σ on a random motion, 4 F/(π v̂) on a sine.
pub(crate) fn of_dry_friction<T: Scalar>(force: T, amplitude: T, motion: Motion) -> T {
    let share = match motion {
        Motion::Random => (2.0 / PI).sqrt(),
        Motion::Harmonic => 4.0 / (PI * SQRT_2),
    };
    force / amplitude * share
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    // E[F v]/E[v²] by the trapezoidal rule, over the Gaussian density or over a period of the sine.
    fn by_quadrature(law: impl Fn(f64) -> f64, sigma: f64, motion: Motion) -> f64 {
        let n = 200_000;
        let (mut power, mut square) = (0.0, 0.0);
        for k in 0..n {
            let (v, weight) = match motion {
                Motion::Random => {
                    let x = -10.0 + 20.0 * (k as f64 + 0.5) / f64::from(n);
                    (sigma * x, (-0.5 * x * x).exp())
                }
                Motion::Harmonic => (sigma * SQRT_2 * (2.0 * PI * (k as f64 + 0.5) / f64::from(n)).sin(), 1.0),
            };
            power += weight * law(v) * v;
            square += weight * v * v;
        }
        power / square
    }

    fn law(x: &[f64], y: &[f64], v: f64) -> f64 {
        let k = x.iter().rposition(|&x| x <= v).unwrap_or(0).min(x.len() - 2);
        y[k] + (y[k + 1] - y[k]) / (x[k + 1] - x[k]) * (v - x[k])
    }

    #[test]
    fn tables_take_as_much_power() {
        let (x, y) = ([-1.2, -0.3, 0.0, 0.2, 0.9], [-900.0, -420.0, 0.0, 510.0, 1300.0]);
        for motion in [Motion::Random, Motion::Harmonic] {
            for sigma in [0.02, 0.15, 0.6, 4.0] {
                let found = Pieces::through(&x, &y).equivalent(sigma, motion);
                let expected = by_quadrature(|v| law(&x, &y, v), sigma, motion);
                assert_relative_eq!(found, expected, max_relative = 1e-8);
            }
        }
    }

    #[test]
    fn a_table_from_zero_holds_both_ways() {
        let both = Pieces::through(&[-0.5, -0.1, 0.0, 0.1, 0.5], &[-9.0, -4.0, 0.0, 4.0, 9.0]);
        let one = Pieces::through(&[0.0, 0.1, 0.5], &[0.0, 4.0, 9.0]);
        assert_relative_eq!(one.equivalent(0.2, Motion::Random), both.equivalent(0.2, Motion::Random));
        assert_eq!(Pieces::through(&[0.0, 0.5], &[0.0, 9.0]).equivalent(0.2, Motion::Random), 18.0);
    }

    #[test]
    fn square_law_friction_and_split_take_as_much_power() {
        for motion in [Motion::Random, Motion::Harmonic] {
            let square = by_quadrature(|v| 3.0 * v * v.abs(), 0.4, motion);
            assert_relative_eq!(of_square_law(3.0, 0.4, motion), square, max_relative = 1e-8);
            let friction = by_quadrature(|v| 50.0 * v.signum(), 0.4, motion);
            assert_relative_eq!(of_dry_friction(50.0, 0.4, motion), friction, max_relative = 1e-8);
            assert_relative_eq!(Pieces::split(2.0, 5.0).equivalent(0.4, motion), 3.5, max_relative = 1e-14);
        }
    }
}
