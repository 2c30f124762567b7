//! What a candidate comes to, and who says so.

use std::cmp::Ordering;

use serde::{Deserialize, Serialize};

/// What one candidate comes to.
///
/// Feasible ones are ranked by cost, before all infeasible ones, which are ranked by violation
/// (Deb 2000); between two equal violations the cost decides.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct Score {
    /// Less is better.
    pub cost: f64,
    /// 0 where feasible; infinite where it couldn't be judged.
    pub violation: f64,
}

impl Score {
    /// Of a candidate that couldn't be judged: behind all others.
    pub const UNJUDGED: Self = Self { cost: f64::INFINITY, violation: f64::INFINITY };

    /// Whether nothing is violated.
    pub fn is_feasible(&self) -> bool {
        self.violation <= 0.0
    }

    /// Better ones are less.
    pub fn order(&self, other: &Score) -> Ordering {
        match (self.is_feasible(), other.is_feasible()) {
            (true, true) => self.cost.total_cmp(&other.cost),
            (true, false) => Ordering::Less,
            (false, true) => Ordering::Greater,
            (false, false) => {
                let by_violation = self.violation.total_cmp(&other.violation);
                by_violation.then(self.cost.total_cmp(&other.cost))
            }
        }
    }

    /// As it is, but [`Score::UNJUDGED`] where a number is missing.
    pub(crate) fn or_unjudged(self) -> Self {
        if self.cost.is_nan() || self.violation.is_nan() { Self::UNJUDGED } else { self }
    }

    /// One number in the same order, for methods that know no violations.
    ///
    /// A feasible cost is itself up to ±1e100. A violation, from the least to infinity, goes to
    /// 1e119 and more by its fourth root, which keeps all but the last two bits of its order.
    pub(crate) fn as_one_number(&self) -> f64 {
        if self.is_feasible() {
            self.cost.clamp(-1e100, 1e100)
        } else {
            1e200 * self.violation.sqrt().sqrt()
        }
    }
}

/// Something to minimise over the unit box [0, 1]ⁿ.
pub trait Objective: Sync {
    /// How many numbers a candidate has.
    fn n(&self) -> usize;

    /// Scores one candidate: the same for the same numbers, whoever else is being scored.
    ///
    /// A score with a NaN counts as one that couldn't be judged.
    fn score(&self, unit: &[f64]) -> Score;
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Every kind of score, best first.
    fn ladder() -> Vec<Score> {
        let of = |cost, violation| Score { cost, violation };
        vec![
            of(f64::NEG_INFINITY, 0.0),
            of(-1e90, 0.0),
            of(-2.0, 0.0),
            of(0.0, 0.0),
            of(3.0, 0.0),
            of(-9.0, 5e-324),
            of(-9.0, 1e-12),
            of(8.0, 1e-12),
            of(-9.0, 1.0),
            of(-9.0, 1e300),
            of(-9.0, f64::INFINITY),
            Score::UNJUDGED,
        ]
    }

    /// The definition: any two of a ladder stand as their places do, so the order is total,
    /// antisymmetric and transitive there.
    #[test]
    fn analytic_order_is_total() {
        let ladder = ladder();
        for (a, one) in ladder.iter().enumerate() {
            for (b, other) in ladder.iter().enumerate() {
                assert_eq!(one.order(other), a.cmp(&b), "{one:?} {other:?}");
            }
        }
    }

    /// Where two numbers differ, they differ as the scores do.
    #[test]
    fn analytic_one_number_keeps_the_order() {
        let ladder = ladder();
        for pair in ladder.windows(2) {
            let (better, worse) = (pair[0].as_one_number(), pair[1].as_one_number());
            assert!(better <= worse, "{pair:?}");
            assert!(pair[0].violation == pair[1].violation || better < worse, "{pair:?}");
        }
    }

    #[test]
    fn analytic_a_missing_number_is_worst() {
        let of = |cost, violation| Score { cost, violation }.or_unjudged();
        assert_eq!(of(f64::NAN, 0.0), Score::UNJUDGED);
        assert_eq!(of(0.0, f64::NAN), Score::UNJUDGED);
        assert_eq!(of(1.0, 2.0), Score { cost: 1.0, violation: 2.0 });
    }
}
