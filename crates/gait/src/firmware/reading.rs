//! Tables read back from CSV and from C headers.

use crate::GaitError;
use crate::firmware::preamble::MARK;
use crate::firmware::{FirmwareTable, Preamble, Scale};

/// Fewest and most rows and columns are told by the blocks themselves; a text longer than any table
/// isn't one.
type Counts = Vec<Vec<i32>>;

/// Whether a text says of itself that it is a table for firmware.
pub fn is_table_text(text: &str) -> bool {
    let mut lines = text.lines().map(uncommented).filter(|line| !line.is_empty());
    lines.next().is_some_and(|line| line.starts_with(MARK))
}

/// Reads a table back from its CSV, whose rows are then the loop, or from its C header.
///
/// # Errors
///
/// [`GaitError::Text`] with the line that is to blame.
pub fn read_table(text: &str) -> Result<FirmwareTable, GaitError> {
    if text.trim_start().starts_with("/*") { read_header(text) } else { read_csv(text) }
}

fn uncommented(line: &str) -> &str {
    line.trim_start_matches('\u{feff}').trim_start_matches(['#', '/', '*', ' ', '\t']).trim_end()
}

fn refuse(line: usize, why: impl Into<String>) -> GaitError {
    GaitError::Text { line, why: why.into() }
}

fn read_csv(text: &str) -> Result<FirmwareTable, GaitError> {
    let numbered = || (1..).zip(text.lines());
    let comments: Vec<(usize, &str)> = numbered()
        .filter(|(_, line)| line.starts_with('#'))
        .map(|(at, line)| (at, uncommented(line)))
        .collect();
    let preamble = Preamble::read(&comments)?;
    let plain = |(_, line): &(usize, &str)| !line.starts_with('#') && !line.trim().is_empty();
    let mut rows = numbered().filter(plain);
    let (header_at, header) = rows.next().ok_or_else(|| refuse(0, "there is no row of names"))?;
    let names: Vec<&str> = header.split(',').map(str::trim).collect();
    let unit = preamble.scale.unit.word();
    let place = |name: &str| names.iter().position(|own| *own == name);
    let columns = preamble.channels.iter().map(|channel| {
        let name = format!("{}_{unit}", channel.name());
        place(&name).ok_or_else(|| refuse(header_at, format!("the column `{name}` is missing")))
    });
    let columns = columns.collect::<Result<Vec<usize>, GaitError>>()?;
    let head = [place("head_heading_deg"), place("head_elevation_deg")];
    let (mut cycle, mut head_deg) = (Counts::new(), [vec![], vec![]]);
    for (at, row) in rows {
        let fields: Vec<&str> = row.split(',').map(str::trim).collect();
        if fields.len() != names.len() {
            let (found, wanted) = (fields.len(), names.len());
            return Err(refuse(at, format!("this row has {found} numbers, not {wanted}")));
        }
        let value = |column: usize| number(at, fields[column]);
        let count = |&column: &usize| count(preamble.scale, at, value(column)?);
        cycle.push(columns.iter().map(count).collect::<Result<_, _>>()?);
        for (degrees, column) in head_deg.iter_mut().zip(head) {
            degrees.extend(column.map(value).transpose()?);
        }
    }
    let whole = head.iter().all(Option::is_some);
    finish(FirmwareTable {
        preamble,
        start: vec![],
        cycle,
        stop: vec![],
        head_deg: whole.then_some(head_deg),
    })
}

fn number(line: usize, field: &str) -> Result<f64, GaitError> {
    let value = field.parse::<f64>().ok().filter(|value| value.is_finite());
    value.ok_or_else(|| refuse(line, format!("\"{field}\" isn't a number")))
}

/// The count that a value was written for.
fn count(scale: Scale, line: usize, value: f64) -> Result<i32, GaitError> {
    let resolution = scale.resolution;
    let count = scale.count(value).ok_or_else(|| refuse(line, format!("{value} is too large")))?;
    if (scale.value(count) - value).abs() <= 1e-6 * resolution {
        return Ok(count);
    }
    let unit = scale.unit.word();
    let why = format!("{value} {unit} isn't a whole number of counts of {resolution} {unit}");
    Err(refuse(line, format!("{why}; change `resolution:` in the comments with the numbers")))
}

