//! Why a key is no number of a design, and which may be meant.

use toml::de::{DeTable, DeValue};

use crate::key_path::{KeyPath, Step};
use crate::nearest::nearest;
use crate::node::shortened;
use crate::numbers::Numbers;
use crate::{Design, DesignError, Mistake, Override};

/// Tells a key that is no number of a design.
pub(crate) fn no_number(design: &Design, key: &str) -> DesignError {
    let told = |why: String, nearest| DesignError::NoNumber { key: shortened(key), why, nearest };
    let Some(path) = KeyPath::parse(key) else {
        return told("it isn't written as a key is".into(), None);
    };
    match why_not(design, &path) {
        Some(why) => told(why, None),
        None => told("there is no such key".into(), meant(design.origin.numbers(), key, &path)),
    }
}

/// What is in the way of a number under a known key.
fn why_not(design: &Design, path: &KeyPath) -> Option<String> {
    let tree = DeTable::parse(&design.text).ok();
    let kind = tree.and_then(|tree| kind_of(design.origin.numbers(), tree.get_ref(), path));
    if kind.is_some() {
        return kind;
    }
    let one = Override::number_at(path, 1.0, true);
    let Err(errors) = design.read_again(vec![one]) else {
        return Some(LEFT_OUT.into());
    };
    let mistakes = || errors.mistakes().iter();
    let unknown = |what: &DesignError| matches!(what, DesignError::UnknownKey { .. });
    if mistakes().any(|mistake| unknown(mistake.what())) {
        return None;
    }
    let key = path.to_string();
    let about_it = mistakes().find(|mistake| mistake.key() == key);
    Some(match about_it.map(Mistake::what) {
        Some(DesignError::WrongKind { wanted, .. }) => format!("it must be {wanted}"),
        Some(DesignError::CannotSet { why }) => why.clone(),
        Some(other) => other.to_string(),
        None => LEFT_OUT.into(),
    })
}

const LEFT_OUT: &str =
    "the design leaves it out, and no number stands for it then; write it into the file first";

/// What stands under a key, where that isn't a number.
pub(crate) fn kind_of(numbers: &Numbers, tree: &DeTable<'_>, path: &KeyPath) -> Option<String> {
    numbers_within(numbers, path).or_else(|| kind_in_tree(tree, path))
}

/// Told of a table or list that holds numbers.
fn numbers_within(numbers: &Numbers, path: &KeyPath) -> Option<String> {
    const MOST: usize = 4;
    let within = numbers.keys().filter(|own| own.is_within(path) && *own != path);
    let within: Vec<&KeyPath> = within.collect();
    let named = within.iter().take(MOST).map(|own| format!("`{own}`")).collect::<Vec<_>>();
    let more = if within.len() > MOST { ", …" } else { "" };
    let kind = match within.first()?.0.get(path.0.len())? {
        Step::Key(_) => "a table; name a number in it",
        Step::Item(_) => "a list; name a number in it, with items from 0",
    };
    Some(format!("it is {kind}: {}{more}", named.join(", ")))
}

fn kind_in_tree(tree: &DeTable<'_>, path: &KeyPath) -> Option<String> {
    let (first, rest) = path.0.split_first()?;
    let mut value = match first {
        Step::Key(key) => tree.get(key.as_str())?,
        Step::Item(_) => return None,
    };
    for step in rest {
        value = match step {
            Step::Key(key) => value.get_ref().get(key.as_str())?,
            Step::Item(idx) => value.get_ref().get(*idx)?,
        };
    }
    match value.get_ref() {
        DeValue::String(_) => Some("it is a text".into()),
        DeValue::Array(_) => Some("it is a list".into()),
        DeValue::Table(_) => Some("it is a table".into()),
        _ => None,
    }
}

/// The key that may be meant.
pub(crate) fn meant(numbers: &Numbers, key: &str, path: &KeyPath) -> Option<String> {
    let keys: Vec<(&KeyPath, String)> =
        numbers.keys().map(|path| (path, path.to_string())).collect();
    let as_whole = nearest(key, keys.iter().map(|(_, own)| own.as_str()));
    let [last] = path.0.as_slice() else { return as_whole };
    // Its table may have been left off.
    let last = KeyPath(vec![last.clone()]).to_string();
    let ends = |(path, own): &(&KeyPath, String)| {
        let end = path.0.last().map(|step| KeyPath(vec![step.clone()]).to_string())?;
        Some((end, own.clone()))
    };
    let ends: Vec<(String, String)> = keys.iter().filter_map(ends).collect();
    let near = nearest(&last, ends.iter().map(|(end, _)| end.as_str()));
    let own = near.and_then(|near| ends.into_iter().find(|(end, _)| *end == near));
    own.map(|(_, own)| own).or(as_whole)
}
