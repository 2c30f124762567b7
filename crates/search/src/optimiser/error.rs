/// Why a search can't begin.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum OptimiserError {
    /// There is nothing to vary.
    #[error("nothing varies: a search needs one number or more to choose")]
    NothingVaries,
    /// The start lies outside of the box.
    #[error("number {nth} of the start is {value}, but must be from 0 to 1 of its range")]
    StartOutside {
        /// Counted from 1.
        nth: usize,
        /// As given.
        value: f64,
    },
    /// A number of the plan is out of range.
    #[error("`{name}` is {value}, but must be {allowed}")]
    OutOfRange {
        /// Which.
        name: &'static str,
        /// As given.
        value: f64,
        /// In words.
        allowed: &'static str,
    },
}
