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
}
