//! Air, wing sections, and the quasi-steady load on a strip of a segment.
//!
//! Each strip feels only its own local airspeed across the segment's axis (simple sweep theory);
//! the wake of one bend on the next, unsteady lag, finite span and added mass are missing.
//! Nothing here knows of time or of a chain.
//!
//! Segment axes: x along the segment toward the head, y left, z out of the back. Incidence is in
//! [−π/2, π/2], positive when air meets the belly. SI units and radians.

mod air;
mod domed;
mod error;
mod friction;
mod pchip;
mod prepared;
mod section;
mod strip;

pub use air::{Air, DRY_AIR_GAS_CONSTANT, STANDARD_GRAVITY_M_S2};
pub use error::AeroError;
pub use friction::{SkinFriction, SkinFrictionLaw};
pub use pchip::{Parity, Pchip};
pub use prepared::PreparedSection;
pub use section::{Coefficients, Polar, Section, SectionKind, SectionTable};
pub use strip::{FourStrips, Scales, StripLoads};

/// Pressure centre of a thin section at small incidence, fraction of the chord from the leading
/// edge. Quarter chord is thin-section theory; its blend to mid-chord broadside is ours.
pub const DEFAULT_PRESSURE_CENTRE: f64 = 0.25;
