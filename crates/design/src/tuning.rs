//! What tuning is to do: `[search]`, in a design or, without that heading, in a file of its own.
//!
//! Read for a design whose numbers it names. Every key is checked: numbers that vary are the
//! design's own, and what is wanted and required is printed by a flight or a budget.

use std::path::Path;

use crate::design::unusable;
use crate::document::{Document, Mark, source_of};
use crate::files::{MOST_TOML_BYTES, read_file};
use crate::key_path::KeyPath;
use crate::mistake::Mistake;
use crate::node::{Node, shortened};
use crate::table::Table;
use crate::tuning_rows::{Required, Varied, read_required, read_varied, refuse_unknown_quantity};
use crate::{Design, DesignError, DesignErrors};

/// What a wish looks like.
const WISH: &str = "{ maximise = \"…\" } or { minimise = \"…\" }";

/// Most wishes at once.
const MOST_WISHES: usize = 3;

/// What tuning is to do.
#[derive(Debug, Clone, PartialEq)]
pub struct Tuning {
    /// One, or two or three to be traded against each other.
    pub wishes: Vec<Wish>,
    /// Absent: the single launch of the design.
    pub robust: Option<Robust>,
    /// How often a design is tried.
    pub evaluations: Option<u32>,
    /// Whether what `fly` and `budget` ask of a design by themselves is asked here, too.
    pub limits_kept: bool,
    /// What may vary, in the order of the keys.
    pub vary: Vec<Varied>,
    /// What is required, in the order of the keys.
    pub require: Vec<Required>,
}

/// A quantity to be made large or small.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Wish {
    /// As printed, `glide_ratio`, `budget.least_margin`.
    pub key: String,
    /// Large, or else small.
    pub maximise: bool,
}

/// Judged over several launches that differ.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Robust {
    /// How many.
    pub launches: u32,
    /// Which of their values counts.
    pub take: Take,
}

/// Which value of several launches counts.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Take {
    /// The mean.
    Mean,
    /// The least favourable.
    Worst,
    /// That which nine in ten launches are at least as good as.
    Tenth,
}

impl Take {
    const WORDS: [(&'static str, Self); 3] =
        [("mean", Self::Mean), ("worst", Self::Worst), ("q10", Self::Tenth)];

    /// As in the file.
    pub fn word(self) -> &'static str {
        Self::WORDS.into_iter().find(|(_, own)| *own == self).map_or("", |(word, _)| word)
    }
}

impl Tuning {
    /// Reads the `[search]` of a design.
    ///
    /// # Errors
    ///
    /// All mistakes in it, or that there is none.
    pub fn of_design(design: &Design) -> Result<Self, DesignErrors> {
        let path = design.origin.path();
        read(path, design.text.clone(), |document| {
            let tuning = Table::top(document).need_table("search");
            read_tuning(tuning, design)
        })
    }

    /// Reads a file of its own.
    ///
    /// # Errors
    ///
    /// All mistakes in it.
    pub fn read(path: &Path, design: &Design) -> Result<Self, DesignErrors> {
        let text = read_file(path, MOST_TOML_BYTES).map_err(|error| unusable(path, error))?;
        read(path, text, |document| {
            let top = Table::top(document);
            refuse_heading(&top);
            if document.is_sound() { read_tuning(top, design) } else { None }
        })
    }
}

fn read(
    path: &Path,
    text: String,
    tables: impl FnOnce(&Document<'_>) -> Option<Tuning>,
) -> Result<Tuning, DesignErrors> {
    let fail = |mistakes: Vec<Mistake>| DesignErrors::new(path.display().to_string(), mistakes);
    let source = source_of(path, text);
    let document = Document::parse(&source).map_err(fail)?;
    let tuning = tables(&document);
    let mistakes = document.into_mistakes();
    tuning.filter(|_| mistakes.is_empty()).ok_or_else(|| fail(mistakes))
}

/// Tells a file that is a design, or that has the heading of a design's table.
fn refuse_heading(top: &Table<'_>) {
    let refuse = |key: &str, why: &str, remedy| {
        let what = DesignError::Disagree { why: why.to_owned(), remedy };
        top.document().note(&KeyPath::of([key]), Mark::Key, &[], what);
    };
    if top.holds("body") {
        let why = "this is a design, but a file that says how to search is needed";
        refuse("body", why, "name a file with `want` and [vary], or leave the second file out");
    } else if top.holds("search") {
        let why = "a file of its own has no [search]: its keys stand at the top";
        refuse("search", why, "take the heading out, and write [vary] and [require]");
    }
}

/// Absent where there are mistakes, noted in the document.
fn read_tuning(table: Table<'_>, design: &Design) -> Option<Tuning> {
    let wishes = table.need("want", WISH).map(|node| read_wishes(&node)).unwrap_or_default();
    let robust = read_robust(table.table("robust"));
    let evaluations = table.whole("evaluations", 1..=10_000_000);
    let limits_kept = table.word("limits", &[("kept", true), ("ignored", false)]).unwrap_or(true);
    let vary = read_varied(table.need_table("vary"), design);
    let require = read_required(&table.table("require"));
    table.finish();
    Some(Tuning { wishes, robust, evaluations, limits_kept, vary, require })
}

fn read_wishes(node: &Node<'_>) -> Vec<Wish> {
    if !node.is_list() {
        return read_wish(node).into_iter().collect();
    }
    let items = node.list("a list of wishes").unwrap_or_default();
    if !(2..=MOST_WISHES).contains(&items.len()) {
        let why = "wishes to be traded against each other are two or three".to_owned();
        node.note(DesignError::ListLength { found: items.len(), wanted: None, why });
    }
    let wishes: Vec<Wish> = items.iter().take(MOST_WISHES).filter_map(read_wish).collect();
    for (idx, wish) in wishes.iter().enumerate() {
        if wishes[..idx].iter().any(|other| other.key == wish.key) {
            let why = format!("`{}` is wished for twice", shortened(&wish.key));
            node.note(DesignError::Disagree { why, remedy: "name each once" });
        }
    }
    wishes
}

fn read_wish(node: &Node<'_>) -> Option<Wish> {
    if !node.is_table() {
        node.wrong_kind(WISH);
        return None;
    }
    let table = node.table()?;
    if table.entries().is_empty() {
        node.note(DesignError::WrongKind { found: "an empty table".into(), wanted: WISH.into() });
    }
    let (most, least) = (table.get("maximise"), table.get("minimise"));
    let why = "a wish goes one way";
    table.refuse_beside("minimise", "maximise", why, "keep one of the two");
    table.finish();
    let (node, maximise) = most.map(|node| (node, true)).or(least.map(|node| (node, false)))?;
    let key = node.text_as("the name of a printed quantity")?;
    refuse_unknown_quantity(&node, key, Mark::Value).then(|| Wish { key: key.to_owned(), maximise })
}

fn read_robust(table: Table<'_>) -> Option<Robust> {
    if !table.is_given() {
        return None;
    }
    let launches = table.need_whole("launches", 1..=1000);
    let take = table.need("take", "\"mean\", \"worst\" or \"q10\"");
    let take = take.and_then(|node| node.word(&Take::WORDS));
    table.finish();
    Some(Robust { launches: launches?, take: take? })
}
