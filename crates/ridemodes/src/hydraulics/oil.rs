//! Oil properties at a temperature and pressure.

use crate::numerics::Scalar;
use crate::spec::{self, Slot};

/// Oil at the working temperature.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Oil<T> {
    /// Density [kg/m³].
    pub density: T,
    /// Dynamic viscosity [Pa·s].
    pub viscosity: T,
    bulk_modulus: Option<T>,
    air_fraction: T,
    air_exponent: T,
    atmosphere: T,
}

// Temperatures at which the file states density and viscosities [K].
const STATED_DENSITY: f64 = 288.15;
const STATED_COLD: f64 = 313.15;
const STATED_HOT: f64 = 373.15;

impl<T: Scalar> Oil<T> {
    pub(crate) fn new(oil: &spec::Oil<Slot>, numbers: &[T], temperature: T, atmosphere: T) -> Self {
        let value = |slot: Slot| numbers[slot.0];
        // ρ(T) = ρ₁₅ / (1 + α (T − 288.15 K))
        let density = value(oil.density) / (value(oil.expansion) * (temperature - STATED_DENSITY) + 1.0);
        let kinematic = walther(value(oil.kinematic_viscosity), value(oil.kinematic_viscosity_hot), temperature);
        Self {
            density,
            viscosity: density * kinematic,
            bulk_modulus: oil.bulk_modulus.map(value),
            air_fraction: value(oil.air_fraction),
            air_exponent: value(oil.air_exponent),
            atmosphere,
        }
    }

    /// 1/β_e at an absolute pressure [1/Pa]: 1/β_e = 1/β + x/(κ p) with x = x₀ p_atm/p (H. E. Merritt,
    /// *Hydraulic Control Systems*, 1967, with his fraction x stated at p; from memory).
    pub(crate) fn compressibility(&self, pressure: T) -> T {
        let fraction = self.air_fraction * self.atmosphere / pressure;
        let air = fraction / (self.air_exponent * pressure);
        self.bulk_modulus.map_or(air, |modulus| T::one() / modulus + air)
    }

    /// Resistance of laminar flow (Hagen–Poiseuille) R = 128 μ L/(π d⁴) [Pa·s/m³].
    pub(crate) fn resistance(&self, length: T, bore: T) -> T {
        self.viscosity * length * 128.0 / (bore.square().square() * std::f64::consts::PI)
    }

    /// Inertance of plug flow I = ρ L/(π d²/4) [Pa·s²/m³].
    pub(crate) fn inertance(&self, length: T, bore: T) -> T {
        self.density * length / pipe_area(bore)
    }
}

/// Area of a round bore, π d²/4 [m²].
pub(crate) fn pipe_area<T: Scalar>(bore: T) -> T {
    bore.square() * (std::f64::consts::PI / 4.0)
}

// Kinematic viscosity from the two stated ones: log log(ν + 0.7) = A − B log T with ν in mm²/s
// (Walther; ASTM D341, from memory).
fn walther<T: Scalar>(cold: T, hot: T, temperature: T) -> T {
    let double_log = |viscosity: T| (viscosity * 1e6 + 0.7).ln().ln();
    let (y_cold, y_hot) = (double_log(cold), double_log(hot));
    let slope = (y_hot - y_cold) / (STATED_HOT.ln() - STATED_COLD.ln());
    let y = y_cold + slope * (temperature.ln() - STATED_COLD.ln());
    (y.exp().exp() - 0.7) * 1e-6
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    fn oil(bulk_modulus: Option<f64>, air_fraction: f64) -> Oil<f64> {
        Oil { density: 870.0, viscosity: 0.03, bulk_modulus, air_fraction, air_exponent: 1.4, atmosphere: 101_325.0 }
    }

    // Δp = 128 μ L Q/(π d⁴): 0.03 Pa·s, 2 m, 1e-4 m³/s, 10 mm gives 24 446.2 Pa (worked by hand).
    #[test]
    fn laminar_resistance() {
        assert_relative_eq!(oil(None, 0.0).resistance(2.0, 0.01) * 1e-4, 24_446.2, max_relative = 1e-5);
        assert_relative_eq!(oil(None, 0.0).inertance(2.0, 0.01), 870.0 * 2.0 / 7.853_981_634e-5, max_relative = 1e-9);
    }

    // Merritt 1967 (from memory): 220 000 psi oil with 1 % air at 500 psi, n 1.4, gives 53 103 psi.
    // His fraction is the one at 500 psi, so the stated one is scaled to the atmosphere.
    #[test]
    fn entrained_air() {
        let psi = 6_894.757;
        let p = 500.0 * psi;
        let at_atmosphere = 0.01 * p / 101_325.0;
        let effective = 1.0 / oil(Some(220e3 * psi), at_atmosphere).compressibility(p) / psi;
        assert_relative_eq!(effective, 53_103.0, max_relative = 1e-5);
    }

    // The law passes through both stated viscosities, and through the ISO 3448 mid-point in between
    // it is monotone.
    #[test]
    fn viscosity_between_and_beyond() {
        let nu = |t: f64| walther(32e-6, 5.4e-6, t);
        assert_relative_eq!(nu(STATED_COLD), 32e-6, max_relative = 1e-12);
        assert_relative_eq!(nu(STATED_HOT), 5.4e-6, max_relative = 1e-12);
        // ISO VG 32 mineral oil with viscosity index near 100: 300 to 400 mm²/s at 0 °C (common practice, no source).
        assert!((250e-6..450e-6).contains(&nu(273.15)), "{}", nu(273.15));
    }
}
