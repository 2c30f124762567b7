//! How much each flown drop still counts after what was seen.

use rayon::prelude::*;

use super::evidence::likeness;
use super::likeness::Likeness;
use super::measures::{Counted, Kinds, MEASURES};
use crate::Truth;

/// As many drops of equal weight must be left, or half of what there are.
const LEFT: f64 = 100.0;

/// Halvings in the search for how far chances count.
const HALVINGS: usize = 40;

/// Weights of drops.
#[derive(Debug, Clone)]
pub struct Weights {
    /// Of each drop, in their order; the largest is 1.
    pub each: Vec<f64>,
    /// Drops of equal weight that would tell as much.
    pub effective: f64,
    /// Power to which the chances were taken, 0 to 1.
    pub power: f64,
}

impl Weights {
    /// By the chances of what was seen, were each drop's truth the real one.
    ///
    /// Where that leaves few drops, the chances are taken to a power below 1, so that enough are left:
    /// bands are wider then than they could be.
    pub fn of(truths: &[Truth], likenesses: &[Option<&Likeness>], seen: &[Counted]) -> Self {
        let kinds = Kinds::among(seen);
        let logs: Vec<f64> =
            truths.par_iter().map(|&truth| log_of(truth, likenesses, seen, &kinds)).collect();
        Self::leaving_enough(&logs)
    }

    fn leaving_enough(logs: &[f64]) -> Self {
        let enough = LEFT.min(0.5 * logs.len() as f64);
        let full = Self::to_power(logs, 1.0);
        if full.effective >= enough {
            return full;
        }
        let (mut low, mut high) = (0.0, 1.0);
        for _ in 0..HALVINGS {
            let power = 0.5 * (low + high);
            if Self::to_power(logs, power).effective >= enough { low = power } else { high = power }
        }
        Self::to_power(logs, low)
    }

    fn to_power(logs: &[f64], power: f64) -> Self {
        let most = logs.iter().copied().fold(f64::NEG_INFINITY, f64::max);
        let each: Vec<f64> = logs.iter().map(|log| (power * (log - most)).exp()).collect();
        let (sum, squares) = each.iter().fold((0.0, 0.0), |(s, q), w| (s + w, q + w * w));
        let effective = if squares > 0.0 { sum * sum / squares } else { 0.0 };
        Self { each, effective, power }
    }
}

fn log_of(truth: Truth, likenesses: &[Option<&Likeness>], seen: &[Counted], kinds: &Kinds) -> f64 {
    let of_kind = |(place, &(rung_idx, measured)): (usize, &(usize, [bool; MEASURES]))| {
        let chances = likeness(likenesses, rung_idx).chances(truth, measured);
        let of = seen.iter().zip(&kinds.of).filter(|(_, kind)| **kind == place);
        of.map(|((_, measures), _)| chances.log(measures)).sum::<f64>()
    };
    kinds.known.iter().enumerate().map(of_kind).sum()
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// By hand: weights 1, ½ and ½ tell as much as 2²/(1 + ¼ + ¼) = 2.667 alike; to the power 0 all
    /// count alike.
    #[test]
    fn analytic_effective_drops() {
        let logs = [-3.0, -3.0 - 2.0_f64.ln(), -3.0 - 2.0_f64.ln()];
        let full = Weights::to_power(&logs, 1.0);
        assert_relative_eq!(full.effective, 8.0 / 3.0, epsilon = 1e-12);
        assert_relative_eq!(full.each[1], 0.5, epsilon = 1e-12);
        assert_relative_eq!(Weights::to_power(&logs, 0.0).effective, 3.0);
    }

    /// 1000 drops of which one alone is likely: chances are flattened until 100 are left.
    #[test]
    fn analytic_enough_drops_are_left() {
        let logs: Vec<f64> = (0..1000).map(|k| -0.5 * f64::from(k * k)).collect();
        let weights = Weights::leaving_enough(&logs);
        assert_relative_eq!(weights.effective, 100.0, max_relative = 1e-6);
        assert!(weights.power < 0.01, "{}", weights.power);
        // Half a normal distribution of this scatter tells as much as √π times it.
        let scatter = weights.power.sqrt().recip();
        assert_relative_eq!(std::f64::consts::PI.sqrt() * scatter, 100.0, max_relative = 0.02);
        let even = Weights::leaving_enough(&[-7.0; 30]);
        assert_eq!((even.effective, even.power), (30.0, 1.0));
    }
}
