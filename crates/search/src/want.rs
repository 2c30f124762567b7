use std::cmp::Ordering;

use crate::Candidate;

/// What is wished for, of servos that can do it.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Want {
    /// Least mass of all servos.
    Lightest,
    /// Longest way in the flight.
    Furthest,
    /// Least price of all servos; those without a price come last.
    Cheapest,
}

impl Want {
    /// The better of two comes first; of two alike, the lighter, then the one that comes first on
    /// the shelf.
    pub fn order(self, a: &Candidate, b: &Candidate) -> Ordering {
        self.cost(a)
            .total_cmp(&self.cost(b))
            .then_with(|| a.servos_kg.total_cmp(&b.servos_kg))
            .then_with(|| a.choice.cmp(&b.choice))
    }

    /// Less is better.
    pub(crate) fn cost(self, candidate: &Candidate) -> f64 {
        match self {
            Want::Lightest => candidate.servos_kg,
            Want::Furthest => -candidate.distance_m,
            Want::Cheapest => candidate.price.unwrap_or(f64::INFINITY),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::{Choice, Split};

    fn candidate(servo: usize, servos_kg: f64, distance_m: f64, price: Option<f64>) -> Candidate {
        Candidate {
            choice: Choice { splits: [Some(Split::uniform(servo)), None] },
            servos_kg,
            mass_kg: 0.3 + servos_kg,
            price,
            glide_ratio: Some(distance_m / 10.0),
            distance_m,
            least_margin: Some(2.0),
            misses: Vec::new(),
            times_over: 1.0,
            assumptions: Vec::new(),
        }
    }

    /// Each wish puts another first; what has no price comes last, and of those alike the lighter.
    #[test]
    fn analytic_order_by_each_wish() {
        let all = [
            candidate(0, 0.2, 12.0, None),
            candidate(1, 0.4, 14.0, Some(90.0)),
            candidate(2, 0.3, 13.0, Some(30.0)),
            candidate(3, 0.5, 11.0, None),
        ];
        let ranked = |want: Want| -> Vec<usize> {
            let mut sorted = all.to_vec();
            sorted.sort_by(|a, b| want.order(a, b));
            sorted.iter().map(|one| one.choice.splits[0].unwrap().middle).collect()
        };
        assert_eq!(ranked(Want::Lightest), [0, 2, 1, 3]);
        assert_eq!(ranked(Want::Furthest), [1, 2, 0, 3]);
        assert_eq!(ranked(Want::Cheapest), [2, 1, 0, 3]);
    }
}
