//! A search in words for people.

use std::fmt::Write;

use undulift_search::tuning::{
    Active, Bound, Closing, Held, Judge, Ledger, Limit, Origin, Slope, Verdict,
};

use super::Told;
use super::record::Record;
use crate::terminal;

/// Share of the best that a small step may take away before it is told (our choice).
const RIDGE: f64 = 0.05;

/// Lines of what is missed.
const MOST_MISSES: usize = 8;

/// The best so far, in a few words.
pub fn in_short(judge: &Judge, best: &Verdict) -> String {
    let key = &judge.wish().key;
    match (best.is_feasible(), best.wish) {
        (true, Some(wish)) => format!("best {key} {}", short(wish)),
        _ => format!("nothing feasible yet, violation {:.3}", best.violation),
    }
}

/// What stands at the head of best.toml.
pub fn head_of_best(judge: &Judge, record: &Record, ledger: &Ledger) -> String {
    let (wish, best) = (judge.wish(), ledger.best());
    let way = if wish.maximise { "large" } else { "small" };
    let value = best.and_then(|best| best.wish).map_or("none".to_owned(), short);
    let kept = match best.is_some_and(Verdict::is_feasible) {
        true => "It keeps all that is required.",
        false => "It misses what is required, by less than any other that was tried.",
    };
    let search = match &record.search {
        Some(path) => format!("as {path} says"),
        None => "as [search] says".into(),
    };
    let sets: String = record.sets.iter().map(|set| format!(" --set {set}")).collect();
    // A line break in a name would end the comment.
    let head = [
        format!(
            "Tuned by undulift {}: {} as {way} as could be found is {value}.",
            record.version, wish.key
        ),
        format!(
            "{kept} Found at evaluation {} of at most {}, seed {}, {search}.",
            ledger.best_at(),
            record.evaluations,
            record.seed
        ),
        format!("All else, comments too, is of {}{sets},", record.design),
        format!("input SHA-256 {}.", record.input_sha256),
    ];
    head.map(|line| format!("# {}\n", line.replace(char::is_control, " "))).concat()
}

/// The whole answer.
pub fn answer(told: &Told<'_>) -> String {
    let Told { judge, run, record, closing, folder } = told;
    let ledger = run.ledger();
    let (tried, share) = (ledger.tried(), 100.0 * ledger.feasible_share());
    let mut text = format!(
        "{}  {tried} evaluations, seed {}, {share:.0} % of them feasible; the best is number {}\n",
        judge.design().name,
        record.seed,
        ledger.best_at()
    );
    text.push_str(&table(judge, closing));
    if !closing.after.is_feasible() {
        text.push_str("  Nothing that was tried keeps all that is required; this misses least\n");
    } else if !closing.slopes.is_empty() {
        text.push_str(&slopes(judge, closing));
        text.push_str(&holding(judge, closing));
    }
    for path in [folder.best_path(), folder.history_path()] {
        let _ = writeln!(text, "  Wrote {}", path.display());
    }
    text
}

/// Before and after.
fn table(judge: &Judge, closing: &Closing) -> String {
    let Closing { before, after, .. } = closing;
    let mut rows = vec![[String::new(), String::new(), "before".into(), "best".into(), "".into()]];
    let wish = judge.wish();
    let way = if wish.maximise { "large" } else { "small" };
    let cell = |value: Option<f64>| value.map_or("-".into(), short);
    let wishes = [cell(before.wish), cell(after.wish)];
    let [own, best] = wishes;
    rows.push(["Wanted".into(), wish.key.clone(), own, best, format!("as {way} as can be")]);
    for (idx, limit) in judge.limits().iter().enumerate() {
        let label = if idx == 0 { "Required" } else { "" };
        let [own, best] = [before, after].map(|verdict| cell(verdict.limits[idx]));
        rows.push([label.into(), limit.key.clone(), own, best, limit_in_words(limit)]);
    }
    for (idx, one) in judge.varied().iter().enumerate() {
        let label = if idx == 0 { "Varied" } else { "" };
        let [own, best] = [before, after].map(|verdict| short(verdict.values[idx]));
        let ends = format!("{} to {}", one.low, one.high);
        rows.push([label.into(), one.knob.key().into(), own, best, ends]);
    }
    let width = |column: usize| rows.iter().map(|row| row[column].chars().count()).max();
    let [names, own, best] = [1, 2, 3].map(|column| width(column).unwrap_or(0));
    let line = |row: &[String; 5]| {
        let [label, name, before, after, note] = row;
        let line = format!("  {label:<9} {name:<names$}  {before:>own$}  {after:>best$}   {note}");
        format!("{}\n", line.trim_end())
    };
    rows.iter().map(line).collect()
}

