//! The search for servos.

use rayon::prelude::*;
use undulift_design::Design;
use undulift_flight::Settings;
use undulift_servo::Servo;

use crate::bench::Bench;
use crate::estimate::Estimate;
use crate::mixes::{Mix, mixes};
use crate::{Candidate, Choice, SizingError, Want};

/// Between the instants that a budget is made from while searching, s.
const COARSE_S: f64 = 5e-3;

/// The same for what is shown, s: as `undulift budget` has it.
const FINE_S: f64 = 1e-3;

/// Candidates that are shown.
const SHOWN: usize = 10;

/// Mixes that are flown at once.
const BATCH: usize = 32;

/// Mixes that are flown at most.
const MOST_MIXES: usize = 640;

/// How far a search has come.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Step {
    /// So many more flights are meant.
    Planned(usize),
    /// One is done.
    Flown,
    /// No more will be flown of what was meant.
    Stopped,
}

/// What was found.
#[derive(Debug, Clone, PartialEq)]
pub struct Sized {
    /// At most ten: those that pass, best first, then those that miss least.
    pub candidates: Vec<Candidate>,
    /// How many were flown in all.
    pub flown: usize,
    /// Whether all mixes were flown that by their estimates might pass and be among the ten.
    pub complete: bool,
}

impl Sized {
    /// The first, where it passes.
    pub fn best(&self) -> Option<&Candidate> {
        self.candidates.first().filter(|candidate| candidate.passes())
    }

    /// Those that pass.
    pub fn passing(&self) -> impl Iterator<Item = &Candidate> {
        self.candidates.iter().filter(|candidate| candidate.passes())
    }
}

/// Finds servos that can do what a design's flight asks of them.
///
/// All pairs of one servo for yaw and one for pitch are flown. Then the loads of those flights whose
/// other axis is the best pair's tell, joint by joint, which mixes may pass: all whose worst joint
/// is estimated within a tenth of its limits. They are flown in the order of the wish, at most 640,
/// until ten pass that no other could better; by distance, which is only estimated, as many as may
/// be. What is shown is judged again from instants as close as those of a budget.
///
/// - `shelf`: the servos to choose from
/// - `told`: how far it has come, from any thread
///
/// # Errors
///
/// [`SizingError`]; that nothing passes is a result.
pub fn size(
    design: &Design,
    shelf: &[Servo],
    want: Want,
    settings: Settings,
    told: &(dyn Fn(Step) + Sync),
) -> Result<Sized, SizingError> {
    let bench = Bench::new(design, shelf, settings)?;
    if shelf.is_empty() {
        return Err(SizingError::NoServos);
    }
    let choices = bench.uniform();
    told(Step::Planned(choices.len()));
    let uniform = judge_all(&bench, &choices, COARSE_S, told);
    // Where one can't be flown, others may.
    let refused = uniform.iter().find_map(|result| result.as_ref().err()).cloned();
    let uniform: Vec<Candidate> = uniform.into_iter().flatten().collect();
    let Some(best) = uniform.iter().min_by(|a, b| passing_first(want, a, b)).cloned() else {
        return Err(refused.expect("a shelf has a servo, and a design a joint that it drives"));
    };
    let mut search = Search { bench, want, told, candidates: uniform, flown: 0, complete: false };
    search.flown = search.candidates.len();
    search.fly_mixes(&best);
    Ok(search.shown())
}

/// Candidates so far.
struct Search<'a> {
    bench: Bench<'a>,
    want: Want,
    told: &'a (dyn Fn(Step) + Sync),
    candidates: Vec<Candidate>,
    flown: usize,
    complete: bool,
}

