//! Section tables: coefficients over incidence at one or more Reynolds numbers.

use undulift_aero::{Polar, SectionTable};

use crate::DesignError;
use crate::columns::{Cells, ColumnRule, Columns};
use crate::mistake::{MOST_COLLECTED, Mistake, Source};
use crate::range::Range;

/// How far the ends of a table may miss ±90°, degrees, or lift there: rounding, no more.
const END_SLACK: f64 = 1e-9;

/// Builds a section from a CSV file.
///
/// # Errors
///
/// All mistakes in it, each with its row.
pub(crate) fn build_section_table(
    name: &str,
    source: &Source,
) -> Result<SectionTable, Vec<Mistake>> {
    const COEFFICIENT: Range = Range::within(100.0);
    let rule = |name: &str, range, needed| ColumnRule {
        name: name.to_owned(),
        cells: Cells::Number(range),
        needed,
    };
    let rules = [
        rule("reynolds", Range::above_0_to(1e9), true),
        rule("alpha_deg", Range::within(90.0), true),
        rule("cl", COEFFICIENT, true),
        rule("cd", Range::from_to(0.0, 100.0), true),
        rule("cm", COEFFICIENT, false),
    ];
    let columns = Columns::read(source, &rules)?;
    let rows_of = rows_by_reynolds(&columns);
    if rows_of.is_empty() {
        let why = "there are no rows below the names of the columns".to_owned();
        let what = DesignError::Row { why, remedy: "give rows from −90° to 90°" };
        return Err(vec![columns.mistake(0, "alpha_deg", what)]);
    }
    let all = rows_of.iter().flat_map(|(reynolds, rows)| check(&columns, *reynolds, rows));
    let mistakes: Vec<Mistake> = all.take(MOST_COLLECTED).collect();
    if !mistakes.is_empty() {
        return Err(mistakes);
    }
    let polars = rows_of.iter().map(|(reynolds, rows)| polar(&columns, *reynolds, rows)).collect();
    SectionTable::new(name, polars)
        .map_err(|error| vec![columns.mistake(0, "reynolds", DesignError::Section(error))])
}

fn column<'c>(columns: &'c Columns<'_>, name: &str) -> &'c [f64] {
    columns.get(name).expect("a file without it was refused")
}

/// Reynolds numbers in rising order, each with its rows in the file's order.
fn rows_by_reynolds(columns: &Columns<'_>) -> Vec<(f64, Vec<usize>)> {
    let reynolds = column(columns, "reynolds");
    let mut rows: Vec<usize> = (0..columns.rows()).collect();
    rows.sort_by(|&a, &b| reynolds[a].total_cmp(&reynolds[b]));
    let same = rows.chunk_by(|&a, &b| reynolds[a] == reynolds[b]);
    same.map(|rows| (reynolds[rows[0]], rows.to_vec())).collect()
}

fn check(columns: &Columns<'_>, reynolds: f64, rows: &[usize]) -> Vec<Mistake> {
    let alpha_deg = column(columns, "alpha_deg");
    let mut mistakes = Vec::new();
    let mut refuse = |row, name: &str, why: String, remedy| {
        mistakes.push(columns.mistake(row, name, DesignError::Row { why, remedy }));
    };
    let falls = |pair: &&[usize]| alpha_deg[pair[1]] <= alpha_deg[pair[0]];
    for pair in rows.windows(2).filter(falls).take(MOST_COLLECTED) {
        let (before, here) = (alpha_deg[pair[0]], alpha_deg[pair[1]]);
        let why = format!("at Re {reynolds}, {here}° doesn't rise above the {before}° before it");
        refuse(pair[1], "alpha_deg", why, "sort the rows by incidence, each given once");
    }
    for (end, goes, wanted_deg) in [(rows.first(), "begin", -90.0), (rows.last(), "end", 90.0)] {
        let Some(&row) = end else { continue };
        let found_deg = alpha_deg[row];
        if (found_deg - wanted_deg).abs() > END_SLACK {
            let why =
                format!("at Re {reynolds} the rows {goes} at {found_deg}°, not at {wanted_deg}°");
            let remedy = "incidence is never extrapolated: give rows from −90° to 90°";
            refuse(row, "alpha_deg", why, remedy);
            continue;
        }
        for name in ["cl", "cm"] {
            let value = columns.get(name).map_or(0.0, |values| values[row]);
            if value.abs() > END_SLACK {
                let why = format!("at Re {reynolds} and {wanted_deg}° this is {value}, not 0");
                let remedy = "write 0: sections are alike left and right, so broadside on neither side lifts";
                refuse(row, name, why, remedy);
            }
        }
    }
    mistakes
}

fn polar(columns: &Columns<'_>, reynolds: f64, rows: &[usize]) -> Polar {
    let picked = |values: &[f64]| rows.iter().map(|&row| values[row]).collect::<Vec<f64>>();
    Polar {
        reynolds,
        alpha_rad: picked(column(columns, "alpha_deg")).into_iter().map(f64::to_radians).collect(),
        lift: picked(column(columns, "cl")),
        drag: picked(column(columns, "cd")),
        moment: columns.get("cm").map(picked),
    }
}
