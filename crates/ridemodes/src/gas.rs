//! Gas in an accumulator: laws of a constant amount, generic in the scalar.

mod nitrogen;

use crate::numerics::Scalar;
use crate::spec::GasKind;

pub(crate) use nitrogen::Nitrogen;

/// Which gas volume is known.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) enum Fill<T> {
    /// The volume at precharge, empty of oil.
    Precharge(T),
    /// The volume at design pressure and temperature.
    Rest(T),
}

/// A constant amount of gas behind a separator that leaves it no more than `full`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct Gas<T> {
    pub kind: GasKind,
    /// Volume when empty of oil [m³].
    pub full: T,
    /// Volume at which the separator meets its end stop [m³].
    pub least: T,
    /// Polytropic exponent of fast changes, of an ideal gas.
    pub exponent: T,
    /// Amount: p V/T of an ideal gas [Pa·m³/K], the mass of nitrogen [kg].
    pub amount: T,
}

/// A gas at rest.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct GasState<T> {
    /// Volume [m³].
    pub volume: T,
    /// Whether the accumulator is empty of oil or at its end stop, and rigid.
    pub rigid: bool,
}

impl<T: Scalar> Gas<T> {
    /// The gas of an accumulator charged to `precharge` (absolute) at `charged_at`; of its two volumes `fill` is known,
    /// the other follows at the design `pressure` and `temperature`.
    pub(crate) fn charged(
        kind: GasKind,
        fill: Fill<T>,
        precharge: T,
        charged_at: T,
        exponent: T,
        [pressure, temperature]: [T; 2],
    ) -> Self {
        // Amount per volume at the charge, and at rest.
        let per_volume = |p: T, t: T| match kind {
            GasKind::Ideal => p / t,
            GasKind::Nitrogen => Nitrogen::density(p, t),
        };
        let charge = per_volume(precharge, charged_at);
        let full = match fill {
            Fill::Precharge(full) => full,
            Fill::Rest(volume) => {
                let share = per_volume(pressure, temperature) / charge;
                // Below the charge's pressure the gas fills the accumulator.
                if share.value() < 1.0 { volume } else { volume * share }
            }
        };
        Self { kind, full, least: T::zero(), exponent, amount: charge * full }
    }

    /// Pressure at which it fills the accumulator, p₀ T/T₀ of an ideal gas [Pa].
    pub(crate) fn empty_pressure(&self, temperature: T) -> T {
        self.pressure_of(self.full, temperature)
    }

    // p = n T/V, p(m/V, T)
    fn pressure_of(&self, volume: T, temperature: T) -> T {
        match self.kind {
            GasKind::Ideal => self.amount * temperature / volume,
            GasKind::Nitrogen => Nitrogen::pressure(self.amount / volume, temperature),
        }
    }

    /// The gas at a pressure and temperature.
    pub(crate) fn at(&self, pressure: T, temperature: T) -> GasState<T> {
        if self.amount.value() <= 0.0 {
            // No charge: oil fills it up to its end stop.
            return GasState { volume: self.least, rigid: true };
        }
        // V_g = V₀ (p₀/p)(T/T₀), V₀ ρ(p₀, T₀)/ρ(p, T)
        let volume = match self.kind {
            GasKind::Ideal => self.amount * temperature / pressure,
            GasKind::Nitrogen => self.amount / Nitrogen::density(pressure, temperature),
        };
        self.between_its_ends(volume)
    }

    fn between_its_ends(&self, volume: T) -> GasState<T> {
        if volume.value() > self.full.value() {
            GasState { volume: self.full, rigid: true }
        } else if volume.value() < self.least.value() {
            GasState { volume: self.least, rigid: true }
        } else {
            GasState { volume, rigid: false }
        }
    }

    /// The gas at a pressure it came to without heat exchange from a state at rest.
    pub(crate) fn after(&self, start: GasState<T>, [from, temperature]: [T; 2], pressure: T) -> GasState<T> {
        if self.amount.value() <= 0.0 {
            return start;
        }
        // A gas that was at an end begins to move at the pressure that its own amount has there.
        let from = if start.rigid { self.pressure_of(start.volume, temperature) } else { from };
        let volume = match self.kind {
            // V (p/p_start)^(−1/κ)
            GasKind::Ideal => start.volume * ((from / pressure).ln() / self.exponent).exp(),
            GasKind::Nitrogen => self.amount / Nitrogen::isentrope(self.amount / start.volume, temperature, pressure),
        };
        self.between_its_ends(volume)
    }

