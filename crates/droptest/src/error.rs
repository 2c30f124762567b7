use undulift_flight::FlightError;

/// Why a drop test can't be planned.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum DropError {
    /// A number that a relation doesn't take.
    #[error("{quantity} is {value}, but must be {allowed}")]
    Figure {
        /// Which.
        quantity: &'static str,
        /// What was given.
        value: f64,
        /// What could be.
        allowed: &'static str,
    },
    /// Too few to say anything.
    #[error(
        "only {found} sound flights were flown, but a region needs {needed}; fly more, or lower [faults] share"
    )]
    TooFew {
        /// Flown.
        found: usize,
        /// Needed.
        needed: usize,
    },
    /// Too few to read what was seen by.
    #[error(
        "only {found} of the drops flown from {height_m:.1} m stayed upright, but reading what was seen needs \
         {needed}; fly more"
    )]
    TooFewToRead {
        /// Flown, sound and upright.
        found: usize,
        /// Needed.
        needed: usize,
        /// Release height, m.
        height_m: f64,
    },
    /// No sound flight could be flown; this is why the first couldn't.
    #[error("no drop could be flown: {0}")]
    Flight(#[from] FlightError),
}

/// Refuses a number that doesn't hold a condition.
pub(crate) fn check(
    quantity: &'static str,
    value: f64,
    holds: bool,
    allowed: &'static str,
) -> Result<(), DropError> {
    if holds { Ok(()) } else { Err(DropError::Figure { quantity, value, allowed }) }
}
