//! A battery under load: its voltage, whether it collapses, how its charge goes down.
//!
//! Voltage follows power at once: V = V_oc − R_int·P/V, the higher root. Where there is none the
//! battery can't give so much power at any voltage, and collapses.

use crate::{Battery, Regulator};

/// What all servos ask of their supply at an instant.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Load {
    /// Of the motors, at any voltage, W.
    pub motors_w: f64,
    /// Of their electronics, A.
    pub idle_a: f64,
}

/// A battery that holds its load.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Fed {
    /// At the battery's terminals, V.
    pub voltage_v: f64,
    /// Out of the battery, A.
    pub current_a: f64,
    /// The same times the voltage, W.
    pub power_w: f64,
    /// At the servos, V.
    pub servo_voltage_v: f64,
    /// Into all servos, out of the regulator where there is one, A.
    pub servo_current_a: f64,
}

/// A battery that can't.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Collapse {
    /// What was asked of it, W.
    pub asked_w: f64,
    /// Most that it could give, W.
    pub most_w: f64,
}

impl Battery {
    /// Voltage and current under a load.
    ///
    /// - `charge`: 0 empty to 1 full
    ///
    /// # Errors
    ///
    /// [`Collapse`] where no voltage carries the load; that is a result, not a mistake.
    pub fn feed(&self, charge: f64, load: Load) -> Result<Fed, Collapse> {
        let Some(Regulator { volts, efficiency, .. }) = self.regulator else {
            return self.feed_straight(charge, load, 1.0);
        };
        let servos_w = load.motors_w + load.idle_a * volts;
        let held = self.terminals(charge, 0.0, servos_w / efficiency + self.electronics_w);
        match held {
            Ok(voltage_v) if voltage_v >= volts => {
                let power_w = servos_w / efficiency + self.electronics_w;
                Ok(Fed {
                    voltage_v,
                    current_a: power_w / voltage_v,
                    power_w,
                    servo_voltage_v: volts,
                    servo_current_a: servos_w / volts,
                })
            }
            // Too little to regulate: the servos get what the battery has.
            _ => self.feed_straight(charge, load, efficiency),
        }
    }

    /// Servos at the battery's own voltage, which their electronics' power follows.
    fn feed_straight(&self, charge: f64, load: Load, efficiency: f64) -> Result<Fed, Collapse> {
        let fixed_w = load.motors_w / efficiency + self.electronics_w;
        let voltage_v = self.terminals(charge, load.idle_a / efficiency, fixed_w)?;
        let servos_w = load.motors_w + load.idle_a * voltage_v;
        let power_w = servos_w / efficiency + self.electronics_w;
        Ok(Fed {
            voltage_v,
            current_a: power_w / voltage_v,
            power_w,
            servo_voltage_v: voltage_v,
            servo_current_a: servos_w / voltage_v,
        })
    }

    /// Higher root V of V = V_oc − R_int·(I + P/V).
    fn terminals(&self, charge: f64, current_a: f64, power_w: f64) -> Result<f64, Collapse> {
        let resistance_ohm = self.resistance_ohm();
        let free_v = self.open_circuit_v(charge) - resistance_ohm * current_a;
        let discriminant = free_v * free_v - 4.0 * resistance_ohm * power_w;
        if free_v > 0.0 && discriminant >= 0.0 {
            return Ok(0.5 * (free_v + discriminant.sqrt()));
        }
        let most_w = free_v.max(0.0).powi(2) / (4.0 * resistance_ohm);
        Err(Collapse { asked_w: power_w, most_w })
    }
}

/// A battery on its way through a history.
#[derive(Debug, Clone)]
pub struct Discharge<'a> {
    battery: &'a Battery,
    charge: f64,
    fed: Option<Fed>,
    /// Given so far, C and J.
    coulomb: f64,
    energy_j: f64,
}

impl<'a> Discharge<'a> {
    /// - `charge`: at the start
    pub fn new(battery: &'a Battery, charge: f64) -> Self {
        Self { battery, charge, fed: None, coulomb: 0.0, energy_j: 0.0 }
    }

    /// Goes on to the next instant, current and power straight between them.
    ///
    /// - `seconds`: since the last instant
    ///
    /// # Errors
    ///
    /// [`Collapse`]; nothing is then given on either side of the instant.
    pub fn go_on(&mut self, load: Load, seconds: f64) -> Result<Fed, Collapse> {
        if let Some(before) = self.fed {
            let from = self.charge;
            // Heun's method: the current at the end follows from the charge that is left there.
            self.charge = from - before.current_a * seconds / self.battery.capacity_coulomb;
            let end_a = self.battery.feed(self.charge, load).map(|fed| fed.current_a);
            let coulomb = 0.5 * (before.current_a + end_a.unwrap_or(0.0)) * seconds;
            self.charge = from - coulomb / self.battery.capacity_coulomb;
            self.coulomb += coulomb;
        }
        let fed = self.battery.feed(self.charge, load);
        if let (Some(before), Ok(now)) = (self.fed, fed) {
            self.energy_j += 0.5 * (before.power_w + now.power_w) * seconds;
        }
        self.fed = fed.ok();
        fed
    }

    /// 0 empty to 1 full; below 0 where it gave more than it had.
    pub fn charge(&self) -> f64 {
        self.charge
    }

    /// Given so far, C.
    pub fn coulomb(&self) -> f64 {
        self.coulomb
    }

    /// Given so far at its terminals, J.
    pub fn energy_j(&self) -> f64 {
        self.energy_j
    }
}

