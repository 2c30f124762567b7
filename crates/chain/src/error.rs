use crate::MOST_SEGMENTS;

/// Why a chain can't be built.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum ChainError {
    /// A chain needs a joint to bend at, and is bounded so that its cost is.
    #[error("a chain has 2 to {MOST_SEGMENTS} segments, not {found}")]
    SegmentCount {
        /// Segments given.
        found: usize,
    },
    /// n segments are joined by n − 1 joints.
    #[error("{segments} segments need {} joints, not {found}", segments - 1)]
    JointCount {
        /// Segments in the chain.
        segments: usize,
        /// Joints given.
        found: usize,
    },
    /// A length, width, thickness or mass that no body can have.
    #[error("segment {segment}: {quantity} is {value}, but must be finite and above 0")]
    SegmentSize {
        /// Counted from 1 at the head.
        segment: usize,
        /// Which measure.
        quantity: &'static str,
        /// What was given.
        value: f64,
    },
    /// A point mass with a negative mass or an unusable place.
    #[error("a point mass in segment {segment} has mass {mass_kg} kg or a place that isn't finite")]
    PointMass {
        /// Counted from 1 at the head.
        segment: usize,
        /// What was given.
        mass_kg: f64,
    },
    /// A point mass is fixed in a segment that isn't there.
    #[error("a point mass sits in segment {segment}, but the chain has {segments}")]
    NoSuchSegment {
        /// Counted from 1 at the head.
        segment: usize,
        /// Segments in the chain.
        segments: usize,
    },
}
