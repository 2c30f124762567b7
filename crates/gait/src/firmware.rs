//! Gait tables for firmware, as values and as text: joint angles as whole numbers of counts.
//!
//! [`Blocks`] are a gait's angles at equal steps: a start, the repeating loop, a return to rest.
//! [`FirmwareTable`] is the same in counts of a unit, channel by channel; [`misses`] holds it
//! against what joints and boards can do. It is written as CSV, as a C99 header with its reader, as
//! opened here.

mod blocks;
mod channel;
mod check;
mod counts;
mod csv_text;
mod preamble;
mod scale;

pub use blocks::{Blocks, Ends, whole_frames};
pub use channel::Channel;
pub use check::{Block, Board, Miss, Reach, Spot, misses};
pub use counts::{CType, FirmwareTable};
pub use csv_text::csv_text;
pub use preamble::Preamble;
pub use scale::{Scale, Unit};
