//! Mistakes with their places, drawn by miette or told in a line each.

use std::fmt;
use std::ops::Range;
use std::sync::Arc;

use miette::{Diagnostic, LabeledSpan, NamedSource, SourceCode};

use crate::DesignError;
use crate::table::A_TABLE;
use crate::unit::unit_of;

/// A file's name and text, shared by all mistakes in it.
pub(crate) type Source = Arc<NamedSource<String>>;

/// Most mistakes that are told of a design; a file of the wrong kind has them in every line.
const MOST_MISTAKES: usize = 50;

/// Most mistakes that are collected in one file; finding each one's line takes time.
pub(crate) const MOST_COLLECTED: usize = 200;

/// Lines longer than this aren't drawn, bytes.
const LONGEST_DRAWN_LINE: usize = 400;

/// One mistake and where it is.
#[derive(Debug)]
pub struct Mistake {
    pub(crate) source: Option<Source>,
    pub(crate) place: Option<Place>,
    /// Other places that have a part in it, with what stands there.
    pub(crate) beside: Vec<(Range<usize>, String)>,
    /// The override that it comes from, as it was given.
    pub(crate) set: Option<String>,
    pub(crate) key: String,
    pub(crate) what: DesignError,
}

/// A place in a text.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(crate) struct Place {
    pub(crate) span: Range<usize>,
    pub(crate) line: usize,
    pub(crate) column: usize,
}

impl Place {
    /// - `span`: bytes
    pub(crate) fn of(text: &str, span: Range<usize>) -> Self {
        let before = &text.as_bytes()[..span.start.min(text.len())];
        let line_start = before.iter().rposition(|&byte| byte == b'\n').map_or(0, |at| at + 1);
        Self {
            line: 1 + before.iter().filter(|&&byte| byte == b'\n').count(),
            column: 1 + String::from_utf8_lossy(&before[line_start..]).chars().count(),
            span,
        }
    }
}

impl Mistake {
    /// A file that can't be read at all.
    pub(crate) fn of_file(what: DesignError) -> Self {
        Self { source: None, place: None, beside: vec![], set: None, key: String::new(), what }
    }

    /// A mistake at a place in a file.
    pub(crate) fn at(source: &Source, span: Range<usize>, key: String, what: DesignError) -> Self {
        let place = Some(Place::of(source.inner(), span));
        let source = Some(source.clone());
        Self { source, place, beside: vec![], set: None, key, what }
    }

    /// The dotted key it is about, empty where there is none.
    pub fn key(&self) -> &str {
        &self.key
    }

    /// What is wrong.
    pub fn what(&self) -> &DesignError {
        &self.what
    }

    /// Line and column from 1, absent where the file can't be read or an override is to blame.
    pub fn line_column(&self) -> Option<(usize, usize)> {
        self.place.as_ref().map(|place| (place.line, place.column))
    }

    /// The whole of it in a line: `file:line:column: key: message`.
    pub fn line(&self) -> String {
        let line = match (&self.source, &self.place) {
            (Some(source), Some(place)) => {
                format!("{}:{}:{}: {self}", source.name(), place.line, place.column)
            }
            _ => self.to_string(),
        };
        line.replace(char::is_control, " ")
    }

    /// What to do about it.
    pub fn remedy(&self) -> Option<String> {
        let last = self.key.rsplit('.').next().unwrap_or_default();
        match &self.what {
            DesignError::Missing { wanted } if wanted == A_TABLE => {
                Some(format!("add a [{}] table", self.key))
            }
            DesignError::Missing { .. } => Some(format!("add `{last} = …`")),
            DesignError::OutOfRange { .. } => {
                let unit = unit_of(&self.key).map(|unit| format!("; it is in {unit}"));
                Some(format!("{}{}", self.what.help()?, unit.unwrap_or_default()))
            }
            what => what.help(),
        }
    }

    fn is_drawn(&self) -> Option<(&Source, &Place)> {
        let (source, place) = self.source.as_ref().zip(self.place.as_ref())?;
        let text = source.inner().as_bytes();
        let start = place.span.start.min(text.len());
        let from = text[..start].iter().rposition(|&byte| byte == b'\n').map_or(0, |at| at + 1);
        let to = text[start..].iter().position(|&byte| byte == b'\n').unwrap_or(text.len() - start);
        (start + to - from <= LONGEST_DRAWN_LINE).then_some((source, place))
    }
}

impl fmt::Display for Mistake {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let told = self
            .set
            .as_ref()
            .and_then(|set| set.trim_start_matches("--set ").split_once('='))
            .is_some_and(|(key, _)| key.trim() == self.key);
        if let Some(set) = &self.set {
            write!(f, "{set}: ")?;
        }
        if !(told || self.key.is_empty()) {
            write!(f, "{}: ", self.key)?;
        }
        write!(f, "{}", self.what)
    }
}

// Its message already holds the cause, which `what` keeps.
impl std::error::Error for Mistake {}

impl Diagnostic for Mistake {
    fn help<'a>(&'a self) -> Option<Box<dyn fmt::Display + 'a>> {
        self.remedy().map(|help| Box::new(help) as Box<dyn fmt::Display>)
    }

    fn source_code(&self) -> Option<&dyn SourceCode> {
        self.is_drawn().map(|(source, _)| source as &dyn SourceCode)
    }

    fn labels(&self) -> Option<Box<dyn Iterator<Item = LabeledSpan> + '_>> {
        let (_, place) = self.is_drawn()?;
        let main = LabeledSpan::new_primary_with_span(Some("here".into()), place.span.clone());
        let beside = self.beside.iter();
        let beside = beside
            .map(|(span, label)| LabeledSpan::new_with_span(Some(label.clone()), span.clone()));
        Some(Box::new(std::iter::once(main).chain(beside)))
    }
}

/// Everything wrong with a design, at least one mistake.
#[derive(Debug)]
pub struct DesignErrors {
    file: String,
    mistakes: Vec<Mistake>,
    left_out: usize,
}

impl DesignErrors {
    /// - `mistakes`: at least one
    pub(crate) fn new(file: String, mut mistakes: Vec<Mistake>) -> Self {
        let left_out = mistakes.len().saturating_sub(MOST_MISTAKES);
        mistakes.truncate(MOST_MISTAKES);
        Self { file, mistakes, left_out }
    }

    /// In the order of the files' lines.
    pub fn mistakes(&self) -> &[Mistake] {
        &self.mistakes
    }

    /// One line a mistake: `file:line:column: key: message`.
    pub fn lines(&self) -> impl Iterator<Item = String> + '_ {
        self.mistakes.iter().map(Mistake::line)
    }
}

impl fmt::Display for DesignErrors {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let count = self.mistakes.len() + self.left_out;
        let (file, plural) = (&self.file, if count == 1 { "" } else { "s" });
        let or_more = if count < MOST_COLLECTED { "" } else { " or more" };
        write!(f, "`{file}` can't be used: {count}{or_more} mistake{plural}")?;
        if self.left_out > 0 { write!(f, ", the first {MOST_MISTAKES} told") } else { Ok(()) }
    }
}

impl std::error::Error for DesignErrors {}

impl Diagnostic for DesignErrors {
    fn related<'a>(&'a self) -> Option<Box<dyn Iterator<Item = &'a dyn Diagnostic> + 'a>> {
        Some(Box::new(self.mistakes.iter().map(|mistake| mistake as &dyn Diagnostic)))
    }
}
