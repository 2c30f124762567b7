use undulift_flight::FlightError;

/// Why a design can't be tuned.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum TuningError {
    /// Two wishes or three.
    #[error(
        "`want` has {wishes} wishes, but one wish at a time is tuned for; keep one, and require \
         something of the others in [search.require]"
    )]
    SeveralWishes {
        /// How many.
        wishes: usize,
    },
    /// What varies doesn't move what is wanted.
    #[error(
        "`{key}` stays at {value} whatever varies ({designs} designs all over the ranges were \
         tried), so there is nothing to search for; want another quantity, or let another number \
         vary"
    )]
    ConstantWish {
        /// Of what is wanted.
        key: String,
        /// Its only value.
        value: f64,
        /// How many were tried.
        designs: usize,
    },
    /// Budgets of this design can't be made.
    #[error(transparent)]
    Flight(#[from] FlightError),
    /// The search can't begin.
    #[error(transparent)]
    Optimiser(#[from] crate::optimiser::OptimiserError),
}
