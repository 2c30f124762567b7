//! Figures at their worst over a history.

use crate::{Miss, MissKind, Remedies, When};

/// A figure at its worst so far.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Worst {
    pub(crate) figure: f64,
    pub(crate) limit: f64,
    /// How bad, the more the worse.
    pub(crate) rank: f64,
    pub(crate) when: When,
}

/// Keeps the worse of two; of equals the earlier.
pub(crate) fn keep(worst: &mut Option<Worst>, new: Worst) {
    if worst.is_none_or(|old| new.rank > old.rank) {
        *worst = Some(new);
    }
}

/// Infinite over no limit at all.
pub(crate) fn times_over(figure: f64, limit: f64) -> f64 {
    if limit > 0.0 { figure / limit } else { f64::INFINITY }
}

/// Without place and remedies.
pub(crate) fn miss(kind: MissKind, worst: Worst) -> Miss {
    Miss {
        kind,
        place: None,
        when: Some(worst.when),
        found: worst.figure,
        limit: worst.limit,
        times_over: times_over(worst.figure, worst.limit),
        remedies: Remedies::default(),
    }
}
