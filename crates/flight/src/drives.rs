//! What turns the joints where they don't all follow their commands.

use undulift_gait::{Gait, Interpolation, Pattern};
use undulift_servo::{Battery, Servo};

use crate::FlightError;

/// Most commands a second that firmware may give.
const MOST_UPDATES_HZ: f64 = 10_000.0;

/// How the axes of a chain are turned, and what feeds those that servos turn.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Drives {
    /// How each axis is turned from release on, in the order of [`undulift_chain::joint_axes`].
    pub modes: Vec<Mode>,
    /// What changes on the way.
    pub faults: Vec<Fault>,
    /// The servos that modes speak of.
    pub servos: Vec<Servo>,
    /// Feeds them; absent: each has the voltage that its figures hold at.
    pub battery: Option<Battery>,
    /// Commands a second, each held until the next; absent: commands go on without steps.
    pub update_hz: Option<f64>,
}

/// What turns one axis.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Mode {
    /// It follows its command exactly, whatever torque that takes.
    Commanded,
    /// A servo turns it as well as it can.
    Driven {
        /// Of [`Drives::servos`].
        servo_idx: usize,
    },
    /// Nothing does; a rotor, where there was one, turns with it no more.
    Limp,
    /// It holds its angle.
    Locked,
}

/// One axis that fails.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Fault {
    /// In the order of [`undulift_chain::joint_axes`].
    pub axis_idx: usize,
    /// After release, s.
    pub at_s: f64,
    /// What becomes of it.
    pub failure: Failure,
}

/// What becomes of an axis that fails.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Failure {
    /// Nothing turns it any more.
    Limp,
    /// It stops at once and holds its angle: an impulse that keeps momentum and angular momentum of
    /// the whole.
    Locked,
}

impl Drives {
    /// All axes of a chain commanded.
    pub fn commanded(n_axes: usize) -> Self {
        Self { modes: vec![Mode::Commanded; n_axes], ..Self::default() }
    }

    /// Whether every axis follows its command, whatever happens.
    pub fn all_commanded(&self) -> bool {
        self.faults.is_empty() && self.modes.iter().all(|mode| *mode == Mode::Commanded)
    }

    /// - `n_axes`: that the chain has
    pub(crate) fn check(&self, gait: &Gait, n_axes: usize) -> Result<(), FlightError> {
        if self.modes.len() != n_axes {
            return Err(FlightError::ModeCount { found: self.modes.len(), axes: n_axes });
        }
        for mode in &self.modes {
            if let Mode::Driven { servo_idx } = *mode {
                let servos = self.servos.len();
                let missing = FlightError::NoSuchServo { servo: servo_idx + 1, servos };
                self.servos.get(servo_idx).ok_or(missing)?;
            }
        }
        let refuse =
            |quantity, value, allowed| Err(FlightError::Setting { quantity, value, allowed });
        for fault in &self.faults {
            if fault.axis_idx >= n_axes {
                return Err(FlightError::NoSuchAxis { axis: fault.axis_idx + 1, axes: n_axes });
            }
            if !(fault.at_s.is_finite() && fault.at_s >= 0.0) {
                return refuse("time of a fault in s", fault.at_s, "0 or more");
            }
        }
        if let Some(update_hz) = self.update_hz
            && !(update_hz > 0.0 && update_hz <= MOST_UPDATES_HZ)
        {
            return refuse("update rate in Hz", update_hz, "above 0 and at most 10000");
        }
        self.refuse_jumps(gait)
    }

    /// What follows straight lines between rows jumps in rate at each, and would knock at the rest.
    fn refuse_jumps(&self, gait: &Gait) -> Result<(), FlightError> {
        let Pattern::Table(table) = &gait.pattern else { return Ok(()) };
        let follows = self.modes.contains(&Mode::Commanded);
        match table.interpolation() {
            Interpolation::Hold if follows => Err(FlightError::Held),
            Interpolation::Linear if follows && !self.all_commanded() => Err(FlightError::Jumps),
            _ => Ok(()),
        }
    }
}
