use undulift_chain::ChainError;
use undulift_gait::GaitError;

/// Why a flight can't be computed.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum FlightError {
    /// The gait doesn't fit the chain.
    #[error(transparent)]
    Gait(#[from] GaitError),
    /// The chain can't be built.
    #[error(transparent)]
    Chain(#[from] ChainError),
    /// Released with a corner on or below the floor.
    #[error("at release the lowest corner is {lowest_m:.3} m above the floor; raise the release height by more than {:.3} m", -lowest_m)]
    ReleasedOnFloor {
        /// Height of the lowest corner above the floor or the catch, m.
        lowest_m: f64,
    },
    /// Released on its back.
    #[error(
        "at release the body is not upright: its back points {tilt_deg:.1}° away from the vertical, 90° or more"
    )]
    ReleasedInverted {
        /// Angle between the body's dorsal axis and the vertical, degrees.
        tilt_deg: f64,
    },
    /// A segment that the chain doesn't have.
    #[error("there is no segment {segment}: the chain has 1 to {segments}")]
    NoSuchSegment {
        /// Counted from 1.
        segment: usize,
        /// Segments in the chain.
        segments: usize,
    },
    /// A pose with other axes than the chain's.
    #[error("the pose has {found} joint angles, but the chain has {axes} axes")]
    PoseAngles {
        /// Angles given.
        found: usize,
        /// Angles needed.
        axes: usize,
    },
    /// Joint loads need accelerations, which only a smooth gait has.
    #[error(
        "joint loads need a smooth gait: with interpolation = \"linear\" or \"hold\" accelerations are impulses; use \"cubic\""
    )]
    Impulses,
    /// A mode for each axis is needed.
    #[error("there are {found} modes for {axes} axes")]
    ModeCount {
        /// Given.
        found: usize,
        /// Of the chain.
        axes: usize,
    },
    /// A mode speaks of a servo that isn't there.
    #[error("there is no servo {servo}: there are {servos}")]
    NoSuchServo {
        /// Counted from 1.
        servo: usize,
        /// Given.
        servos: usize,
    },
    /// A fault speaks of an axis that the chain doesn't have.
    #[error("there is no axis {axis}: the chain has 1 to {axes}")]
    NoSuchAxis {
        /// Counted from 1.
        axis: usize,
        /// Of the chain.
        axes: usize,
    },
    /// Axes that jump in rate would knock at those that don't follow commands.
    #[error(
        "with interpolation = \"linear\" the rates of axes without a servo jump, and would knock at the rest; use \"cubic\", or give every axis a servo"
    )]
    Jumps,
    /// Rows that are held jump, and only servos follow a jump as well as they can.
    #[error(
        "with interpolation = \"hold\" commands jump from row to row, which joints that follow them \
         exactly can't; use \"linear\" or \"cubic\", or fly with driven joints and a servo on every axis"
    )]
    Held,
    /// A setting that can't be used.
    #[error("{quantity} is {value}, but must be {allowed}")]
    Setting {
        /// Which.
        quantity: &'static str,
        /// What was given.
        value: f64,
        /// What could be.
        allowed: &'static str,
    },
    /// The integrator gave up: motion faster than any step it can take.
    #[error(
        "the motion became too fast to follow at t = {time_s:.6} s; look for extreme speeds, tiny masses or a loose tolerance"
    )]
    StepTooSmall {
        /// Time reached, s.
        time_s: f64,
    },
    /// The bound on steps was met.
    #[error(
        "gave up after {steps} steps at t = {time_s:.6} s; loosen the tolerance or shorten the flight"
    )]
    TooManySteps {
        /// Steps taken.
        steps: u32,
        /// Time reached, s.
        time_s: f64,
    },
}
