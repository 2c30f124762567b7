//! What a budget fails by, how far, and which servo would pass.

use std::fmt;

use crate::{Place, Servo, Supply, When};

/// A limit that a history misses.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Miss {
    /// Which limit.
    pub kind: MissKind,
    /// Whose; absent for battery and regulator.
    pub place: Option<Place>,
    /// When it is missed most; absent where that has no instant.
    pub when: Option<When>,
    /// The figure, in the limit's unit.
    pub found: f64,
    /// What it may be.
    pub limit: f64,
    /// How many times over the limit, above 1; infinite where no factor tells it.
    pub times_over: f64,
    /// What would help, as far as the servo alone can tell.
    pub remedies: Remedies,
}

/// Which limit is missed, and its unit.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum MissKind {
    /// The battery holds no voltage at the power asked, W.
    BatteryCollapse,
    /// Torque margin below the factor asked, 1.
    Torque,
    /// Speed above what the line reaches without load, rad/s.
    Speed,
    /// Winding hotter than it may be, K.
    WindingHeat,
    /// RMS torque above what the servo holds for ever, N·m.
    ContinuousTorque,
    /// Battery current above its limit, A.
    BatteryCurrent,
    /// Regulator current above its limit, A.
    RegulatorCurrent,
    /// More charge drawn in a drop than the battery held, C.
    BatteryEmpty,
}

impl MissKind {
    /// A word or two for reports.
    pub fn word(self) -> &'static str {
        match self {
            MissKind::BatteryCollapse => "battery collapse",
            MissKind::Torque => "torque",
            MissKind::Speed => "speed",
            MissKind::WindingHeat => "winding heat",
            MissKind::ContinuousTorque => "continuous torque",
            MissKind::BatteryCurrent => "battery current",
            MissKind::RegulatorCurrent => "regulator current",
            MissKind::BatteryEmpty => "battery empty",
        }
    }
}

impl Miss {
    /// What is missed by how much, and where, without the time.
    pub fn limit_and_place(&self) -> String {
        let place = self.place.map(|Place { joint, axis }| format!(" at joint {joint} {axis}"));
        format!("{}{}", self.figure_and_limit(), place.unwrap_or_default())
    }

    fn figure_and_limit(&self) -> String {
        let Miss { found, limit, .. } = *self;
        match self.kind {
            MissKind::BatteryCollapse => {
                format!("the battery collapses under {found:.1} W; it has {limit:.1} W at most")
            }
            MissKind::Torque => format!("torque margin {found:.2}, below {limit:.2}"),
            MissKind::Speed => {
                let [found, limit] = [found, limit].map(f64::to_degrees);
                format!("{found:.0}°/s, above the {limit:.0}°/s reached without load")
            }
            MissKind::WindingHeat => {
                let [found, limit] = [found, limit].map(|kelvin| kelvin - 273.15);
                format!("winding at {found:.0} °C, above {limit:.0} °C")
            }
            MissKind::ContinuousTorque => {
                format!("RMS torque {found:.3} N·m, above the continuous {limit:.3} N·m")
            }
            MissKind::BatteryCurrent => format!("battery gives {found:.1} A, above {limit:.1} A"),
            MissKind::RegulatorCurrent => {
                format!("regulator gives {found:.1} A, above {limit:.1} A")
            }
            MissKind::BatteryEmpty => {
                format!("the drop takes {found:.0} C of the {limit:.0} C in the battery")
            }
        }
    }
}

impl fmt::Display for Miss {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.limit_and_place())?;
        self.when.map_or(Ok(()), |when| write!(f, ", t = {:.2} s", when.at_s))
    }
}

/// Which servo in place of the missing one would pass at every instant, all its other figures and
/// the voltage kept. Both factors are above 1; absent where that change alone doesn't help.
///
/// A stronger servo at the same currents, or a faster one, may be better than any that is made;
/// and a change of mass or rotor inertia would change the torque asked.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Remedies {
    /// Factor on the stall torque.
    pub stronger: Option<f64>,
    /// Factor on the no-load speed.
    pub faster: Option<f64>,
}

impl Servo {
    /// Factor on the stall torque that lifts the margin to one asked; infinite where none does.
    pub(crate) fn stronger(&self, margin: f64, torque_factor: f64) -> f64 {
        if margin > 0.0 { torque_factor / margin } else { f64::INFINITY }
    }

    /// Factor on the no-load speed that does, driving; infinite where none does.
    pub(crate) fn faster(
        &self,
        torque_nm: f64,
        rate_rad_s: f64,
        supply: Supply,
        torque_factor: f64,
    ) -> f64 {
        // Below this share of the line the back-EMF must stay; a faster servo has less of it.
        let friction_v = self.no_load_current_a * supply.winding_ohm;
        let asked_v = torque_factor * torque_nm.abs() / self.torque_nm_per_v(supply.winding_ohm);
        let room_v = supply.voltage_v - friction_v - asked_v;
        if room_v > 0.0 { self.back_emf_v(rate_rad_s) / room_v } else { f64::INFINITY }
    }
}

#[cfg(test)]
mod tests {
    use approx::assert_relative_eq;

    use super::*;
    use crate::servo::tests::servo;

    /// The stronger and the faster servo meet the margin asked exactly.
    #[test]
    fn twin_remedied_servos_meet_the_margin() {
        let servo = servo();
        let supply = Supply { voltage_v: 5.5, winding_ohm: 1.7 };
        let margin = servo.margin(0.4, 6.0, supply).unwrap();
        let stall_torque_nm = servo.stall_torque_nm * servo.stronger(margin, 1.5);
        let stronger = Servo { stall_torque_nm, ..servo.clone() };
        assert_relative_eq!(stronger.margin(0.4, 6.0, supply).unwrap(), 1.5, max_relative = 1e-12);
        let factor = servo.faster(0.4, 6.0, supply, 1.5);
        assert!(factor > 1.0);
        let no_load_speed_rad_s = servo.no_load_speed_rad_s * factor;
        let faster = Servo { no_load_speed_rad_s, ..servo.clone() };
        assert_relative_eq!(faster.margin(0.4, 6.0, supply).unwrap(), 1.5, max_relative = 1e-12);
        assert_eq!(servo.faster(0.9, 6.0, supply, 1.5), f64::INFINITY);
        assert_eq!(servo.stronger(-0.1, 1.5), f64::INFINITY);
    }
}