fn limit_in_words(limit: &Limit) -> String {
    let bound = match limit.bound {
        Bound::Least(value) => format!("at least {value}"),
        Bound::Most(value) => format!("at most {value}"),
    };
    match (limit.origin, limit.key.as_str()) {
        (Origin::Always, _) => "0: it must land".into(),
        (Origin::Design, "joint_travel_share") => format!("{bound} of each joint's travel"),
        (Origin::Design, "budget.times_over") => {
            format!("{bound}: servo speed and heat, currents, charge")
        }
        (Origin::Design, _) => format!("{bound}, the design's [limits]"),
        (Origin::Search, _) => bound,
    }
}

/// How the wish moves with each number.
fn slopes(judge: &Judge, closing: &Closing) -> String {
    let key = &judge.wish().key;
    let mut text = format!("  How {key} moves about there, each number alone by a step\n");
    let mut missing = false;
    for (idx, (one, slope)) in judge.varied().iter().zip(&closing.slopes).enumerate() {
        let own = closing.after.values[idx];
        let sides = [(0, "less", "at its least"), (1, "more", "at its most")];
        let [less, more] = sides.map(|(side, word, end)| {
            let (value, verdict) = (slope.values[side], &slope.verdicts[side]);
            if value == own {
                return end.to_owned();
            }
            let moved = match (verdict.wish, closing.after.wish) {
                (Some(wish), Some(best)) => format!("{:+.4}", wish - best),
                _ => "none".into(),
            };
            let mark = if verdict.is_feasible() { "" } else { "*" };
            missing |= !verdict.is_feasible();
            format!("{moved}{mark} at {} {word}", short((value - own).abs()))
        });
        let _ = writeln!(text, "    {:<30}{less:>25}{more:>27}", one.knob.key());
    }
    if missing {
        text.push_str("    * misses what is required\n");
    }
    text
}

/// What holds the best back.
fn holding(judge: &Judge, closing: &Closing) -> String {
    let mut text = if closing.active.is_empty() {
        "  No end and no limit holds it back\n".to_owned()
    } else {
        format!(
            "  What holds it back, and what {} gains at least with that 10 % looser\n",
            judge.wish().key
        )
    };
    for active in &closing.active {
        let gain = match (active.gain, active.loosened) {
            (Some(gain), Some(to)) => format!("{} at {}", signed(gain, judge), short(to)),
            (None, Some(_)) => "unknown: the short search found nothing feasible".into(),
            (_, None) => "it can't be loosened: the file allows no more".into(),
        };
        let _ = writeln!(text, "    {:<46} {gain}", held_in_words(judge, active));
    }
    if let Some(within) = closing.settled_within {
        let _ = writeln!(
            text,
            "  A short search about it, {} evaluations with nothing looser, betters it by {}",
            closing.local_evaluations,
            signed(within, judge).trim_start_matches(['+', '-'])
        );
    }
    text
}

fn signed(gain: f64, judge: &Judge) -> String {
    let sign = if judge.wish().maximise { '+' } else { '-' };
    if gain == 0.0 { "nothing".into() } else { format!("{sign}{}", short(gain)) }
}

