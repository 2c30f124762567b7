//! A design's servos, as what turns the joints of a flight.

use undulift_chain::joint_axes;
use undulift_flight::{Drives, Fault, Mode};
use undulift_servo::Servo;

use crate::Design;

impl Design {
    /// What turns the joints: every servo its axis where `driven`, else all follow their commands.
    pub fn drives(&self, driven: bool, faults: Vec<Fault>) -> Drives {
        let axes = joint_axes(self.glider.chain.joints());
        let names: Vec<&String> = self.servos.keys().collect();
        let mode = |servo_name: Option<&str>| {
            let servo_idx = names.iter().position(|known| Some(known.as_str()) == servo_name);
            match servo_idx {
                Some(servo_idx) if driven => Mode::Driven { servo_idx },
                _ => Mode::Commanded,
            }
        };
        let name = |of: &undulift_chain::AxisOf| self.servo_names.of(of.joint_idx, of.axis);
        Drives {
            modes: axes.iter().map(|of| mode(name(of))).collect(),
            faults,
            servos: self.servos.values().cloned().collect::<Vec<Servo>>(),
            battery: self.battery.as_ref().map(|battery| battery.supply.clone()),
            update_hz: self.update_hz,
        }
    }
}
