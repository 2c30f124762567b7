//! CSV files as named columns of finite numbers, each number with its place.

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
    pub(crate) range: Range,
    pub(crate) needed: bool,
}

/// Named columns, one number a row.
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
        let start = record.position().map_or(0, start_of);
        self.starts.push(start);
        if record.len() != self.names.len() {
            let (found, wanted) = (record.len(), self.names.len());
            let why = format!("this row has {found} numbers, but there are {wanted} columns");
            mistakes.push(row_mistake(self.source, start..start, "", why));
            return;
        }
        for (column, (field, rule)) in record.iter().zip(rules).enumerate() {
            let Some(&ColumnRule { range, .. }) = *rule else { continue };
            match field.parse::<f64>().ok().filter(|&value| range.contains(value)) {
                Some(value) => self.values[column].push(value),
                None => {
                    let span = field_span(self.source.inner(), start, column);
                    let why = match field {
                        "" => "the number is missing here".to_owned(),
                        _ if field.parse::<f64>().is_err() => {
                            format!("\"{}\" isn't a number", shortened(field))
                        }
                        _ => format!("{} is out of range: it must be {range}", shortened(field)),
                    };
                    mistakes.push(row_mistake(self.source, span, &self.names[column], why));
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

fn row_mistake(source: &Source, span: Span<usize>, key: &str, why: String) -> Mistake {
    let remedy = "every row holds one number a column, with a point and without its unit";
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
