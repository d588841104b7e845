//! A chamber of a cylinder.

use super::oil::pipe_area;
use crate::axes::Corner;
use crate::numerics::Scalar;
use crate::spec::{CylinderKind, Slot, Spec};

/// A cylinder chamber.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub(crate) struct Chamber {
    pub corner: Corner,
    /// Whether bump squeezes it.
    pub bump: bool,
}

impl Chamber {
    /// E.g. `front_left_bump`.
    pub(crate) fn name(self) -> String {
        format!("{}_{}", self.corner.name(), if self.bump { "bump" } else { "rebound" })
    }

    /// Pressed area at the wheel (N2) at a deflection, +A·MR where bump squeezes the chamber, −A·MR where it expands
    /// it [m²].
    pub(crate) fn signed_area<T: Scalar>(self, spec: &Spec<Slot>, numbers: &[T], deflection: T) -> T {
        let cylinder = spec.corner(self.corner).and_then(|corner| corner.cylinder.as_ref());
        let slope = cylinder.map_or(T::zero(), |cylinder| numbers[cylinder.motion_ratio_slope.0]);
        self.cylinder_area(spec, numbers).map_or(T::zero(), |(area, ratio)| {
            let at_wheel = area * (ratio + slope * deflection);
            if self.bump { at_wheel } else { -at_wheel }
        })
    }

    /// Oil in the chamber with the piston in the middle of its stroke [m³].
    pub(super) fn rest_volume<T: Scalar>(self, spec: &Spec<Slot>, numbers: &[T]) -> T {
        let stroke = spec.corner(self.corner).and_then(|corner| Some(corner.cylinder.as_ref()?.stroke));
        match (self.cylinder_area(spec, numbers), stroke) {
            (Some((area, _)), Some(stroke)) => area * numbers[stroke.0] * 0.5,
            _ => T::zero(),
        }
    }

    /// Pressed area of the piston [m²].
    pub(crate) fn piston_area<T: Scalar>(self, spec: &Spec<Slot>, numbers: &[T]) -> T {
        self.cylinder_area(spec, numbers).map_or(T::zero(), |(area, _)| area)
    }

    // Pressed area of the piston and motion ratio. The rod is on the rebound side, of a through rod on both.
    fn cylinder_area<T: Scalar>(self, spec: &Spec<Slot>, numbers: &[T]) -> Option<(T, T)> {
        let cylinder = spec.corner(self.corner)?.cylinder.as_ref()?;
        let value = |slot: Slot| numbers[slot.0];
        let bore = pipe_area(value(cylinder.bore));
        let full = self.bump && cylinder.kind != CylinderKind::ThroughRod;
        let area = if full { bore } else { bore - pipe_area(value(cylinder.rod)) };
        Some((area, value(cylinder.motion_ratio)))
    }
}
