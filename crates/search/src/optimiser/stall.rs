//! When a run has nothing left to find.

use std::collections::VecDeque;

use serde::{Deserialize, Serialize};

use super::cma::{Axes, Cma};
use super::{Plan, Score};

/// Best of the latest generations, latest last.
#[derive(Debug, Clone, Default, Serialize, Deserialize)]
pub(crate) struct Recent {
    best: VecDeque<Score>,
}

impl Recent {
    /// - `n_kept`: 10 + ⌈30·n / λ⌉
    fn push(&mut self, best: Score, n_kept: usize) {
        self.best.push_back(best);
        while self.best.len() > n_kept {
            self.best.pop_front();
        }
    }
}

/// Notes a generation and tells whether the run has stalled.
///
/// Of the tutorial's criteria: TolX, TolFun with EqualFunValues, ConditionCov.
///
/// - `ranked`: the generation, best first
///
/// # Source
///
/// Hansen, arXiv:1604.00772, B.3.
pub(crate) fn has_stalled(run: &mut Cma, axes: &Axes, ranked: &[Score], plan: &Plan) -> bool {
    let n_kept = 10 + (30 * plan.start.len()).div_ceil(run.population);
    run.recent.push(ranked[0], n_kept);
    let best = run.recent.best.make_contiguous();
    let level = best.len() == n_kept && span(best) <= plan.cost_tolerance;
    let flat = level && (span(ranked) <= plan.cost_tolerance || span(best) == 0.0);
    flat || run.has_shrunk(plan.step_tolerance) || axes.condition() > 1e14
}

/// Most less least cost where all are feasible, or violation where none is.
fn span(scores: &[Score]) -> f64 {
    let feasible = scores[0].is_feasible();
    if scores.iter().any(|score| score.is_feasible() != feasible) {
        return f64::INFINITY;
    }
    let of = |score: &Score| if feasible { score.cost } else { score.violation };
    let least = scores.iter().map(of).fold(f64::INFINITY, f64::min);
    let most = scores.iter().map(of).fold(f64::NEG_INFINITY, f64::max);
    // Infinity less infinity would be no number.
    if least == most { 0.0 } else { most - least }
}