    /// Exponents n of C = V/(n p), slow (isothermal) and fast.
    pub(crate) fn exponents(&self, state: GasState<T>, [pressure, temperature]: [T; 2]) -> [T; 2] {
        match self.kind {
            GasKind::Ideal => [T::one(), self.exponent],
            GasKind::Nitrogen => {
                // Squeezed without heat exchange it is warmer than its wall.
                let density = self.amount / state.volume;
                Nitrogen::exponents(density, Nitrogen::temperature(density, pressure, temperature))
            }
        }
    }

    /// Compliances dV/dp of the gas, slow and fast [m³/Pa]; none when the accumulator is empty of oil or at its end stop.
    pub(crate) fn compliances(&self, state: GasState<T>, [pressure, temperature]: [T; 2]) -> [T; 2] {
        if state.rigid {
            return [T::zero(); 2];
        }
        // C = V_g/(κ p)
        self.exponents(state, [pressure, temperature]).map(|exponent| state.volume / (exponent * pressure))
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    fn ideal(fill: Fill<f64>, precharge: f64, exponent: f64, pressure: f64) -> Gas<f64> {
        Gas::charged(GasKind::Ideal, fill, precharge, 293.15, exponent, [pressure, 293.15])
    }

    // Ideal polytropic gas spring k = n p A²/V: n 1.3, 9 MPa, 0.6 L, 12 cm² gives 28 080 N/m
    // (worked by hand).
    #[test]
    fn gas_spring_rate() {
        let gas = ideal(Fill::Rest(0.6e-3), 4e6, 1.3, 9e6);
        let [_, fast] = gas.compliances(gas.at(9e6, 293.15), [9e6, 293.15]);
        assert_relative_eq!(12e-4 * 12e-4 / fast, 28_080.0, max_relative = 1e-12);
        assert_relative_eq!(gas.full, 0.6e-3 * 9.0 / 4.0, max_relative = 1e-14);
    }

    #[test]
    fn compliance_is_the_slope_of_the_law() {
        for kind in [GasKind::Ideal, GasKind::Nitrogen] {
            let (p, t, h) = (12.0e6, 310.0, 200.0);
            let gas = Gas::charged(kind, Fill::Precharge(1e-3), 8e6, 280.0, 1.4, [p, t]);
            let start = gas.at(p, t);
            let [slow, fast] = gas.compliances(start, [p, t]);
            let slope = |law: &dyn Fn(f64) -> f64| -(law(p + h) - law(p - h)) / (2.0 * h);
            assert_relative_eq!(slope(&|q| gas.at(q, t).volume), slow, max_relative = 1e-8);
            assert_relative_eq!(slope(&|q| gas.after(start, [p, t], q).volume), fast, max_relative = 1e-8);
        }
    }

    #[test]
    fn nitrogen_becomes_an_ideal_gas_when_thin() {
        let (p, t) = (3e4, 300.0);
        let law = |kind| Gas::charged(kind, Fill::Precharge(1e-3), 1e4, 280.0, 1.3995, [p, t]);
        let (real, ideal) = (law(GasKind::Nitrogen), law(GasKind::Ideal));
        assert_relative_eq!(real.at(p, t).volume, ideal.at(p, t).volume, max_relative = 1e-4);
        let [slow, fast] = real.exponents(real.at(p, t), [p, t]);
        assert_relative_eq!(slow, 1.0, max_relative = 1e-3);
        assert_relative_eq!(fast, 1.4, max_relative = 1e-3);
    }

    #[test]
    fn an_empty_accumulator_is_rigid() {
        let gas = ideal(Fill::Precharge(1e-3), 4e6, 1.4, 3e6);
        let state = gas.at(3e6, 293.15);
        assert_eq!((state.volume, state.rigid), (1e-3, true));
        assert_eq!(gas.compliances(state, [3e6, 293.15]), [0.0; 2]);
        assert_relative_eq!(gas.empty_pressure(293.15), 4e6, max_relative = 1e-14);
        // So it is at its end stop.
        let stopped = Gas { least: 0.4e-3, ..gas };
        assert_eq!((stopped.at(12e6, 293.15).volume, stopped.at(12e6, 293.15).rigid), (0.4e-3, true));
        assert!(!stopped.at(9e6, 293.15).rigid);
    }
}
