//! Design files in: read, checked, explained, and turned into values of the crates below.
//!
//! A design is a TOML file; it may name a servo catalogue (TOML), section tables and a gait table
//! (CSV). [`read`] finds all mistakes of all these files at once and tells each with its place, what
//! was found, what may stand there and what to do. Values from outside ([`Override`]) are
//! written into the text before it is read. A number of a design that was read is a [`Knob`], and
//! [`Design::written`] gives a design back as text; reading and writing lose no bit.
//!
//! Files hold degrees and the units that their keys name; values are in SI units
//! and radians. Tables that other commands read are left alone until they ask: [`Tuning`] is what
//! `[search]` says, [`Design::wiring`] what `[wiring]` does. A [`Hall`] is a
//! file of its own, and so is what was seen of drops ([`read_seen`]).

mod body;
mod carried;
mod catalogue;
mod columns;
mod design;
mod document;
mod drives;
mod error;
mod fast;
mod files;
mod gait;
mod gait_table;
mod hall;
mod joints;
mod key_path;
mod knob;
mod mistake;
mod moved;
mod named_files;
mod nearest;
mod no_number;
mod node;
mod numbers;
mod order;
mod origin;
mod overrides;
mod poses;
pub mod quantities;
mod range;
mod scatter;
mod section_table;
mod sections;
mod seen;
mod servo;
mod spread;
mod starter;
mod surroundings;
mod table;
mod tuning;
mod tuning_rows;
mod unit;
mod wiring;
mod written;

pub use carried::{Battery, Payload};
pub use catalogue::{Catalogue, read_catalogue};
pub use design::{Design, read, read_text};
pub use error::DesignError;
pub use hall::{Camera, Catch, CatchKind, FaultShares, Hall, Person, Release};
pub use joints::ServoNames;
pub use knob::{Knob, set_all};
pub use mistake::{DesignErrors, Mistake};
pub use moved::copy_for;
pub use overrides::Override;
pub use poses::{PoseRow, read_poses};
pub use scatter::Scatter;
pub use seen::{Ended, SeenDrop, read_seen};
pub use spread::{Spread, Vary};
pub use starter::starter;
pub use surroundings::Limits;
pub use tuning::{Robust, Take, Tuning, Wish};
pub use tuning_rows::{Required, Varied};
pub use undulift_servo::{Endurance, PositionLoop, Pulse, Regulator, Servo};
