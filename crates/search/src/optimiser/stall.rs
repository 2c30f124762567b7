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

#[cfg(test)]
mod tests {
    use super::*;

    fn scores(pairs: &[(f64, f64)]) -> Vec<Score> {
        pairs.iter().map(|&(cost, violation)| Score { cost, violation }).collect()
    }

    /// By hand.
    #[test]
    fn analytic_span_is_of_one_kind() {
        assert_eq!(span(&scores(&[(3.0, 0.0), (1.0, 0.0), (2.0, 0.0)])), 2.0);
        assert_eq!(span(&scores(&[(9.0, 0.5), (1.0, 0.25)])), 0.25);
        assert_eq!(span(&scores(&[(1.0, 0.0), (1.0, 1e-9)])), f64::INFINITY);
        assert_eq!(span(&[Score::UNJUDGED, Score::UNJUDGED]), 0.0);
    }

    /// With two numbers and six candidates, 10 + 30·2/6 = 20 generations are kept, so a run whose
    /// scores never change stalls at the twentieth.
    #[test]
    fn analytic_a_flat_run_stalls_when_its_memory_is_full() {
        let plan = Plan::new(vec![0.5; 2], 1000, 1);
        let mut run = Cma::new(&plan.start, plan.step, 6);
        let axes = run.axes();
        let mut stalls = |cost| has_stalled(&mut run, &axes, &scores(&[(cost, 0.0); 6]), &plan);
        assert!(!stalls(2.0));
        assert_eq!((2..40).find(|_| stalls(1.0)), Some(21));
    }
}
