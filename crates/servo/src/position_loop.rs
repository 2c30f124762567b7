//! The torque of a servo that follows its command.
//!
//! A proportional position loop on a direct-current motor: its own back-EMF damps it, and its line
//! limits it. Delay, integral action and the loop's own sampling are missing.

use crate::{PositionLoop, Quadrant, Servo, Supply};

/// A servo's loop at one supply, ready to be asked often.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct FedLoop {
    position_loop: PositionLoop,
    /// At full drive without speed, N·m.
    full_nm: f64,
    /// By which the back-EMF damps, N·m·s.
    damping_nm_s: f64,
    /// Left standing still, N·m, and what a rad/s takes of it while driving.
    standing_nm: f64,
    falling_nm_s: f64,
}

impl PositionLoop {
    /// Share of full drive that an error calls for, −1 to 1.
    pub fn drive(&self, error_rad: f64) -> f64 {
        let beyond_rad = error_rad.abs() - self.deadband_rad;
        if beyond_rad <= 0.0 {
            return 0.0;
        }
        (beyond_rad / self.full_at_rad).min(1.0).copysign(error_rad)
    }
}

impl Servo {
    /// τ_s·(d·(V − I₀R)/(V_n − I₀R) − q̇/ω₀) for the loop's drive d, held to what the line leaves,
    /// N·m.
    ///
    /// - `error_rad`: command less angle
    pub fn loop_torque_nm(&self, error_rad: f64, rate_rad_s: f64, supply: Supply) -> f64 {
        self.fed_loop(supply).torque_nm(error_rad, rate_rad_s)
    }

    /// The loop at one supply.
    pub fn fed_loop(&self, supply: Supply) -> FedLoop {
        let cold_volts = supply.voltage_v - self.no_load_current_a * self.winding_resistance_ohm();
        let standing_nm = self.torque_left_nm(Quadrant::Drives, 0.0, supply);
        let at_one_rad_s_nm = self.torque_left_nm(Quadrant::Drives, 1.0, supply);
        FedLoop {
            position_loop: self.position_loop,
            full_nm: self.stall_torque_nm * cold_volts / self.no_load_back_emf_v(),
            damping_nm_s: self.stall_torque_nm / self.no_load_speed_rad_s,
            standing_nm,
            falling_nm_s: standing_nm - at_one_rad_s_nm,
        }
    }
}

impl FedLoop {
    /// As [`Servo::loop_torque_nm`] has it, N·m.
    #[inline]
    pub fn torque_nm(&self, error_rad: f64, rate_rad_s: f64) -> f64 {
        let (asked_nm, left_nm) = self.asked_and_left_nm(error_rad, rate_rad_s);
        asked_nm.clamp(-left_nm, left_nm)
    }

    /// Whether the servo gives all it has: full drive, or all that its line leaves.
    pub fn is_saturated(&self, error_rad: f64, rate_rad_s: f64) -> bool {
        let (asked_nm, left_nm) = self.asked_and_left_nm(error_rad, rate_rad_s);
        self.position_loop.drive(error_rad).abs() >= 1.0 || asked_nm.abs() > left_nm
    }

    #[inline]
    fn asked_and_left_nm(&self, error_rad: f64, rate_rad_s: f64) -> (f64, f64) {
        let drive = self.position_loop.drive(error_rad);
        let asked_nm = drive * self.full_nm - rate_rad_s * self.damping_nm_s;
        let left_nm = match Quadrant::of(asked_nm, rate_rad_s) {
            Quadrant::Drives => self.standing_nm - rate_rad_s.abs() * self.falling_nm_s,
            Quadrant::IsDriven => self.standing_nm,
        };
        (asked_nm, left_nm.max(0.0))
    }
}

#[cfg(test)]
mod tests {
    use approx::assert_relative_eq;

    use super::*;
    use crate::servo::tests::servo;

    /// By hand with 5° and 0.2°: 0.2° and less call for nothing, 2.7° for half, 5.2° and more for
    /// all; the sign follows the error.
    #[test]
    fn analytic_drive() {
        let position_loop = PositionLoop::default();
        for (error_deg, drive) in
            [(0.0, 0.0), (0.2, 0.0), (2.7, 0.5), (-2.7, -0.5), (5.2, 1.0), (-90.0, -1.0)]
        {
            let found = position_loop.drive(f64::to_radians(error_deg));
            assert_relative_eq!(found, drive, epsilon = 1e-14);
        }
    }

    /// Full drive runs along the line where the servo drives and holds stall torque where it is
    /// driven; no error brakes with the back-EMF; a voltage below friction does nothing.
    #[test]
    fn analytic_torque_meets_the_line() {
        let servo = servo();
        let supply = servo.cold_supply(6.0);
        for (error_rad, rate_rad_s, torque_nm) in [
            (1.0, 0.0, 1.0),
            (1.0, 4.0, 0.6),
            (1.0, -4.0, 1.0),
            (-1.0, 4.0, -1.0),
            (0.0, 4.0, -0.4),
            (1.0, 12.0, -0.2),
        ] {
            let found_nm = servo.loop_torque_nm(error_rad, rate_rad_s, supply);
            assert_relative_eq!(found_nm, torque_nm, epsilon = 1e-12);
        }
        assert_eq!(servo.loop_torque_nm(1.0, 4.0, servo.cold_supply(0.2)), 0.0);
    }

    /// A hot winding limits the loop to its own line.
    #[test]
    fn twin_hot_servo_is_a_weaker_one() {
        let servo = servo();
        let supply = Supply { voltage_v: 6.0, winding_ohm: 2.0 };
        let left_nm = servo.torque_left_nm(Quadrant::Drives, 4.0, supply);
        assert!(left_nm < 0.6);
        let found_nm = servo.loop_torque_nm(1.0, 4.0, supply);
        assert_relative_eq!(found_nm, left_nm, max_relative = 1e-14);
    }
}
