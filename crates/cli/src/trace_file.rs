//! A flight as a table of numbers.

use std::path::Path;

use undulift_chain::Axis;
use undulift_flight::{TraceRow, trace};

use crate::flown::Flown;
use crate::whole_file;

/// Columns of every trace, before those of the joints.
const COLUMNS: [&str; 13] = [
    "time_s",
    "x_m",
    "y_m",
    "z_m",
    "vx_m_s",
    "vy_m_s",
    "vz_m_s",
    "roll_deg",
    "pitch_deg",
    "yaw_deg",
    "hx_kg_m2_s",
    "hy_kg_m2_s",
    "hz_kg_m2_s",
];

/// Writes a flight, whole or not at all.
pub fn write(path: &Path, flown: &mut Flown, every_s: f64) -> anyhow::Result<()> {
    whole_file::write(path, |file| {
        let mut table = csv::Writer::from_writer(file);
        let axes = undulift_chain::joint_axes(flown.design.glider.chain.joints());
        let joints = axes.iter().map(|of| {
            let word = match of.axis {
                Axis::Yaw => "yaw",
                Axis::Pitch => "pitch",
            };
            format!("{word}_{}_deg", of.joint_idx + 1)
        });
        table.write_record(COLUMNS.map(str::to_owned).into_iter().chain(joints))?;
        for row in trace(&mut flown.flight, every_s) {
            table.write_record(numbers(&row).map(number))?;
        }
        table.flush()?;
        Ok(())
    })
}

/// Shortest digits that read back as the same number; small ones with an exponent.
pub fn number(value: f64) -> String {
    if value != 0.0 && value.abs() < 1e-4 { format!("{value:e}") } else { format!("{value}") }
}

fn numbers(row: &TraceRow) -> impl Iterator<Item = f64> + '_ {
    let state = &row.state;
    let attitude = [row.attitude.roll_rad(), row.attitude.pitch_rad(), row.attitude.yaw_rad()];
    [row.time_s]
        .into_iter()
        .chain(state.place_m.iter().copied().collect::<Vec<_>>())
        .chain(state.velocity_m_s.iter().copied().collect::<Vec<_>>())
        .chain(attitude.map(f64::to_degrees))
        .chain(state.momentum_kg_m2_s.iter().copied().collect::<Vec<_>>())
        .chain(row.angles_rad.iter().map(|angle_rad| angle_rad.to_degrees()))
}
