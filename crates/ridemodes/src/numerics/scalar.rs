//! The algebra that element laws and the assembly are written in.

use std::ops::{Add, AddAssign, Div, Mul, Neg, Sub};

/// A real number, a real number with its derivative, or several side by side.
///
/// There is no comparison on purpose: branches on a value (stop engaged, wheel lifted, valve shut)
/// are decided in `f64` and passed in, so that every lane and derivative takes the same one.
pub trait Scalar:
    Copy
    + Add<Output = Self>
    + Sub<Output = Self>
    + Mul<Output = Self>
    + Div<Output = Self>
    + Neg<Output = Self>
    + AddAssign
    + Add<f64, Output = Self>
    + Sub<f64, Output = Self>
    + Mul<f64, Output = Self>
    + Div<f64, Output = Self>
{
    /// A constant.
    fn constant(value: f64) -> Self;
    /// The value that decides branches.
    fn value(self) -> f64;
    /// Whether it is zero and does not change either.
    fn is_zero(self) -> bool;
    /// Whether it does not change.
    fn is_settled(self) -> bool;
    /// Square root.
    fn sqrt(self) -> Self;
    /// Exponential.
    fn exp(self) -> Self;
    /// Natural logarithm.
    fn ln(self) -> Self;
    /// A real power with a constant exponent.
    fn powf(self, exponent: f64) -> Self;
    /// Error function.
    fn erf(self) -> Self;
    /// Arc sine, for values within −1 and 1.
    fn asin(self) -> Self;

    /// Zero.
    fn zero() -> Self {
        Self::constant(0.0)
    }

    /// One.
    fn one() -> Self {
        Self::constant(1.0)
    }

    /// The square.
    fn square(self) -> Self {
        self * self
    }
}

impl Scalar for f64 {
    fn constant(value: f64) -> Self {
        value
    }
    fn value(self) -> f64 {
        self
    }
    fn is_zero(self) -> bool {
        self == 0.0
    }
    fn is_settled(self) -> bool {
        true
    }
    fn sqrt(self) -> Self {
        f64::sqrt(self)
    }
    fn exp(self) -> Self {
        f64::exp(self)
    }
    fn ln(self) -> Self {
        f64::ln(self)
    }
    fn powf(self, exponent: f64) -> Self {
        f64::powf(self, exponent)
    }
    fn erf(self) -> Self {
        libm::erf(self)
    }
    fn asin(self) -> Self {
        f64::asin(self)
    }
}