/// Parts that a full charge is cut into to count drops.
const CHARGE_PARTS: u32 = 8;

impl Battery {
    /// How many times a full charge bears a history, none of it between; up to where it is empty
    /// or collapses. Absent where the history takes nothing.
    ///
    /// - `loads`: seconds since the instant before, and the load
    pub(crate) fn repeats_per_charge(&self, loads: &[(f64, Load)]) -> Option<f64> {
        let mut repeats = 0.0;
        for part in (0..CHARGE_PARTS).rev() {
            let charge = (f64::from(part) + 0.5) / f64::from(CHARGE_PARTS);
            let mut discharge = Discharge::new(self, charge);
            let holds = loads.iter().all(|&(seconds, load)| discharge.go_on(load, seconds).is_ok());
            if !holds {
                break;
            }
            repeats += self.capacity_coulomb / f64::from(CHARGE_PARTS) / discharge.coulomb();
        }
        repeats.is_finite().then_some(repeats)
    }
}

#[cfg(test)]
mod tests {
    use approx::assert_relative_eq;

    use super::*;
    use crate::battery::tests::battery;

    /// By hand: 8.4 V behind 0.03 Ω under 60 + 1 W: V = 4.2 + √(17.64 − 1.83) = 8.176 18 V,
    /// 7.460 697 A. Most is 8.4²/0.12 = 588 W.
    #[test]
    fn analytic_higher_root_and_collapse() {
        let battery = battery();
        let fed = battery.feed(1.0, Load { motors_w: 60.0, idle_a: 0.0 }).unwrap();
        assert_relative_eq!(fed.voltage_v, 8.176_179, max_relative = 1e-6);
        assert_relative_eq!(fed.current_a, 7.460_697, max_relative = 1e-6);
        assert!(battery.feed(1.0, Load { motors_w: 586.9, idle_a: 0.0 }).is_ok());
        let collapse = battery.feed(1.0, Load { motors_w: 587.1, idle_a: 0.0 }).unwrap_err();
        assert_relative_eq!(collapse.most_w, 588.0, max_relative = 1e-12);
        assert_relative_eq!(collapse.asked_w, 588.1, max_relative = 1e-12);
    }

    /// What is found satisfies V = V_oc − R_int·P/V and min(regulator, battery) on every side of
    /// the regulator's voltage.
    #[test]
    fn twin_feeding_satisfies_its_equations() {
        let regulator = Regulator { volts: 6.0, current_limit_a: 10.0, efficiency: 0.9 };
        for regulator in [None, Some(regulator)] {
            let battery = Battery { cell_resistance_ohm: 0.1, regulator, ..battery() };
            for (charge, motors_w) in [(1.0, 5.0), (0.5, 20.0), (0.0, 40.0), (1.0, 45.0)] {
                let load = Load { motors_w, idle_a: 0.3 };
                let fed = battery.feed(charge, load).unwrap();
                let servo_v = regulator.map_or(fed.voltage_v, |r| r.volts.min(fed.voltage_v));
                assert_relative_eq!(fed.servo_voltage_v, servo_v, max_relative = 1e-14);
                let efficiency = regulator.map_or(1.0, |r| r.efficiency);
                let power_w = (motors_w + 0.3 * servo_v) / efficiency + 1.0;
                assert_relative_eq!(fed.power_w, power_w, max_relative = 1e-12);
                let voltage_v = battery.open_circuit_v(charge) - 0.2 * power_w / fed.voltage_v;
                assert_relative_eq!(fed.voltage_v, voltage_v, max_relative = 1e-12);
            }
        }
    }

    /// Without resistance the charge that constant power takes from a straight line of voltage
    /// has a closed form: Q·(V_0² − V_1²)/(2·ΔV) = P·t over the fall of voltage.
    #[test]
    fn analytic_constant_power_empties_by_a_square_root() {
        let battery = Battery { cell_resistance_ohm: 0.0, ..battery() };
        let mut discharge = Discharge::new(&battery, 1.0);
        let load = Load { motors_w: 19.0, idle_a: 0.0 };
        for _ in 0..=300 {
            discharge.go_on(load, 1.0).unwrap();
        }
        let end_v = (8.4_f64.powi(2) - 2.0 * 20.0 * 300.0 * 1.8 / 1620.0).sqrt();
        assert_relative_eq!(battery.open_circuit_v(discharge.charge()), end_v, max_relative = 1e-6);
        assert_relative_eq!(discharge.energy_j(), 6000.0, max_relative = 1e-12);
        let gone = (1.0 - discharge.charge()) * 1620.0;
        assert_relative_eq!(discharge.coulomb(), gone, max_relative = 1e-12);
    }

    /// The count of drops against drops that really follow each other.
    #[test]
    fn twin_repeats_against_one_after_another() {
        let battery = battery();
        let load = Load { motors_w: 40.0, idle_a: 0.1 };
        let loads = [(0.0, load), (1.0, load), (1.0, load)];
        let mut discharge = Discharge::new(&battery, 1.0);
        let mut count = 0;
        while discharge.charge() > 0.0 {
            discharge.go_on(load, 2.0).unwrap();
            count += 1;
        }
        let found = battery.repeats_per_charge(&loads).unwrap();
        assert!((found - f64::from(count)).abs() < 2.0, "{found} {count}");
        assert_eq!(Battery { electronics_w: 0.0, ..battery }.repeats_per_charge(&[]), None);
    }
}
