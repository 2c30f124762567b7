//! CSV files as named columns of finite numbers and known words, each with its place.

use std::ops::Range as Span;

use crate::DesignError;
use crate::mistake::{MOST_COLLECTED, Mistake, Source};
use crate::nearest::nearest;
use crate::node::shortened;
use crate::range::Range;

/// Most columns that are looked at; the longest body needs far fewer.
const MOST_COLUMNS: usize = 1000;

/// A column that a table may have.
#[derive(Debug, Clone)]
pub(crate) struct ColumnRule {
    pub(crate) name: String,
    pub(crate) cells: Cells,
    pub(crate) needed: bool,
}

/// What stands in a column.
#[derive(Debug, Clone, Copy)]
pub(crate) enum Cells {
    /// A number each.
    Number(Range),
    /// A number, or nothing, which is read as not a number.
    NumberOrNothing(Range),
    /// One of these words each, read as its place among them.
    Word(&'static [&'static str]),
}

/// Whether a cell holds a word, in small or large letters, with any of the usual dashes in it.
fn is_word(word: &str, field: &str) -> bool {
    field.replace([' ', '-'], "_").eq_ignore_ascii_case(word)
}

impl Cells {
    fn remedy(self) -> &'static str {
        match self {
            Self::Word(_) => "write the word as it stands here, without quotes",
            Self::Number(_) => ONE_NUMBER_EACH,
            Self::NumberOrNothing(_) => {
                "write a number with a point and without its unit, or nothing"
            }
        }
    }

    /// What a cell holds, or why it can't stand there.
    fn read(self, field: &str) -> Result<f64, String> {
        match self {
            Self::NumberOrNothing(_) if field.is_empty() => Ok(f64::NAN),
            Self::Number(range) | Self::NumberOrNothing(range) => match field.parse::<f64>() {
                Ok(value) if range.contains(value) => Ok(value),
                Ok(_) => Err(format!("{} is out of range: it must be {range}", shortened(field))),
                Err(_) if field.is_empty() => Err("the number is missing here".to_owned()),
                Err(_) => Err(format!("\"{}\" isn't a number", shortened(field))),
            },
            Self::Word(words) => match words.iter().position(|word| is_word(word, field)) {
                Some(place) => Ok(place as f64),
                None if field.is_empty() => {
                    Err(format!("the word is missing here: one of {}", words.join(", ")))
                }
                None => Err(format!(
                    "\"{}\" isn't known here: it must be one of {}",
                    shortened(field),
                    words.join(", ")
                )),
            },
        }
    }
}

/// Named columns, one number a row; words are numbers, too.
#[derive(Debug)]
pub(crate) struct Columns<'s> {
    source: &'s Source,
    names: Vec<String>,
    values: Vec<Vec<f64>>,
    /// Bytes in the file, from 0: shape (rows).
    starts: Vec<usize>,
}

impl<'s> Columns<'s> {
    /// Reads a file against what its columns may be, in any order.
    ///
    /// # Errors
    ///
    /// All mistakes in header and numbers.
    pub(crate) fn read(source: &'s Source, rules: &[ColumnRule]) -> Result<Self, Vec<Mistake>> {
        Self::read_among(source, rules, |_| false)
    }

    /// The same of a file that has other columns, too.
    ///
    /// - `is_left`: whether a column without a rule is left unread; else it is a mistake
    ///
    /// # Errors
    ///
    /// As for [`Self::read`].
    pub(crate) fn read_among(
        source: &'s Source,
        rules: &[ColumnRule],
        is_left: impl Fn(&str) -> bool,
    ) -> Result<Self, Vec<Mistake>> {
        let text = source.inner().as_str();
        let mut reader = csv::ReaderBuilder::new()
            .flexible(true)
            .has_headers(false)
            .comment(Some(b'#'))
            .trim(csv::Trim::All)
            .from_reader(text.as_bytes());
        let mut records = reader.records();
        let header = match records.next() {
            Some(Ok(header)) => header,
            // A file of comments alone.
            _ => csv::StringRecord::new(),
        };
        let names: Vec<String> =
            header.iter().map(|name| name.trim_start_matches('\u{feff}').to_owned()).collect();
        check_header(source, &header, &names, rules, is_left)?;
        let by_column: Vec<Option<&ColumnRule>> =
            names.iter().map(|name| rules.iter().find(|rule| rule.name == *name)).collect();
        let mut columns = Self { source, values: vec![vec![]; names.len()], names, starts: vec![] };
        let mut mistakes = Vec::new();
        for record in records {
            if mistakes.len() >= MOST_COLLECTED {
                break;
            }
            match record {
                Ok(record) => columns.take(&record, &by_column, &mut mistakes),
                Err(error) => {
                    let span = error.position().map_or(0, start_of);
                    let why = format!("this row can't be read: {error}");
                    mistakes.push(row_mistake(source, span..span, "", why));
                }
            }
        }
        if mistakes.is_empty() { Ok(columns) } else { Err(mistakes) }
    }

