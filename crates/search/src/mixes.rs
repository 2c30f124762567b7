//! Mixes that are worth flying, in the order in which to fly them.

use std::cmp::Ordering;

use crate::estimate::Estimate;
use crate::{Choice, Split};

/// A split whose worst joint is estimated to be less than this many times over its limits may pass.
const NEARLY: f64 = 1.1;

/// Splits of each axis that are combined with those of the other.
const KEPT: usize = 400;

/// A mix to be flown.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Mix {
    pub(crate) choice: Choice,
    /// Estimated cost by the wish.
    pub(crate) cost: f64,
    /// Whether neither axis is estimated to miss by a tenth.
    pub(crate) hopeful: bool,
}

/// A split of one axis with its estimates.
#[derive(Debug, Clone, Copy)]
struct Rated {
    split: Option<Split>,
    cost: f64,
    times_over: f64,
}

/// Combinations of promising splits of which one at least has two servos, in the order in which to
/// fly them: by the wish where both axes may pass. Where one has no split that may, none is hoped
/// for, and those that would miss least come first.
pub(crate) fn mixes(
    n_servos: usize,
    estimates: [Option<&Estimate>; 2],
    n_driven: [usize; 2],
) -> Vec<Mix> {
    let [yaw, pitch] = [0, 1].map(|at| rated(n_servos, estimates[at], n_driven[at]));
    let is_hopeful = |all: &[Rated]| all.iter().all(|rated| rated.times_over < NEARLY);
    let hopeful = is_hopeful(&yaw) && is_hopeful(&pitch);
    let is_mixed = |rated: &Rated| rated.split.is_some_and(|split| split.end_joints > 0);
    let mut found = Vec::new();
    for (yaw_rank, yaw) in yaw.iter().enumerate() {
        for (pitch_rank, pitch) in pitch.iter().enumerate() {
            if is_mixed(yaw) || is_mixed(pitch) {
                let choice = Choice { splits: [yaw.split, pitch.split] };
                let mix = Mix { choice, cost: yaw.cost + pitch.cost, hopeful };
                found.push((yaw_rank + pitch_rank, mix));
            }
        }
    }
    found.sort_by(|(a_ranks, a), (b_ranks, b)| {
        // By the worst axis alone, that axis' best split would be tried with everything first.
        let by_ranks = if hopeful { Ordering::Equal } else { a_ranks.cmp(b_ranks) };
        by_ranks.then_with(|| a.cost.total_cmp(&b.cost)).then_with(|| a.choice.cmp(&b.choice))
    });
    found.into_iter().map(|(_, mix)| mix).collect()
}

/// Promising splits of an axis; where none is, those that would miss least.
fn rated(n_servos: usize, estimate: Option<&Estimate>, n_driven: usize) -> Vec<Rated> {
    let Some(estimate) = estimate else {
        return vec![Rated { split: None, cost: 0.0, times_over: 1.0 }];
    };
    let rate = |split: Split| Rated {
        split: Some(split),
        cost: estimate.cost(split),
        times_over: estimate.times_over(split),
    };
    let mut all: Vec<Rated> = Split::all(n_servos, n_driven).into_iter().map(rate).collect();
    if all.iter().any(|rated| rated.times_over < NEARLY) {
        all.retain(|rated| rated.times_over < NEARLY);
        all.sort_by(|a, b| a.cost.total_cmp(&b.cost));
    } else {
        all.sort_by(|a, b| a.times_over.total_cmp(&b.times_over));
    }
    all.truncate(KEPT);
    all
}
