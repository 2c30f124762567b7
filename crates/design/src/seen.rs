//! What was measured of drops, one a row of a CSV file.

use std::path::Path;

use crate::columns::{Cells, ColumnRule, Columns};
use crate::design::unusable;
use crate::document::source_of;
use crate::files::{MOST_CSV_BYTES, read_file};
use crate::mistake::{Mistake, Source};
use crate::range::Range;
use crate::{DesignError, DesignErrors};

/// How far a release may be off the height of its rung, m.
const OFF_RUNG_M: f64 = 0.1;

/// How far a side may exceed the distance that it is a part of, m: measuring.
const OFF_SIDE_M: f64 = 0.1;

/// Most drops that are read.
const MOST_ROWS: usize = 1000;

/// A drop as it was seen.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SeenDrop {
    /// Of which height of the ladder, from 0.
    pub rung_idx: usize,
    /// From under the release to the end, m; absent: not measured.
    pub distance_m: Option<f64>,
    /// To the left of the launch, m; absent: not measured.
    pub side_m: Option<f64>,
    /// From release to the end, s; absent: not measured.
    pub time_s: Option<f64>,
    /// Larger of roll and pitch on the way, rad; absent: not measured.
    pub peak_tilt_rad: Option<f64>,
    /// How it ended.
    pub ended: Ended,
}

/// How a drop ended.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Ended {
    /// In the catch or on the floor, as it was meant to.
    Landed,
    /// It turned over on the way.
    Inverted,
    /// Beside the catch.
    MissedCatch,
    /// It touched a wall, a person, the rig or anything else on its way.
    Touched,
    /// Something of robot or release didn't do as it should.
    Failed,
}

impl Ended {
    /// In the order of [`Self::WORDS`].
    pub const ALL: [Self; 5] =
        [Self::Landed, Self::Inverted, Self::MissedCatch, Self::Touched, Self::Failed];
    /// As in files.
    pub const WORDS: [&str; 5] = ["landed", "inverted", "missed_catch", "touched", "failed"];

    /// As in files.
    pub fn word(self) -> &'static str {
        Self::WORDS[self as usize]
    }
}

/// Reads what was seen of drops.
///
/// - `heights_m`: the release ladder; each row must be of one of them, to 0.1 m
///
/// # Errors
///
/// All mistakes in it, each with its place.
pub fn read_seen(path: &Path, heights_m: &[f64]) -> Result<Vec<SeenDrop>, DesignErrors> {
    let text = read_file(path, MOST_CSV_BYTES).map_err(|error| unusable(path, error))?;
    let fail = |mistakes| DesignErrors::new(path.display().to_string(), mistakes);
    seen(&source_of(path, text), heights_m).map_err(fail)
}

fn seen(source: &Source, heights_m: &[f64]) -> Result<Vec<SeenDrop>, Vec<Mistake>> {
    let columns = Columns::read(source, &rules())?;
    if !(1..=MOST_ROWS).contains(&columns.rows()) {
        let why = match columns.rows() {
            0 => "there are no rows, but one or more are needed".to_owned(),
            rows => format!("there are {rows} rows, but at most {MOST_ROWS} are read"),
        };
        let remedy = "give one row a drop, below the row of names";
        return Err(vec![columns.mistake(0, "height_m", DesignError::Row { why, remedy })]);
    }
    let number = |name: &str, row: usize| columns.get(name).map_or(f64::NAN, |values| values[row]);
    let given = |value: f64| Some(value).filter(|value| !value.is_nan());
    let (mut drops, mut mistakes) = (Vec::new(), Vec::new());
    for row in 0..columns.rows() {
        let height_m = number("height_m", row);
        let off = |rung_m: &f64| (rung_m - height_m).abs() <= OFF_RUNG_M + 1e-9;
        let nearest = heights_m
            .iter()
            .enumerate()
            .filter(|(_, rung_m)| off(rung_m))
            .min_by(|(_, a), (_, b)| (*a - height_m).abs().total_cmp(&(*b - height_m).abs()));
        let Some((rung_idx, _)) = nearest else {
            mistakes.push(columns.mistake(row, "height_m", no_rung(height_m, heights_m)));
            continue;
        };
        let (distance_m, side_m) = (number("distance_m", row), number("side_m", row));
        if side_m.abs() > distance_m + OFF_SIDE_M {
            let why =
                format!("{side_m} m to the side is further than the {distance_m} m of distance");
            let remedy =
                "distance goes straight to the body, side is a part of it; correct one of them";
            mistakes.push(columns.mistake(row, "side_m", DesignError::Row { why, remedy }));
            continue;
        }
        drops.push(SeenDrop {
            rung_idx,
            distance_m: given(distance_m),
            side_m: given(side_m),
            time_s: given(number("time_s", row)),
            peak_tilt_rad: given(number("peak_tilt_deg", row)).map(f64::to_radians),
            ended: Ended::ALL[number("ended", row) as usize],
        });
    }
    if mistakes.is_empty() { Ok(drops) } else { Err(mistakes) }
}

fn no_rung(height_m: f64, heights_m: &[f64]) -> DesignError {
    let rungs: Vec<String> = heights_m.iter().map(f64::to_string).collect();
    let why = format!(
        "{height_m} m is no height of the hall's ladder ({} m), to {OFF_RUNG_M} m",
        rungs.join(", ")
    );
    DesignError::Row { why, remedy: "correct it, or add this height to the hall's heights_m" }
}

fn rules() -> Vec<ColumnRule> {
    let rule = |name: &str, cells, needed| ColumnRule { name: name.to_owned(), cells, needed };
    vec![
        // As on the sheet; not used.
        rule("drop", Cells::NumberOrNothing(Range::within(1e9)), false),
        rule("height_m", Cells::Number(Range::above_0_to(1000.0)), true),
        rule("distance_m", Cells::NumberOrNothing(Range::from_to(0.0, 10_000.0)), true),
        rule("side_m", Cells::NumberOrNothing(Range::within(10_000.0)), false),
        rule("time_s", Cells::NumberOrNothing(Range::above_0_to(1000.0)), false),
        rule("peak_tilt_deg", Cells::NumberOrNothing(Range::from_to(0.0, 180.0)), false),
        rule("ended", Cells::Word(&Ended::WORDS), true),
    ]
}
