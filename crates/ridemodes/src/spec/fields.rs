//! The tables of the vehicle file.

use std::collections::BTreeMap;

use serde::{Deserialize, Serialize};

use super::schema::{Bounds, Choice, Described, Field, Flag, Kind, Named, Presence, Schema, TablePresence, tables};
use crate::axes::Corner;
use crate::units::STANDARD_ATMOSPHERE;

const ANY: Bounds = Bounds::ANY;
const NOT_NEGATIVE: Bounds = Bounds::NOT_NEGATIVE;
const POSITIVE: Bounds = Bounds::POSITIVE;
const LOADS: Bounds = Bounds::within(-100.0, 100.0);
const RESISTANCE: Bounds = Bounds::within(0.0, 1e15);
/// The two-viscosity law needs more than 0.3 mm²/s.
const VISCOSITY: Bounds = Bounds::within(4e-7, 0.1);
const COMPLIANCE: Bounds = Bounds::within(0.0, 1e-6);
const OPENING: Bounds = Bounds::up_to(1e15);

macro_rules! words {
    ($( $(#[doc = $doc:literal])+ $name:ident { $( $(#[doc = $meaning:literal])+ $variant:ident = $word:literal, )+ } )+) => { $(
        $(#[doc = $doc])+
        #[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
        pub enum $name { $( $(#[doc = $meaning])+ #[serde(rename = $word)] $variant, )+ }

        impl Choice for $name {
            const WORDS: &'static [&'static str] = &[$($word),+];
        }
    )+ };
}

words! {
    /// How the oil of a pipe is accelerated.
    Inertia {
        /// Plug flow: ρL/A.
        Plug = "plug",
        /// Developed laminar flow at low frequency: 4/3 of the plug's.
        Developed = "developed",
        /// Left out.
        None = "none",
    }

    /// How a cylinder's chambers take part in the oil.
    CylinderKind {
        /// Both chambers are ports: bump squeezes the full piston area and expands the rod side.
        DoubleActing = "double_acting",
        /// The full piston area is a port; the rod side is open to the air.
        SingleActing = "single_acting",
        /// Both chambers are ports, with the rod taken off on either side.
        ThroughRod = "through_rod",
        /// Both chambers joined through the piston; the port is on the full side and the rod area acts.
        PistonValve = "piston_valve",
    }

    /// How gas in an accumulator behaves.
    GasKind {
        /// Ideal gas with the polytropic exponent given.
        Ideal = "ideal",
        /// Real nitrogen by a published equation of state; the exponent is not used.
        Nitrogen = "nitrogen",
    }

    /// What kind of motion an amplitude describes.
    Motion {
        /// Gaussian, as on a road.
        Random = "random",
        /// Sine.
        Harmonic = "harmonic",
    }

    /// What resists the flow in a valve.
    ValveKind {
        /// A check valve with a throttle beside it: `throttle`, `open_resistance`, `cracking_pressure`.
        Check = "check",
        /// One resistance for either direction: `forward`, `backward`.
        Split = "split",
        /// Pressure drop over flow: `flow`, `pressure_drop`.
        Table = "table",
        /// Sharp-edged orifice: `diameter`, `discharge`.
        Orifice = "orifice",
    }

    /// How the chambers of the four cylinders are joined to circuits.
    LayoutKind {
        /// Two circuits: the chambers that bump squeezes on one side with those that bump expands
        /// on the other. Stiff in roll.
        Roll = "roll",
        /// Two circuits: those squeezed on one axle with those expanded on the other. Stiff in pitch.
        Pitch = "pitch",
        /// Four circuits: each squeezed chamber with the expanded one diagonally opposite. Stiff in
        /// roll and pitch.
        Diagonal = "diagonal",
        /// Two circuits: all that bump squeezes, all that bump expands. Stiff in heave alone.
        Heave = "heave",
        /// As `roll`, but each axle on its own: four circuits. Stiff in roll and warp.
        AxleRoll = "axle_roll",
    }
}

tables! {
    /// A four-wheeled vehicle at its design condition (file format 1).
    Spec {
        /// Name for headings.
        name: Option<String> = text,
        /// What the vehicle is, for people.
        description: Option<String> = text,
        /// Temperature of oil and gas at the design condition.
        temperature: N = number("K", Bounds::within(200.0, 450.0), 293.15),
        /// Pressure of the air around.
        atmosphere: N = pressure(STANDARD_ATMOSPHERE),
        /// Body.
        body: Body<N> = table(Body),
        /// Front axle.
        front: Axle<N> = table(Axle),
        /// Rear axle.
        rear: Axle<N> = table(Axle),
        /// Oil in all circuits.
        oil: Option<Oil<N>> = maybe(Oil),
        /// Circuits laid out by a rule.
        layout: Option<Layout<N>> = maybe(Layout),
        /// Circuits given one by one.
        circuits: Named<Circuit<N>> = named(Circuit),
        /// Nodes of the oil beside the hubs of the circuits.
        nodes: Named<Node<N>> = named(Node),
        /// Lines between circuits and nodes.
        lines: Named<ConnectingLine<N>> = named(ConnectingLine),
        /// Mechanical links between wheels.
        links: Named<Link<N>> = named(Link),
        /// Places where people sit.
        seats: Named<Seat<N>> = named(Seat),
        /// Named load cases.
        cases: Named<Case<N>> = named(Case),
        /// Named settings: values by path that override the file's.
        settings: Named<BTreeMap<String, serde_json::Value>> = overrides,
    }

    /// Sprung mass with all that is fixed to it.
    Body {
        /// Sprung mass.
        mass: N = number("kg", POSITIVE),
        /// Moment of inertia about the roll axis x through the centre of gravity.
        roll_inertia: N = number("kg*m^2", POSITIVE),
        /// Moment of inertia about the pitch axis y through the centre of gravity.
        pitch_inertia: N = number("kg*m^2", POSITIVE),
        /// Product of inertia of roll and pitch, the integral of x·y over the mass.
        roll_pitch_product: N = number("kg*m^2", ANY, 0.0),
        /// Height of the centre of gravity above the ground.
        cg_height: N = number("m", Bounds::up_to(20.0)),
        /// Offset of the centre of gravity to the left of the centre line.
        cg_offset: N = number("m", ANY, 0.0),
        /// Static warp preload, (FL − FR − RL + RR)/4 of the sprung corner loads.
        warp_preload: N = number("N", Bounds::within(-1e7, 1e7), 0.0),
    }

    /// Axle, either with `both` corners alike or with `left` and `right` apart.
    Axle {
        /// Distance of the axle from the body's centre of gravity, ahead for the front, behind for the rear.
        distance: N = number("m", Bounds::up_to(50.0)),
        /// Track width.
        track: N = number("m", Bounds::up_to(20.0)),
        /// Height of the roll centre above the ground.
        roll_centre_height: N = number("m", ANY, 0.0),
        /// Height of the unsprung masses' centre of gravity above the ground.
        unsprung_height: N = number("m", Bounds::within(0.0, 5.0), 0.3),
        /// Share of the axle's load change under braking that its links carry past the springs.
        anti_braking: N = number("1", Bounds::within(-2.0, 2.0), 0.0),
        /// Share of the axle's load change under drive that its links carry past the springs.
        anti_driving: N = number("1", Bounds::within(-2.0, 2.0), 0.0),
        /// Anti-roll bar.
        anti_roll_bar: Option<AntiRollBar<N>> = maybe(AntiRollBar),
        /// Both corners.
        both: Option<CornerSpec<N>> = maybe(CornerSpec),
        /// Left corner.
        left: Option<CornerSpec<N>> = maybe(CornerSpec),
        /// Right corner.
        right: Option<CornerSpec<N>> = maybe(CornerSpec),
    }

    /// Anti-roll bar.
    AntiRollBar {
        /// Moment per angle of roll of the axle relative to the body.
        rate: N = number("N*m/rad", NOT_NEGATIVE),
    }

    /// Wheel, tyre and suspension of one corner.
    CornerSpec {
        /// Unsprung mass.
        unsprung_mass: N = number("kg", POSITIVE),
        /// Tyre.
        tyre: Tyre<N> = table(Tyre),
        /// Spring.
        spring: Option<Spring<N>> = maybe(Spring),
        /// Stop that ends the travel in bump.
        bump_stop: Option<Stop<N>> = maybe(Stop),
        /// Stop that ends the travel in rebound.
        rebound_stop: Option<Stop<N>> = maybe(Stop),
        /// Damper.
        damper: Option<Damper<N>> = maybe(Damper),
        /// Hydraulic cylinder.
        cylinder: Option<Cylinder<N>> = maybe(Cylinder),
    }

    /// Tyre, vertically.
    Tyre {
        /// Vertical rate; zero for a wheel off the ground.
        rate: N = number("N/m", NOT_NEGATIVE),
        /// Vertical damping.
        damping: N = number("N*s/m", Bounds::within(0.0, 1e8), 0.0),
    }

    /// Suspension spring.
    Spring {
        /// Rate of the spring itself.
        rate: N = number("N/m", NOT_NEGATIVE),
        /// Hardening: force per third power of spring travel.
        cubic: N = number("N/m^3", NOT_NEGATIVE, 0.0),
        /// Spring travel over wheel travel.
        motion_ratio: N = number("1", POSITIVE, 1.0),
        /// Change of the motion ratio per wheel travel, bump positive.
        motion_ratio_slope: N = number("1/m", Bounds::within(-100.0, 100.0), 0.0),
    }

    /// Elastic stop: beyond its gap the force is rate·x + cubic·x³.
    Stop {
        /// Free travel of the stop from the design height.
        gap: N = number("m", Bounds::within(0.0, 5.0)),
        /// Rate beyond the gap.
        rate: N = number("N/m", POSITIVE),
        /// Hardening: force per third power of travel beyond the gap.
        cubic: N = number("N/m^3", NOT_NEGATIVE, 0.0),
        /// Stop travel over wheel travel.
        motion_ratio: N = number("1", POSITIVE, 1.0),
    }

    /// Suspension damper beside any cylinder.
    Damper {
        /// Force per velocity of the damper itself; or give `velocity` and `force`.
        coefficient: Option<N> = optional("N*s/m", Bounds::within(0.0, 1e8)),
        /// Velocities of a force–velocity table, bump positive, ascending; from 0 upwards means alike both ways.
        velocity: Option<Vec<N>> = list("m/s", Bounds::within(-100.0, 100.0)),
        /// Forces at these velocities, resisting bump positive.
        force: Option<Vec<N>> = list("N", Bounds::within(-1e7, 1e7)),
        /// Dry friction, either way.
        friction: N = number("N", Bounds::within(0.0, 1e6), 0.0),
        /// Velocity of the damper (r.m.s.) at which table and friction are taken as linear.
        amplitude: Option<N> = optional("m/s", Bounds::up_to(100.0)),
        /// Motion that the amplitude describes.
        motion: Motion = choice(Motion),
        /// Damper travel over wheel travel.
        motion_ratio: N = number("1", POSITIVE, 1.0),
        /// Rate of a mount in series with the damper; absent means rigid.
        mount_rate: Option<N> = optional("N/m", Bounds::within(1e2, 1e10)),
    }

    /// Hydraulic cylinder between wheel and body; bump squeezes its `bump` chamber (full piston area) and expands
    /// its `rebound` chamber (rod side).
    Cylinder {
        /// How its chambers take part.
        kind: CylinderKind = choice(CylinderKind),
        /// Bore.
        bore: N = number("m", Bounds::up_to(1.0)),
        /// Rod diameter, on the rebound side.
        rod: N = number("m", Bounds::within(0.0, 1.0)),
        /// Piston travel over wheel travel.
        motion_ratio: N = number("1", POSITIVE, 1.0),
        /// Change of the motion ratio per wheel travel, bump positive.
        motion_ratio_slope: N = number("1/m", Bounds::within(-100.0, 100.0), 0.0),
        /// Stroke; at rest the piston is in its middle. Sets the oil volume of the chambers.
        stroke: N = number("m", Bounds::within(0.0, 5.0), 0.0),
        /// Resistance of the passage through the piston, of a `piston_valve` cylinder.
        piston_throttle: N = number("Pa*s/m^3", RESISTANCE, 0.0),
        /// Valve in the piston, of a `piston_valve` cylinder; forward is the flow in bump.
        piston_valve: Option<Valve<N>> = maybe(Valve),
        /// Dry friction of seals and bushes, either way.
        friction: N = number("N", Bounds::within(0.0, 1e6), 0.0),
        /// Velocity of the piston (r.m.s.) at which friction is taken as linear.
        amplitude: Option<N> = optional("m/s", Bounds::up_to(100.0)),
        /// Motion that the amplitude describes.
        motion: Motion = choice(Motion),
    }

    /// Oil.
    Oil {
        /// Density at 15 °C.
        density: N = number("kg/m^3", Bounds::within(100.0, 5000.0)),
        /// Bulk modulus without air; absent means incompressible.
        bulk_modulus: Option<N> = optional("Pa", POSITIVE),
        /// Kinematic viscosity at 40 °C.
        kinematic_viscosity: N = number("m^2/s", VISCOSITY),
        /// Kinematic viscosity at 100 °C.
        kinematic_viscosity_hot: N = number("m^2/s", VISCOSITY),
        /// Thermal expansion.
        expansion: N = number("1/K", NOT_NEGATIVE, 7e-4),
        /// Volume of entrained air per volume of oil at atmospheric pressure.
        air_fraction: N = number("1", Bounds::within(0.0, 0.5), 0.0),
        /// Polytropic exponent of the entrained air.
        air_exponent: N = number("1", Bounds::within(1.0, 2.5), 1.4),
    }

    /// Oil circuit at one pressure: chambers and accumulators joined at a hub.
    Circuit {
        /// System pressure at the design condition; left out, that of the circuit it is joined to by lines.
        pressure: Option<N> = maybe_pressure,
        /// Least pressure allowed; left out, 1 bar above the atmosphere.
        minimum_pressure: Option<N> = maybe_pressure,
        /// Oil volume at the hub beside that of chambers and lines.
        volume: N = number("m^3", NOT_NEGATIVE, 0.0),
        /// Swell of hoses at the hub: volume per pressure.
        compliance: N = number("m^3/Pa", COMPLIANCE, 0.0),
        /// Chambers, keyed by corner and side, e.g. `front_left_bump`.
        chambers: Named<Port<N>> = named(Port),
        /// Accumulators.
        accumulators: Named<Accumulator<N>> = named(Accumulator),
    }

    /// Way from a cylinder chamber to the hub of its circuit, or to a node.
    Port {
        /// Node that the way leads to; left out, the hub of the circuit.
        node: Option<String> = text,
        /// Resistance of the port throttle.
        throttle: N = number("Pa*s/m^3", RESISTANCE, 0.0),
        /// Valve in the port; forward is out of the chamber.
        valve: Option<Valve<N>> = maybe(Valve),
        /// Whether the way is shut.
        closed: Flag<N> = flag,
        /// Line; absent means the chamber is at the hub.
        line: Option<Line<N>> = maybe(Line),
    }

    /// Line or hose, by its geometry (`length` and `bore`) or by data (`resistance`, `inertance`, `volume`); data
    /// take the place of what would follow from geometry.
    Line {
        /// Length.
        length: Option<N> = optional("m", Bounds::up_to(500.0)),
        /// Inner diameter.
        bore: Option<N> = optional("m", Bounds::within(5e-4, 0.5)),
        /// How its oil is accelerated.
        inertia: Inertia = choice(Inertia),
        /// Pieces that the line is cut into, so that waves in a long one are seen.
        pieces: usize = count(64),
        /// Resistance.
        resistance: Option<N> = optional("Pa*s/m^3", RESISTANCE),
        /// Inertance.
        inertance: Option<N> = optional("Pa*s^2/m^3", Bounds::within(0.0, 1e12)),
        /// Oil volume.
        volume: Option<N> = optional("m^3", Bounds::within(0.0, 1.0)),
        /// Swell of a hose: volume per length and pressure.
        swell: N = number("m^2/Pa", Bounds::within(0.0, 1e-6), 0.0),
        /// Swell of the whole hose: volume per pressure.
        compliance: N = number("m^3/Pa", COMPLIANCE, 0.0),
    }

    /// Place in the oil where lines meet.
    Node {
        /// Circuit whose pressure it has at rest.
        circuit: String = label,
        /// Oil volume there, beside that of lines.
        volume: N = number("m^3", NOT_NEGATIVE, 0.0),
        /// Swell of hoses there: volume per pressure.
        compliance: N = number("m^3/Pa", COMPLIANCE, 0.0),
    }

    /// Line from a circuit's hub or a node to another.
    ConnectingLine {
        /// Circuit or node where it starts.
        from: String = label,
        /// Circuit or node where it ends.
        to: String = label,
        /// Resistance of a throttle at its start.
        throttle: N = number("Pa*s/m^3", RESISTANCE, 0.0),
        /// Valve at its start; forward is from `from` to `to`.
        valve: Option<Valve<N>> = maybe(Valve),
        /// Whether it only balances slowly (a bleed): shut for vibration, open for a standing vehicle.
        slow: Flag<N> = flag,
        /// Whether it is shut.
        closed: Flag<N> = flag,
        /// Length.
        length: Option<N> = optional("m", Bounds::up_to(500.0)),
        /// Inner diameter.
        bore: Option<N> = optional("m", Bounds::within(5e-4, 0.5)),
        /// How its oil is accelerated.
        inertia: Inertia = choice(Inertia),
        /// Pieces that the line is cut into, so that waves in a long one are seen.
        pieces: usize = count(64),
        /// Resistance, in place of that from geometry.
        resistance: Option<N> = optional("Pa*s/m^3", RESISTANCE),
        /// Inertance, in place of that from geometry.
        inertance: Option<N> = optional("Pa*s^2/m^3", Bounds::within(0.0, 1e12)),
        /// Oil volume, in place of that from geometry.
        volume: Option<N> = optional("m^3", Bounds::within(0.0, 1.0)),
        /// Swell of a hose: volume per length and pressure.
        swell: N = number("m^2/Pa", Bounds::within(0.0, 1e-6), 0.0),
        /// Swell of the whole hose: volume per pressure.
        compliance: N = number("m^3/Pa", COMPLIANCE, 0.0),
    }

    /// Valve that is not linear, taken as a resistance at its amplitude.
    Valve {
        /// What resists the flow.
        kind: ValveKind = must_choose(ValveKind),
        /// Flow (r.m.s.) at which the valve is taken as linear.
        amplitude: N = number("m^3/s", Bounds::up_to(1.0)),
        /// Motion that the amplitude describes.
        motion: Motion = choice(Motion),
        /// Resistance of the throttle beside a check valve.
        throttle: Option<N> = optional("Pa*s/m^3", OPENING),
        /// Resistance of the open check valve itself.
        open_resistance: Option<N> = optional("Pa*s/m^3", OPENING),
        /// Pressure difference at which the check valve opens, forward.
        cracking_pressure: Option<N> = optional("Pa", Bounds::within(0.0, 1e8)),
        /// Resistance to forward flow, of a split.
        forward: Option<N> = optional("Pa*s/m^3", RESISTANCE),
        /// Resistance to backward flow, of a split.
        backward: Option<N> = optional("Pa*s/m^3", RESISTANCE),
        /// Flows of a table, ascending; from 0 upwards means alike both ways.
        flow: Option<Vec<N>> = list("m^3/s", Bounds::within(-1.0, 1.0)),
        /// Pressure drops at these flows.
        pressure_drop: Option<Vec<N>> = list("Pa", Bounds::within(-1e9, 1e9)),
        /// Diameter of an orifice.
        diameter: Option<N> = optional("m", Bounds::within(1e-4, 0.1)),
        /// Discharge coefficient of an orifice.
        discharge: Option<N> = optional("1", Bounds::within(0.1, 1.0)),
    }

    /// Mechanical link between wheels: its travel is the weighted sum of the four wheel travels (bump positive).
    Link {
        /// Weight of the front left wheel's travel.
        front_left: N = number("1", ANY, 0.0),
        /// Weight of the front right wheel's travel.
        front_right: N = number("1", ANY, 0.0),
        /// Weight of the rear left wheel's travel.
        rear_left: N = number("1", ANY, 0.0),
        /// Weight of the rear right wheel's travel.
        rear_right: N = number("1", ANY, 0.0),
        /// Rate: force per travel of the link.
        rate: N = number("N/m", NOT_NEGATIVE, 0.0),
        /// Damping: force per velocity of the link.
        damping: N = number("N*s/m", Bounds::within(0.0, 1e8), 0.0),
        /// Inertance: force per acceleration of the link.
        inertance: N = number("kg", Bounds::within(0.0, 1e6), 0.0),
    }

    /// Gas accumulator. Give either `volume` or `gas_volume`.
    Accumulator {
        /// Gas volume at precharge, empty of oil.
        volume: Option<N> = optional("m^3", Bounds::up_to(0.2)),
        /// Gas volume at rest under the design load.
        gas_volume: Option<N> = optional("m^3", Bounds::up_to(0.2)),
        /// Precharge pressure at `precharge_temperature`.
        precharge: N = pressure,
        /// Temperature at which the precharge is stated.
        precharge_temperature: N = number("K", Bounds::within(200.0, 450.0), 293.15),
        /// How the gas behaves.
        gas: GasKind = choice(GasKind),
        /// Polytropic exponent of the gas: 1 isothermal, 1.4 adiabatic.
        exponent: N = number("1", Bounds::within(1.0, 2.5), 1.4),
        /// Time in which the gas takes the temperature of its wall; left out, vibration is without heat exchange.
        relaxation_time: Option<N> = optional("s", Bounds::within(1e-4, 1e6)),
        /// Gas volume at which the separator meets its end stop.
        least_gas_volume: N = number("m^3", Bounds::within(0.0, 0.2), 0.0),
        /// Share of the charge that permeates each year.
        yearly_loss: N = number("1", Bounds::within(0.0, 0.9), 0.0),
        /// Node that it is at; left out, the hub of the circuit.
        node: Option<String> = text,
        /// Resistance of the throttle before the accumulator.
        throttle: N = number("Pa*s/m^3", RESISTANCE, 0.0),
        /// Valve before the accumulator; forward is into it.
        valve: Option<Valve<N>> = maybe(Valve),
        /// Whether the way to it is shut.
        closed: Flag<N> = flag,
        /// Line between hub and accumulator.
        line: Option<Line<N>> = maybe(Line),
    }

    /// Circuits that follow from a rule; each gets the same pressure, volume and accumulators.
    Layout {
        /// The rule.
        kind: LayoutKind = must_choose(LayoutKind),
        /// System pressure of every circuit.
        pressure: N = pressure,
        /// Oil volume at every hub beside that of chambers and lines.
        volume: N = number("m^3", NOT_NEGATIVE, 0.0),
        /// Swell of hoses at every hub: volume per pressure.
        compliance: N = number("m^3/Pa", COMPLIANCE, 0.0),
        /// Ways from the chambers to the hubs.
        ports: Ports<N> = filled(Ports),
        /// Accumulators of every circuit.
        accumulators: Named<Accumulator<N>> = named(Accumulator),
    }

    /// Ways from the chambers to the hubs, by axle and side of the piston.
    Ports {
        /// Front chambers that bump squeezes.
        front_bump: Port<N> = filled(Port),
        /// Front chambers that bump expands.
        front_rebound: Port<N> = filled(Port),
        /// Rear chambers that bump squeezes.
        rear_bump: Port<N> = filled(Port),
        /// Rear chambers that bump expands.
        rear_rebound: Port<N> = filled(Port),
    }

    /// Load case: what the vehicle stands under.
    Case {
        /// Acceleration to the left.
        lateral: N = number("m/s^2", LOADS, 0.0),
        /// Acceleration forward.
        longitudinal: N = number("m/s^2", LOADS, 0.0),
        /// Acceleration upwards, added to gravity.
        vertical: N = number("m/s^2", Bounds::within(-500.0, 500.0), 0.0),
        /// Temperature of gas and oil; left out, that of the design condition.
        temperature: Option<N> = optional("K", Bounds::within(200.0, 450.0)),
        /// Aerodynamic load on the front axle, downwards.
        downforce_front: N = number("N", Bounds::within(-1e6, 1e6), 0.0),
        /// Aerodynamic load on the rear axle, downwards.
        downforce_rear: N = number("N", Bounds::within(-1e6, 1e6), 0.0),
        /// Slope of the ground across, left side higher.
        side_slope: N = number("rad", Bounds::within(-1.5, 1.5), 0.0),
        /// Slope of the ground ahead, uphill.
        grade: N = number("rad", Bounds::within(-1.5, 1.5), 0.0),
        /// Height of the ground under the front left wheel.
        front_left: N = number("m", Bounds::within(-2.0, 2.0), 0.0),
        /// Height of the ground under the front right wheel.
        front_right: N = number("m", Bounds::within(-2.0, 2.0), 0.0),
        /// Height of the ground under the rear left wheel.
        rear_left: N = number("m", Bounds::within(-2.0, 2.0), 0.0),
        /// Height of the ground under the rear right wheel.
        rear_right: N = number("m", Bounds::within(-2.0, 2.0), 0.0),
        /// Point masses carried.
        payload: Named<PointMass<N>> = named(PointMass),
        /// Whether the gas exchanges no heat on the way there.
        fast: Flag<N> = flag,
    }

    /// Point mass carried by the body.
    PointMass {
        /// Mass.
        mass: N = number("kg", NOT_NEGATIVE),
        /// Distance ahead of the body's centre of gravity.
        x: N = number("m", ANY, 0.0),
        /// Distance to the left of the body's centre of gravity.
        y: N = number("m", ANY, 0.0),
        /// Height above the body's centre of gravity.
        z: N = number("m", ANY, 0.0),
    }

    /// Place where a person sits.
    Seat {
        /// Distance ahead of the body's centre of gravity.
        x: N = number("m", ANY),
        /// Distance to the left of the centre line.
        y: N = number("m", ANY),
        /// Height of the seat surface above the ground.
        height: N = number("m", NOT_NEGATIVE),
    }
}

impl<N> Axle<N> {
    /// The corner on one side, where the axle is given side by side.
    pub fn side(&self, left: bool) -> Option<&CornerSpec<N>> {
        self.both.as_ref().or(if left { self.left.as_ref() } else { self.right.as_ref() })
    }
}

impl<N> Spec<N> {
    /// The axle of a corner.
    pub fn axle(&self, corner: Corner) -> &Axle<N> {
        if corner.is_front() { &self.front } else { &self.rear }
    }

    /// A corner.
    pub fn corner(&self, corner: Corner) -> Option<&CornerSpec<N>> {
        self.axle(corner).side(corner.is_left())
    }
}

impl CylinderKind {
    /// Whether its rebound chamber is a port.
    pub fn has_rebound_port(self) -> bool {
        matches!(self, Self::DoubleActing | Self::ThroughRod)
    }
}

impl<N: Copy> ConnectingLine<N> {
    /// Whether it has a pipe, and not only what stands at its start.
    pub fn has_pipe(&self) -> bool {
        [self.length, self.bore, self.resistance, self.inertance, self.volume].iter().any(Option::is_some)
    }

    /// The line itself, without what stands at its start.
    pub fn line(&self) -> Line<N> {
        Line {
            length: self.length,
            bore: self.bore,
            inertia: self.inertia,
            pieces: self.pieces,
            resistance: self.resistance,
            inertance: self.inertance,
            volume: self.volume,
            swell: self.swell,
            compliance: self.compliance,
        }
    }
}
