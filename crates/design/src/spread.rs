//! What differs from launch to launch: `[spread]`.

use crate::document::{Document, Mark};
use crate::key_path::{KeyPath, Step};
use crate::no_number::{kind_of, meant};
use crate::node::{Node, shortened};
use crate::numbers::Numbers;
use crate::range::Range;
use crate::table::Table;
use crate::{DesignError, Knob};

/// How far a number may differ; wider than any number is.
const DIFFERENCE: Range = Range::within(1e6);
const DEVIATION: Range = Range::from_to(0.0, 1e6);

/// The ways in which a number may differ, as a message tells them.
const WAYS: &str = "{ sd = … }, { low = …, high = … } or { factor_sd = … }";

/// What differs from launch to launch.
#[derive(Debug, Clone, PartialEq, Default)]
pub enum Spread {
    /// The design says nothing of it.
    #[default]
    Default,
    /// Nothing differs.
    None,
    /// The design's own, in the order of their keys.
    Own(Vec<(Knob, Vary)>),
}

/// How a number differs, in the unit of the file.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Vary {
    /// Normal about the design's value, with this standard deviation.
    Sd(f64),
    /// Uniform, added to the design's value.
    Range {
        /// Least that is added.
        low: f64,
        /// Most that is added.
        high: f64,
    },
    /// Normal about 1, with this standard deviation, times the design's value.
    FactorSd(f64),
}

/// - `numbers`: all of the design
pub(crate) fn read_spread(top: &Table<'_>, numbers: &Numbers) -> Spread {
    let Some(node) = top.get("spread") else { return Spread::Default };
    if node.is_text() {
        return node.word(&[("none", ())]).map_or(Spread::Default, |()| Spread::None);
    }
    if !node.is_table() {
        node.wrong_kind("\"none\", or a table [spread]");
        return Spread::Default;
    }
    let mut own = Vec::new();
    for (key, node) in top.table("spread").entries() {
        if is_split_key(&node) {
            let why = "a key with dots in it stands in quotes here".to_owned();
            let remedy = "write the whole key in quotes: \"launch.speed_m_s\" = { sd = 0.2 }";
            top.document().note(node.path(), Mark::Key, &[], DesignError::Disagree { why, remedy });
            continue;
        }
        let (knob, vary) = (read_knob(key, &node, numbers, top.document()), read_vary(&node));
        own.extend(knob.zip(vary));
    }
    own.sort_by(|(a, _), (b, _)| a.key().cmp(b.key()));
    Spread::Own(own)
}

/// Whether tables stand where numbers should: `launch.speed_m_s = { … }` without quotes.
fn is_split_key(node: &Node<'_>) -> bool {
    node.is_table()
        && node.table().is_some_and(|table| {
            let inner = table.entries();
            !inner.is_empty() && inner.iter().all(|(_, inner)| inner.is_table())
        })
}

fn read_knob(
    key: &str,
    node: &Node<'_>,
    numbers: &Numbers,
    document: &Document<'_>,
) -> Option<Knob> {
    let refuse = |what| document.note(node.path(), Mark::Key, &[], what);
    let told = |why: String, nearest| {
        refuse(DesignError::NoNumber { key: shortened(key), why, nearest });
    };
    let Some(path) = KeyPath::parse(key) else {
        told("it isn't written as a key is".into(), None);
        return None;
    };
    if let Some(number) = numbers.get(&path) {
        if number.allowed.is_whole() {
            let why = "a whole number can't differ a little from launch to launch".to_owned();
            refuse(DesignError::Disagree { why, remedy: "take it out" });
            return None;
        }
        return Some(Knob::new(path, *number));
    }
    // A number may be missing only because of a mistake in it.
    let spoilt = |step: &Step| matches!(step, Step::Key(table) if document.is_spoilt(table));
    if !path.0.first().is_some_and(spoilt) {
        match kind_of(numbers, document.tree(), &path) {
            Some(kind) => told(kind, None),
            None => told("it holds none under this key".into(), meant(numbers, key, &path)),
        }
    }
    None
}

fn read_vary(node: &Node<'_>) -> Option<Vary> {
    if !node.is_table() {
        node.wrong_kind(WAYS);
        return None;
    }
    let table = node.table()?;
    if table.entries().is_empty() {
        node.note(DesignError::WrongKind { found: "an empty table".into(), wanted: WAYS.into() });
        return None;
    }
    let sd = table.number("sd", DEVIATION);
    let (low, high) = (table.number("low", DIFFERENCE), table.number("high", DIFFERENCE));
    let factor_sd = table.number("factor_sd", DEVIATION);
    refuse_mixtures(&table);
    let vary = match (sd, factor_sd, low, high) {
        (Some(sd), ..) => Some(Vary::Sd(sd)),
        (_, Some(factor_sd), ..) => Some(Vary::FactorSd(factor_sd)),
        (.., Some(low), Some(high)) => Some(Vary::Range { low, high }),
        _ => None,
    };
    if let Some(Vary::Range { low, high }) = vary
        && low > high
    {
        let why = format!("{low} is above the {high} that `high` says");
        table.disagree("low", &["high"], why, "swap the two");
    }
    table.finish();
    vary
}

fn refuse_mixtures(table: &Table<'_>) {
    for (key, other) in [
        ("low", "sd"),
        ("high", "sd"),
        ("factor_sd", "sd"),
        ("low", "factor_sd"),
        ("high", "factor_sd"),
    ] {
        let why = "a number differs in one way";
        table.refuse_beside(
            key,
            other,
            why,
            "keep `sd` alone, `factor_sd` alone, or `low` and `high`",
        );
    }
    for (key, other) in [("low", "high"), ("high", "low")] {
        if table.holds(key) && !table.holds(other) {
            let wanted = format!("a number {DIFFERENCE}, as `{key}` is given");
            table.note(other, DesignError::Missing { wanted });
        }
    }
}