/// Which end or limit.
pub fn held_in_words(judge: &Judge, active: &Active) -> String {
    let of = |idx: usize| &judge.varied()[idx];
    match active.held {
        Held::Low(idx) => format!("{} at its least, {}", of(idx).knob.key(), of(idx).low),
        Held::High(idx) => format!("{} at its most, {}", of(idx).knob.key(), of(idx).high),
        Held::Limit(idx) => {
            let limit = &judge.limits()[idx];
            match limit.bound {
                Bound::Least(value) => format!("{} at least {value}", limit.key),
                Bound::Most(value) => format!("{} at most {value}", limit.key),
            }
        }
    }
}

/// Says where the best stands on a ridge too narrow for a robot.
pub fn tell_ridge(told: &Told<'_>) {
    let Told { judge, closing, .. } = told;
    let asked = closing.after.is_feasible() && judge.launches() == 1;
    let Some(best) = closing.after.wish.filter(|_| asked) else { return };
    let loss = |wish: f64| {
        let by = if judge.wish().maximise { best - wish } else { wish - best };
        by / best.abs()
    };
    let worst =
        |of: &Slope| of.verdicts.iter().filter_map(|v| Some(loss(v.wish?))).reduce(f64::max);
    let losses = closing.slopes.iter().enumerate().filter_map(|(idx, of)| Some((worst(of)?, idx)));
    let Some((loss, idx)) = losses.max_by(|a, b| a.0.total_cmp(&b.0)) else { return };
    if loss > RIDGE {
        terminal::tell_hint(&format!(
            "the best stands on a narrow ridge: a hundredth of the range of {} takes {:.0} % of it \
             away; to find one that launches and settings may miss, add robust = {{ launches = 24, \
             take = \"q10\" }}",
            judge.varied()[idx].knob.key(),
            100.0 * loss
        ));
    }
}

/// Says what the least infeasible misses, and what can't be had together.
pub fn tell_misses(told: &Told<'_>) {
    let Told { judge, run, closing, .. } = told;
    let (limits, ledger) = (judge.limits(), run.ledger());
    let missed = limits.iter().zip(&closing.after.limits);
    let missed = missed.filter(|(limit, value)| limit.miss(**value) > 0.0);
    for (limit, value) in missed.take(MOST_MISSES) {
        let value = value.map_or("has no value".into(), |value| format!("is {}", short(value)));
        let (name, wanted) = (&judge.design().name, limit_in_words(limit));
        terminal::tell_limit(&format!("{name}: {} {value}; required is {wanted}", limit.key));
    }
    let columns = Limit::columns(limits);
    let never: Vec<&String> =
        (0..limits.len()).filter(|&idx| ledger.met(idx) == 0).map(|idx| &columns[idx]).collect();
    let apart: Vec<String> = ledger
        .never_together()
        .into_iter()
        .map(|(one, two)| format!("{} and {}", columns[one], columns[two]))
        .collect();
    let tried = ledger.tried();
    for key in &never {
        terminal::tell_hint(&format!("none of the {tried} that were tried met {key}"));
    }
    for pair in apart.iter().take(MOST_MISSES) {
        terminal::tell_hint(&format!("none of the {tried} that were tried met both {pair}"));
    }
    if never.is_empty() && apart.is_empty() {
        terminal::tell_hint(
            "any two limits were met together by some that were tried, but never all; more \
             evaluations may help",
        );
    }
    if ledger.unjudged() > 0 {
        terminal::tell_hint(&format!(
            "{} of those that were tried could not be made, let go or followed",
            ledger.unjudged()
        ));
    }
}

/// Some five digits.
fn short(value: f64) -> String {
    let size = value.abs();
    if value == 0.0 || !value.is_finite() {
        format!("{value}")
    } else if !(1e-5..1e6).contains(&size) {
        format!("{value:.3e}")
    } else {
        let digits = (4 - size.log10().floor() as i32).clamp(0, 9) as usize;
        let shown = format!("{value:.digits$}");
        let shown = if shown.contains('.') { shown.trim_end_matches('0') } else { &shown };
        shown.trim_end_matches('.').to_owned()
    }
}
