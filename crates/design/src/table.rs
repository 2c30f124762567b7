//! Keys taken one by one, each with what it may hold.
//!
//! A [`Table`] notes the keys that it was asked for, so that [`Table::finish`] can refuse the rest.
//! A getter answers `None` both where a key is left out and where it holds a mistake, which is
//! then noted in the [`Document`]; reading goes on, and so finds all mistakes of a file at once.

use std::cell::RefCell;
use std::ops::RangeInclusive;

use toml::Spanned;
use toml::de::{DeString, DeTable, DeValue};

use crate::DesignError;
use crate::document::{Document, Mark};
use crate::key_path::KeyPath;
use crate::mistake::MOST_COLLECTED;
use crate::nearest::nearest;
use crate::node::{Count, Node, whole_wanted};
use crate::numbers::{Allowed, Number};
use crate::range::Range;

/// What a key must be that holds others.
pub(crate) const A_TABLE: &str = "a table";

/// A table of a file, or one that was left out and so holds nothing.
#[derive(Debug)]
pub(crate) struct Table<'d> {
    document: &'d Document<'d>,
    entries: Option<&'d DeTable<'d>>,
    path: KeyPath,
    asked: RefCell<Vec<String>>,
}

impl<'d> Table<'d> {
    /// The whole file.
    pub(crate) fn top(document: &'d Document<'d>) -> Self {
        Self::new(document, Some(document.tree()), KeyPath::default())
    }

    pub(crate) fn new(
        document: &'d Document<'d>,
        entries: Option<&'d DeTable<'d>>,
        path: KeyPath,
    ) -> Self {
        Self { document, entries, path, asked: RefCell::default() }
    }

    /// Whether the file has it.
    pub(crate) fn is_given(&self) -> bool {
        self.entries.is_some()
    }

    /// Whether it holds a key, without asking for it.
    pub(crate) fn holds(&self, key: &str) -> bool {
        self.entries.is_some_and(|entries| entries.contains_key(key))
    }

    pub(crate) fn path(&self) -> &KeyPath {
        &self.path
    }

    pub(crate) fn document(&self) -> &'d Document<'d> {
        self.document
    }

