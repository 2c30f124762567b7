//! Gait tables for firmware, as values and as text: joint angles as whole numbers of counts.
//!
//! [`Blocks`] are a gait's angles at equal steps: a start, the repeating loop, a return to rest.
//! [`FirmwareTable`] is the same in counts of a unit, channel by channel; [`misses`] holds it
//! against what joints and boards can do. It is written as CSV, as a C99 header with its reader, as
//! opened here.

mod blocks;
mod c_header;
mod channel;
mod check;
mod counts;
mod csv_text;
mod deviation;
mod json_text;
mod preamble;
mod reading;
mod scale;
mod timing;
mod trajectory;

pub use blocks::{Blocks, Ends, whole_frames};
pub use c_header::{c_header, c_name};
pub use channel::Channel;
pub use check::{Block, Board, Miss, Reach, Spot, misses};
pub use counts::{CType, FirmwareTable};
pub use csv_text::csv_text;
pub use deviation::Deviation;
pub use json_text::json_text;
pub use preamble::Preamble;
pub use reading::{is_table_text, read_table};
pub use scale::{Scale, Unit};
pub use timing::Timing;
pub use trajectory::trajectory_text;
