//! Real nitrogen.
//!
//! R. Span, E. W. Lemmon, R. T. Jacobsen, W. Wagner & A. Yokozeki, J. Phys. Chem. Ref. Data 29 (2000) 1361–1433: the
//! reduced Helmholtz energy α(δ, τ) with δ = ρ/ρ_c and τ = T_c/T. Their four terms about the critical point are left
//! out: above 200 K they are below 1e-30.

use crate::numerics::Scalar;

/// Real nitrogen above 200 K.
pub(crate) struct Nitrogen;

const CRITICAL_TEMPERATURE: f64 = 126.192; // K
const CRITICAL_DENSITY: f64 = 11_183.901_464_580_624 * 0.028_013_48; // kg/m³
const GAS_CONSTANT: f64 = 8.314_51 / 0.028_013_48; // J/(kg·K)

// (n, d, t, l): n δ^d τ^t e^(−δ^l), without the exponential at l = 0.
const TERMS: [(f64, i32, f64, i32); 32] = [
    (0.924_803_575_275, 1, 0.25, 0),
    (-0.492_448_489_428, 1, 0.875, 0),
    (0.661_883_336_938, 2, 0.5, 0),
    (-1.929_026_492_01, 2, 0.875, 0),
    (-0.062_246_930_962_9, 3, 0.375, 0),
    (0.349_943_957_581, 3, 0.75, 0),
    (0.564_857_472_498, 1, 0.5, 1),
    (-1.617_200_059_87, 1, 0.75, 1),
    (-0.481_395_031_883, 1, 2.0, 1),
    (0.421_150_636_384, 3, 1.25, 1),
    (-0.016_196_223_082_5, 3, 3.5, 1),
    (0.172_100_994_165, 4, 1.0, 1),
    (0.007_354_489_249_33, 6, 0.5, 1),
    (0.016_807_730_547_9, 6, 3.0, 1),
    (-0.001_076_266_641_79, 7, 0.0, 1),
    (-0.013_731_808_851_3, 7, 2.75, 1),
    (0.000_635_466_899_859, 8, 0.75, 1),
    (0.003_044_322_794_19, 8, 2.5, 1),
    (-0.043_576_233_604_5, 1, 4.0, 2),
    (-0.072_317_488_931_6, 2, 6.0, 2),
    (0.038_964_431_527_2, 3, 6.0, 2),
    (-0.021_220_136_391, 4, 3.0, 2),
    (0.004_088_229_815_09, 5, 3.0, 2),
    (-5.519_900_179_84e-5, 8, 6.0, 2),
    (-0.046_201_671_647_9, 4, 16.0, 3),
    (-0.003_003_117_160_11, 5, 11.0, 3),
    (0.036_882_589_120_8, 5, 15.0, 3),
    (-0.002_558_568_462_2, 8, 12.0, 3),
    (0.008_969_152_645_58, 3, 12.0, 4),
    (-0.004_415_133_703_5, 5, 7.0, 4),
    (0.001_337_229_248_58, 6, 4.0, 4),
    (0.000_264_832_491_957, 9, 16.0, 4),
];

/// δ and τ derivatives of the residual part, each times its powers of δ and τ.
struct Residual<T> {
    /// δ α_δ
    d: T,
    /// δ² α_δδ
    dd: T,
    /// τ α_τ
    t: T,
    /// τ² α_ττ
    tt: T,
    /// δ τ α_δτ
    dt: T,
    /// α
    value: T,
}

fn residual<T: Scalar>(density: T, temperature: T) -> Residual<T> {
    let delta = density / CRITICAL_DENSITY;
    let tau = T::constant(CRITICAL_TEMPERATURE) / temperature;
    let (ln_delta, ln_tau) = (delta.ln(), tau.ln());
    let mut sum =
        Residual { d: T::zero(), dd: T::zero(), t: T::zero(), tt: T::zero(), dt: T::zero(), value: T::zero() };
    // δ^l for l = 1 to 4 is shared.
    let powers = [T::zero(), delta, delta.square(), delta.square() * delta, delta.square().square()];
    for &(n, d, t, l) in &TERMS {
        let (d, l_real) = (f64::from(d), f64::from(l));
        let damped = powers[l as usize];
        let term = (ln_delta * d + ln_tau * t - damped).exp() * n;
        // δ ∂/∂δ of ln term = d − l δ^l
        let slope = -(damped * l_real) + d;
        sum.value += term;
        sum.d += term * slope;
        sum.dd += term * (slope.square() - slope - damped * (l_real * l_real));
        sum.t += term * t;
        sum.tt += term * (t * (t - 1.0));
        sum.dt += term * slope * t;
    }
    sum
}