    /// Takes what a key holds.
    pub(crate) fn get(&self, key: &str) -> Option<Node<'d>> {
        self.asked.borrow_mut().push(key.to_owned());
        let value = self.entries?.get(key)?;
        Some(Node::new(self.document, value, self.path.key(key)))
    }

    /// Takes what a key holds that must not be left out.
    pub(crate) fn need(&self, key: &str, wanted: &str) -> Option<Node<'d>> {
        let node = self.get(key);
        // Where the whole table is missing, that is what is told.
        if node.is_none() && self.is_given() {
            let missing = DesignError::Missing { wanted: wanted.to_owned() };
            self.note(key, missing);
        }
        node
    }

    pub(crate) fn number(&self, key: &str, range: Range) -> Option<f64> {
        self.get(key)?.number(range)
    }

    /// A number with the one that stands for it where it is left out.
    pub(crate) fn number_or(&self, key: &str, range: Range, default: f64) -> f64 {
        self.default(key, default, Allowed::Real(range));
        self.number(key, range).unwrap_or(default)
    }

    /// Remembers what stands for a key that is left out.
    fn default(&self, key: &str, value: f64, allowed: Allowed) {
        if !self.holds(key) {
            self.document.record(self.path.key(key), Number { value, allowed });
        }
    }

    pub(crate) fn need_number(&self, key: &str, range: Range) -> Option<f64> {
        self.need(key, &format!("a number {range}"))?.number(range)
    }

    pub(crate) fn whole(&self, key: &str, range: RangeInclusive<u32>) -> Option<u32> {
        self.get(key)?.whole(range)
    }

    /// A whole number with the one that stands for it where it is left out.
    pub(crate) fn whole_or(&self, key: &str, range: RangeInclusive<u32>, default: u32) -> u32 {
        self.default(key, f64::from(default), Allowed::whole(&range));
        self.whole(key, range).unwrap_or(default)
    }

    pub(crate) fn need_whole(&self, key: &str, range: RangeInclusive<u32>) -> Option<u32> {
        self.need(key, &whole_wanted(&range))?.whole(range)
    }

    pub(crate) fn text(&self, key: &str) -> Option<&'d str> {
        self.get(key)?.text()
    }

    /// One of some words, each with what it stands for.
    pub(crate) fn word<T: Copy>(&self, key: &str, words: &[(&str, T)]) -> Option<T> {
        self.get(key)?.word(words)
    }

    /// x, y and z.
    pub(crate) fn triple(&self, key: &str, range: Range) -> Option<[f64; 3]> {
        let why = "three are needed: x, y and z".to_owned();
        let count = Count { items: Some(3), why, decided_by: None };
        self.get(key)?.numbers(range, &count)?.try_into().ok()
    }

    /// x, y and z, all 0 where they are left out.
    pub(crate) fn triple_or_zero(&self, key: &str, range: Range) -> [f64; 3] {
        if !self.holds(key) {
            let zero = Number { value: 0.0, allowed: Allowed::Real(range) };
            for idx in 0..3 {
                self.document.record(self.path.key(key).item(idx), zero);
            }
        }
        self.triple(key, range).unwrap_or_default()
    }

    /// A table in this one, empty where it is left out.
    pub(crate) fn table(&self, key: &str) -> Table<'d> {
        let given = self.get(key).and_then(|node| node.table());
        given.unwrap_or_else(|| Table::new(self.document, None, self.path.key(key)))
    }

    /// A table in this one that must not be left out.
    pub(crate) fn need_table(&self, key: &str) -> Table<'d> {
        let given = self.need(key, A_TABLE).and_then(|node| node.table());
        given.unwrap_or_else(|| Table::new(self.document, None, self.path.key(key)))
    }

    /// A list of tables, empty where it is left out.
    pub(crate) fn tables(&self, key: &str) -> Vec<Table<'d>> {
        let items = self.get(key).and_then(|node| node.list("a list of tables, [[like this]]"));
        items.unwrap_or_default().into_iter().filter_map(|item| item.table()).collect()
    }

    /// Tables under names of the user's own, empty where they are left out.
    pub(crate) fn named_tables(&self, key: &str) -> Vec<(&'d str, Table<'d>)> {
        let named = self.table(key).entries().into_iter();
        named.filter_map(|(name, node)| Some((name, node.table()?))).collect()
    }

    /// All that it holds, taken without being asked for by name.
    pub(crate) fn entries(&self) -> Vec<(&'d str, Node<'d>)> {
        let entries = self.entries.into_iter().flat_map(|entries| entries.iter());
        let node = |(name, value): (&'d Spanned<DeString<'d>>, &'d Spanned<DeValue<'d>>)| {
            let path = self.path.key(name.get_ref());
            (&**name.get_ref(), Node::new(self.document, value, path))
        };
        entries.map(node).collect()
    }

    /// Knows a key without reading it.
    pub(crate) fn leave(&self, key: &str) {
        self.asked.borrow_mut().push(key.to_owned());
    }

    /// Puts down a mistake about one key.
    pub(crate) fn note(&self, key: &str, what: DesignError) {
        self.document.note(&self.path.key(key), Mark::Value, &[], what);
    }

    /// Refuses a key because of another in this table, where both are given.
    pub(crate) fn refuse_beside(
        &self,
        key: &str,
        other: &str,
        why: &'static str,
        remedy: &'static str,
    ) {
        if self.holds(key) && self.holds(other) {
            let clash = DesignError::Clash { other: other.to_owned(), why, remedy };
            let (path, beside) = (self.path.key(key), [self.path.key(other)]);
            self.document.note(&path, Mark::Key, &beside, clash);
        }
    }

    /// Puts down that keys of this table don't fit each other.
    pub(crate) fn disagree(&self, key: &str, others: &[&str], why: String, remedy: &'static str) {
        let beside: Vec<KeyPath> = others.iter().map(|other| self.path.key(other)).collect();
        let what = DesignError::Disagree { why, remedy };
        self.document.note(&self.path.key(key), Mark::Value, &beside, what);
    }

    /// Refuses keys that nobody asked for.
    pub(crate) fn finish(self) {
        let mut asked = self.asked.into_inner();
        asked.sort_unstable();
        asked.dedup();
        let known = |key: &str| asked.binary_search_by(|asked| asked.as_str().cmp(key)).is_ok();
        let keys = self.entries.into_iter().flat_map(|entries| entries.keys());
        let unknown = keys.map(|key| &**key.get_ref()).filter(|key| !known(key));
        for key in unknown.take(MOST_COLLECTED) {
            let nearest = nearest(key, asked.iter().map(String::as_str));
            let what = DesignError::UnknownKey { nearest, known: asked.clone() };
            self.document.note(&self.path.key(key), Mark::Key, &[], what);
        }
    }
}
