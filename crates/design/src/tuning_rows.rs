//! Rows of `[search.vary]` and `[search.require]`.

use crate::document::Mark;
use crate::nearest::nearest;
use crate::node::{Count, Node, shortened};
use crate::quantities::{BUDGET_NUMBERS, FLIGHT_NUMBERS};
use crate::range::Range;
use crate::table::Table;
use crate::{Design, DesignError, Knob};

/// Wider than any number of a design or a flight is.
const ANY: Range = Range::within(1e12);

/// What is required of a quantity.
const LIMIT: &str = "{ at_least = … }, { at_most = … } or both";

/// A number that may vary, and between which ends, in the file's unit.
#[derive(Debug, Clone, PartialEq)]
pub struct Varied {
    /// Which.
    pub knob: Knob,
    /// Least that it may be.
    pub low: f64,
    /// Most.
    pub high: f64,
}

/// What is required of a quantity, in the unit that it is printed in.
#[derive(Debug, Clone, PartialEq)]
pub struct Required {
    /// As printed.
    pub key: String,
    /// It must not be below.
    pub at_least: Option<f64>,
    /// It must not be above.
    pub at_most: Option<f64>,
}

pub(crate) fn read_varied(table: Table<'_>, design: &Design) -> Vec<Varied> {
    let entries = table.entries();
    if entries.is_empty() && table.is_given() {
        let why = "nothing varies, so there is nothing to search for".to_owned();
        let remedy = "name numbers of the design: \"gait.frequency_hz\" = [0.6, 1.6]";
        let what = DesignError::Disagree { why, remedy };
        table.document().note(table.path(), Mark::Key, &[], what);
    }
    let mut varied: Vec<Varied> = Vec::new();
    for (key, node) in entries {
        let Some(one) = read_one_varied(key, &node, design) else { continue };
        if varied.iter().any(|other| other.knob.key() == one.knob.key()) {
            let why = "this number is named twice".to_owned();
            refuse_key(&node, DesignError::Disagree { why, remedy: "name it once" });
        }
        varied.push(one);
    }
    varied.sort_by(|a, b| a.knob.key().cmp(b.knob.key()));
    varied
}

fn read_one_varied(key: &str, node: &Node<'_>, design: &Design) -> Option<Varied> {
    if node.is_table() {
        refuse_key(node, key_without_quotes("\"gait.frequency_hz\" = [0.6, 1.6]"));
        return None;
    }
    let knob = Knob::find(design, key).map_err(|error| refuse_key(node, error)).ok();
    let why = "it is the least and the most that the number may be".to_owned();
    let ends = node.numbers(ANY, &Count { items: Some(2), why, decided_by: None });
    let (knob, ends) = knob.zip(ends)?;
    let (low, high) = (ends[0], ends[1]);
    for end in [low, high].into_iter().filter(|&end| !knob.allows(end)) {
        let found = shortened(&end.to_string());
        let whole = if knob.is_whole() { "a whole number " } else { "" };
        let allowed = format!("{whole}{}", knob.allowed());
        node.note(DesignError::OutOfRange { found, allowed });
    }
    if low >= high {
        let (why, remedy) = if low == high {
            (format!("both ends are {low}, so it can't vary"), "take it out, or set them apart")
        } else {
            (format!("the least, {low}, is above the most, {high}"), "swap the two")
        };
        node.note(DesignError::Disagree { why, remedy });
    }
    Some(Varied { knob, low, high })
}

pub(crate) fn read_required(table: &Table<'_>) -> Vec<Required> {
    let entries = table.entries();
    let mut required: Vec<Required> =
        entries.iter().filter_map(|(key, node)| read_one_required(key, node)).collect();
    required.sort_by(|a, b| a.key.cmp(&b.key));
    required
}

fn read_one_required(key: &str, node: &Node<'_>) -> Option<Required> {
    if !node.is_table() {
        node.wrong_kind(LIMIT);
        return None;
    }
    let table = node.table()?;
    let entries = table.entries();
    if !entries.is_empty() && entries.iter().all(|(_, inner)| inner.is_table()) {
        refuse_key(node, key_without_quotes("\"budget.least_margin\" = { at_least = 1.5 }"));
        return None;
    }
    let known = refuse_unknown_quantity(node, key, Mark::Key);
    if entries.is_empty() {
        node.note(DesignError::WrongKind { found: "an empty table".into(), wanted: LIMIT.into() });
    }
    let (at_least, at_most) = (table.number("at_least", ANY), table.number("at_most", ANY));
    if let (Some(least), Some(most)) = (at_least, at_most)
        && least > most
    {
        let why = format!("{least} is above the {most} that `at_most` says");
        table.disagree("at_least", &["at_most"], why, "swap the two, or keep one");
    }
    table.finish();
    known.then(|| Required { key: key.to_owned(), at_least, at_most })
}

/// Puts down a key that names nothing that is printed as a number.
///
/// - returns whether it does
pub(crate) fn refuse_unknown_quantity(node: &Node<'_>, key: &str, mark: Mark) -> bool {
    let known = || FLIGHT_NUMBERS.into_iter().chain(BUDGET_NUMBERS);
    if known().any(|own| own == key) {
        return true;
    }
    let why = match key {
        "end" => "it is a word".into(),
        "alpha_deg" | "reynolds" => "it is a band of two numbers".into(),
        _ => "neither a flight nor a budget prints it".to_owned(),
    };
    let last = |own: &'static str| own.rsplit('.').next().unwrap_or(own);
    let short = nearest(key, known().map(last));
    let short = short.and_then(|short| known().find(|own| last(own) == short));
    let nearest = nearest(key, known()).or(short.map(str::to_owned));
    node.note_at(mark, DesignError::NoQuantity { key: shortened(key), why, nearest });
    false
}

fn refuse_key(node: &Node<'_>, what: DesignError) {
    node.note_at(Mark::Key, what);
}

fn key_without_quotes(example: &'static str) -> DesignError {
    DesignError::Disagree {
        why: format!("a key with dots in it stands in quotes here, such as {example}"),
        remedy: "write the whole key in quotes",
    }
}