// τ² α⁰_ττ and the entropy part τ α⁰_τ − α⁰ of the ideal gas, less ln δ.
fn ideal<T: Scalar>(temperature: T) -> (T, T) {
    let tau = T::constant(CRITICAL_TEMPERATURE) / temperature;
    let x = T::constant(3364.011) / temperature;
    let decay = (-x).exp();
    let powers = [(-0.000_193_481_9, -1.0), (-1.247_742e-5, -2.0), (6.678_326e-8, -3.0)];
    // 1.012941 ln(1 − e^(−x)) is the vibration of the molecule.
    let vibration = (T::one() - decay).ln() * 1.012_941;
    let vibration_slope = x * decay / (T::one() - decay) * 1.012_941;
    let mut curvature = -(x.square() * decay / (T::one() - decay).square() * 1.012_941) - 2.5;
    let mut entropy = T::constant(2.5 + 12.769_527_08) - tau.ln() * 2.5 + vibration_slope - vibration;
    for (n, t) in powers {
        let term = (tau.ln() * t).exp() * n;
        curvature += term * (t * (t - 1.0));
        entropy += term * (t - 1.0);
    }
    (curvature, entropy)
}

impl Nitrogen {
    /// (O5) p = ρ R T (1 + δ α_δ) [Pa]
    pub(crate) fn pressure<T: Scalar>(density: T, temperature: T) -> T {
        density * temperature * GAS_CONSTANT * (residual(density, temperature).d + 1.0)
    }

    // (∂p/∂ρ)_T = R T (1 + 2 δ α_δ + δ² α_δδ)
    fn slope<T: Scalar>(density: T, temperature: T) -> T {
        let r = residual(density, temperature);
        temperature * GAS_CONSTANT * (r.d * 2.0 + r.dd + 1.0)
    }

    /// Density at a pressure and temperature [kg/m³].
    pub(crate) fn density<T: Scalar>(pressure: T, temperature: T) -> T {
        let (p, t) = (pressure.value(), temperature.value());
        let mut density = p / (GAS_CONSTANT * t);
        for _ in 0..60 {
            let step = (Self::pressure(density, t) - p) / Self::slope(density, t);
            // p rises with ρ above the critical temperature; half the density is far enough for one step.
            density -= step.clamp(-density, 0.5 * density);
            if step.abs() <= 1e-15 * density {
                break;
            }
        }
        // One step more in the scalar carries the derivative (implicit function theorem).
        let start = T::constant(density);
        start - (Self::pressure(start, temperature) - pressure) / T::constant(Self::slope(density, t))
    }

    /// Temperature at a density and pressure, from one nearby [K].
    pub(crate) fn temperature<T: Scalar>(density: T, pressure: T, near: T) -> T {
        let (rho, p) = (density.value(), pressure.value());
        // (∂p/∂T)_ρ = ρ R (1 + δ α_δ − δτ α_δτ)
        let slope = |t: f64| {
            let r = residual(rho, t);
            rho * GAS_CONSTANT * (r.d - r.dt + 1.0)
        };
        let mut t = near.value();
        for _ in 0..30 {
            let step = (Self::pressure(rho, t) - p) / slope(t);
            t -= step.clamp(-0.3 * t, 0.3 * t);
            if step.abs() <= 4e-16 * t {
                break;
            }
        }
        let end = T::constant(t);
        end - (Self::pressure(density, end) - pressure) / T::constant(slope(t))
    }

    /// Exponents (ρ/p)(∂p/∂ρ) at constant temperature and at constant entropy.
    pub(crate) fn exponents<T: Scalar>(density: T, temperature: T) -> [T; 2] {
        let r = residual(density, temperature);
        let compressibility = r.d + 1.0;
        let slow = (r.d * 2.0 + r.dd + 1.0) / compressibility;
        // k_s = k_T + (1 + δα_δ − δτα_δτ)²/(Z c_v/R), c_v/R = −τ²(α⁰_ττ + α_ττ)
        let heat = -(ideal(temperature).0 + r.tt);
        let fast = slow + (compressibility - r.dt).square() / (compressibility * heat);
        [slow, fast]
    }

    // s/R less a constant.
    fn entropy<T: Scalar>(density: T, temperature: T) -> T {
        let r = residual(density, temperature);
        ideal(temperature).1 + r.t - r.value - (density / CRITICAL_DENSITY).ln()
    }

