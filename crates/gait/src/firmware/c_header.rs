use std::fmt::Write;

use crate::GaitError;
use crate::Interpolation;
use crate::firmware::preamble::in_comment;
use crate::firmware::{CType, FirmwareTable, Scale};

/// The reader: `NAME` and `PREFIX` stand for the table's name, `TYPE` for its numbers' type.
const READER: &str = "\
static inline TYPE NAME_start_row(uint64_t row, size_t column)
{
    return row < PREFIX_START_ROWS ? NAME_start[row][column]
                                   : NAME_loop[(row - PREFIX_START_ROWS) % PREFIX_ROWS][column];
}

static inline TYPE NAME_loop_row(uint64_t row, size_t column)
{
    return NAME_loop[row % PREFIX_ROWS][column];
}

static inline TYPE NAME_stop_row(uint64_t row, size_t column)
{
    return NAME_stop[row < PREFIX_STOP_ROWS ? row : PREFIX_STOP_ROWS - 1u][column];
}

/* Since the trigger, in microseconds: waits, starts, then runs the loop for as long as you like. */
static inline TYPE NAME_start_at(size_t column, uint32_t time_us)
{
    const uint32_t moved_us = time_us > PREFIX_DELAY_US ? time_us - PREFIX_DELAY_US : 0u;
    const uint64_t at = (uint64_t)moved_us * PREFIX_ROWS;
    const uint64_t row = at / PREFIX_PERIOD_US;
    return NAME_between(NAME_start_row(row, column), NAME_start_row(row + 1u, column),
                        (int64_t)(at % PREFIX_PERIOD_US));
}

/* Since the loop's first row. */
static inline TYPE NAME_loop_at(size_t column, uint32_t time_us)
{
    const uint64_t at = (uint64_t)time_us * PREFIX_ROWS;
    const uint64_t row = at / PREFIX_PERIOD_US;
    return NAME_between(NAME_loop_row(row, column), NAME_loop_row(row + 1u, column),
                        (int64_t)(at % PREFIX_PERIOD_US));
}

/* Since the loop's first row, when the loop is to end there; stays at the last row. */
static inline TYPE NAME_stop_at(size_t column, uint32_t time_us)
{
    const uint64_t at = (uint64_t)time_us * PREFIX_ROWS;
    const uint64_t row = at / PREFIX_PERIOD_US;
    return NAME_between(NAME_stop_row(row, column), NAME_stop_row(row + 1u, column),
                        (int64_t)(at % PREFIX_PERIOD_US));
}
";

/// Straight lines between rows.
const LINEAR: &str = "\
/* Between two rows: a straight line, to the nearest count, halves away from zero. */
static inline TYPE NAME_between(TYPE from, TYPE to, int64_t part)
{
    const int64_t whole = (int64_t)PREFIX_PERIOD_US;
    const int64_t sum = (int64_t)from * (whole - part) + (int64_t)to * part;
    return (TYPE)((sum < 0 ? sum - whole / 2 : sum + whole / 2) / whole);
}
";

/// Rows that stand until the next.
const HOLD: &str = "\
/* Between two rows: the earlier stands until the next. */
static inline TYPE NAME_between(TYPE from, TYPE to, int64_t part)
{
    (void)to;
    (void)part;
    return from;
}
";

