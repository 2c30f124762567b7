//! What the best of a search is worth.

use std::convert::Infallible;

use super::slopes::slopes;
use super::{Judge, Run, Slope, Store, Tried, Verdict};
use crate::optimiser::Plan;

/// How near to a limit it is active, of the limit's scale; to an end, of the range.
const NEAR: f64 = 0.01;

/// By how much an active limit or end is loosened, of the limit's scale or of the range.
const LOOSENED: f64 = 0.1;

/// First step of a search about the best, of the ranges.
const LOCAL_STEP: f64 = 0.05;

/// Evaluations of such a search for each number that varies, and the fewest and most in all.
const LOCAL_EACH: usize = 40;
const LOCAL_ALL: [usize; 2] = [60, 400];

/// What the best of a search is worth.
#[derive(Debug, Clone, PartialEq)]
pub struct Closing {
    /// The design as it was read.
    pub before: Verdict,
    /// The best.
    pub after: Verdict,
    /// One for each number that varies, at the best.
    pub slopes: Vec<Slope>,
    /// What holds the best back; none where nothing is feasible.
    pub active: Vec<Active>,
    /// By how much a short search about the best, with nothing loosened, betters the wish.
    pub settled_within: Option<f64>,
    /// Evaluations of each short search.
    pub local_evaluations: usize,
}

/// A limit or an end that the best is at.
#[derive(Debug, Clone, PartialEq)]
pub struct Active {
    /// Which.
    pub held: Held,
    /// Where it was put to see what it costs; absent where it can't be loosened.
    pub loosened: Option<f64>,
    /// By how much more a short search about the best betters the wish with it loosened by 10 %
    /// than with nothing loosened; what it truly costs may be more.
    pub gain: Option<f64>,
}

/// What holds a best back, by its place among what varies or among the limits.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Held {
    /// A number is as small as it may be.
    Low(usize),
    /// A number is as large as it may be.
    High(usize),
    /// A limit is only just met.
    Limit(usize),
}

/// The best of a run beside what it began with; neither how it moves nor what holds it back.
///
/// - returns none before anything was tried
pub fn brief_closing(judge: &Judge, run: &Run) -> Option<Closing> {
    let after = run.ledger().best()?.clone();
    Some(Closing {
        before: judge.before(),
        slopes: Vec::new(),
        active: Vec::new(),
        settled_within: None,
        local_evaluations: 0,
        after,
    })
}

/// Says what the best of a run is worth.
///
/// - `told`: called before each short search, with how many there are
/// - returns none before anything was tried
pub fn closing(judge: &Judge, run: &Run, told: &dyn Fn(usize)) -> Option<Closing> {
    let mut closing = brief_closing(judge, run)?;
    let after = &closing.after;
    let [least, most] = LOCAL_ALL;
    let evaluations = (LOCAL_EACH * after.values.len()).clamp(least, most);
    closing.local_evaluations = evaluations;
    closing.slopes = slopes(judge, after);
    if after.is_feasible() {
        let held = held(judge, after);
        let searches = held.len() + 1;
        told(searches);
        let own = bettered(judge, after, evaluations);
        let active = held.into_iter().map(|held| {
            told(searches);
            let (loosened, judge) = loosened(judge, held).unzip();
            let gain = judge.and_then(|judge| bettered(&judge, after, evaluations));
            // One search may by chance find less than the other.
            let gain = gain.map(|gain| (gain - own.unwrap_or(0.0)).max(0.0));
            Active { held, loosened, gain }
        });
        closing.active = active.collect();
        closing.settled_within = own;
    }
    Some(closing)
}

/// The ends and limits that a candidate is at.
fn held(judge: &Judge, at: &Verdict) -> Vec<Held> {
    let mut held = Vec::new();
    for (idx, (one, value)) in judge.varied().iter().zip(&at.values).enumerate() {
        let near = NEAR * (one.high - one.low);
        if value - one.low <= near {
            held.push(Held::Low(idx));
        } else if one.high - value <= near {
            held.push(Held::High(idx));
        }
    }
    for (idx, (limit, value)) in judge.limits().iter().zip(&at.limits).enumerate() {
        // A landing is there or not.
        let graded = limit.origin != super::Origin::Always;
        let near = |value: f64| limit.bound.relative_miss(value) >= -NEAR;
        if graded && value.is_some_and(near) && limit.key != super::outcome::TIMES_OVER {
            held.push(Held::Limit(idx));
        }
    }
    held
}

/// A judge with one end or limit loosened, and where that was put.
fn loosened(judge: &Judge, held: Held) -> Option<(f64, Judge)> {
    let (idx, sign) = match held {
        Held::Limit(idx) => {
            let judge = judge.with_eased_limit(idx, LOOSENED);
            return Some((judge.limits()[idx].bound.value(), judge));
        }
        Held::Low(idx) => (idx, -1.0),
        Held::High(idx) => (idx, 1.0),
    };
    let one = &judge.varied()[idx];
    let by = LOOSENED * (one.high - one.low);
    let by = sign * if one.knob.is_whole() { by.round().max(1.0) } else { by };
    let end = by + if sign < 0.0 { one.low } else { one.high };
    let ends = if sign < 0.0 { [end, one.high] } else { [one.low, end] };
    one.knob.allows(end).then(|| (end, judge.with_ends(idx, ends[0], ends[1])))
}

/// By how much a short search about a candidate betters its wish.
fn bettered(judge: &Judge, at: &Verdict, evaluations: usize) -> Option<f64> {
    let start = judge.unit(&at.values);
    let plan = Plan { step: LOCAL_STEP, ..Plan::new(start, evaluations, judge.seed()) };
    let mut run = Run::planned(judge, plan).ok()?;
    let Ok(_) = run.go_on(judge, &mut Nowhere, &|| false);
    let found = run.ledger().best().filter(|best| best.is_feasible())?;
    let by = found.wish? - at.wish?;
    Some(if judge.wish().maximise { by } else { -by }.max(0.0))
}

/// Keeps nothing.
struct Nowhere;

impl Store for Nowhere {
    type Error = Infallible;

    fn keep(&mut self, _: &[Tried], _: &Run, _: bool) -> Result<(), Infallible> {
        Ok(())
    }
}
