//! How much each flown drop still counts after what was seen.

use rand::SeedableRng;
use rand_xoshiro::Xoshiro256PlusPlus;
use rayon::prelude::*;

use super::evidence::likeness;
use super::likeness::{Likeness, telling};
use super::measures::{Counted, Kinds, MEASURES};
use crate::Truth;

/// Truths that the likely ones are drawn from.
const DRAWN_FROM: usize = 8000;

/// Weights of drops.
#[derive(Debug, Clone)]
pub struct Weights {
    /// Of each drop, in their order; the largest is 1.
    pub each: Vec<f64>,
    /// Drops of equal weight that would tell as much.
    pub effective: f64,
}

impl Weights {
    /// By the chances of what was seen, were each drop's truth the real one.
    pub fn of(truths: &[Truth], likenesses: &[Option<&Likeness>], seen: &[Counted]) -> Self {
        let kinds = Kinds::among(seen);
        let logs: Vec<f64> =
            truths.par_iter().map(|&truth| log_of(truth, likenesses, seen, &kinds)).collect();
        Self::from_logs(&logs)
    }

    /// All alike.
    pub fn even(drops: usize) -> Self {
        Self { each: vec![1.0; drops], effective: drops as f64 }
    }

    fn from_logs(logs: &[f64]) -> Self {
        let most = logs.iter().copied().fold(f64::NEG_INFINITY, f64::max);
        let each: Vec<f64> = logs.iter().map(|log| (log - most).exp()).collect();
        let (sum, squares) = each.iter().fold((0.0, 0.0), |(s, q), w| (s + w, q + w * w));
        let effective = if squares > 0.0 { sum * sum / squares } else { 0.0 };
        Self { each, effective }
    }
}

/// Truths as what was seen makes them likely.
#[derive(Debug, Clone)]
pub struct Likely {
    /// Evenly over all that a plan allows for.
    pub truths: Vec<Truth>,
    /// Of each.
    pub weights: Weights,
}

impl Likely {
    /// By what was seen.
    pub fn of(likenesses: &[Option<&Likeness>], seen: &[Counted], seed: u64) -> Self {
        let mut random = Xoshiro256PlusPlus::seed_from_u64(seed ^ 0x6c69_6b65);
        let truths: Vec<Truth> = (0..DRAWN_FROM).map(|_| Truth::draw(&mut random)).collect();
        let weights = Weights::of(&truths, likenesses, seen);
        Self { truths, weights }
    }

    /// So many of them, each as often as it is likely: at even steps of the running sum.
    pub fn draw(&self, drops: usize) -> Vec<Truth> {
        let step = self.weights.each.iter().sum::<f64>() / drops as f64;
        let mut drawn = Vec::with_capacity(drops);
        let mut running = 0.0;
        for (truth, weight) in self.truths.iter().zip(&self.weights.each) {
            running += weight;
            while drawn.len() < drops && (drawn.len() as f64 + 0.5) * step < running {
                drawn.push(*truth);
            }
        }
        drawn
    }
}

fn log_of(truth: Truth, likenesses: &[Option<&Likeness>], seen: &[Counted], kinds: &Kinds) -> f64 {
    let of_kind = |(place, &(rung_idx, measured)): (usize, &(usize, [bool; MEASURES]))| {
        let chances = likeness(likenesses, rung_idx).chances(truth, measured);
        let of = seen.iter().zip(&kinds.of).filter(|(_, kind)| **kind == place);
        let drops = seen.iter().filter(|(other, _)| *other == rung_idx).count() as f64;
        telling(drops) / drops * of.map(|((_, measures), _)| chances.log(measures)).sum::<f64>()
    };
    kinds.known.iter().enumerate().map(of_kind).sum()
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// By hand: weights 1, ½ and ½ tell as much as 2²/(1 + ¼ + ¼) = 2.667 alike.
    #[test]
    fn analytic_effective_drops() {
        let logs = [-3.0, -3.0 - 2.0_f64.ln(), -3.0 - 2.0_f64.ln()];
        let weights = Weights::from_logs(&logs);
        assert_relative_eq!(weights.effective, 8.0 / 3.0, epsilon = 1e-12);
        assert_relative_eq!(weights.each[1], 0.5, epsilon = 1e-12);
        assert_relative_eq!(Weights::even(3).effective, 3.0);
    }

    /// Of weights 1, 0, ½ and ½, eight are drawn 4, 0, 2 and 2 times.
    #[test]
    fn analytic_likely_truths_are_drawn_as_often() {
        let truths: Vec<Truth> =
            [0.1, 0.2, 0.3, 0.4].map(|doubt| Truth { doubt, wave: 1.0 }).to_vec();
        let each = vec![1.0, 0.0, 0.5, 0.5];
        let likely = Likely { truths, weights: Weights { each, effective: 2.0 } };
        let drawn: Vec<f64> = likely.draw(8).iter().map(|truth| truth.doubt).collect();
        assert_eq!(drawn, [0.1, 0.1, 0.1, 0.1, 0.3, 0.3, 0.4, 0.4]);
    }
}
