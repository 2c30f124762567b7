//! What a candidate comes to.

use serde::{Deserialize, Serialize};

use crate::optimiser::Score;

/// What a candidate comes to.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Verdict {
    /// Of what varies, in the file's units.
    pub values: Vec<f64>,
    /// Of what is wanted; absent where the flight has none.
    pub wish: Option<f64>,
    /// The quantity of each limit; absent where the flight has none.
    pub limits: Vec<Option<f64>>,
    /// What each limit's miss counts, and a wish without a value 1, summed; 0 where it is feasible,
    /// infinite where no launch of the design could be made or followed.
    pub violation: f64,
}

impl Verdict {
    /// Whether nothing is missed.
    pub fn is_feasible(&self) -> bool {
        self.violation == 0.0
    }

    /// For the optimiser.
    pub fn score(&self, maximise: bool) -> Score {
        let cost = self.wish.map_or(f64::INFINITY, |wish| if maximise { -wish } else { wish });
        Score { cost, violation: self.violation }
    }
}
