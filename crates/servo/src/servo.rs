//! Servos as catalogues give them.
//!
//! Figures are at the output shaft, gear losses inside, all at one voltage and with the winding
//! at 20 °C.

use std::f64::consts::{FRAC_PI_2, PI};

use crate::ServoError;
use crate::figures::Figures;

/// A servo's catalogue figures.
#[derive(Debug, Clone, PartialEq)]
pub struct Servo {
    /// As the design calls it.
    pub name: String,
    /// kg.
    pub mass_kg: f64,
    /// Voltage that torque, speed and currents are given at, V.
    pub at_voltage_v: f64,
    /// N·m.
    pub stall_torque_nm: f64,
    /// rad/s.
    pub no_load_speed_rad_s: f64,
    /// A.
    pub stall_current_a: f64,
    /// Turning unloaded, A.
    pub no_load_current_a: f64,
    /// Electronics alone, A.
    pub idle_current_a: f64,
    /// Of the gear when the load drives the motor; absent: what the figures imply.
    pub gear_efficiency: Option<f64>,
    /// Rotor inertia seen at the output shaft, kg·m².
    pub rotor_inertia_at_output_kg_m2: f64,
    /// What it stands for long.
    pub endurance: Endurance,
    /// Pulses that command it.
    pub pulse: Pulse,
    /// Its position loop.
    pub position_loop: PositionLoop,
    /// In any currency.
    pub price: Option<f64>,
}

/// What a servo stands for long.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub enum Endurance {
    /// Nothing is known.
    #[default]
    Unknown,
    /// A torque that it holds for ever, N·m.
    ContinuousTorque(f64),
    /// One thermal mass.
    Thermal {
        /// Winding to air, K/W.
        resistance_k_w: f64,
        /// J/K.
        capacity_j_k: f64,
        /// Hottest that the winding may be, K.
        winding_limit_k: f64,
    },
}

/// Pulse lengths, µs.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Pulse {
    /// At −90°.
    pub minus_90_us: f64,
    /// Straight.
    pub centre_us: f64,
    /// At 90°.
    pub plus_90_us: f64,
}

impl Default for Pulse {
    fn default() -> Self {
        Self { minus_90_us: 500.0, centre_us: 1500.0, plus_90_us: 2500.0 }
    }
}

/// A proportional loop on the angle's error.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct PositionLoop {
    /// Error beyond the deadband that calls for full drive, rad.
    pub full_at_rad: f64,
    /// Error that calls for none, rad.
    pub deadband_rad: f64,
}

impl Default for PositionLoop {
    fn default() -> Self {
        Self { full_at_rad: 5_f64.to_radians(), deadband_rad: 0.2_f64.to_radians() }
    }
}

impl Servo {
    /// Refuses figures that no servo has.
    ///
    /// # Errors
    ///
    /// [`ServoError::Figure`], [`ServoError::Currents`], [`ServoError::Efficiency`] or
    /// [`ServoError::Pulses`], the first that is met.
    pub fn check(&self) -> Result<(), ServoError> {
        let name = format!("servo `{}`", self.name);
        let figures = Figures { of: &name };
        figures.within("mass_kg", self.mass_kg, [0.0, 1000.0])?;
        figures.within("at_voltage_v", self.at_voltage_v, [1e-3, 1000.0])?;
        figures.within("stall_torque_nm", self.stall_torque_nm, [1e-6, 1e4])?;
        figures.within("no_load_speed_rad_s", self.no_load_speed_rad_s, [1e-6, 1e4])?;
        figures.within("stall_current_a", self.stall_current_a, [1e-6, 1000.0])?;
        figures.within("no_load_current_a", self.no_load_current_a, [0.0, 1000.0])?;
        figures.within("idle_current_a", self.idle_current_a, [0.0, 1000.0])?;
        figures.within_where_given("gear_efficiency", self.gear_efficiency, [1e-6, 1.0])?;
        let inertia_kg_m2 = self.rotor_inertia_at_output_kg_m2;
        figures.within("rotor_inertia_at_output_kg_m2", inertia_kg_m2, [0.0, 1000.0])?;
        figures.within_where_given("price", self.price, [0.0, 1e9])?;
        let PositionLoop { full_at_rad, deadband_rad } = self.position_loop;
        figures.within("loop.full_at_rad", full_at_rad, [1e-9, PI])?;
        figures.within("loop.deadband_rad", deadband_rad, [0.0, FRAC_PI_2])?;
        self.endurance.check(&figures)?;
        self.check_pulse(&figures)?;
        self.check_efficiency()
    }

    fn check_pulse(&self, figures: &Figures<'_>) -> Result<(), ServoError> {
        const PULSE_US: [f64; 2] = [1.0, 20_000.0];
        let Pulse { minus_90_us, centre_us, plus_90_us } = self.pulse;
        figures.within("pulse_us.minus_90", minus_90_us, PULSE_US)?;
        figures.within("pulse_us.centre", centre_us, PULSE_US)?;
        figures.within("pulse_us.plus_90", plus_90_us, PULSE_US)?;
        if (centre_us - minus_90_us) * (plus_90_us - centre_us) > 0.0 {
            return Ok(());
        }
        Err(ServoError::Pulses { servo: self.name.clone(), minus_90_us, centre_us, plus_90_us })
    }

    fn check_efficiency(&self) -> Result<(), ServoError> {
        let (no_load_a, stall_a) = (self.no_load_current_a, self.stall_current_a);
        if no_load_a >= stall_a {
            return Err(ServoError::Currents { servo: self.name.clone(), no_load_a, stall_a });
        }
        let efficiency = self.implied_efficiency();
        if efficiency > 1.0 {
            return Err(ServoError::Efficiency { servo: self.name.clone(), efficiency });
        }
        Ok(())
    }

