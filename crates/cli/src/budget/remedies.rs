//! What would mend a flight that fails, beside other servos: a slower gait, a lighter structure.

use undulift_design::{Design, Knob, set_all};

use super::asking::{Judged, in_flight};
use crate::args::Budget as Args;

/// Halvings by which a change that passes is closed in on.
const HALVINGS: usize = 12;

/// Slowest gait that is tried, of the design's own frequency.
const SLOWEST: f64 = 0.1;

/// Lightest structure that is tried, of the design's own.
const LIGHTEST: f64 = 0.2;

/// Changes with which everything passes, each alone.
#[derive(Debug, Default)]
pub struct Remedies {
    /// The fastest gait, slower than the design's own, Hz.
    pub slower_hz: Option<f64>,
    /// The heaviest structure, lighter than the design's own.
    pub lighter: Option<Lighter>,
}

/// A structure that is lighter all over.
#[derive(Debug)]
pub struct Lighter {
    /// Of the design's own.
    pub factor: f64,
    /// As the command takes it.
    pub set: String,
}

impl Remedies {
    /// Finds them by flying.
    pub fn find(design: &Design, judged: &Judged, args: &Args) -> Self {
        // A flight that ends early asks for less; that is no remedy.
        let passes = |changed: &Design| {
            in_flight(changed, args)
                .is_ok_and(|changed| changed.passes() && changed.end() == judged.end())
        };
        Self { slower_hz: slower(design, &passes), lighter: lighter(design, &passes) }
    }
}

fn slower(design: &Design, passes: &impl Fn(&Design) -> bool) -> Option<f64> {
    let knob = Knob::find(design, "gait.frequency_hz").ok()?;
    let own_hz = knob.value(design);
    let with = |factor: f64| changed(design, &[&knob], &[rounded_down(factor * own_hz)]);
    let factor = largest(SLOWEST, |factor| with(factor).is_some_and(|design| passes(&design)))?;
    Some(rounded_down(factor * own_hz))
}

fn lighter(design: &Design, passes: &impl Fn(&Design) -> bool) -> Option<Lighter> {
    let knobs = structure(design)?;
    let knobs: Vec<&Knob> = knobs.iter().collect();
    let values_kg = |factor: f64| -> Vec<f64> {
        knobs.iter().map(|knob| rounded_down(factor * knob.value(design))).collect()
    };
    let with = |factor: f64| changed(design, &knobs, &values_kg(factor));
    let factor = largest(LIGHTEST, |factor| with(factor).is_some_and(|design| passes(&design)))?;
    let texts: Vec<String> = values_kg(factor).iter().map(f64::to_string).collect();
    let set = match (&knobs[..], &texts[..]) {
        ([knob], [text]) => format!("--set {}={text}", knob.key()),
        _ => format!("--set 'body.structure_kg=[{}]'", texts.join(", ")),
    };
    Some(Lighter { factor, set })
}

/// All numbers of `body.structure_kg` that are masses.
fn structure(design: &Design) -> Option<Vec<Knob>> {
    let find = |key: &str| Knob::find(design, key).ok();
    if let Some(total) = find("body.structure_kg.total").or_else(|| find("body.structure_kg")) {
        return Some(vec![total]);
    }
    let items = 0..design.glider.chain.n_segments();
    items.map(|item| find(&format!("body.structure_kg[{item}]"))).collect()
}

fn changed(design: &Design, knobs: &[&Knob], values: &[f64]) -> Option<Design> {
    let mut changed = design.clone();
    let changes: Vec<(&Knob, f64)> = knobs.iter().copied().zip(values.iter().copied()).collect();
    set_all(&mut changed, &changes).ok()?;
    Some(changed)
}

/// The largest factor below 1 that passes, closed in on by halving; absent where the least doesn't.
fn largest(least: f64, passes: impl Fn(f64) -> bool) -> Option<f64> {
    let (mut good, mut bad) = (least, 1.0);
    if !passes(good) {
        return None;
    }
    for _ in 0..HALVINGS {
        let middle = 0.5 * (good + bad);
        if passes(middle) { good = middle } else { bad = middle }
    }
    Some(good)
}

/// To five digits, so that what is printed is what was tried.
fn rounded_down(value: f64) -> f64 {
    let digits = 4 - value.abs().log10().floor() as i32;
    let scale = 10_f64.powi(digits.max(0));
    (value * scale).floor() / scale
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn analytic_five_digits_are_kept() {
        for (value, kept) in [(1.461_289, 1.4612), (0.153_459_9, 0.15345), (123.456, 123.45)] {
            assert_eq!(rounded_down(value), kept);
        }
    }

    /// The largest number whose square is at most a half.
    #[test]
    fn analytic_halving_closes_in() {
        let found = largest(0.1, |factor| factor * factor <= 0.5).unwrap();
        assert!(found <= 0.5_f64.sqrt() && found > 0.5_f64.sqrt() - 0.9 / 4096.0);
        assert_eq!(largest(0.8, |factor| factor * factor <= 0.5), None);
    }
}
