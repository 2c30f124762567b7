//! Why a key is no number of a design, and which may be meant.

use crate::key_path::{KeyPath, Step};
use crate::nearest::nearest;
use crate::{Design, DesignError, Mistake, Override};

/// Tells a key that is no number of a design.
pub(crate) fn no_number(design: &Design, key: &str) -> DesignError {
    let told = |why: String, nearest| DesignError::NoNumber { key: key.to_owned(), why, nearest };
    let Some(path) = KeyPath::parse(key) else {
        return told("it isn't written as a key is".into(), None);
    };
    match why_not(design, &path) {
        Some(why) => told(why, None),
        None => told("there is no such key".into(), meant(design, key, &path)),
    }
}

/// What is in the way of a number under a known key.
fn why_not(design: &Design, path: &KeyPath) -> Option<String> {
    if let Some(within) = numbers_within(design, path).or_else(|| kind_in_text(design, path)) {
        return Some(within);
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

/// Told of a table or list that holds numbers.
fn numbers_within(design: &Design, path: &KeyPath) -> Option<String> {
    const MOST: usize = 4;
    let within = design.origin.numbers().keys().filter(|own| own.is_within(path) && *own != path);
    let within: Vec<&KeyPath> = within.collect();
    let named = within.iter().take(MOST).map(|own| format!("`{own}`")).collect::<Vec<_>>();
    let more = if within.len() > MOST { ", …" } else { "" };
    let kind = match within.first()?.0.get(path.0.len())? {
        Step::Key(_) => "a table; name a number in it",
        Step::Item(_) => "a list; name a number in it, with items from 0",
    };
    Some(format!("it is {kind}: {}{more}", named.join(", ")))
}

/// What stands under a key in the text, where that isn't a number.
fn kind_in_text(design: &Design, path: &KeyPath) -> Option<String> {
    let tree: toml::Table = design.text.parse().ok()?;
    let (first, rest) = path.0.split_first()?;
    let mut value = match first {
        Step::Key(key) => tree.get(key.as_str())?,
        Step::Item(_) => return None,
    };
    for step in rest {
        value = match step {
            Step::Key(key) => value.get(key.as_str())?,
            Step::Item(idx) => value.get(*idx)?,
        };
    }
    match value {
        toml::Value::String(_) => Some("it is a text".into()),
        toml::Value::Array(_) => Some("it is a list".into()),
        toml::Value::Table(_) => Some("it is a table".into()),
        _ => None,
    }
}

/// The key that may be meant, among all numbers of the design.
fn meant(design: &Design, key: &str, path: &KeyPath) -> Option<String> {
    let keys: Vec<(&KeyPath, String)> =
        design.origin.numbers().keys().map(|path| (path, path.to_string())).collect();
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
