//! First derivatives by forward differentiation.

use std::ops::{Add, AddAssign, Div, Mul, Neg, Sub};

use super::Scalar;

/// A value with its derivative with respect to one seed.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Dual {
    /// The value.
    pub value: f64,
    /// Its derivative.
    pub derivative: f64,
}

impl Dual {
    /// The variable that is differentiated by.
    pub const fn variable(value: f64) -> Self {
        Self { value, derivative: 1.0 }
    }

    // f(x) with f'(x) = slope: the chain rule.
    fn chain(self, value: f64, slope: f64) -> Self {
        Self { value, derivative: slope * self.derivative }
    }
}

impl Add for Dual {
    type Output = Self;
    fn add(self, other: Self) -> Self {
        Self { value: self.value + other.value, derivative: self.derivative + other.derivative }
    }
}

impl Sub for Dual {
    type Output = Self;
    fn sub(self, other: Self) -> Self {
        Self { value: self.value - other.value, derivative: self.derivative - other.derivative }
    }
}

impl Mul for Dual {
    type Output = Self;
    fn mul(self, other: Self) -> Self {
        Self {
            value: self.value * other.value,
            derivative: self.derivative * other.value + self.value * other.derivative,
        }
    }
}

impl Div for Dual {
    type Output = Self;
    fn div(self, other: Self) -> Self {
        let value = self.value / other.value;
        Self { value, derivative: (self.derivative - value * other.derivative) / other.value }
    }
}

impl Neg for Dual {
    type Output = Self;
    fn neg(self) -> Self {
        Self { value: -self.value, derivative: -self.derivative }
    }
}

impl AddAssign for Dual {
    fn add_assign(&mut self, other: Self) {
        *self = *self + other;
    }
}

impl Add<f64> for Dual {
    type Output = Self;
    fn add(self, other: f64) -> Self {
        self.chain(self.value + other, 1.0)
    }
}

impl Sub<f64> for Dual {
    type Output = Self;
    fn sub(self, other: f64) -> Self {
        self.chain(self.value - other, 1.0)
    }
}

impl Mul<f64> for Dual {
    type Output = Self;
    fn mul(self, other: f64) -> Self {
        self.chain(self.value * other, other)
    }
}

impl Div<f64> for Dual {
    type Output = Self;
    fn div(self, other: f64) -> Self {
        self.chain(self.value / other, 1.0 / other)
    }
}

impl Scalar for Dual {
    fn constant(value: f64) -> Self {
        Self { value, derivative: 0.0 }
    }
    fn value(self) -> f64 {
        self.value
    }
    fn is_zero(self) -> bool {
        self.value == 0.0 && self.derivative == 0.0
    }
    fn is_settled(self) -> bool {
        self.derivative == 0.0
    }
    fn sqrt(self) -> Self {
        let root = self.value.sqrt();
        self.chain(root, 0.5 / root)
    }
    fn exp(self) -> Self {
        let value = self.value.exp();
        self.chain(value, value)
    }
    fn ln(self) -> Self {
        self.chain(self.value.ln(), 1.0 / self.value)
    }
    fn powf(self, exponent: f64) -> Self {
        self.chain(self.value.powf(exponent), exponent * self.value.powf(exponent - 1.0))
    }
    fn erf(self) -> Self {
        // d erf/dx = 2/√π e^(−x²)
        self.chain(libm::erf(self.value), std::f64::consts::FRAC_2_SQRT_PI * (-self.value * self.value).exp())
    }
    fn asin(self) -> Self {
        self.chain(self.value.asin(), 1.0 / (1.0 - self.value * self.value).sqrt())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    // Every operation of the trait against a central difference.
    #[test]
    fn derivatives_match_central_differences() {
        fn all<T: Scalar>(x: T) -> T {
            let y = (x * 2.0 + 1.0).sqrt() / (x - 0.25) + x.exp() * x.ln()
                - x.powf(1.4) * (x / 3.0).erf() * (x / 5.0).asin();
            -(y.square() + T::constant(3.0) * x) / 2.0
        }
        for x in [0.6, 1.3, 4.0] {
            let h = 1e-6 * x;
            let numeric = (all(x + h) - all(x - h)) / (2.0 * h);
            let exact = all(Dual::variable(x));
            assert_eq!(exact.value, all(x));
            approx::assert_relative_eq!(exact.derivative, numeric, max_relative = 1e-8);
        }
    }
}
