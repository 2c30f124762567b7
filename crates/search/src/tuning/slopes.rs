//! How the result moves with each number.

use rayon::prelude::*;

use super::{Fineness, Judge, Verdict};

/// Step to either side, of the range.
const STEP: f64 = 0.01;

/// What becomes of a candidate when one number is moved a step to either side: by 1 % of its range,
/// or by 1 where it is whole; less where an end of the range is nearer, and not at all at the end.
#[derive(Debug, Clone, PartialEq)]
pub struct Slope {
    /// Less and more, as set, in the file's unit.
    pub values: [f64; 2],
    /// What both come to, judged finely.
    pub verdicts: [Verdict; 2],
}

impl Slope {
    /// Change of what is wanted for each unit of the file between the two; absent where a flight
    /// has no value. Where the best stands on a ridge this says little: see both sides.
    pub fn wish_per_unit(&self) -> Option<f64> {
        let [less, more] = &self.verdicts;
        self.per_unit(less.wish, more.wish)
    }

    /// The same of a limit's quantity.
    pub fn limit_per_unit(&self, limit: usize) -> Option<f64> {
        let [less, more] = &self.verdicts;
        self.per_unit(less.limits[limit], more.limits[limit])
    }

    fn per_unit(&self, less: Option<f64>, more: Option<f64>) -> Option<f64> {
        let slope = (more? - less?) / (self.values[1] - self.values[0]);
        slope.is_finite().then_some(slope)
    }
}

/// Slopes at a candidate, one for each number that varies.
pub(crate) fn slopes(judge: &Judge, at: &Verdict) -> Vec<Slope> {
    (0..at.values.len()).into_par_iter().map(|idx| slope(judge, at, idx)).collect()
}

fn slope(judge: &Judge, at: &Verdict, idx: usize) -> Slope {
    let one = &judge.varied()[idx];
    let step = if one.knob.is_whole() { 1.0 } else { STEP * (one.high - one.low) };
    let own = at.values[idx];
    let values = [(own - step).max(one.low), (own + step).min(one.high)];
    let verdicts = values.map(|value| {
        let mut values = at.values.clone();
        values[idx] = value;
        judge.judge(values, Fineness::Fine)
    });
    Slope { values, verdicts }
}
