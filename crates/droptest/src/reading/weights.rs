//! How much each flown drop still counts after what was seen.

use super::evidence::{Counted, likeness};
use super::likeness::{Chances, Likeness};
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
        let logs: Vec<f64> = truths.iter().map(|&truth| log_of(truth, likenesses, seen)).collect();
        let enough = LEFT.min(0.5 * truths.len() as f64);
        let full = Self::to_power(&logs, 1.0);
        if full.effective >= enough {
            return full;
        }
        let (mut low, mut high) = (0.0, 1.0);
        for _ in 0..HALVINGS {
            let power = 0.5 * (low + high);
            if Self::to_power(&logs, power).effective >= enough {
                low = power
            } else {
                high = power
            }
        }
        Self::to_power(&logs, low)
    }

    fn to_power(logs: &[f64], power: f64) -> Self {
        let most = logs.iter().copied().fold(f64::NEG_INFINITY, f64::max);
        let each: Vec<f64> = logs.iter().map(|log| (power * (log - most)).exp()).collect();
        let (sum, squares) = each.iter().fold((0.0, 0.0), |(s, q), w| (s + w, q + w * w));
        let effective = if squares > 0.0 { sum * sum / squares } else { 0.0 };
        Self { each, effective, power }
    }
}

fn log_of(truth: Truth, likenesses: &[Option<&Likeness>], seen: &[Counted]) -> f64 {
    let mut known: Vec<((usize, [bool; 4]), Chances)> = Vec::new();
    let of = |&(rung_idx, measures): &Counted| {
        let kind = (rung_idx, measures.map(|value| !value.is_nan()));
        let place = known.iter().position(|(own, _)| *own == kind).unwrap_or_else(|| {
            known.push((kind, likeness(likenesses, rung_idx).chances(truth, kind.1)));
            known.len() - 1
        });
        known[place].1.log(&measures)
    };
    seen.iter().map(of).sum()
}
