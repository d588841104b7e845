//! Gas in an accumulator.

use crate::numerics::Scalar;

/// Gas of one accumulator at rest in the system.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct GasState<T> {
    /// Gas volume at system pressure [m³].
    pub volume: T,
    /// Gas volume at precharge, empty of oil [m³].
    pub full: T,
    /// Compliance dV/dp of the gas [m³/Pa]; zero when the accumulator is empty of oil.
    pub compliance: T,
    /// Pressure at which the accumulator runs empty of oil at this temperature [Pa].
    pub empty_pressure: T,
}

/// Which gas volume is known.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) enum Fill<T> {
    /// The volume at precharge.
    Precharge(T),
    /// The volume at system pressure.
    Rest(T),
}

/// An ideal gas of constant amount, charged to `precharge` at `precharge_temperature`, now at
/// `pressure` (absolute) and `temperature`, changing state with the polytropic `exponent`.
///
/// `empty` decides the branch: whether the pressure is below that of the charge.
pub(crate) fn ideal<T: Scalar>(
    fill: Fill<T>,
    precharge: T,
    precharge_temperature: T,
    exponent: T,
    pressure: T,
    temperature: T,
    empty: bool,
) -> GasState<T> {
    // p₀ T/T₀: the charge at working temperature
    let empty_pressure = precharge * temperature / precharge_temperature;
    // V_g = V₀ (p₀/p)(T/T₀)
    let share = if empty { T::one() } else { empty_pressure / pressure };
    let (volume, full) = match fill {
        Fill::Precharge(full) => (full * share, full),
        Fill::Rest(volume) => (volume, volume / share),
    };
    // C = V_g/(κ p)
    let compliance = if empty { T::zero() } else { volume / (exponent * pressure) };
    GasState { volume, full, compliance, empty_pressure }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    // Ideal polytropic gas spring k = n p A²/V: n 1.3, 9 MPa, 0.6 L, 12 cm² gives 28 080 N/m
    // (worked by hand).
    #[test]
    fn gas_spring_rate() {
        let gas = ideal(Fill::Rest(0.6e-3), 4e6, 293.15, 1.3, 9e6, 293.15, false);
        assert_relative_eq!(12e-4 * 12e-4 / gas.compliance, 28_080.0, max_relative = 1e-12);
        assert_relative_eq!(gas.full, 0.6e-3 * 9.0 / 4.0, max_relative = 1e-14);
    }

    #[test]
    fn compliance_is_the_slope_of_the_polytrope() {
        // V = V_g (p_s/p)^(1/κ) about the state at rest.
        let (kappa, p) = (1.4, 3.2e6);
        let gas = ideal(Fill::Precharge(1e-3), 2e6, 280.0, kappa, p, 310.0, false);
        let volume = |q: f64| gas.volume * (p / q).powf(1.0 / kappa);
        let h = 10.0;
        assert_relative_eq!(-(volume(p + h) - volume(p - h)) / (2.0 * h), gas.compliance, max_relative = 1e-8);
        assert_relative_eq!(gas.volume, 1e-3 * (2.0 / 3.2) * (310.0 / 280.0), max_relative = 1e-14);
    }

    #[test]
    fn an_empty_accumulator_is_rigid() {
        let gas = ideal(Fill::Precharge(1e-3), 4e6, 293.15, 1.4, 3e6, 293.15, true);
        assert_eq!((gas.volume, gas.compliance), (1e-3, 0.0));
    }
}