    fn take(
        &mut self,
        record: &csv::StringRecord,
        rules: &[Option<&ColumnRule>],
        mistakes: &mut Vec<Mistake>,
    ) {
        // Spreadsheets leave rows of commas behind.
        if record.len() == self.names.len() && record.iter().all(str::is_empty) {
            return;
        }
        let start = record.position().map_or(0, start_of);
        self.starts.push(start);
        if record.len() != self.names.len() {
            let (found, wanted) = (record.len(), self.names.len());
            let why = format!("this row has {found} numbers, but there are {wanted} columns");
            mistakes.push(row_mistake(self.source, start..start, "", why));
            return;
        }
        for (column, (field, rule)) in record.iter().zip(rules).enumerate() {
            let Some(&ColumnRule { cells, .. }) = *rule else { continue };
            match cells.read(field) {
                Ok(value) => self.values[column].push(value),
                Err(why) => {
                    let span = field_span(self.source.inner(), start, column);
                    let what = DesignError::Row { why, remedy: cells.remedy() };
                    mistakes.push(Mistake::at(self.source, span, self.names[column].clone(), what));
                }
            }
        }
    }

    pub(crate) fn rows(&self) -> usize {
        self.starts.len()
    }

    /// A column's numbers, where the file has it; empty for one that was left unread.
    pub(crate) fn get(&self, name: &str) -> Option<&[f64]> {
        let column = self.names.iter().position(|own| own == name)?;
        Some(&self.values[column])
    }

    /// A mistake at a number.
    pub(crate) fn mistake(&self, row: usize, name: &str, what: DesignError) -> Mistake {
        let start = self.starts.get(row).copied().unwrap_or(0);
        let column = self.names.iter().position(|own| own == name).unwrap_or(0);
        let span = field_span(self.source.inner(), start, column);
        Mistake::at(self.source, span, name.to_owned(), what)
    }
}

fn check_header(
    source: &Source,
    header: &csv::StringRecord,
    names: &[String],
    rules: &[ColumnRule],
    is_left: impl Fn(&str) -> bool,
) -> Result<(), Vec<Mistake>> {
    let start = header.position().map_or(0, start_of);
    if let [name] = names
        && name.contains([';', '\t'])
    {
        let why = "the columns aren't set apart by commas".to_owned();
        let remedy = "save the file with commas between columns and points in numbers";
        let what = DesignError::Row { why, remedy };
        return Err(vec![Mistake::at(source, start..start, String::new(), what)]);
    }
    if names.len() > MOST_COLUMNS {
        let why = format!("there are {} columns, but at most {MOST_COLUMNS} are read", names.len());
        let remedy = "check that this is the file you mean";
        let what = DesignError::Row { why, remedy };
        return Err(vec![Mistake::at(source, start..start, String::new(), what)]);
    }
    let mut mistakes = Vec::new();
    let named = |needed| {
        let rules = rules.iter().filter(move |rule| rule.needed == needed);
        rules.map(|rule| rule.name.as_str()).collect::<Vec<_>>().join(", ")
    };
    let (needed, others) = (named(true), named(false));
    let wanted =
        if others.is_empty() { needed } else { format!("{needed}, and if you like {others}") };
    let unknown = |name: &&String| !rules.iter().any(|rule| rule.name == **name);
    for rule in rules.iter().filter(|rule| rule.needed && !names.contains(&rule.name)) {
        let unknown = names.iter().filter(unknown).map(String::as_str);
        let nearest = nearest(&rule.name, unknown);
        let (column, wanted) = (rule.name.clone(), wanted.clone());
        let what = DesignError::MissingColumn { column, nearest, wanted };
        mistakes.push(Mistake::at(source, start..start, String::new(), what));
    }
    for (place, name) in names.iter().enumerate() {
        let why = if names[..place].contains(name) {
            "is there twice".to_owned()
        } else if unknown(&name) && !is_left(name) {
            "isn't one that is read".to_owned()
        } else {
            continue;
        };
        let (column, wanted) = (shortened(name), wanted.clone());
        let what = DesignError::ExtraColumn { column, why, wanted };
        let span = field_span(source.inner(), start, place);
        mistakes.push(Mistake::at(source, span, String::new(), what));
    }
    if mistakes.is_empty() { Ok(()) } else { Err(mistakes) }
}

const ONE_NUMBER_EACH: &str =
    "every row holds one number a column, with a point and without its unit";

fn row_mistake(source: &Source, span: Span<usize>, key: &str, why: String) -> Mistake {
    let remedy = ONE_NUMBER_EACH;
    Mistake::at(source, span, key.to_owned(), DesignError::Row { why, remedy })
}

fn start_of(position: &csv::Position) -> usize {
    position.byte() as usize
}

/// Where a field stands; the start of its row where quotes make that hard to say.
fn field_span(text: &str, start: usize, column: usize) -> Span<usize> {
    // Blank and comment lines in front belong to the record's position.
    let mut start = start.min(text.len());
    let line = loop {
        let Some(rest) = text.get(start..) else { return start..start };
        let end = rest.find('\n').map_or(rest.len(), |end| end + 1);
        let line = &rest[..end];
        let skipped = line.trim().is_empty() || line.starts_with('#');
        if !skipped || end == rest.len() {
            break line.trim_end();
        }
        start += end;
    };
    if line.contains('"') {
        return start..start;
    }
    let before: usize = line.split(',').take(column).map(|field| field.len() + 1).sum();
    let field = line.split(',').nth(column).unwrap_or("");
    let blank = field.len() - field.trim_start().len();
    let from = start + (before + blank).min(line.len());
    from..from + field.trim().len()
}
