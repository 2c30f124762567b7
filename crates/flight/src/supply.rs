//! What the servos are fed with, from frame to frame.

use undulift_servo::{Battery, Load};

use crate::crossing::first_at_or_below_zero;

/// How closely a voltage is found, V.
const VOLTAGE_V: f64 = 1e-6;

/// A battery on its way through a flight.
#[derive(Debug, Clone)]
pub(crate) struct Feed {
    battery: Battery,
    charge: f64,
    /// Since the last frame, A.
    current_a: f64,
}

impl Feed {
    pub(crate) fn new(battery: &Battery) -> Self {
        Self { battery: battery.clone(), charge: battery.charge, current_a: 0.0 }
    }

    /// Voltage at the servos, V: what the battery has left under the load that the servos are at
    /// that voltage. A weaker battery makes weaker servos, so there is always one.
    ///
    /// - `seconds`: since the last frame
    /// - `load_at`: what all servos take at a voltage
    pub(crate) fn voltage_v(&mut self, seconds: f64, load_at: impl Fn(f64) -> Load) -> f64 {
        self.charge -= self.current_a * seconds / self.battery.capacity_coulomb;
        let fed_at = |voltage_v: f64| self.battery.feed(self.charge, load_at(voltage_v)).ok();
        let unloaded = self.battery.feed(self.charge, Load::default());
        let most_v = unloaded.map_or(0.0, |fed| fed.servo_voltage_v);
        let missing_v = |below_v: f64| {
            let voltage_v = most_v - below_v;
            voltage_v - fed_at(voltage_v).map_or(0.0, |fed| fed.servo_voltage_v)
        };
        let voltage_v = if missing_v(0.0) <= 0.0 {
            most_v
        } else {
            most_v - first_at_or_below_zero([0.0, most_v], VOLTAGE_V, missing_v)
        };
        self.current_a = fed_at(voltage_v).map_or(0.0, |fed| fed.current_a);
        voltage_v
    }
}
