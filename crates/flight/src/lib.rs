//! A flight: release, equations of motion, integration, landing, and what it reports.
//!
//! Joints follow their commands exactly; the chain as a whole is free. The wake of one bend on the
//! next, unsteady lag, finite span, elastic links and added mass are missing. Nothing here opens a
//! file or prints. A flight is a pure function of its inputs: the same inputs give the same bits.
//!
//! World frame: x along the launch azimuth, y left, z up, origin on the floor under the release
//! point. Roll is positive right side down, pitch positive nose up, yaw positive nose left. SI
//! units and radians.

mod attitude;
mod bands;
mod bench_loads;
mod course;
mod crossing;
mod doubts;
mod drives;
mod driving;
mod equations;
mod error;
mod events;
mod flying;
mod glider;
mod histories;
mod integration;
mod loads;
mod outlook;
mod overlaps;
mod path;
mod release;
mod scatter;
mod state;
mod stepping;
mod summary;
mod supply;
mod trace;
mod tracking;
mod trajectory;
mod turning;
mod weighted;

pub use attitude::Attitude;
pub use bands::{Bands, Stretched, bands};
pub use bench_loads::{Clamped, Pose, bench_loads};
pub use doubts::{Doubt, doubts, doubts_ahead};
pub use drives::{Drives, Failure, Fault, Mode};
pub use equations::Equations;
pub use error::FlightError;
pub use flying::{End, Flight, Settings, fly, fly_driven};
pub use glider::{Glider, Launch};
pub use histories::{HingeLoad, Histories, Loaded, histories, loads_at};
pub use loads::Wrench;
pub use outlook::{Outlook, outlook};
pub use overlaps::{Overlap, overlaps};
pub use release::release;
pub use scatter::{Change, Differs, Spread, draw};
pub use state::{LooseAxis, State};
pub use summary::{LastCycle, Summary, summary};
pub use trace::{TraceRow, trace};
pub use tracking::{Saturation, Tracking, TrackingError, tracking};
pub use trajectory::Trajectory;
