/// Why a servo, a battery or a history can't be reckoned with.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum ServoError {
    /// A figure that isn't finite, or isn't in its range.
    #[error("{of}: {quantity} is {value}, but must be from {from} to {to}")]
    Figure {
        /// Which servo, battery, history …
        of: String,
        /// Its name, with its unit.
        quantity: &'static str,
        /// What was given.
        value: f64,
        /// Least that could be.
        from: f64,
        /// Most that could be.
        to: f64,
    },
    /// Turning unloaded draws less than being held.
    #[error(
        "servo `{servo}`: {no_load_a} A unloaded is not less than the {stall_a} A that it draws stalled"
    )]
    Currents {
        /// Its name.
        servo: String,
        /// Unloaded, A.
        no_load_a: f64,
        /// Stalled, A.
        stall_a: f64,
    },
    /// More out than in.
    #[error(
        "servo `{servo}`: its figures imply an efficiency of {efficiency:.2}, but no servo gives out more than it takes in: at most 1"
    )]
    Efficiency {
        /// Its name.
        servo: String,
        /// Mechanical over electrical power.
        efficiency: f64,
    },
    /// Pulses must rise, or fall, from one end to the other.
    #[error(
        "servo `{servo}`: {minus_90_us}, {centre_us} and {plus_90_us} µs at −90°, 0° and 90° neither rise nor fall throughout"
    )]
    Pulses {
        /// Its name.
        servo: String,
        /// At −90°.
        minus_90_us: f64,
        /// Straight.
        centre_us: f64,
        /// At 90°.
        plus_90_us: f64,
    },
    /// A curve of cell voltages must cover empty to full and not fall on the way.
    #[error(
        "the cell's voltage curve must go from charge 0 to 1, charge rising and voltage not falling; point {point} doesn't fit"
    )]
    Curve {
        /// Which, from 1.
        point: usize,
    },
    /// A history without an instant.
    #[error("a history needs one instant or more")]
    NoInstant,
    /// Time goes on.
    #[error("a history's time falls back to {time_s} s at row {row}")]
    TimeFalls {
        /// Which, from 1.
        row: usize,
        /// Its time, s.
        time_s: f64,
    },
    /// Columns of one length.
    #[error("joint {joint} {axis}: {found} values of {column} for {expected} instants")]
    Length {
        /// From 1.
        joint: usize,
        /// "yaw" or "pitch".
        axis: &'static str,
        /// Which.
        column: &'static str,
        /// How many there are.
        found: usize,
        /// How many instants there are.
        expected: usize,
    },
    /// A number that no servo has.
    #[error("joint {joint} {axis} asks for servo number {servo_idx}, but there are {servos}")]
    NoSuchServo {
        /// From 1.
        joint: usize,
        /// "yaw" or "pitch".
        axis: &'static str,
        /// From 0.
        servo_idx: usize,
        /// How many there are.
        servos: usize,
    },
}