    /// Density at a pressure reached without heat exchange from a density and temperature [kg/m³].
    pub(crate) fn isentrope<T: Scalar>(density: T, temperature: T, pressure: T) -> T {
        let start = [density.value(), temperature.value()];
        let p = pressure.value();
        let entropy = Self::entropy(start[0], start[1]);
        // From the ideal gas on, Newton in ln ρ and ln T of ln p and s.
        let ratio = p / Self::pressure(start[0], start[1]);
        let [_, exponent] = Self::exponents(start[0], start[1]);
        let mut ln_density = start[0].ln() + ratio.ln() / exponent;
        let mut ln_temperature = start[1].ln() + ratio.ln() * 0.4 / 1.4;
        let jacobian = |density: f64, temperature: f64| {
            let r = residual(density, temperature);
            let z = r.d + 1.0;
            // ∂ln p/∂ln ρ, ∂ln p/∂ln T, ∂s/∂ln ρ, ∂s/∂ln T
            let heat = -(ideal(temperature).0 + r.tt);
            [(r.d * 2.0 + r.dd + 1.0) / z, (z - r.dt) / z, r.dt - z, heat]
        };
        for _ in 0..60 {
            let (density, temperature) = (ln_density.exp(), ln_temperature.exp());
            let [a, b, c, d] = jacobian(density, temperature);
            let missing =
                [(Self::pressure(density, temperature) / p).ln(), Self::entropy(density, temperature) - entropy];
            let determinant = a * d - b * c;
            let step =
                [(d * missing[0] - b * missing[1]) / determinant, (a * missing[1] - c * missing[0]) / determinant];
            ln_density -= step[0].clamp(-0.7, 0.7);
            ln_temperature -= step[1].clamp(-0.3, 0.3);
            if step[0].abs().max(step[1].abs()) <= 1e-14 {
                break;
            }
        }
        // One step more in the scalar carries the derivatives by start and by pressure.
        let (end, warm) = (ln_density.exp(), ln_temperature.exp());
        let [a, b, c, d] = jacobian(end, warm);
        let missing = [
            (T::constant(Self::pressure(end, warm)) / pressure).ln(),
            T::constant(Self::entropy(end, warm)) - Self::entropy(density, temperature),
        ];
        let step = (missing[0] * d - missing[1] * b) / (a * d - b * c);
        T::constant(end) * (-step).exp()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    use crate::numerics::Dual;

    // CoolProp 8.0.0 with the same equation (250, 310, 370 K at 20, 100, 250 bar).
    #[test]
    fn exponents_of_the_published_equation() {
        for (bar, t, fast, slow) in [
            (20.0, 250.0, 1.4347, 0.9868),
            (100.0, 250.0, 1.6808, 1.0027),
            (250.0, 250.0, 2.5023, 1.3557),
            (20.0, 310.0, 1.4304, 0.9996),
            (100.0, 310.0, 1.5998, 1.0333),
            (250.0, 310.0, 2.0629, 1.2352),
            (100.0, 370.0, 1.5585, 1.0449),
            (250.0, 370.0, 1.8791, 1.1927),
        ] {
            let density = Nitrogen::density(bar * 1e5, t);
            assert_relative_eq!(Nitrogen::pressure(density, t), bar * 1e5, max_relative = 1e-13);
            let [found_slow, found_fast] = Nitrogen::exponents(density, t);
            assert!((found_fast - fast).abs() <= 6e-5, "{bar} {t}: {found_fast} {fast}");
            assert!((found_slow - slow).abs() <= 6e-5, "{bar} {t}: {found_slow} {slow}");
        }
    }

    #[test]
    fn derivatives_pass_through() {
        let (p, t) = (1.3e7, 305.0);
        let density = Nitrogen::density(p, t);
        let slope = |law: &dyn Fn(f64) -> f64, x: f64| (law(x * (1.0 + 1e-6)) - law(x * (1.0 - 1e-6))) / (2e-6 * x);
        let (dual_p, dual_t) = (Dual::variable(p), Dual::variable(t));
        let (fixed_p, fixed_t) = (Dual::constant(p), Dual::constant(t));
        let close = |exact: Dual, numeric: f64| assert_relative_eq!(exact.derivative, numeric, max_relative = 1e-7);
        close(Nitrogen::density(dual_p, fixed_t), slope(&|p| Nitrogen::density(p, t), p));
        close(Nitrogen::density(fixed_p, dual_t), slope(&|t| Nitrogen::density(p, t), t));
        let end = 1.9e7;
        let start = Dual::variable(density);
        close(
            Nitrogen::isentrope(start, fixed_t, Dual::constant(end)),
            slope(&|density| Nitrogen::isentrope(density, t, end), density),
        );
        close(
            Nitrogen::isentrope(Dual::constant(density), dual_t, Dual::constant(end)),
            slope(&|t| Nitrogen::isentrope(density, t, end), t),
        );
        close(
            Nitrogen::isentrope(Dual::constant(density), fixed_t, Dual::variable(end)),
            slope(&|end| Nitrogen::isentrope(density, t, end), end),
        );
    }
}
