//! Where a design came from, kept so that it can be read again with other numbers.

use std::collections::BTreeMap;
use std::path::{Path, PathBuf};
use std::sync::Arc;

use crate::design::read_kept;
use crate::key_path::KeyPath;
use crate::mistake::Source;
use crate::numbers::{Allowed, Number, Numbers};
use crate::{Design, DesignErrors, Override};

/// What a design was read from, and what was set since.
#[derive(Debug, Clone, PartialEq, Default)]
pub(crate) struct Origin {
    reading: Arc<Reading>,
    /// Numbers set without text, each key once.
    set: Vec<(KeyPath, f64)>,
}

#[derive(Debug, PartialEq, Default)]
struct Reading {
    path: PathBuf,
    files: BTreeMap<PathBuf, Source>,
    numbers: Numbers,
}

impl Origin {
    pub(crate) fn new(path: &Path, files: BTreeMap<PathBuf, Source>, numbers: Numbers) -> Self {
        Self { reading: Arc::new(Reading { path: path.to_owned(), files, numbers }), set: vec![] }
    }

    /// Where the design stands.
    pub(crate) fn path(&self) -> &Path {
        &self.reading.path
    }

    /// All numbers as they were read.
    pub(crate) fn numbers(&self) -> &Numbers {
        &self.reading.numbers
    }

    /// A number as it is now.
    pub(crate) fn number(&self, path: &KeyPath) -> Option<Number> {
        let read = *self.reading.numbers.get(path)?;
        let set = self.set.iter().find(|(own, _)| own == path);
        Some(set.map_or(read, |&(_, value)| Number { value, ..read }))
    }

    /// Remembers a number that was set without text.
    pub(crate) fn remember(&mut self, path: &KeyPath, value: f64) {
        match self.set.iter_mut().find(|(own, _)| own == path) {
            Some((_, own)) => *own = value,
            None => self.set.push((path.clone(), value)),
        }
    }

    /// Keys of what was set without text.
    pub(crate) fn set_keys(&self) -> impl Iterator<Item = &KeyPath> {
        self.set.iter().map(|(path, _)| path)
    }

    /// What was set without text, as overrides of the text.
    pub(crate) fn overrides(&self) -> Vec<Override> {
        self.set.iter().map(|(path, value)| self.override_of(path, *value)).collect()
    }

    /// A number as an override of the text.
    pub(crate) fn override_of(&self, path: &KeyPath, value: f64) -> Override {
        let allowed = self.reading.numbers.get(path).map(|number| number.allowed);
        Override::number_at(path, value, allowed.as_ref().is_some_and(Allowed::is_whole))
    }
}

impl Design {
    /// Reads it again from memory with what was set since, and with more set.
    pub(crate) fn read_again(&self, more: Vec<Override>) -> Result<Design, DesignErrors> {
        let mut overrides = self.origin.overrides();
        overrides.extend(more);
        let reading = &self.origin.reading;
        read_kept(&reading.path, self.text.clone(), &overrides, reading.files.clone())
    }
}
