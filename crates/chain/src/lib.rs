//! The robot as a chain of rigid segments: what it is made of and what shape it takes.
//!
//! A [`Chain`] holds segments, the joints between them and the point masses fixed in them; a
//! [`Shape`] is where a set of joint angles puts the segments. Nothing here knows of time, air
//! or a floor.
//!
//! Segment frame: x along the segment toward the head, y left, z out of the back. Segments count
//! from the head; segment 0's frame is the root frame in which shapes are given. Its origin is at
//! the middle of a segment's front end, so the rear end is at −L x̂. Angles are in radians.

mod attached;
mod body_frame;
mod chain_of;
mod error;
mod joint;
mod overlap;
mod profile;
mod segment;
mod shape;

pub use attached::{Carried, MassSplit, PointMass};
pub use body_frame::{attitude_along_axis, nearest_rotation};
pub use chain_of::Chain;
pub use error::ChainError;
pub use joint::{Axis, AxisOf, Joint, Span, joint_axes, spans};
pub use overlap::overlapping_segments;
pub use profile::{Profile, ProfileShape, line_density_masses};
pub use segment::{Inertial, Segment};
pub use shape::Shape;

/// Most segments a chain may have; keeps work per flight bounded.
pub const MOST_SEGMENTS: usize = 128;