    /// R = V_n/I_s of the winding at 20 °C, Ω.
    pub fn winding_resistance_ohm(&self) -> f64 {
        self.at_voltage_v / self.stall_current_a
    }

    /// Back-EMF at no-load speed, V_n − I₀R, V.
    pub fn no_load_back_emf_v(&self) -> f64 {
        self.at_voltage_v * (1.0 - self.no_load_current_a / self.stall_current_a)
    }

    /// Mechanical over electrical power that the figures imply, copper loss aside:
    /// ω₀τ_s/[(V_n − I₀R)(I_s − I₀)]. At most 1.
    pub fn implied_efficiency(&self) -> f64 {
        let load_current_a = self.stall_current_a - self.no_load_current_a;
        self.no_load_speed_rad_s * self.stall_torque_nm
            / (self.no_load_back_emf_v() * load_current_a)
    }

    /// Efficiency of the gear when the load drives the motor.
    pub fn driven_efficiency(&self) -> f64 {
        self.gear_efficiency.unwrap_or_else(|| self.implied_efficiency())
    }

    /// Most that the shaft gives at `at_voltage_v`: half the stall torque at half the speed, W.
    pub fn peak_power_w(&self) -> f64 {
        0.25 * self.stall_torque_nm * self.no_load_speed_rad_s
    }
}

impl Endurance {
    fn check(&self, figures: &Figures<'_>) -> Result<(), ServoError> {
        match *self {
            Endurance::Unknown => Ok(()),
            Endurance::ContinuousTorque(torque_nm) => {
                figures.within("continuous_torque_nm", torque_nm, [1e-9, 1e4])
            }
            Endurance::Thermal { resistance_k_w, capacity_j_k, winding_limit_k } => {
                figures.within("thermal.resistance_k_w", resistance_k_w, [1e-6, 1e4])?;
                figures.within("thermal.capacity_j_k", capacity_j_k, [1e-6, 1e6])?;
                figures.within("thermal.winding_limit_k", winding_limit_k, [293.15, 773.15])
            }
        }
    }
}

#[cfg(test)]
pub(crate) mod tests {
    use approx::assert_relative_eq;

    use super::*;

    /// An invented servo with round figures.
    pub(crate) fn servo() -> Servo {
        Servo {
            name: "round".into(),
            mass_kg: 0.030,
            at_voltage_v: 6.0,
            stall_torque_nm: 1.0,
            no_load_speed_rad_s: 10.0,
            stall_current_a: 4.0,
            no_load_current_a: 0.2,
            idle_current_a: 0.01,
            gear_efficiency: None,
            rotor_inertia_at_output_kg_m2: 2e-4,
            endurance: Endurance::Thermal {
                resistance_k_w: 15.0,
                capacity_j_k: 12.0,
                winding_limit_k: 383.15,
            },
            pulse: Pulse::default(),
            position_loop: PositionLoop::default(),
            price: None,
        }
    }

    /// By hand: R = 6/4 = 1.5 Ω, V_n − I₀R = 5.7 V, η = 10·1/(5.7·3.8) = 0.461681.
    #[test]
    fn analytic_round_figures_imply_an_efficiency() {
        let servo = servo();
        assert_eq!(servo.check(), Ok(()));
        assert_relative_eq!(servo.winding_resistance_ohm(), 1.5);
        assert_relative_eq!(servo.no_load_back_emf_v(), 5.7, max_relative = 1e-14);
        assert_relative_eq!(servo.implied_efficiency(), 0.461_680_5, max_relative = 1e-6);
        assert_eq!(servo.driven_efficiency(), servo.implied_efficiency());
    }

    /// A 2.0 N·m class servo at 0.14 s/60°: (π/3)/0.14 = 7.479 98 rad/s, a quarter of the product
    /// 3.739 99 W (plain arithmetic on figures as they are sold).
    #[test]
    fn analytic_peak_power_of_a_two_newton_metre_servo() {
        let no_load_speed_rad_s = 60_f64.to_radians() / 0.14;
        let servo = Servo { stall_torque_nm: 2.0, no_load_speed_rad_s, ..servo() };
        assert_relative_eq!(servo.no_load_speed_rad_s, 7.479_98, max_relative = 1e-6);
        assert_relative_eq!(servo.peak_power_w(), 3.739_99, max_relative = 1e-6);
    }

    /// Each wrong figure is refused by name.
    #[test]
    fn twin_impossible_figures_are_refused() {
        let refused = |servo: Servo| servo.check().unwrap_err().to_string();
        let found = refused(Servo { stall_torque_nm: 0.0, ..servo() });
        assert_eq!(
            found,
            "servo `round`: stall_torque_nm is 0, but must be from 0.000001 to 10000"
        );
        let found = refused(Servo { stall_torque_nm: f64::NAN, ..servo() });
        assert!(found.contains("stall_torque_nm is NaN"), "{found}");
        let found = refused(Servo { no_load_current_a: 4.0, ..servo() });
        assert!(found.contains("4 A unloaded is not less than the 4 A"), "{found}");
        let found = refused(Servo { stall_torque_nm: 3.0, ..servo() });
        assert!(found.contains("an efficiency of 1.39"), "{found}");
        for efficiency in [0.0, 1.01, f64::NAN] {
            let found = refused(Servo { gear_efficiency: Some(efficiency), ..servo() });
            assert!(found.contains("gear_efficiency"), "{found}");
        }
        let pulse = Pulse { centre_us: 2500.0, ..Pulse::default() };
        assert!(refused(Servo { pulse, ..servo() }).contains("neither rise nor fall"));
        let endurance = Endurance::ContinuousTorque(0.0);
        assert!(refused(Servo { endurance, ..servo() }).contains("continuous_torque_nm"));
    }
}
