//! What a servo draws: signed current, electrical power, copper loss.
//!
//! Nothing is given back to the battery. Current steps where a loaded servo turns round, as dry
//! friction does; at rest under torque the driving value holds.

use crate::{Quadrant, Servo, Supply};

impl Servo {
    /// Through the winding, A; negative where the load works against it. The electronics' own
    /// current is left out.
    ///
    /// - `torque_nm`: servo torque, rotor inertia in
    pub fn current_a(&self, torque_nm: f64, rate_rad_s: f64) -> f64 {
        if torque_nm == 0.0 && rate_rad_s == 0.0 {
            return 0.0;
        }
        let load_a = (self.stall_current_a - self.no_load_current_a) * torque_nm.abs()
            / self.stall_torque_nm;
        match Quadrant::of(torque_nm, rate_rad_s) {
            Quadrant::Drives => self.no_load_current_a + load_a,
            Quadrant::IsDriven => {
                let efficiency = self.implied_efficiency() * self.driven_efficiency();
                self.no_load_current_a - load_a * efficiency
            }
        }
    }

    /// i²R_T, W.
    pub fn copper_loss_w(&self, torque_nm: f64, rate_rad_s: f64, winding_ohm: f64) -> f64 {
        self.current_a(torque_nm, rate_rad_s).powi(2) * winding_ohm
    }

    /// What the motor takes in, max(0, i²R_T + E·i), W; its electronics are left out.
    pub fn motor_power_w(&self, torque_nm: f64, rate_rad_s: f64, winding_ohm: f64) -> f64 {
        let current_a = self.current_a(torque_nm, rate_rad_s);
        let volts = current_a * winding_ohm + self.back_emf_v(rate_rad_s);
        (current_a * volts).max(0.0)
    }

    /// What motor and electronics take in, W.
    pub fn electrical_power_w(&self, torque_nm: f64, rate_rad_s: f64, supply: Supply) -> f64 {
        self.motor_power_w(torque_nm, rate_rad_s, supply.winding_ohm)
            + self.idle_current_a * supply.voltage_v
    }
}

#[cfg(test)]
mod tests {
    use std::f64::consts::TAU;

    use approx::assert_relative_eq;

    use super::*;
    use crate::servo::tests::servo;

    /// Stalled V_n·I_s = 24 W, unloaded V_n·I₀ = 1.2 W, at rest nothing.
    #[test]
    fn analytic_stall_and_no_load() {
        let servo = servo();
        assert_relative_eq!(servo.motor_power_w(1.0, 0.0, 1.5), 24.0, max_relative = 1e-14);
        assert_relative_eq!(servo.motor_power_w(0.0, 10.0, 1.5), 1.2, max_relative = 1e-14);
        assert_relative_eq!(servo.motor_power_w(0.0, -10.0, 1.5), 1.2, max_relative = 1e-14);
        assert_eq!(servo.motor_power_w(0.0, 0.0, 1.5), 0.0);
        let supply = servo.cold_supply(6.0);
        assert_relative_eq!(servo.electrical_power_w(0.0, 0.0, supply), 0.06);
    }

    /// By hand, driven with 0.5 N·m and a gear efficiency of 0.8: η = 0.461 680 5, so
    /// i = 0.2 − 3.8·0.461 680 5·0.8·0.5 = −0.501 754 A; at 1 rad/s E = 0.57 V and
    /// i²R + E·i = 0.377 636 − 0.286 000 = 0.091 636 W; at 10 rad/s it would give back.
    #[test]
    fn analytic_driven_current_and_power() {
        let servo = Servo { gear_efficiency: Some(0.8), ..servo() };
        assert_relative_eq!(servo.current_a(-0.5, 1.0), -0.501_754, max_relative = 1e-5);
        assert_relative_eq!(servo.motor_power_w(-0.5, 1.0, 1.5), 0.091_636, max_relative = 1e-4);
        assert_eq!(servo.motor_power_w(-0.5, 10.0, 1.5), 0.0);
    }

    /// Current and power on both sides of τ = 0 differ by no more than the torque between them
    /// explains.
    #[test]
    fn twin_draw_is_continuous_through_no_torque() {
        let servo = servo();
        for rate_rad_s in [-7.0, -0.01, 0.01, 7.0] {
            let [before, after] =
                [-1e-9, 1e-9].map(|torque_nm| servo.motor_power_w(torque_nm, rate_rad_s, 1.5));
            assert_relative_eq!(before, after, epsilon = 1e-7);
            let [before, after] = [-1e-9, 1e-9].map(|torque| servo.current_a(torque, rate_rad_s));
            assert_relative_eq!(before, after, epsilon = 1e-8);
        }
    }

    /// Over a cycle electrical energy in is at least mechanical energy out and copper loss.
    #[test]
    fn twin_a_cycle_loses_energy() {
        let n_samples = 1000;
        for (gear_efficiency, lag_rad) in [(None, 0.0), (Some(1.0), 2.0), (Some(0.5), 3.1)] {
            let servo = Servo { gear_efficiency, ..servo() };
            let (mut electrical_w, mut needed_w) = (0.0, 0.0);
            for sample in 0..n_samples {
                let phase_rad = TAU * f64::from(sample) / f64::from(n_samples);
                let (torque_nm, rate_rad_s) =
                    (0.6 * (phase_rad + lag_rad).cos(), 6.0 * phase_rad.cos());
                electrical_w += servo.motor_power_w(torque_nm, rate_rad_s, 1.8);
                needed_w +=
                    torque_nm * rate_rad_s + servo.copper_loss_w(torque_nm, rate_rad_s, 1.8);
            }
            assert!(electrical_w >= needed_w, "{electrical_w} {needed_w}");
        }
    }
}
