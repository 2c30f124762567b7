//! A TOML file as a tree with places, and the mistakes found in it.

use std::cell::RefCell;
use std::ops::Range;
use std::path::Path;
use std::sync::Arc;

use miette::NamedSource;
use toml::Spanned;
use toml::de::{DeTable, DeValue};
use toml_edit::DocumentMut;

use crate::key_path::{KeyPath, Step};
use crate::mistake::{MOST_COLLECTED, Mistake, Source};
use crate::numbers::{Number, Numbers};
use crate::overrides::Changed;
use crate::{DesignError, Override};

/// Which part of an entry a mistake is marked at.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum Mark {
    Key,
    Value,
}

/// A parsed file.
///
/// Where overrides changed the text, values come from the changed one and places from the file as
/// it is, so that the lines told are those that an editor shows.
#[derive(Debug)]
pub(crate) struct Document<'t> {
    source: Source,
    tree: DeTable<'t>,
    as_written: Option<DeTable<'t>>,
    overrides: &'t [Override],
    /// Servos that an override took over from a catalogue, whose own mistakes are told there.
    copied: Vec<KeyPath>,
    mistakes: RefCell<Vec<Mistake>>,
    numbers: RefCell<Numbers>,
}

/// A file's text under its name.
pub(crate) fn source_of(path: &Path, text: String) -> Source {
    Arc::new(NamedSource::new(path.display().to_string(), text))
}

impl<'t> Document<'t> {
    /// A file as it is.
    ///
    /// # Errors
    ///
    /// What keeps it from being TOML.
    pub(crate) fn parse(source: &'t Source) -> Result<Self, Vec<Mistake>> {
        let tree = tree_of(source.inner()).map_err(|(span, why)| {
            vec![Mistake::at(source, span, String::new(), DesignError::Syntax { why })]
        })?;
        let source = source.clone();
        Ok(Self {
            source,
            tree,
            as_written: None,
            overrides: &[],
            copied: vec![],
            mistakes: RefCell::default(),
            numbers: RefCell::default(),
        })
    }

    /// The same file with its text changed by overrides.
    ///
    /// # Errors
    ///
    /// What keeps the changed text from being TOML.
    pub(crate) fn changed(
        self,
        changed: &'t Changed,
        overrides: &'t [Override],
    ) -> Result<Self, Vec<Mistake>> {
        let tree = tree_of(&changed.text)
            .map_err(|(_, why)| vec![Mistake::of_file(DesignError::Syntax { why })])?;
        let copied = changed.copied.iter().map(|name| KeyPath::of(["servo", name])).collect();
        Ok(Self { tree, as_written: Some(self.tree), overrides, copied, ..self })
    }

