//! Choosing for a design: what it asks of its servos, which of a catalogue can do it, and what its
//! numbers are best set to.
//!
//! For servos, every candidate is flown with its servos' masses in the chain, and its budget made
//! from that flight. Of one kind of servo for yaw and one for pitch, all pairs are flown. Of mixes,
//! one servo for the middle joints of an axis and another for as many joints at either end, so many
//! that not all are: loads of flights with one kind an axis tell which may pass, and those are flown
//! in the order of the wish ([`size`] says how far). Three kinds on an axis, ends that differ and
//! another battery aren't tried; nor are servos checked for room in a segment.
//!
//! Numbers are set by [`tuning`], which asks the [`optimiser`] what to try next. All is the same on
//! any number of threads. Nothing here opens a file or prints.

mod asked;
mod bench;
mod choice;
mod coarsest;
mod error;
mod estimate;
mod misses;
mod mixes;
pub mod optimiser;
mod sizing;
mod table_flights;
mod texts;
mod travel;
pub mod tuning;
mod want;

pub use asked::{Asked, Drops, asked_at_rest, asked_in_flight};
pub use bench::Candidate;
pub use choice::{Choice, Split, driven};
pub use coarsest::{Coarsest, Hunt, MOST_ROWS_TRIED, Trial};
pub use error::SizingError;
pub use sizing::{Sized, Step, size};
pub use table_flights::{TableFlight, fly_gait, fly_table};
pub use texts::with_servos;
pub use travel::{BeyondTravel, beyond_travel};
pub use want::Want;
