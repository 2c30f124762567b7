//! What was seen at the rungs so far: whether to go on, and what to see at the next.
//!
//! A robot's truth (how far the model is off, what its servos reach) is the same in all its drops.
//! So drops that were seen tell which truths are likely, and every flown drop counts by the
//! chance of what was seen, were its truth the real one; where too few count, more are flown of robots
//! drawn by those chances. Whether any truth goes
//! with what was seen at all is judged beside ladders drawn of truths that do.

mod evidence;
mod likeness;
mod measures;
mod stop;
mod weights;

use statrs::distribution::{Binomial, DiscreteCDF};
use undulift_design::{Ended, SeenDrop};
use undulift_flight::Spread;

use crate::{Bands, Drop, DropError, Outcome, Truth};
use evidence::{Evidence, grid};
use likeness::Likeness;
use measures::{Counted, MEASURES, of_seen, tilt_deg, with_error_rad};
pub use stop::Stop;
use weights::{Likely, Weights};

/// Chance below which something seen is a surprise.
const SURPRISING: f64 = 0.01;
/// Shares of the next rung's drops that may miss the catch, turn over, and touch anything.
const MOST_MISSING: f64 = 0.05;
const MOST_TURNING: f64 = 0.05;
const MOST_TOUCHING: f64 = 0.01;
/// Standard errors by which one measure must be off to be called the reason.
const ALONE: f64 = 2.0;
/// Drops with a distance from a height, before the next.
const ENOUGH: usize = 3;
/// Flown drops of equal weight that must be left for a height's shares and bands.
const LEFT: f64 = 400.0;
/// Drops that are flown anew where fewer are.
const ANEW: usize = 1000;

/// Drops that were flown from one height.
#[derive(Debug, Clone, Copy)]
pub struct Flown<'d> {
    /// m.
    pub height_m: f64,
    /// Sound ones and others.
    pub drops: &'d [Drop],
}

/// What was seen comes to.
#[derive(Debug, Clone)]
pub struct Reading {
    /// Reasons to stop; go on where there is none.
    pub stops: Vec<Stop>,
    /// Drops that were seen.
    pub seen: usize,
    /// Where to drop next, if not to stop; absent where enough was seen from every height.
    pub next: Option<Next>,
    /// Heights below the highest seen of which nothing was seen, m.
    pub skipped_m: Vec<f64>,
    /// Share of ladders by robots that the plan allows for that go as badly with it, or worse.
    pub surprise: f64,
    /// Real lift over computed lift; absent where nothing could be flown.
    pub lift: Option<Spread>,
    /// Real drag over computed drag, likewise.
    pub drag: Option<Spread>,
    /// What drops to come will be like.
    pub rungs: Vec<Narrowed>,
}

/// The lowest height from which too little was seen.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Next {
    /// m.
    pub height_m: f64,
    /// Drops that are missing there before going higher.
    pub drops: usize,
}

impl std::fmt::Display for Next {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        let drops = if self.drops == 1 { "drop" } else { "drops" };
        write!(
            f,
            "go on at {:.1} m: {} {drops} or more from there before going higher",
            self.height_m, self.drops
        )
    }
}

/// What drops to come from one height will be like.
#[derive(Debug, Clone)]
pub struct Narrowed {
    /// m.
    pub height_m: f64,
    /// Drops that were seen.
    pub seen: usize,
    /// Those among them whose distance was measured and that went well enough to tell something.
    pub measured: usize,
    /// Sound drops that were flown.
    pub flown: usize,
    /// Of the plan; absent where no sound drop could be flown.
    pub before: Option<Bands>,
    /// By what was seen.
    pub now: Option<Bands>,
    /// Flown drops of equal weight that would tell as much as those that `now` is of.
    pub effective: f64,
    /// Shares of the plan that turn over and that miss the catch.
    pub planned: [f64; 2],
    /// Share that turns over.
    pub turned_over: f64,
    /// Share that misses the catch.
    pub missed_catch: f64,
    /// Share that touches a wall or comes to where people are.
    pub touching: f64,
}

/// A release ladder that was flown, ready for what is seen of it.
#[derive(Debug, Clone)]
pub struct Ladder<'d> {
    rungs: Vec<Rung<'d>>,
}

/// Sound drops of one rung.
#[derive(Debug, Clone)]
struct Rung<'d> {
    height_m: f64,
    truths: Vec<Truth>,
    outcomes: Vec<&'d Outcome>,
    /// Why nothing can be read of it, where nothing can.
    likeness: Result<Likeness, DropError>,
}

