//! The torque–speed line: what a servo still has at a voltage, a speed and a winding's heat.
//!
//! The line is straight. Below the voltage that overcomes its own friction a servo has less than
//! nothing left, and the figure goes on falling.

use crate::Servo;

/// What feeds a servo, and the winding that it feeds.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Supply {
    /// At the servo, V.
    pub voltage_v: f64,
    /// Of the winding at its temperature, Ω.
    pub winding_ohm: f64,
}

/// Which way power goes between servo and chain.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Quadrant {
    /// The servo works on the chain, or holds.
    Drives,
    /// The chain works on the servo.
    IsDriven,
}

impl Quadrant {
    /// - `torque_nm`, `rate_rad_s`: servo torque and joint rate
    pub fn of(torque_nm: f64, rate_rad_s: f64) -> Self {
        if torque_nm * rate_rad_s >= 0.0 { Quadrant::Drives } else { Quadrant::IsDriven }
    }
}

impl Servo {
    /// A voltage, and the winding at 20 °C.
    pub fn cold_supply(&self, voltage_v: f64) -> Supply {
        Supply { voltage_v, winding_ohm: self.winding_resistance_ohm() }
    }

    /// Largest torque that it can give, N·m; negative where it can't even turn itself so fast.
    ///
    /// With the winding's own resistance R_T, driving:
    /// τ_s·(R/R_T)·(V − I₀R_T − (V_n − I₀R)|q̇|/ω₀)/(V_n − I₀R); driven, the speed's term is left
    /// out.
    pub fn torque_left_nm(&self, quadrant: Quadrant, rate_rad_s: f64, supply: Supply) -> f64 {
        let back_emf_v = match quadrant {
            Quadrant::Drives => self.back_emf_v(rate_rad_s),
            Quadrant::IsDriven => 0.0,
        };
        let volts = supply.voltage_v - self.no_load_current_a * supply.winding_ohm - back_emf_v;
        self.torque_nm_per_v(supply.winding_ohm) * volts
    }

    /// Torque left over torque asked; absent where none is asked.
    ///
    /// - `torque_nm`: servo torque, rotor inertia in
    pub fn margin(&self, torque_nm: f64, rate_rad_s: f64, supply: Supply) -> Option<f64> {
        let quadrant = Quadrant::of(torque_nm, rate_rad_s);
        let margin = self.torque_left_nm(quadrant, rate_rad_s, supply) / torque_nm.abs();
        // Next to no torque, whose ratio has no number, is none.
        margin.is_finite().then_some(margin)
    }

    /// Speed that the line reaches without load, rad/s; negative where it can't turn itself.
    pub fn unloaded_speed_rad_s(&self, supply: Supply) -> f64 {
        let volts = supply.voltage_v - self.no_load_current_a * supply.winding_ohm;
        self.no_load_speed_rad_s * volts / self.no_load_back_emf_v()
    }

    /// (V_n − I₀R)|q̇|/ω₀, V.
    pub fn back_emf_v(&self, rate_rad_s: f64) -> f64 {
        self.no_load_back_emf_v() * rate_rad_s.abs() / self.no_load_speed_rad_s
    }

    /// Torque that a volt beyond friction and back-EMF brings, N·m/V.
    pub(crate) fn torque_nm_per_v(&self, winding_ohm: f64) -> f64 {
        self.stall_torque_nm * self.winding_resistance_ohm()
            / (winding_ohm * self.no_load_back_emf_v())
    }
}

#[cfg(test)]
mod tests {
    use std::f64::consts::TAU;

    use approx::assert_relative_eq;

    use super::*;
    use crate::servo::tests::servo;

    /// 12 V, 3800 rpm without load, 30 mN·m stalled. On the ideal line by hand: at 2500 rpm
    /// 30·(1 − 2500/3800) = 10.2632 mN·m; most power at half stall and half speed,
    /// 0.015·198.968 = 2.984 51 W.
    #[test]
    fn analytic_worked_motor_line() {
        let rad_s = |rpm: f64| rpm * TAU / 60.0;
        let motor = Servo {
            at_voltage_v: 12.0,
            stall_torque_nm: 0.030,
            no_load_speed_rad_s: rad_s(3800.0),
            stall_current_a: 1.5,
            no_load_current_a: 0.05,
            ..servo()
        };
        let supply = motor.cold_supply(12.0);
        let left_nm = motor.torque_left_nm(Quadrant::Drives, rad_s(2500.0), supply);
        assert_relative_eq!(left_nm, 10.2632e-3, max_relative = 1e-5);
        assert_relative_eq!(motor.peak_power_w(), 2.984_51, max_relative = 2e-6);
        let half_nm = motor.torque_left_nm(Quadrant::Drives, rad_s(1900.0), supply);
        assert_relative_eq!(half_nm, 0.015, max_relative = 1e-12);
        assert_relative_eq!(half_nm * rad_s(1900.0), motor.peak_power_w(), max_relative = 1e-12);
    }

    /// At its own voltage, cold, the line runs from stall torque to no-load speed; being driven
    /// costs it nothing.
    #[test]
    fn analytic_ends_of_the_line() {
        let servo = servo();
        let supply = servo.cold_supply(6.0);
        for (quadrant, rate_rad_s, left_nm) in [
            (Quadrant::Drives, 0.0, 1.0),
            (Quadrant::Drives, 10.0, 0.0),
            (Quadrant::Drives, -10.0, 0.0),
            (Quadrant::IsDriven, 10.0, 1.0),
        ] {
            let found_nm = servo.torque_left_nm(quadrant, rate_rad_s, supply);
            assert_relative_eq!(found_nm, left_nm, epsilon = 1e-14);
        }
        assert_relative_eq!(servo.unloaded_speed_rad_s(supply), 10.0, max_relative = 1e-14);
        assert_relative_eq!(servo.margin(0.4, 5.0, supply).unwrap(), 1.25, max_relative = 1e-14);
        assert_relative_eq!(servo.margin(-0.4, 5.0, supply).unwrap(), 2.5, max_relative = 1e-14);
        assert_eq!(servo.margin(0.0, 5.0, supply), None);
    }

    /// A motor from first principles: V − E − iR_T = 0 with torque k(i − I₀), k = τ_s/(I_s − I₀).
    #[test]
    fn twin_hot_line_is_ohms_law() {
        let servo = servo();
        let constant_nm_a = servo.stall_torque_nm / (4.0 - 0.2);
        for (voltage_v, rate_rad_s, factor) in [(6.0, 3.0, 1.2), (4.8, 0.0, 1.4), (7.4, 12.0, 0.9)]
        {
            let supply = Supply { voltage_v, winding_ohm: 1.5 * factor };
            let current_a = (voltage_v - 5.7 * rate_rad_s / 10.0) / supply.winding_ohm;
            let left_nm = servo.torque_left_nm(Quadrant::Drives, rate_rad_s, supply);
            assert_relative_eq!(left_nm, constant_nm_a * (current_a - 0.2), max_relative = 1e-12);
        }
    }
}
