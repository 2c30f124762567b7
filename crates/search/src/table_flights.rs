//! Flights of gait tables, so that what a table costs shows.

use undulift_design::Design;
use undulift_flight::{End, FlightError, Glider, Settings, fly, fly_driven, summary};
use undulift_gait::{Gait, GaitTable, Interpolation, Pattern};

/// What a table's flight is held to.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct TableFlight {
    /// How it ended.
    pub end: End,
    /// Distance over drop.
    pub glide_ratio: Option<f64>,
    /// Horizontal, m.
    pub distance_m: f64,
    /// Largest roll, rad.
    pub peak_roll_rad: f64,
    /// Largest pitch, rad.
    pub peak_pitch_rad: f64,
}

impl TableFlight {
    /// How much its glide ratio differs from another's, as a share of that; absent where either has
    /// none, or they ended differently.
    pub fn off(&self, reference: &Self) -> Option<f64> {
        let (own, other) = (self.glide_ratio?, reference.glide_ratio?);
        (self.end == reference.end).then(|| (own / other - 1.0).abs())
    }
}

/// Flies a design's own gait: with joints that follow it exactly or, where rows of its table will be
/// held, with its servos and no frames.
///
/// # Errors
///
/// [`FlightError`] where it can't be flown.
pub fn fly_gait(
    design: &Design,
    between: Interpolation,
    settings: &Settings,
) -> Result<TableFlight, FlightError> {
    fly_one(design, &design.glider, between, settings)
}

/// Flies a design with a table in its gait's place, read from phase 0 on, its start kept: rows that
/// are held with its servos, others with joints that follow them exactly.
///
/// # Errors
///
/// [`FlightError`] where it can't be flown.
pub fn fly_table(
    design: &Design,
    table: GaitTable,
    settings: &Settings,
) -> Result<TableFlight, FlightError> {
    let between = table.interpolation();
    let start = design.glider.gait.start;
    let gait = Gait { pattern: Pattern::Table(table), phase_rad: 0.0, start };
    fly_one(design, &Glider { gait, ..design.glider.clone() }, between, settings)
}

fn fly_one(
    design: &Design,
    glider: &Glider,
    between: Interpolation,
    settings: &Settings,
) -> Result<TableFlight, FlightError> {
    let mut flight = if between == Interpolation::Hold {
        // Rows are the frames.
        let drives = undulift_flight::Drives { update_hz: None, ..design.drives(true, vec![]) };
        fly_driven(glider, &drives, settings)?
    } else {
        fly(glider, settings)?
    };
    let summary = summary(glider, &mut flight);
    Ok(TableFlight {
        end: summary.end,
        glide_ratio: summary.glide_ratio,
        distance_m: summary.distance_m,
        peak_roll_rad: summary.peak_roll_rad,
        peak_pitch_rad: summary.peak_pitch_rad,
    })
}
