//! Gait tables: joint angles in equal steps of time, one period long; also those written for
//! firmware, as a C header or as CSV in any unit.

use undulift_chain::{Joint, joint_axes};
use undulift_gait::firmware::{is_table_text, read_table};
use undulift_gait::{GaitError, GaitTable, Interpolation};

use crate::DesignError;
use crate::columns::{Cells, ColumnRule, Columns};
use crate::mistake::{Mistake, Source};
use crate::range::Range;

/// How far a time may be off its equal step, as a share of the step: rounding in a file.
const STEP_SLACK: f64 = 0.01;

/// Builds a gait from a CSV file or a C header.
///
/// # Errors
///
/// All mistakes in it, each with its row.
pub(crate) fn build_gait_table(
    source: &Source,
    joints: &[Joint],
    interpolation: Interpolation,
) -> Result<GaitTable, Vec<Mistake>> {
    let axes = joint_axes(joints);
    if is_firmware(source.inner()) {
        let table = read_table(source.inner());
        let table = table.and_then(|table| table.gait_table(&axes, interpolation));
        return table.map_err(|error| vec![firmware_mistake(source, error)]);
    }
    let names: Vec<String> =
        axes.iter().map(|of| format!("{}_{}_deg", of.axis.word(), of.joint_idx + 1)).collect();
    let columns = Columns::read(source, &rules(&names))?;
    let step_s = step_s(&columns)?;
    let radians = |name: &str| -> Option<Vec<f64>> {
        Some(columns.get(name)?.iter().map(|angle_deg| angle_deg.to_radians()).collect())
    };
    let axes_rad = names.iter().filter_map(|name| radians(name)).collect();
    let (heading_rad, elevation_rad) = (radians("head_heading_deg"), radians("head_elevation_deg"));
    GaitTable::new(step_s, axes_rad, heading_rad, elevation_rad, interpolation)
        .map_err(|error| vec![columns.mistake(0, "time_s", DesignError::Gait(error))])
}

/// Whether it is a table for firmware with more than plain degrees in its columns.
fn is_firmware(text: &str) -> bool {
    let in_degrees = text.lines().any(|line| line.trim() == "# unit: deg");
    is_table_text(text) && !in_degrees
}

fn firmware_mistake(source: &Source, error: GaitError) -> Mistake {
    let text = source.inner();
    let (line, why) = match error {
        GaitError::Text { line, why } => (line, why),
        other => (0, other.to_string()),
    };
    let start = text.split_inclusive('\n').take(line.saturating_sub(1)).map(str::len).sum();
    let remedy = "write the table again with `undulift table`, or name a plain CSV";
    Mistake::at(source, start..start, String::new(), DesignError::Row { why, remedy })
}

fn rules(axes: &[String]) -> Vec<ColumnRule> {
    let rule = |name: &str, range, needed| ColumnRule {
        name: name.to_owned(),
        cells: Cells::Number(range),
        needed,
    };
    let time = rule("time_s", Range::from_to(0.0, 1e4), true);
    let angles = axes.iter().map(|name| rule(name, Range::within(360.0), true));
    let head = ["head_heading_deg", "head_elevation_deg"]
        .map(|name| rule(name, Range::within(36_000.0), false));
    std::iter::once(time).chain(angles).chain(head).collect()
}

/// The equal step between the rows' times, s.
fn step_s(columns: &Columns<'_>) -> Result<f64, Vec<Mistake>> {
    let times_s = columns.get("time_s").unwrap_or_default();
    let mistake =
        |row, why, remedy| vec![columns.mistake(row, "time_s", DesignError::Row { why, remedy })];
    let rows = times_s.len();
    if rows < 2 {
        let why = format!("there are {rows} rows, but two or more are needed");
        return Err(mistake(0, why, "give one row a step, over one period"));
    }
    let step_s = times_s[rows - 1] / (rows - 1) as f64;
    let remedy = "times run in equal steps from 0; the last row doesn't repeat the first";
    if times_s[0].abs() > STEP_SLACK * step_s {
        return Err(mistake(0, format!("the first time is {} s, not 0", times_s[0]), remedy));
    }
    // The steps from row to row show best where one is left out or is there twice.
    let first_s = times_s[1] - times_s[0];
    for row in 1..rows {
        let own_s = times_s[row] - times_s[row - 1];
        let even = (own_s - first_s).abs() <= 2.0 * STEP_SLACK * first_s.abs();
        let on_grid = (times_s[row] - step_s * row as f64).abs() <= STEP_SLACK * step_s;
        if own_s <= 0.0 || !(even || on_grid) {
            let why = format!(
                "{} s comes {own_s:.6} s after the row before it, but steps are {first_s:.6} s",
                times_s[row]
            );
            return Err(mistake(row, why, remedy));
        }
    }
    let off = |&row: &usize| (times_s[row] - step_s * row as f64).abs() > STEP_SLACK * step_s;
    match (1..rows).find(off) {
        None => Ok(step_s),
        Some(row) => {
            let at_s = step_s * row as f64;
            let why = format!("{} s is not where equal steps would be, {at_s:.6} s", times_s[row]);
            Err(mistake(row, why, remedy))
        }
    }
}