fn read_header(text: &str) -> Result<FirmwareTable, GaitError> {
    let end = text.find("*/").ok_or_else(|| refuse(1, "the comment on top doesn't end"))?;
    let comments: Vec<(usize, &str)> =
        (1..).zip(text[..end].lines()).map(|(at, line)| (at, uncommented(line))).collect();
    let comments: Vec<(usize, &str)> =
        comments.into_iter().filter(|(_, line)| !line.is_empty()).collect();
    let preamble = Preamble::read(&comments)?;
    let columns = preamble.channels.len();
    let [start, cycle, stop] = ["start", "loop", "stop"].map(|block| rows(text, block, columns));
    let head = ["head_heading_deg", "head_elevation_deg"].map(|key| degrees(&comments, key));
    let [heading, elevation] = head;
    let table = FirmwareTable {
        preamble,
        start: start?,
        cycle: cycle?,
        stop: stop?,
        head_deg: heading?.zip(elevation?).map(|(heading, elevation)| [heading, elevation]),
    };
    check_crc(text, &table)?;
    finish(table)
}

/// The rows of `static const … NAME_block[…][…] = { … };`.
fn rows(text: &str, block: &str, columns: usize) -> Result<Counts, GaitError> {
    let missing = || refuse(0, format!("the numbers of `…_{block}[…]` can't be found"));
    let mark = format!("_{block}[");
    let of_line = |line: &&str| line.starts_with("static const") && line.contains(&mark);
    let line = text.lines().find(of_line).ok_or_else(missing)?;
    // The line is a part of the text, so its place is the distance between the two.
    let from = line.as_ptr() as usize - text.as_ptr() as usize + line.len();
    let length = text[from..].find(';').ok_or_else(missing)?;
    let first_line = 1 + text[..from].matches('\n').count();
    let mut rows = Counts::new();
    for (at, row) in (first_line..).zip(text[from..from + length].lines()) {
        let row = row.trim().trim_start_matches('{').trim_end_matches(',').trim_end_matches('}');
        if row.is_empty() {
            continue;
        }
        let counts = row.split(',').map(|field| {
            let field = field.trim();
            field.parse().map_err(|_| refuse(at, format!("\"{field}\" isn't a whole number")))
        });
        let counts = counts.collect::<Result<Vec<i32>, GaitError>>()?;
        if counts.len() != columns {
            return Err(refuse(
                at,
                format!("this row has {} numbers, not {columns}", counts.len()),
            ));
        }
        rows.push(counts);
    }
    Ok(rows)
}

fn degrees(comments: &[(usize, &str)], key: &str) -> Result<Option<Vec<f64>>, GaitError> {
    let found = comments
        .iter()
        .find_map(|&(at, line)| Some((at, line.strip_prefix(key)?.strip_prefix(':')?)));
    let Some((at, numbers)) = found else { return Ok(None) };
    numbers.split_whitespace().map(|field| number(at, field)).collect::<Result<_, _>>().map(Some)
}

/// Numbers that were changed by hand don't fit their checksum.
fn check_crc(text: &str, table: &FirmwareTable) -> Result<(), GaitError> {
    let found = (1..).zip(text.lines()).find_map(|(at, line)| {
        let hex = line.split_once("_CRC32 0x")?.1.get(..8)?;
        Some((at, u32::from_str_radix(hex, 16).ok()?))
    });
    let (at, written) = found.ok_or_else(|| refuse(0, "the line `#define …_CRC32` is missing"))?;
    let own = table.crc32(table.c_type()?);
    if own == written {
        return Ok(());
    }
    let why = format!("its numbers have the checksum 0x{own:08X}, not 0x{written:08X} as written");
    Err(refuse(at, format!("{why}: they were changed; write the table again")))
}

fn finish(table: FirmwareTable) -> Result<FirmwareTable, GaitError> {
    let rows = table.cycle.len();
    let uneven = table.head_deg.iter().flatten().any(|degrees| degrees.len() != rows);
    if uneven {
        return Err(refuse(
            0,
            format!("the head has not as many angles as the loop's {rows} rows"),
        ));
    }
    if table.preamble.step_s <= 0.0 || table.preamble.channels.is_empty() {
        return Err(refuse(0, "a table has channels, and a step above 0 s"));
    }
    Ok(table)
}
