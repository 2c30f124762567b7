use undulift_flight::FlightError;
use undulift_servo::ServoError;

/// Why servos can't be chosen.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum SizingError {
    /// There is nothing to choose from.
    #[error("the catalogue has no servo; give it one [servo.NAME] table or more")]
    NoServos,
    /// No joint turns.
    #[error(
        "no joint of the design turns, so there is nothing to drive; `joints.axes` says which do"
    )]
    NoAxes,
    /// Joints turn, but no servo drives one.
    #[error(
        "the design drives no joint with a servo; name any of the catalogue in joints.yaw_servo, \
         joints.pitch_servo or both, to say which joints get one"
    )]
    NothingDriven,
    /// No candidate could be flown; this is why the first couldn't.
    #[error(transparent)]
    Flight(#[from] FlightError),
    /// No budget could be made; this is why the first couldn't.
    #[error(transparent)]
    Servo(#[from] ServoError),
}
