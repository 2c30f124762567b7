//! How the result moves with each number.

use rayon::prelude::*;

use super::{Fineness, Judge, Verdict};

/// Step to either side, of the range.
const STEP: f64 = 0.01;

/// How the result moves with one number, by a difference over a step to either side: 1 % of its
/// range, or 1 for a whole number, less where an end of the range is nearer.
#[derive(Debug, Clone, PartialEq)]
pub struct Slope {
    /// Least and most that it was set to, in the file's unit.
    pub between: [f64; 2],
    /// Of what is wanted, for each unit of the file; absent where a flight has no value.
    pub wish: Option<f64>,
    /// The same of each limit's quantity.
    pub limits: Vec<Option<f64>>,
}

/// Slopes at a candidate, one for each number that varies.
pub(crate) fn slopes(judge: &Judge, at: &Verdict) -> Vec<Slope> {
    (0..at.values.len()).into_par_iter().map(|idx| slope(judge, at, idx)).collect()
}

fn slope(judge: &Judge, at: &Verdict, idx: usize) -> Slope {
    let one = &judge.varied()[idx];
    let step = if one.knob.is_whole() { 1.0 } else { STEP * (one.high - one.low) };
    let own = at.values[idx];
    let between = [(own - step).max(one.low), (own + step).min(one.high)];
    let [below, above] = between.map(|value| {
        let mut values = at.values.clone();
        values[idx] = value;
        judge.judge(values, Fineness::Fine)
    });
    let per_unit = |below: Option<f64>, above: Option<f64>| {
        let slope = (above? - below?) / (between[1] - between[0]);
        slope.is_finite().then_some(slope)
    };
    let pairs = below.limits.iter().zip(&above.limits);
    Slope {
        between,
        wish: per_unit(below.wish, above.wish),
        limits: pairs.map(|(below, above)| per_unit(*below, *above)).collect(),
    }
}
