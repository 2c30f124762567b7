//! Servos and what feeds them: torque–speed line, current, heat, battery, and budgets from
//! histories of torque and speed.
//!
//! A servo is a direct-current motor behind a gear, known by its catalogue figures at the output
//! shaft. Gear play, friction that varies with load or heat, iron losses, the winding's inductance
//! and the driver's own losses are missing, and nothing is given back to the battery. Nothing here
//! knows of a flight, opens a file or prints: an instant or a history goes in, figures come out.
//!
//! Torque and rate are positive along the joint's positive angle; a servo drives while their
//! product isn't negative, else it is driven. SI units, radians and kelvin.

mod assumptions;
mod axis_run;
mod battery;
mod battery_run;
mod budget;
mod draw;
mod error;
mod feeding;
mod figures;
mod heat;
mod history;
mod line;
mod misses;
mod position_loop;
mod servo;
mod worst;

pub use assumptions::Assumption;
pub use battery::{Battery, CellVoltage, Regulator};
pub use budget::{AxisBudget, BatteryBudget, Budget, Conditions, budget};
pub use error::ServoError;
pub use feeding::{Collapse, Discharge, Fed, Load};
pub use heat::{COPPER_PER_K, COPPER_REFERENCE_K, Heat, Winding};
pub use history::{AxisHistory, Histories, Place, When};
pub use line::{Quadrant, Supply};
pub use misses::{Miss, MissKind, Remedies};
pub use position_loop::FedLoop;
pub use servo::{Endurance, PositionLoop, Pulse, Servo};
