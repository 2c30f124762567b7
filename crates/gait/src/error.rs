/// Why a gait doesn't fit a chain.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum GaitError {
    /// A table has a column for each axis of each joint, no more and no less.
    #[error(
        "the gait table has {found} columns of joint angles, but the chain has {axes} joint axes"
    )]
    ColumnCount {
        /// Columns in the table.
        found: usize,
        /// Yaw and pitch axes in the chain.
        axes: usize,
    },
    /// A table needs rows to repeat.
    #[error("the gait table has {rows} rows, but needs 2 or more")]
    TooFewRows {
        /// Rows in the table.
        rows: usize,
    },
    /// Steps, angles and amplitudes have to be numbers.
    #[error("the gait's {quantity} is {value}, which can't be flown")]
    Unusable {
        /// Which number.
        quantity: &'static str,
        /// What was given.
        value: f64,
    },
    /// A gait that stands has no loop.
    #[error("the gait stands still, so there is no loop to write; give it a frequency above 0 Hz")]
    Stands,
    /// Blocks are kept to what sixteen bits count.
    #[error(
        "{of} would have {rows} rows, but a table holds {least} to {most}; choose another rate, \
         number of steps or start"
    )]
    RowCount {
        /// Which block.
        of: &'static str,
        /// Rows it would have.
        rows: usize,
        /// Fewest.
        least: usize,
        /// Most.
        most: usize,
    },
    /// A period that isn't a whole number of frames.
    #[error(
        "a period of {frequency_hz} Hz is {frames:.3} frames at {rate_hz} Hz, but a loop needs a whole \
         number, 2 or more; the nearest frequencies that have one are {:.6} Hz and {:.6} Hz: \
         --set gait.frequency_hz=…, or --steps N for frames that fit the period",
        nearest_hz[0],
        nearest_hz[1]
    )]
    PartFrame {
        /// Frames a second.
        rate_hz: f64,
        /// Of the gait.
        frequency_hz: f64,
        /// Frames in a period.
        frames: f64,
        /// Frequencies beside it, Hz.
        nearest_hz: [f64; 2],
    },
    /// A number of counts that its type can't hold.
    #[error(
        "{axis} needs {value:.0} counts of {resolution} {unit}, but {bits} bits hold at most {most}; \
         choose a coarser --resolution"
    )]
    TooFine {
        /// Which axis.
        axis: String,
        /// Counts needed.
        value: f64,
        /// One count.
        resolution: f64,
        /// Of it.
        unit: &'static str,
        /// Of the type.
        bits: u32,
        /// It holds.
        most: i64,
    },
    /// A table for firmware that can't be read back.
    #[error("{why}")]
    Text {
        /// From 1; 0 where no line is to blame.
        line: usize,
        /// What is wrong.
        why: String,
    },
    /// Messages have angles in radians.
    #[error(
        "a joint-trajectory message has angles in rad, not in {unit}; leave --unit out, or write csv, c \
         or json"
    )]
    MessageUnit {
        /// Asked for.
        unit: &'static str,
    },
}
