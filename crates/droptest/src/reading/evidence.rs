//! How well what was seen goes with any of the truths that a plan allows for.

use nalgebra::Vector4;
use rand::{Rng, SeedableRng};
use rand_distr::StandardNormal;
use rand_xoshiro::Xoshiro256PlusPlus;
use rayon::prelude::*;

use super::likeness::{Chances, Likeness};
use super::measures::{Counted, Kinds, MEASURED_TO, MEASURES, Measures};
use crate::{Truth, WEAKEST_WAVE};

/// Truths that stand for all: over the doubt and over the wave.
const DOUBTS: usize = 33;
const WAVES: usize = 3;

/// Ladders that are drawn to compare with.
const DRAWN: usize = 999;

/// What was seen, with the chances of each drop for many truths.
pub struct Evidence<'a> {
    likenesses: &'a [Option<&'a Likeness>],
    seen: &'a [Counted],
    kinds: Kinds,
    /// Shape (kinds, truths).
    chances: Vec<Vec<Chances>>,
}

impl<'a> Evidence<'a> {
    /// - `likenesses`: of every rung; those that something was seen of must be there
    pub fn new(likenesses: &'a [Option<&'a Likeness>], seen: &'a [Counted]) -> Self {
        let (grid, kinds) = (grid(), Kinds::among(seen));
        let of_kind = |&(rung_idx, measured): &(usize, [bool; MEASURES])| {
            let of = likeness(likenesses, rung_idx);
            grid.iter().map(|&truth| of.chances(truth, measured)).collect()
        };
        let chances = kinds.known.iter().map(of_kind).collect();
        Self { likenesses, seen, kinds, chances }
    }

    /// Chance that a robot of a truth that the plan allows for gives drops that go as badly with all of
    /// these truths: the smaller one of two, by the means and by each drop, taken twice.
    pub fn surprise(&self, seed: u64) -> f64 {
        let own: Vec<Measures> = self.seen.iter().map(|(_, measures)| *measures).collect();
        let own = [self.by_means(&own), self.by_each(&own)];
        let drawn: Vec<[f64; 2]> = (0..DRAWN as u64)
            .into_par_iter()
            .map(|number| {
                let stream = seed ^ number.wrapping_mul(0x9e37_79b9_7f4a_7c15) ^ 0x7365_656e;
                let mut random = Xoshiro256PlusPlus::seed_from_u64(stream);
                let truth = Truth::draw(&mut random);
                let drawn = self.draw(truth, &mut random);
                [self.by_means(&drawn), self.by_each(&drawn)]
            })
            .collect();
        let chance = |way: usize| {
            let as_bad = drawn.iter().filter(|drawn| drawn[way] >= own[way]).count();
            (as_bad + 1) as f64 / (DRAWN + 1) as f64
        };
        (2.0 * chance(0).min(chance(1))).min(1.0)
    }

    /// How far the means of all kinds are off, by their scatter, with the truth that goes best.
    fn by_means(&self, measures: &[Measures]) -> f64 {
        let mut sums = vec![([0.0; MEASURES], 0.0); self.chances.len()];
        for (measures, &kind) in measures.iter().zip(&self.kinds.of) {
            let (sum, drops) = &mut sums[kind];
            (0..MEASURES).for_each(|k| sum[k] += measures[k]);
            *drops += 1.0;
        }
        let apart = |place: usize| {
            let of_kind = self.chances.iter().zip(&sums).map(|(chances, (sum, drops))| {
                chances[place].apart(&sum.map(|sum| sum / drops), *drops)
            });
            of_kind.sum::<f64>()
        };
        (0..DOUBTS * WAVES).map(apart).fold(f64::INFINITY, f64::min)
    }

    /// How unlikely all drops are over all truths: less the logarithm of their mean chance, but for
    /// a constant.
    fn by_each(&self, measures: &[Measures]) -> f64 {
        let mut logs = vec![0.0; DOUBTS * WAVES];
        for (measures, &kind) in measures.iter().zip(&self.kinds.of) {
            for (log, chances) in logs.iter_mut().zip(&self.chances[kind]) {
                *log += chances.log(measures);
            }
        }
        let most = logs.iter().copied().fold(f64::NEG_INFINITY, f64::max);
        -most - logs.iter().map(|log| (log - most).exp()).sum::<f64>().ln()
    }

    /// Measures of as many drops of one robot, where anything was measured.
    fn draw(&self, truth: Truth, random: &mut impl Rng) -> Vec<Measures> {
        let rungs = self.likenesses.iter();
        let common: Vec<Option<Vector4<f64>>> =
            rungs.map(|rung| rung.map(|likeness| likeness.left(random))).collect();
        let one = |(rung_idx, seen): &Counted| {
            let of = likeness(self.likenesses, *rung_idx);
            let own = of.left(random);
            let drawn = of.drawn(truth, common[*rung_idx].unwrap_or_default(), own);
            std::array::from_fn(|k| {
                let error: f64 = random.sample(StandardNormal);
                if seen[k].is_nan() { f64::NAN } else { drawn[k] + MEASURED_TO[k] * error }
            })
        };
        self.seen.iter().map(one).collect()
    }
}

/// Of a rung that something was seen of.
pub fn likeness<'l>(likenesses: &[Option<&'l Likeness>], rung_idx: usize) -> &'l Likeness {
    likenesses[rung_idx].expect("there is one for every rung that was seen")
}

/// Truths evenly over all that a plan allows for.
pub fn grid() -> Vec<Truth> {
    let at = |k: usize, of: usize| k as f64 / (of - 1) as f64;
    let doubts = (0..DOUBTS).map(|k| 2.0 * at(k, DOUBTS) - 1.0);
    let truths = doubts.flat_map(|doubt| {
        let waves = (0..WAVES).map(|k| WEAKEST_WAVE + (1.0 - WEAKEST_WAVE) * at(k, WAVES));
        waves.map(move |wave| Truth { doubt, wave })
    });
    truths.collect()
}
