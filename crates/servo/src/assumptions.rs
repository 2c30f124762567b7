//! What a budget had to assume, so that nobody takes silence for knowledge.

use std::fmt;

use crate::budget::Conditions;
use crate::{Endurance, Histories, Place, Servo};

/// Something that a budget took for granted.
#[derive(Debug, Clone, PartialEq)]
pub enum Assumption {
    /// Axes without a servo: torque is told, margin and power aren't.
    NoServo {
        /// Which.
        places: Vec<Place>,
    },
    /// Nothing is known of a servo's heat, so nothing is checked.
    HeatUnknown {
        /// Its name.
        servo: String,
    },
    /// RMS torque against continuous torque stands in for the winding's heat.
    HeatByRms {
        /// Its name.
        servo: String,
    },
    /// The gear's efficiency when driven is taken from the catalogue figures.
    GearEfficiencyImplied {
        /// The servo's name.
        servo: String,
        /// Which the figures imply.
        efficiency: f64,
    },
    /// A servo's rotor inertia isn't given, and none was added.
    NoRotorInertia {
        /// Its name.
        servo: String,
    },
    /// Every servo is fed at the voltage of its figures.
    NoBattery,
    /// The battery may give any current.
    NoBatteryCurrentLimit,
    /// Each drop begins with the charge at release.
    ChargedBetweenDrops,
    /// A history of no length: nothing warms and nothing is drawn.
    OneInstant,
    /// A servo is fed above the voltage of its figures; their line is carried on beyond them.
    FedAbove {
        /// Its name.
        servo: String,
        /// Most that it gets, V.
        fed_v: f64,
        /// What its figures are for, V.
        at_voltage_v: f64,
    },
}

impl fmt::Display for Assumption {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Assumption::NoServo { places } => {
                let n_axes = places.len();
                let noun = if n_axes == 1 { "axis has" } else { "axes have" };
                write!(f, "{n_axes} {noun} no servo: torque without margin, power or heat")
            }
            Assumption::HeatUnknown { servo } => {
                write!(f, "nothing is known of servo `{servo}`'s heat, so none was checked")
            }
            Assumption::HeatByRms { servo } => write!(
                f,
                "servo `{servo}` has no thermal data: RMS torque against its continuous torque stands in for heat, the winding as cold as in the catalogue"
            ),
            Assumption::GearEfficiencyImplied { servo, efficiency } => write!(
                f,
                "servo `{servo}` gives no gear efficiency: driven, it is taken as {efficiency:.2}, which its figures imply"
            ),
            Assumption::NoRotorInertia { servo } => {
                write!(f, "servo `{servo}` gives no rotor inertia: none was added")
            }
            Assumption::NoBattery => {
                write!(f, "no battery: each servo is fed at the voltage of its figures")
            }
            Assumption::NoBatteryCurrentLimit => {
                write!(f, "the battery has no current limit: any current passes")
            }
            Assumption::ChargedBetweenDrops => {
                write!(f, "each drop begins with the charge at release")
            }
            Assumption::OneInstant => {
                write!(f, "the history has no length: nothing warms and no energy is drawn")
            }
            Assumption::FedAbove { servo, fed_v, at_voltage_v } => write!(
                f,
                "servo `{servo}` is fed up to {fed_v:.2} V, above the {at_voltage_v} V of its figures: check that it may be"
            ),
        }
    }
}

/// - `fed_v`: most that each servo of the list gets, V; absent for those that aren't used
pub(crate) fn assumptions(
    servos: &[Servo],
    histories: &Histories,
    conditions: &Conditions,
    fed_v: &[Option<f64>],
) -> Vec<Assumption> {
    let mut all = Vec::new();
    let without = histories.axes.iter().filter(|axis| axis.servo_idx.is_none());
    let places: Vec<Place> = without.map(|axis| axis.place).collect();
    if !places.is_empty() {
        all.push(Assumption::NoServo { places });
    }
    for (servo, fed_v) in servos.iter().zip(fed_v) {
        if let Some(fed_v) = fed_v {
            about_servo(servo, *fed_v, &mut all);
        }
    }
    match &conditions.battery {
        None => all.push(Assumption::NoBattery),
        Some(battery) => {
            if battery.current_limit_a.is_none() {
                all.push(Assumption::NoBatteryCurrentLimit);
            }
            if conditions.drops > 1 {
                all.push(Assumption::ChargedBetweenDrops);
            }
        }
    }
    if histories.times_s.first() == histories.times_s.last() {
        all.push(Assumption::OneInstant);
    }
    all
}

fn about_servo(servo: &Servo, fed_v: f64, all: &mut Vec<Assumption>) {
    let name = || servo.name.clone();
    if fed_v > servo.at_voltage_v * (1.0 + 1e-9) {
        let at_voltage_v = servo.at_voltage_v;
        all.push(Assumption::FedAbove { servo: name(), fed_v, at_voltage_v });
    }
    match servo.endurance {
        Endurance::Unknown => all.push(Assumption::HeatUnknown { servo: name() }),
        Endurance::ContinuousTorque(_) => all.push(Assumption::HeatByRms { servo: name() }),
        Endurance::Thermal { .. } => {}
    }
    if servo.gear_efficiency.is_none() {
        let efficiency = servo.implied_efficiency();
        all.push(Assumption::GearEfficiencyImplied { servo: name(), efficiency });
    }
    if servo.rotor_inertia_at_output_kg_m2 == 0.0 {
        all.push(Assumption::NoRotorInertia { servo: name() });
    }
}
