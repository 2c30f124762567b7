//! Poses of a body, one a row of a CSV file: joint angles, and roll and pitch where they are given.
//!
//! Columns that tell of no joint are left unread, so that the trace of a flight serves, too.

use std::path::Path;

use undulift_chain::joint_axes;

use crate::columns::{Cells, ColumnRule, Columns};
use crate::design::unusable;
use crate::document::source_of;
use crate::files::read_file;
use crate::mistake::{Mistake, Source};
use crate::range::Range;
use crate::{Design, DesignError, DesignErrors};

/// Most rows that are read.
const MOST_ROWS: usize = 100_000;

/// Largest file: traces give all digits of every joint.
const MOST_BYTES: u64 = 256 << 20;

/// How a body is held.
#[derive(Debug, Clone, PartialEq)]
pub struct PoseRow {
    /// Yaw axes from the head, then pitch axes from the head: shape (axes).
    pub angles_rad: Vec<f64>,
    /// Right side down; 0 where the file doesn't say.
    pub roll_rad: f64,
    /// Nose up; 0 where the file doesn't say.
    pub pitch_rad: f64,
}

/// Reads poses of a design from a CSV file.
///
/// # Errors
///
/// All mistakes in it, each with its place.
pub fn read_poses(path: &Path, design: &Design) -> Result<Vec<PoseRow>, DesignErrors> {
    let text = read_file(path, MOST_BYTES).map_err(|error| unusable(path, error))?;
    let fail = |mistakes| DesignErrors::new(path.display().to_string(), mistakes);
    poses(&source_of(path, text), design).map_err(fail)
}

fn poses(source: &Source, design: &Design) -> Result<Vec<PoseRow>, Vec<Mistake>> {
    let axes = joint_axes(design.glider.chain.joints());
    let name = |of: &undulift_chain::AxisOf| format!("{}_{}_deg", of.axis.word(), of.joint_idx + 1);
    let names: Vec<String> = axes.iter().map(name).collect();
    let columns = Columns::read_among(source, &rules(&names), |name| !tells_of_joint(name))?;
    let rows = columns.rows();
    if !(1..=MOST_ROWS).contains(&rows) {
        let why = match rows {
            0 => "there are no rows, but one or more are needed".to_owned(),
            _ => format!("there are {rows} rows, but at most {MOST_ROWS} are read"),
        };
        let remedy = "give one row a pose, below the row of names";
        let first = names.first().map_or("", String::as_str);
        return Err(vec![columns.mistake(0, first, DesignError::Row { why, remedy })]);
    }
    let angle_rad = |name: &str, row: usize| {
        columns.get(name).map_or(0.0, |angles_deg| angles_deg[row].to_radians())
    };
    let pose = |row| PoseRow {
        angles_rad: names.iter().map(|name| angle_rad(name, row)).collect(),
        roll_rad: angle_rad("roll_deg", row),
        pitch_rad: angle_rad("pitch_deg", row),
    };
    Ok((0..rows).map(pose).collect())
}

fn rules(axes: &[String]) -> Vec<ColumnRule> {
    let rule = |name: &str, most_deg, needed| ColumnRule {
        name: name.to_owned(),
        cells: Cells::Number(Range::within(most_deg)),
        needed,
    };
    let angles = axes.iter().map(|name| rule(name, 360.0, true));
    // As the launch has them.
    angles.chain([rule("roll_deg", 360.0, false), rule("pitch_deg", 90.0, false)]).collect()
}

/// Whether a column is of a joint's axis, be it one that the body has or not.
fn tells_of_joint(name: &str) -> bool {
    let rest = name.strip_prefix("yaw_").or_else(|| name.strip_prefix("pitch_"));
    rest.is_some_and(|rest| rest.starts_with(|first: char| first.is_ascii_digit()))
}
