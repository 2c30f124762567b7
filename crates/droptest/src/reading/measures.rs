//! What is measured of a drop, as numbers that scatter evenly.

use undulift_design::SeenDrop;

use crate::Outcome;

/// How many things are measured.
pub const MEASURES: usize = 4;

/// Distance, m; side, m; time, s; the logarithm of the largest tilt.
pub type Measures = [f64; MEASURES];

/// A drop that counts: its rung and what was measured, not a number where nothing was.
pub type Counted = (usize, Measures);

/// Drops of one kind are of the same rung, and the same was measured of them.
pub struct Kinds {
    /// Rungs and what was measured.
    pub known: Vec<(usize, [bool; MEASURES])>,
    /// Of each drop, its place among those.
    pub of: Vec<usize>,
}

impl Kinds {
    /// Of what was seen.
    pub fn among(seen: &[Counted]) -> Self {
        let mut kinds = Self { known: Vec::new(), of: Vec::new() };
        for (rung_idx, measures) in seen {
            let kind = (*rung_idx, measures.map(|value| !value.is_nan()));
            let place = kinds.known.iter().position(|own| *own == kind);
            if place.is_none() {
                kinds.known.push(kind);
            }
            kinds.of.push(place.unwrap_or(kinds.known.len() - 1));
        }
        kinds
    }
}

/// How well they are measured in a hall: 5 cm, 5 cm, 0.02 s, and 2° with a tenth of the tilt. Our assumption, for
/// a tape on the floor and a camera of 50 frames a second.
pub const MEASURED_TO: Measures = [0.05, 0.05, 0.02, 0.1];

/// Added to a tilt, so that the logarithm of a small one isn't large, degrees.
const TILT_OFFSET_DEG: f64 = 20.0;

/// Of a drop that was flown.
pub fn of_outcome(outcome: &Outcome) -> Measures {
    let summary = &outcome.summary;
    [summary.distance_m, summary.side_drift_m, summary.time_s, of_tilt(outcome.peak_tilt_rad())]
}

/// A tilt with as much more as twice its error of measuring, rad.
pub fn with_error_rad(tilt_rad: f64) -> f64 {
    tilt_deg(of_tilt(tilt_rad) + 2.0 * MEASURED_TO[3]).to_radians()
}

/// Of a drop that was seen; not a number where nothing was measured.
pub fn of_seen(drop: &SeenDrop) -> Measures {
    [drop.distance_m, drop.side_m, drop.time_s, drop.peak_tilt_rad.map(of_tilt)]
        .map(|measured| measured.unwrap_or(f64::NAN))
}

fn of_tilt(tilt_rad: f64) -> f64 {
    (tilt_rad.to_degrees() + TILT_OFFSET_DEG).ln()
}

/// The tilt of a measure.
pub fn tilt_deg(measure: f64) -> f64 {
    measure.exp() - TILT_OFFSET_DEG
}