impl Search<'_> {
    fn fly_mixes(&mut self, best: &Candidate) {
        let Self { bench, want, told, candidates, .. } = self;
        let n_driven = [0, 1].map(|at| bench.driven[at].len());
        let n_axes = n_driven.iter().filter(|&&joints| joints > 0).count();
        told(Step::Planned(n_axes * bench.shelf.len()));
        let estimates = [0, 1].map(|at| {
            let each = || told(Step::Flown);
            (n_driven[at] > 0)
                .then(|| Estimate::new(bench, at, best, candidates, *want, COARSE_S, &each))
        });
        let ahead = mixes(bench.shelf.len(), estimates.each_ref().map(Option::as_ref), n_driven);
        (self.told)(Step::Planned(ahead.len().min(MOST_MIXES)));
        for batch in ahead[..ahead.len().min(MOST_MIXES)].chunks(BATCH) {
            if self.is_settled(&batch[0]) {
                self.complete = true;
                (self.told)(Step::Stopped);
                return;
            }
            let choices: Vec<Choice> = batch.iter().map(|mix| mix.choice).collect();
            let judged = judge_all(&self.bench, &choices, COARSE_S, self.told);
            self.flown += judged.len();
            self.candidates.extend(judged.into_iter().flatten());
        }
        self.complete = ahead.get(MOST_MIXES).is_none_or(|next| !next.hopeful);
    }

    /// Whether as many as are shown pass, and are better than this one and all after it.
    fn is_settled(&self, next: &Mix) -> bool {
        // A distance is only estimated, and those without hope aren't in the order of the wish.
        let passing = self.candidates.iter().filter(|candidate| candidate.passes());
        next.hopeful
            && self.want != Want::Furthest
            && passing.filter(|candidate| self.want.cost(candidate) < next.cost).count() >= SHOWN
    }

    /// The best, judged from close instants.
    fn shown(mut self) -> Sized {
        self.candidates.sort_by(|a, b| passing_first(self.want, a, b));
        let mut shown: Vec<Candidate> = Vec::new();
        let mut missing: Vec<Candidate> = Vec::new();
        let (passing, failing): (Vec<_>, Vec<_>) =
            self.candidates.iter().partition(|candidate| candidate.passes());
        for some in passing.chunks(SHOWN).chain([&failing[..failing.len().min(SHOWN)]]) {
            if shown.len() >= SHOWN {
                break;
            }
            let choices: Vec<Choice> = some.iter().map(|candidate| candidate.choice).collect();
            (self.told)(Step::Planned(choices.len()));
            let again = judge_all(&self.bench, &choices, FINE_S, self.told).into_iter().flatten();
            let (good, bad): (Vec<_>, Vec<_>) = again.partition(Candidate::passes);
            shown.extend(good);
            missing.extend(bad);
        }
        shown.extend(missing);
        shown.sort_by(|a, b| passing_first(self.want, a, b));
        shown.truncate(SHOWN);
        Sized { candidates: shown, flown: self.flown, complete: self.complete }
    }
}

/// Those that pass by the wish, then those that miss by how far.
fn passing_first(want: Want, a: &Candidate, b: &Candidate) -> std::cmp::Ordering {
    b.passes().cmp(&a.passes()).then_with(|| match a.passes() {
        true => want.order(a, b),
        false => a.times_over.total_cmp(&b.times_over).then_with(|| want.order(a, b)),
    })
}

/// In parallel; the results stand in the order of the choices.
fn judge_all(
    bench: &Bench<'_>,
    choices: &[Choice],
    every_s: f64,
    told: &(dyn Fn(Step) + Sync),
) -> Vec<Result<Candidate, SizingError>> {
    let judge = |choice: &Choice| {
        let judged = bench.judge(*choice, every_s);
        told(Step::Flown);
        judged
    };
    choices.par_iter().map(judge).collect()
}

#[cfg(test)]
mod tests {
    use std::path::Path;

    use undulift_design::Override;

    use super::*;
    use crate::Split;

    /// Of three servos on a robot of nine joints every choice there is, 15 of yaw times 9 of pitch,
    /// is flown here, and the search finds the same three by every wish.
    #[test]
    fn twin_a_search_finds_what_trying_everything_finds() {
        let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("../../designs/sedge-10.toml");
        let sets = ["servos=servos.toml", "limits.torque_factor=4.5"];
        let sets = sets.map(|set| Override::parse(set).unwrap());
        let design = undulift_design::read(&path, &sets).unwrap();
        let names = ["micro-9", "thin-12", "mini-17"];
        let shelf = names.map(|name| design.servos[name].clone());
        let bench = Bench::new(&design, &shelf, Settings::default()).unwrap();
        let splits = bench.driven.each_ref().map(|joints| Split::all(3, joints.len()));
        let pairs =
            splits[0].iter().flat_map(|yaw| splits[1].iter().map(move |pitch| [yaw, pitch]));
        let all: Vec<Candidate> = pairs
            .map(|pair| Choice { splits: pair.map(|split| Some(*split)) })
            .map(|choice| bench.judge(choice, FINE_S).unwrap())
            .collect();
        assert_eq!(all.len(), 15 * 9);
        let mut passing: Vec<&Candidate> = all.iter().filter(|one| one.passes()).collect();
        assert!((3..100).contains(&passing.len()), "{}", passing.len());
        for want in [Want::Lightest, Want::Furthest, Want::Cheapest] {
            passing.sort_by(|a, b| want.order(a, b));
            let found = size(&design, &shelf, want, Settings::default(), &|_| ()).unwrap();
            assert!(found.passing().count() >= 3);
            for (found, tried) in found.passing().zip(&passing).take(3) {
                assert_eq!(found, *tried, "{want:?}");
            }
        }
    }

    #[test]
    fn an_empty_shelf_is_refused() {
        let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("../../designs/sedge-10.toml");
        let design = undulift_design::read(&path, &[]).unwrap();
        let refused = size(&design, &[], Want::Lightest, Settings::default(), &|_| ());
        assert_eq!(refused, Err(SizingError::NoServos));
    }
}
