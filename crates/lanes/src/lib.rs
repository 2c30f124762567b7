//! Numbers side by side: what the inner loop computes with.
//!
//! [`Number`] is one number or four in a register; [`Triple`] three of them in space. Beside them
//! stand the few functions that a general library computes too slowly here. Nothing in this crate
//! knows of robots or air.

mod number;
mod rounding;
mod trigonometry;
mod triple;

pub use number::{LANES, Number, lanes};
pub use rounding::{round, whole_and_rest};
pub use trigonometry::{polynomial, sin_cos, sin_cos_all};
pub use triple::Triple;
pub use wide::{CmpGe, f64x2, f64x4};
