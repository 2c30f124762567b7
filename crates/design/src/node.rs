//! One value of a file, taken as what it must be.

use std::ops::RangeInclusive;

use toml::Spanned;
use toml::de::DeValue;

use crate::DesignError;
use crate::document::{Document, Mark};
use crate::key_path::KeyPath;
use crate::nearest::nearest;
use crate::numbers::{Allowed, Number};
use crate::range::Range;
use crate::table::{A_TABLE, Table};

/// Most items of a list that are read; none that is meant has more.
const MOST_ITEMS: usize = 10_000;

/// A value of a file.
#[derive(Debug, Clone)]
pub(crate) struct Node<'d> {
    document: &'d Document<'d>,
    value: &'d Spanned<DeValue<'d>>,
    path: KeyPath,
}

/// How many items a list must have.
#[derive(Debug, Clone)]
pub(crate) struct Count {
    /// Absent where it isn't known because of another mistake.
    pub(crate) items: Option<usize>,
    /// What decides it: "the body has 16 segments".
    pub(crate) why: String,
    /// The key that decides it, if one does.
    pub(crate) decided_by: Option<KeyPath>,
}

impl<'d> Node<'d> {
    pub(crate) fn new(
        document: &'d Document<'d>,
        value: &'d Spanned<DeValue<'d>>,
        path: KeyPath,
    ) -> Self {
        Self { document, value, path }
    }

    pub(crate) fn path(&self) -> &KeyPath {
        &self.path
    }

    /// Where it begins in the text that was read, bytes.
    pub(crate) fn start(&self) -> usize {
        self.value.span().start
    }

    pub(crate) fn is_table(&self) -> bool {
        self.value.get_ref().is_table()
    }

    pub(crate) fn is_list(&self) -> bool {
        self.value.get_ref().is_array()
    }

    pub(crate) fn is_text(&self) -> bool {
        self.value.get_ref().is_str()
    }

    /// Puts down a mistake about it.
    pub(crate) fn note(&self, what: DesignError) {
        self.document.note(&self.path, Mark::Value, &[], what);
    }

    /// Puts down a mistake about it, or about its key.
    pub(crate) fn note_at(&self, mark: Mark, what: DesignError) {
        self.document.note(&self.path, mark, &[], what);
    }

    /// Puts down a mistake about it that another entry has a part in.
    pub(crate) fn note_beside(&self, other: KeyPath, what: DesignError) {
        self.document.note(&self.path, Mark::Value, &[other], what);
    }

    pub(crate) fn wrong_kind(&self, wanted: &str) {
        let wanted = wanted.to_owned();
        self.note(DesignError::WrongKind { found: self.described(), wanted });
    }

    /// A finite number in a range; a whole one will do.
    pub(crate) fn number(&self, range: Range) -> Option<f64> {
        let (value, found) = match self.value.get_ref() {
            DeValue::Float(float) => (float.as_str().parse().ok(), float.to_string()),
            DeValue::Integer(integer) => {
                let value = i64::from_str_radix(integer.as_str(), integer.radix()).ok();
                (value.map(|value| value as f64), integer.to_string())
            }
            _ => {
                self.wrong_kind(&format!("a number {range}"));
                return None;
            }
        };
        // Ranges end at finite numbers, so none holds an infinity or what isn't a number.
        let sound = value.filter(|&value| range.contains(value));
        match sound {
            Some(value) => self.record(value, Allowed::Real(range)),
            None => {
                let found = shortened(&found);
                self.note(DesignError::OutOfRange { found, allowed: range.to_string() });
            }
        }
        sound
    }

    /// A whole number in a range.
    pub(crate) fn whole(&self, range: RangeInclusive<u32>) -> Option<u32> {
        let DeValue::Integer(integer) = self.value.get_ref() else {
            self.wrong_kind(&whole_wanted(&range));
            return None;
        };
        let value = u32::from_str_radix(integer.as_str(), integer.radix()).ok();
        let sound = value.filter(|value| range.contains(value));
        match sound {
            Some(value) => self.record(f64::from(value), Allowed::whole(&range)),
            None => {
                let allowed = format!("from {} to {}", range.start(), range.end());
                let found = shortened(&integer.to_string());
                self.note(DesignError::OutOfRange { found, allowed });
            }
        }
        sound
    }

    fn record(&self, value: f64, allowed: Allowed) {
        self.document.record(self.path.clone(), Number { value, allowed });
    }

    pub(crate) fn boolean(&self) -> Option<bool> {
        match self.value.get_ref() {
            DeValue::Boolean(value) => Some(*value),
            _ => {
                self.wrong_kind("true or false");
                None
            }
        }
    }