/// Truths and outcomes of the sound drops that could be flown.
fn sound(drops: &[Drop]) -> (Vec<Truth>, Vec<&Outcome>) {
    let sound = drops.iter().filter(|drop| drop.fault.is_none());
    sound.filter_map(|drop| Some((drop.truth, drop.result.as_ref().ok()?))).unzip()
}

impl<'d> Rung<'d> {
    fn of(flown: &Flown<'d>) -> Self {
        let (truths, outcomes) = sound(flown.drops);
        let likeness = Likeness::of(flown.height_m, &truths, &outcomes);
        Self { height_m: flown.height_m, truths, outcomes, likeness }
    }

    /// The most that a drop may tilt, where none of those flown turned over, rad: the most of any, with
    /// what measuring misses.
    fn most_tilt_rad(&self) -> Option<f64> {
        if self.outcomes.iter().any(|outcome| outcome.summary.inverted) {
            return None;
        }
        let tilts_rad = self.outcomes.iter().map(|outcome| outcome.peak_tilt_rad());
        tilts_rad.reduce(f64::max).map(with_error_rad)
    }

    /// - `now`: drops to come, by their weights
    fn narrowed(
        &self,
        now: &[&Outcome],
        weights: &Weights,
        [seen, measured]: [usize; 2],
    ) -> Narrowed {
        let touches = |o: &Outcome| o.clearances.walls_m < 0.0 || o.clearances.people_m < 0.0;
        let even = Weights::even(self.outcomes.len());
        Narrowed {
            height_m: self.height_m,
            seen,
            measured,
            flown: self.outcomes.len(),
            before: Bands::of(&self.outcomes),
            now: Bands::to_come(now, &weights.each),
            effective: weights.effective,
            planned: [turns_over, misses].map(|holds| share(&self.outcomes, &even, holds)),
            turned_over: share(now, weights, turns_over),
            missed_catch: share(now, weights, misses),
            touching: share(now, weights, touches),
        }
    }
}

fn turns_over(outcome: &Outcome) -> bool {
    outcome.summary.inverted
}

fn misses(outcome: &Outcome) -> bool {
    !outcome.caught
}

fn share(outcomes: &[&Outcome], weights: &Weights, holds: fn(&Outcome) -> bool) -> f64 {
    let whole: f64 = weights.each.iter().sum();
    let holding = outcomes.iter().zip(&weights.each).filter(|(outcome, _)| holds(outcome));
    // A sum of nothing is −0.
    (0.0 + holding.map(|(_, weight)| weight).sum::<f64>()) / whole.max(f64::MIN_POSITIVE)
}

