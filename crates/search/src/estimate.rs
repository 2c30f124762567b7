//! What a split may come to, told from flights with one kind of servo an axis.

use rayon::prelude::*;

use crate::bench::Bench;
use crate::{Candidate, Choice, Split, Want};

/// Flights whose other axis is that of the best pair tell of one axis.
pub(crate) struct Estimate {
    n_driven: usize,
    /// How many times over, by the servo flown, the servo asked and the joint; absent where the
    /// flight tells nothing.
    strains: Vec<Option<Vec<Vec<f64>>>>,
    /// What a joint with each servo adds to the wish's cost.
    costs: Vec<f64>,
}

impl Estimate {
    /// - `best`: the pair whose other axis is kept
    /// - `uniform`: all pairs that were flown
    pub(crate) fn new(
        bench: &Bench<'_>,
        at: usize,
        best: &Candidate,
        uniform: &[Candidate],
        want: Want,
        every_s: f64,
        each: &(dyn Fn() + Sync),
    ) -> Self {
        let n_driven = bench.driven[at].len();
        let with = |servo: usize| {
            let mut choice = best.choice;
            choice.splits[at] = Some(Split::uniform(servo));
            choice
        };
        let strains = (0..bench.shelf.len())
            .into_par_iter()
            .map(|servo| {
                let found = bench.strain(with(servo), at, every_s);
                each();
                found.ok().flatten()
            })
            .collect();
        let cost = |servo: usize| match want {
            Want::Lightest => bench.shelf[servo].mass_kg,
            Want::Cheapest => bench.shelf[servo].price.unwrap_or(f64::INFINITY),
            Want::Furthest => -distance_m(uniform, with(servo)) / n_driven as f64,
        };
        let costs = (0..bench.shelf.len()).map(cost).collect();
        Self { n_driven, strains, costs }
    }

    /// How many times over its limits the worst joint would be: between the flights with the one
    /// servo everywhere and with the other, as far as the joints go that have each; by either alone
    /// where the other tells nothing.
    pub(crate) fn times_over(&self, split: Split) -> f64 {
        let share = split.share_at_ends(self.n_driven);
        let [ends, middle] = [split.ends, split.middle].map(|flown| self.strains[flown].as_ref());
        let of_joint = |nth: usize| {
            let servo = split.servo_of(nth, self.n_driven);
            match (ends, middle) {
                (Some(ends), Some(middle)) => {
                    weighed(ends[servo][nth], share) + weighed(middle[servo][nth], 1.0 - share)
                }
                (Some(only), None) | (None, Some(only)) => only[servo][nth],
                (None, None) => 1.0,
            }
        };
        (0..self.n_driven).map(of_joint).fold(1.0, f64::max)
    }

    /// What the axis adds to the wish's cost: exactly, or, for the distance, as far as that goes
    /// with the number of joints that have each servo.
    pub(crate) fn cost(&self, split: Split) -> f64 {
        let share = split.share_at_ends(self.n_driven);
        let each = weighed(self.costs[split.ends], share);
        self.n_driven as f64 * (each + weighed(self.costs[split.middle], 1.0 - share))
    }
}

/// Infinite figures weigh nothing where their share is nothing.
fn weighed(figure: f64, share: f64) -> f64 {
    if share > 0.0 { share * figure } else { 0.0 }
}

/// Of a flight that was flown upright; else none at all.
fn distance_m(uniform: &[Candidate], choice: Choice) -> f64 {
    let own = uniform.iter().find(|candidate| candidate.choice == choice);
    own.filter(|candidate| candidate.times_over.is_finite()).map_or(0.0, |own| own.distance_m)
}