    pub(crate) fn tree(&self) -> &DeTable<'t> {
        &self.tree
    }

    /// Puts down what keeps the text from being changed and written.
    ///
    /// Tables that other commands read may hold numbers that are none, which the tree keeps as they
    /// are written, but which can't be written again.
    pub(crate) fn check_changeable(&self) {
        if self.as_written.is_some() {
            // It was changed already.
            return;
        }
        if let Err(error) = self.source.inner().parse::<DocumentMut>() {
            let (span, why) = (error.span().unwrap_or(0..0), error.message().to_owned());
            let what = DesignError::Syntax { why };
            self.note_all(vec![Mistake::at(&self.source, span, String::new(), what)]);
        }
    }

    /// Remembers a number that was read, or a default that stands for it.
    pub(crate) fn record(&self, path: KeyPath, number: Number) {
        self.numbers.borrow_mut().insert(path, number);
    }

    /// All numbers so far.
    pub(crate) fn take_numbers(&self) -> Numbers {
        self.numbers.take()
    }

    /// Whether no mistake was found so far.
    pub(crate) fn is_sound(&self) -> bool {
        self.mistakes.borrow().is_empty()
    }

    /// Whether there is a mistake in what stands under a key at the top.
    pub(crate) fn is_spoilt(&self, top_key: &str) -> bool {
        let within = |mistake: &Mistake| {
            let rest = mistake.key.strip_prefix(top_key);
            rest.is_some_and(|rest| rest.is_empty() || rest.starts_with(['.', '[']))
        };
        self.mistakes.borrow().iter().any(within)
    }

    /// Puts down a mistake.
    ///
    /// - `beside`: other entries that have a part in it
    pub(crate) fn note(&self, path: &KeyPath, mark: Mark, beside: &[KeyPath], what: DesignError) {
        let set = self.set_at(path, beside);
        let is_copied = set.is_none() && self.copied.iter().any(|copied| path.is_within(copied));
        if is_copied || self.mistakes.borrow().len() >= MOST_COLLECTED {
            return;
        }
        let mut mistake = Mistake::at(&self.source, self.span(path, mark), path.to_string(), what);
        let entries = beside.iter().map(|path| (self.span(path, Mark::Key), path.to_string()));
        mistake.beside = entries.filter(|(span, _)| !span.is_empty()).collect();
        if let Some(set) = set.or_else(|| self.set_that_made(path)) {
            mistake.set = Some(set.told());
            (mistake.source, mistake.place) = (None, None);
        }
        self.mistakes.borrow_mut().push(mistake);
    }

    /// The override that set one of these.
    fn set_at(&self, path: &KeyPath, beside: &[KeyPath]) -> Option<&'t Override> {
        let mut sets = self.overrides.iter().rev();
        sets.find(|set| [path].into_iter().chain(beside).any(|path| path.is_within(set.path())))
    }

    /// The override that made the table in which this is missing.
    fn set_that_made(&self, path: &KeyPath) -> Option<&'t Override> {
        let made = path.first(self.steps_written(path) + 1)?;
        self.overrides.iter().rev().find(|set| set.path().is_within(&made))
    }

    /// How many steps of a path lead to something in the file as it is.
    fn steps_written(&self, path: &KeyPath) -> usize {
        let mut holder = None;
        for (place, step) in path.0.iter().enumerate() {
            let Some((_, value)) = self.entry(place == 0, holder, step) else { return place };
            holder = Some(value.get_ref());
        }
        path.0.len()
    }

    /// Puts down mistakes of a file that this one names.
    pub(crate) fn note_all(&self, mistakes: Vec<Mistake>) {
        self.mistakes.borrow_mut().extend(mistakes);
    }

    /// All mistakes so far, in the order of their places.
    pub(crate) fn into_mistakes(self) -> Vec<Mistake> {
        let mut mistakes = self.mistakes.into_inner();
        let file = self.source.name().to_owned();
        mistakes.sort_by_cached_key(|mistake| {
            let other = mistake.source.as_ref().map(|source| source.name().to_owned());
            let other = other.filter(|name| *name != file);
            (other, mistake.place.as_ref().map(|place| place.span.start))
        });
        mistakes
    }

    /// Where an entry, or the nearest that holds it, stands in the file.
    fn span(&self, path: &KeyPath, mark: Mark) -> Range<usize> {
        let mut span = 0..0;
        let mut holder: Option<&DeValue<'t>> = None;
        let last = path.0.len().saturating_sub(1);
        for (place, step) in path.0.iter().enumerate() {
            let Some((key, value)) = self.entry(place == 0, holder, step) else { break };
            span = match key {
                Some(key) if place < last || mark == Mark::Key => key,
                _ => value.span(),
            };
            holder = Some(value.get_ref());
        }
        span
    }

    fn entry<'s>(
        &'s self,
        at_top: bool,
        holder: Option<&'s DeValue<'t>>,
        step: &Step,
    ) -> Option<(Option<Range<usize>>, &'s Spanned<DeValue<'t>>)> {
        let top = self.as_written.as_ref().unwrap_or(&self.tree);
        let table = if at_top { Some(top) } else { holder.and_then(DeValue::as_table) };
        match step {
            Step::Key(key) => {
                let (key, value) = table?.get_key_value(key.as_str())?;
                Some((Some(key.span()), value))
            }
            Step::Item(idx) => Some((None, holder?.get(*idx)?)),
        }
    }
}

fn tree_of(text: &str) -> Result<DeTable<'_>, (Range<usize>, String)> {
    match DeTable::parse(text) {
        Ok(tree) => Ok(tree.into_inner()),
        Err(error) => Err((error.span().unwrap_or(0..0), error.message().to_owned())),
    }
}
