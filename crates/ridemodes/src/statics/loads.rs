//! What acts on the vehicle from outside: weight, accelerations, slopes, aerodynamic load.

use super::condition::Condition;
use crate::numerics::Scalar;
use crate::spec::Slot;
use crate::vehicle::Structure;

/// External forces on body (z, pitch, roll) and wheels under a condition, but for gravity of the wheels.
pub(crate) fn external_loads<T: Scalar>(structure: &Structure, numbers: &[T], condition: &Condition) -> [T; 7] {
    let loads = Loads::new(structure, numbers, condition);
    std::array::from_fn(|i| if i < 3 { loads.on_body[i] } else { loads.on_wheel[i - 3] })
}

/// Forces under a condition, and where the mass is.
pub(super) struct Loads<T> {
    /// Force and moments on the body over z, pitch and roll at the design attitude.
    pub on_body: [T; 3],
    /// Forces on the wheels through the links.
    pub on_wheel: [T; 4],
    /// Moment per roll angle of the leaned body's weight.
    pub leaning: T,
    /// Height of the centre of gravity above the roll axis.
    pub arm: T,
    pub mass: T,
    pub centre: [T; 3],
}

impl<T: Scalar> Loads<T> {
    pub(super) fn new(structure: &Structure, numbers: &[T], condition: &Condition) -> Self {
        let spec = &structure.spec;
        let value = |slot: Slot| numbers[slot.0];
        let weight = condition.weight();
        let (a, b) = (value(spec.front.distance), value(spec.rear.distance));
        let wheelbase = a + b;
        let body = value(spec.body.mass);
        // Payload moves the centre of gravity.
        let (mut mass, mut first) = (body, [T::zero(); 3]);
        for one in &condition.payload {
            mass += T::constant(one.mass);
            for (sum, place) in first.iter_mut().zip([one.x, one.y, one.z]) {
                *sum += T::constant(one.mass * place);
            }
        }
        let centre = first.map(|moment| moment / mass);
        let height = value(spec.body.cg_height) + centre[2];
        // Height above the roll axis, at the centre of gravity.
        let share_front = (b + centre[0]) / wheelbase;
        let (h_front, h_rear) = (value(spec.front.roll_centre_height), value(spec.rear.roll_centre_height));
        let arm = height - (h_front * share_front + h_rear * (T::one() - share_front));
        let (across, ahead) = (condition.across(), condition.ahead());

        let [front_down, rear_down] = condition.downforce.map(T::constant);
        // (O6) Weight at the centre, downforce at the axles; lateral moment about the roll axis.
        let mut on_body = [
            -(mass * weight) - front_down - rear_down,
            first[0] * weight + a * front_down - b * rear_down,
            -(first[1] * weight) + mass * arm * across,
        ];
        let mut on_wheel = [T::zero(); 4];
        let mut whole = mass * height;
        for (axle, share, h_roll, left) in
            [(&spec.front, share_front, h_front, 0), (&spec.rear, T::one() - share_front, h_rear, 2)]
        {
            let unsprung = |left: bool| axle.side(left).map_or(T::zero(), |corner| value(corner.unsprung_mass));
            let own = (unsprung(true) + unsprung(false)) * value(axle.unsprung_height);
            whole += own;
            // (O7) ±(m_axle h_R + m_u h_u) a_y/t through the links, unloading the left
            let pair = (mass * share * h_roll + own) * across / value(axle.track);
            on_wheel[left] += pair;
            on_wheel[left + 1] += -pair;
        }
        // (O8) ΔF = m h a_x/wheelbase from front to rear; the links' share is a pair of forces between body and wheels.
        on_body[1] += -(whole * ahead);
        let transfer = whole * ahead / wheelbase;
        for (axle, gain, x, left) in [(&spec.front, -transfer, a, 0), (&spec.rear, transfer, -b, 2)] {
            let share = if ahead < 0.0 { value(axle.anti_braking) } else { value(axle.anti_driving) };
            let links = share * gain;
            on_body[0] += links;
            on_body[1] += -(x * links);
            on_wheel[left] += -(links * 0.5);
            on_wheel[left + 1] += -(links * 0.5);
        }
        Self { on_body, on_wheel, leaning: mass * arm * weight, arm, mass, centre }
    }
}