/// A C99 header with the table's numbers and a reader of whole numbers only.
///
/// # Errors
///
/// [`GaitError::TooFine`] where 16 bits don't hold a number.
pub fn c_header(table: &FirmwareTable, between: Interpolation) -> Result<String, GaitError> {
    let c_type = table.c_type()?;
    let name = c_name(&table.preamble.design);
    let prefix = name.to_uppercase();
    let mut text = opening(table);
    let _ = write!(
        text,
        "#ifndef {prefix}_GAIT_TABLE_H\n#define {prefix}_GAIT_TABLE_H\n\n\
         #include <stddef.h>\n#include <stdint.h>\n\n"
    );
    text.push_str(&sizes(table, &prefix, c_type));
    let _ = write!(
        text,
        "/* The board's channel of each column. */\n\
         static const uint8_t {name}_channel[{prefix}_COLUMNS] = {{{}}};\n\n",
        listed(table.preamble.channels.iter().map(|channel| i64::from(channel.number)))
    );
    for (block, rows, size) in [
        ("start", &table.start, "START_ROWS"),
        ("loop", &table.cycle, "ROWS"),
        ("stop", &table.stop, "STOP_ROWS"),
    ] {
        let of_type = c_type.name();
        let _ = writeln!(
            text,
            "static const {of_type} {name}_{block}[{prefix}_{size}][{prefix}_COLUMNS] = {{"
        );
        for row in rows {
            let _ =
                writeln!(text, "    {{{}}},", listed(row.iter().map(|&count| i64::from(count))));
        }
        text.push_str("};\n\n");
    }
    let lines = if between == Interpolation::Hold { HOLD } else { LINEAR };
    let reader = format!("{lines}\n{READER}");
    let reader = reader.replace("TYPE", c_type.name());
    text.push_str(&reader.replace("NAME", &name).replace("PREFIX", &prefix));
    text.push_str("\n#endif\n");
    Ok(text)
}

fn listed(numbers: impl Iterator<Item = i64>) -> String {
    numbers.map(|number| number.to_string()).collect::<Vec<_>>().join(", ")
}

/// The comment on top.
fn opening(table: &FirmwareTable) -> String {
    let preamble = &table.preamble;
    let mut text = String::from("/*\n");
    for line in preamble.lines(table.cycle.len()) {
        let _ = writeln!(text, " * {line}");
    }
    let names: Vec<String> = preamble.channels.iter().map(|channel| channel.name()).collect();
    let _ = writeln!(text, " * columns: {}", in_comment(&names.join(" ")));
    if let Some(head) = &table.head_deg {
        for (key, degrees) in ["head_heading_deg", "head_elevation_deg"].into_iter().zip(head) {
            let numbers: Vec<String> = degrees.iter().map(f64::to_string).collect();
            let _ = writeln!(text, " * {key}: {}", numbers.join(" "));
        }
    }
    text.push_str(" */\n");
    text
}

fn sizes(table: &FirmwareTable, prefix: &str, c_type: CType) -> String {
    let Scale { unit, resolution } = table.preamble.scale;
    let mut text = String::new();
    let mut define = |name: &str, value: String, what: &str| {
        let _ = writeln!(text, "#define {prefix}_{name} {value} /* {what} */");
    };
    let of_unit = format!("one count is {resolution} {}", unit.word());
    define("COLUMNS", format!("{}u", table.preamble.channels.len()), &of_unit);
    define("ROWS", format!("{}u", table.cycle.len()), "of the loop");
    define("START_ROWS", format!("{}u", table.start.len()), "from the trigger to the loop");
    define("STOP_ROWS", format!("{}u", table.stop.len()), "from the loop's first row to straight");
    define("PERIOD_US", format!("{}u", table.period_us()), "of the loop, microseconds");
    define("DELAY_US", format!("{}u", table.delay_us()), "from the trigger to the first motion");
    let from_us = format!("{}u", table.loop_from_us());
    define("LOOP_FROM_US", from_us, "from the trigger to the loop's first row");
    define("BYTES", format!("{}u", table.flash_bytes(c_type)), "of start, loop and stop");
    let crc = format!("0x{:08X}u", table.crc32(c_type));
    define("CRC32", crc, "of start, loop and stop, lowest bytes first");
    text.push('\n');
    text
}

/// A design's name as a C identifier can begin.
pub fn c_name(design: &str) -> String {
    let plain = |c: char| if c.is_ascii_alphanumeric() { c.to_ascii_lowercase() } else { '_' };
    let name: String = design.chars().map(plain).collect();
    let name = name.trim_matches('_');
    match name.chars().next() {
        None => "gait".into(),
        Some(first) if first.is_ascii_digit() => format!("gait_{name}"),
        Some(_) => name.into(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// C11 6.4.2.1: letters, digits and underscores, no digit first; a leading underscore may be
    /// taken (7.1.3).
    #[test]
    fn published_names_are_identifiers() {
        for (design, name) in [
            ("reed-16", "reed_16"),
            ("16 reeds", "gait_16_reeds"),
            ("_Größe*/", "gr__e"),
            ("…", "gait"),
        ] {
            assert_eq!(c_name(design), name);
        }
    }
}