    pub(crate) fn text(&self) -> Option<&'d str> {
        self.text_as("a text in quotes")
    }

    /// Text of a certain kind.
    pub(crate) fn text_as(&self, wanted: &str) -> Option<&'d str> {
        match self.value.get_ref() {
            DeValue::String(text) if !text.trim().is_empty() => Some(text),
            _ => {
                self.wrong_kind(wanted);
                None
            }
        }
    }

    /// One of some words, each with what it stands for.
    pub(crate) fn word<T: Copy>(&self, words: &[(&str, T)]) -> Option<T> {
        let found = self.text_as(&in_words(words.iter().map(|(word, _)| *word)))?;
        let meaning = words.iter().find(|(word, _)| *word == found).map(|&(_, meaning)| meaning);
        if meaning.is_none() {
            let nearest = nearest(found, words.iter().map(|(word, _)| *word));
            let known = in_words(words.iter().map(|(word, _)| *word));
            self.note(DesignError::UnknownWord { found: shortened(found), nearest, known });
        }
        meaning
    }

    pub(crate) fn table(&self) -> Option<Table<'d>> {
        match self.value.get_ref() {
            DeValue::Table(entries) => {
                Some(Table::new(self.document, Some(entries), self.path.clone()))
            }
            _ => {
                self.wrong_kind(A_TABLE);
                None
            }
        }
    }

    /// Items of a list of any length.
    pub(crate) fn list(&self, wanted: &str) -> Option<Vec<Node<'d>>> {
        let DeValue::Array(items) = self.value.get_ref() else {
            self.wrong_kind(wanted);
            return None;
        };
        if items.len() > MOST_ITEMS {
            let why = format!("at most {MOST_ITEMS} are read");
            self.note(DesignError::ListLength { found: items.len(), wanted: None, why });
        }
        let node = |(idx, item): (usize, &'d Spanned<DeValue<'d>>)| Node {
            document: self.document,
            value: item,
            path: self.path.item(idx),
        };
        Some(items.iter().enumerate().take(MOST_ITEMS).map(node).collect())
    }

    /// Items of a list of a given length; a wrong length is noted, and they are given all the same.
    pub(crate) fn items(&self, wanted: &str, count: &Count) -> Option<Vec<Node<'d>>> {
        let items = self.list(wanted)?;
        if count.items.is_some_and(|wanted| wanted != items.len()) {
            let (found, why) = (items.len(), count.why.clone());
            let what = DesignError::ListLength { found, wanted: count.items, why };
            match &count.decided_by {
                Some(path) => self.note_beside(path.clone(), what),
                None => self.note(what),
            }
        }
        Some(items)
    }

    /// A list of numbers; absent where its length is wrong or isn't known.
    pub(crate) fn numbers(&self, range: Range, count: &Count) -> Option<Vec<f64>> {
        let wanted = match count.items {
            Some(1) => format!("a list of 1 number {range}"),
            Some(items) => format!("a list of {items} numbers {range}"),
            None => format!("a list of numbers {range}"),
        };
        let items = self.items(&wanted, count)?;
        let values: Vec<Option<f64>> = items.iter().map(|item| item.number(range)).collect();
        if count.items == Some(values.len()) { values.into_iter().collect() } else { None }
    }

    /// One number for all, or a list with one each.
    pub(crate) fn number_or_numbers(&self, range: Range, count: &Count) -> Option<Vec<f64>> {
        if self.is_list() {
            return self.numbers(range, count);
        }
        let value = self.number(range)?;
        Some(vec![value; count.items?])
    }

    /// What stands there, for a message.
    fn described(&self) -> String {
        match self.value.get_ref() {
            DeValue::String(text) if text.trim().is_empty() => "an empty text".into(),
            DeValue::String(text) => format!("the text \"{}\"", shortened(text)),
            DeValue::Integer(number) => format!("the number {}", shortened(&number.to_string())),
            DeValue::Float(number) => format!("the number {}", shortened(&number.to_string())),
            DeValue::Boolean(value) => value.to_string(),
            DeValue::Datetime(_) => "a date or time".into(),
            DeValue::Array(_) => "a list".into(),
            DeValue::Table(_) => "a table".into(),
        }
    }
}

/// Words as a choice: `"a", "b" or "c"`.
fn in_words<'w>(words: impl Iterator<Item = &'w str>) -> String {
    let quoted: Vec<String> = words.map(|word| format!("\"{word}\"")).collect();
    match quoted.split_last() {
        Some((last, rest)) if !rest.is_empty() => format!("{} or {last}", rest.join(", ")),
        _ => quoted.concat(),
    }
}

/// What a whole number must be.
pub(crate) fn whole_wanted(range: &RangeInclusive<u32>) -> String {
    format!("a whole number from {} to {}", range.start(), range.end())
}

/// A text short enough for a message, on one line.
pub(crate) fn shortened(text: &str) -> String {
    const MOST: usize = 40;
    let line: String = text.chars().map(|c| if c.is_control() { ' ' } else { c }).collect();
    if line.chars().count() <= MOST {
        return line;
    }
    line.chars().take(MOST - 1).chain(['…']).collect()
}