impl<'d> Ladder<'d> {
    /// - `flown`: drops from every height, from low to high
    pub fn of(flown: &[Flown<'d>]) -> Self {
        Self { rungs: flown.iter().map(Rung::of).collect() }
    }

    /// What was seen comes to.
    ///
    /// - `seed`: of the ladders that are drawn to compare with
    /// - `fly`: sound drops of such robots from a height, flown where too few of those that were flown
    ///   beforehand count
    ///
    /// # Errors
    ///
    /// [`DropError::TooFewToRead`] where too few drops from a height that was seen were flown.
    pub fn read(
        &self,
        seen: &[SeenDrop],
        seed: u64,
        fly: impl Fn(f64, &[Truth]) -> Vec<Drop>,
    ) -> Result<Reading, DropError> {
        // What missed the catch flew as it would; what went wrong otherwise tells of no truth.
        let counted: Vec<Counted> = seen
            .iter()
            .filter(|drop| matches!(drop.ended, Ended::Landed | Ended::MissedCatch))
            .map(|drop| (drop.rung_idx, of_seen(drop)))
            .collect();
        for (rung_idx, _) in &counted {
            self.rungs[*rung_idx].likeness.as_ref().map_err(Clone::clone)?;
        }
        let likenesses: Vec<Option<&Likeness>> =
            self.rungs.iter().map(|rung| rung.likeness.as_ref().ok()).collect();
        let of_rung = |rung_idx: usize| seen.iter().filter(move |drop| drop.rung_idx == rung_idx);
        let counts = |rung_idx: usize| {
            let has_distance = |(idx, m): &&Counted| *idx == rung_idx && !m[0].is_nan();
            [of_rung(rung_idx).count(), counted.iter().filter(has_distance).count()]
        };
        let surprise = Evidence::new(&likenesses, &counted).surprise(seed);
        let likely = Likely::of(&likenesses, &counted, seed);
        let next_idx = (0..self.rungs.len()).find(|&rung_idx| counts(rung_idx)[1] < ENOUGH);
        let narrowed: Vec<Narrowed> = (0..self.rungs.len())
            .map(|rung_idx| {
                let (rung, counts) = (&self.rungs[rung_idx], counts(rung_idx));
                let weights = Weights::of(&rung.truths, &likenesses, &counted);
                // Nothing is to come from below, or where no robot goes with what was seen.
                let to_come = next_idx.is_none_or(|next_idx| rung_idx >= next_idx);
                if weights.effective >= LEFT || !to_come || surprise < SURPRISING {
                    return rung.narrowed(&rung.outcomes, &weights, counts);
                }
                let drops = fly(rung.height_m, &likely.draw(ANEW));
                let (_, anew) = sound(&drops);
                rung.narrowed(&anew, &Weights::even(anew.len()), counts)
            })
            .collect();
        let mut stops = Vec::new();
        if surprise < SURPRISING {
            stops.push(self.surprising(surprise, &counted));
        }
        for (rung_idx, (rung, now)) in self.rungs.iter().zip(&narrowed).enumerate() {
            let of_rung: Vec<&SeenDrop> = of_rung(rung_idx).collect();
            stops.extend(badly_ended(&of_rung, now));
            stops.extend(tilted(&of_rung, rung));
        }
        // Once enough was seen from every height, more come from the highest.
        stops.extend(
            next_idx
                .map_or(narrowed.last(), |idx| narrowed.get(idx))
                .map(ahead)
                .into_iter()
                .flatten(),
        );
        let highest_idx = seen.iter().map(|drop| drop.rung_idx).max().unwrap_or(0);
        let skipped = narrowed[..highest_idx].iter().filter(|rung| rung.seen == 0);
        let of_truth = |value: fn(&Truth) -> f64| {
            let values = likely.truths.iter().map(value).zip(likely.weights.each.iter().copied());
            Spread::to_come(&values.collect::<Vec<_>>())
        };
        let next = next_idx.map(|idx| &narrowed[idx]);
        Ok(Reading {
            stops,
            seen: seen.len(),
            next: next.map(|rung| Next { height_m: rung.height_m, drops: ENOUGH - rung.measured }),
            skipped_m: skipped.map(|rung| rung.height_m).collect(),
            surprise,
            lift: of_truth(Truth::lift),
            drag: of_truth(Truth::drag),
            rungs: narrowed,
        })
    }

    /// By the measure that goes worst with every truth, if one does by itself.
    fn surprising(&self, surprise: f64, counted: &[Counted]) -> Stop {
        let per_mille = 1000.0 * surprise;
        let of_measure = |(rung_idx, rung): (usize, &Rung<'d>), measure: usize| {
            let of_rung = counted.iter().filter(|(idx, _)| *idx == rung_idx);
            let values = of_rung.map(|(_, m)| m[measure]).filter(|value| !value.is_nan());
            off_of(rung, measure, &values.collect::<Vec<f64>>(), per_mille)
        };
        let all =
            self.rungs.iter().enumerate().flat_map(|rung| {
                (0..MEASURES).filter_map(move |measure| of_measure(rung, measure))
            });
        let worst = all.max_by(|(a, _), (b, _)| a.total_cmp(b));
        let worst = worst.filter(|(off, _)| *off > ALONE);
        worst.map_or(Stop::Together { per_mille }, |(_, stop)| stop)
    }
}

/// How far the mean of some values of one measure is off with the truth that goes best, by its own
/// scatter, and what to say of it.
///
/// - returns nothing where there are no values
fn off_of(rung: &Rung<'_>, measure: usize, values: &[f64], per_mille: f64) -> Option<(f64, Stop)> {
    let likeness = rung.likeness.as_ref().ok().filter(|_| !values.is_empty())?;
    let (truths, drops) = (grid(), values.len());
    let off = |truth: &Truth| likeness.off(*truth, measure, values);
    let least = truths.iter().map(off).fold(f64::INFINITY, f64::min);
    let means = truths.iter().map(|truth| likeness.means_of(*truth, measure, drops));
    let [low, high] = means.fold([f64::INFINITY, f64::NEG_INFINITY], |[low, high], of| {
        [low.min(of[0]), high.max(of[1])]
    });
    let mean = values.iter().sum::<f64>() / drops as f64;
    let (what, unit) =
        [("distance", "m"), ("side", "m"), ("time", "s"), ("largest tilt", "°")][measure];
    let shown = |value: f64| if measure == 3 { tilt_deg(value) } else { value };
    let [mean, low, high] = [mean, low, high].map(shown);
    let height_m = rung.height_m;
    Some((least, Stop::Surprise { per_mille, what, unit, height_m, drops, mean, low, high }))
}

/// Drops that tilted further than any that was flown.
fn tilted(seen: &[&SeenDrop], rung: &Rung<'_>) -> Option<Stop> {
    let tilts_rad = seen.iter().filter_map(|drop| drop.peak_tilt_rad);
    let (tilt_rad, most_rad) = (tilts_rad.reduce(f64::max)?, rung.most_tilt_rad()?);
    let [tilt_deg, most_deg] = [tilt_rad, most_rad].map(f64::to_degrees);
    (tilt_rad > most_rad).then_some(Stop::Tilted { height_m: rung.height_m, tilt_deg, most_deg })
}

/// Drops that ended otherwise than they were meant to.
fn badly_ended(seen: &[&SeenDrop], now: &Narrowed) -> Vec<Stop> {
    let (of, height_m) = (seen.len(), now.height_m);
    let ended = |how: Ended| seen.iter().filter(|drop| drop.ended == how).count();
    let mut stops = Vec::new();
    if let drops @ 1.. = ended(Ended::Touched) {
        stops.push(Stop::Touched { drops, of, height_m });
    }
    if let drops @ 1.. = ended(Ended::Failed) {
        stops.push(Stop::Failed { drops, of, height_m });
    }
    let (inverted, missed) = (ended(Ended::Inverted), ended(Ended::MissedCatch));
    let [turning, missing] = now.planned;
    if is_surprising(inverted, of, turning) {
        let expected = 100.0 * turning;
        stops.push(Stop::TurnedOver { drops: inverted, of, height_m, expected });
    }
    if is_surprising(missed, of, missing) {
        let expected = 100.0 * missing;
        stops.push(Stop::MissedCatch { drops: missed, of, height_m, expected });
    }
    stops
}

/// Whether so many of all are too many for a share; one is where none of those flown did so.
fn is_surprising(drops: usize, of: usize, share: f64) -> bool {
    if drops == 0 || share <= 0.0 {
        return drops > 0;
    }
    let as_many = Binomial::new(share.min(1.0), of as u64);
    as_many.map_or(1.0, |binomial| binomial.sf(drops as u64 - 1)) < SURPRISING
}

/// What the next rung must not bring.
fn ahead(next: &Narrowed) -> Vec<Stop> {
    let Narrowed { height_m, touching, missed_catch, turned_over, .. } = *next;
    if next.now.is_none() {
        return vec![Stop::NextUnknown { height_m }];
    }
    let mut stops = Vec::new();
    if touching > MOST_TOUCHING {
        let (share, most) = (100.0 * touching, 100.0 * MOST_TOUCHING);
        stops.push(Stop::NextTouches { height_m, share, most });
    }
    if turned_over > MOST_TURNING {
        let (share, most) = (100.0 * turned_over, 100.0 * MOST_TURNING);
        stops.push(Stop::NextTurnsOver { height_m, share, most });
    }
    if missed_catch > MOST_MISSING {
        let (share, most) = (100.0 * missed_catch, 100.0 * MOST_MISSING);
        stops.push(Stop::NextMisses { height_m, share, most });
    }
    stops
}

#[cfg(test)]
mod tests {
    use super::*;

    /// By hand, 1 − 0.99⁵ = 4.9 % for one of five at 1 %, 10·0.01² = 0.1 % for two of them; none of any
    /// surprises nobody, one where none was to be does, however many went well.
    #[test]
    fn analytic_too_many_of_five() {
        assert!(!is_surprising(1, 5, 0.01));
        assert!(is_surprising(2, 5, 0.01));
        assert!(is_surprising(1, 5, 0.001));
        assert!(is_surprising(1, 500, 0.0));
        assert!(!is_surprising(0, 5, 0.0));
        assert!(!is_surprising(5, 5, 1.0));
    }
}
