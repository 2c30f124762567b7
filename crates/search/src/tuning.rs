//! Tuning a design: numbers that may vary, one quantity that is wanted, others that are required.
//!
//! Every candidate is put into the design in memory, flown and, where loads matter, given a budget;
//! [`Judge`] says what it comes to. [`Run`] searches, and hands each generation to a [`Store`]
//! together with all it needs to go on. [`closing`] says what the best is worth: which ends and
//! limits hold it back, what they cost, and how it moves with each number.
//!
//! While searching, loads are looked at every 10 ms and limits on them are kept with half a per cent to spare;
//! whatever becomes the best so far is judged again at every millisecond against the limits
//! themselves. The same on any number of threads. Several wishes at once aren't traded here.

mod closing;
mod error;
mod judge;
mod ledger;
mod limit;
mod loads;
mod outcome;
mod run;
mod several;
mod slopes;
mod verdict;

pub use closing::{Active, Closing, Held, brief_closing, closing};
pub use error::TuningError;
pub use judge::{Fineness, Judge};
pub use ledger::Ledger;
pub use limit::{Bound, Limit, Origin};
pub use run::{Ended, Run, Store, Tried};
pub use slopes::Slope;
pub use verdict::Verdict;
