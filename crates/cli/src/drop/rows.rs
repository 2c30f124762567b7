//! Every drop as a row.

use std::path::Path;

use undulift_droptest::{Drop, Outcome};

use crate::trace_file::number;
use crate::whole_file;

const COLUMNS: [&str; 19] = [
    "drop",
    "fault",
    "end",
    "x_m",
    "y_m",
    "distance_m",
    "time_s",
    "speed_m_s",
    "sink_m_s",
    "energy_j",
    "roll_deg",
    "pitch_deg",
    "peak_roll_deg",
    "peak_pitch_deg",
    "turned_over",
    "to_walls_m",
    "to_people_m",
    "to_ceiling_m",
    "behind_release_m",
];

/// Writes them, whole or not at all.
///
/// - `complete`: whether these are all that were asked for; else a last row says so
pub fn write(path: &Path, drops: &[Drop], complete: bool) -> anyhow::Result<()> {
    whole_file::write(path, |file| {
        let mut table = csv::Writer::from_writer(file);
        table.write_record(COLUMNS)?;
        for drop in drops {
            let fault = drop.fault.map_or("", |fault| fault.key()).to_owned();
            let head = [(drop.number + 1).to_string(), fault];
            let cells = match &drop.result {
                Ok(outcome) => cells(outcome).to_vec(),
                Err(_) => {
                    let mut cells = vec![String::new(); COLUMNS.len() - head.len()];
                    cells[0] = "refused".into();
                    cells
                }
            };
            table.write_record(head.into_iter().chain(cells))?;
        }
        if !complete {
            let mut last = vec![String::new(); COLUMNS.len()];
            last[2] = "ended_by_ctrl_c".into();
            table.write_record(last)?;
        }
        table.flush()?;
        Ok(())
    })
}

fn cells(outcome: &Outcome) -> [String; 17] {
    let (summary, clearances) = (&outcome.summary, &outcome.clearances);
    let ended = if outcome.caught { "landed" } else { "missed_catch" };
    let end = if summary.end == undulift_flight::End::Landed { ended } else { "time_up" };
    let person_m = clearances.people_m;
    [
        end.to_owned(),
        number(outcome.place_m[0]),
        number(outcome.place_m[1]),
        number(summary.distance_m),
        number(summary.time_s),
        number(summary.speed_m_s),
        number(summary.sink_m_s),
        number(summary.landing_energy_j),
        number(outcome.tilt_rad[0].to_degrees()),
        number(outcome.tilt_rad[1].to_degrees()),
        number(summary.peak_roll_rad.to_degrees()),
        number(summary.peak_pitch_rad.to_degrees()),
        summary.inverted.to_string(),
        number(clearances.walls_m),
        if person_m.is_finite() { number(person_m) } else { String::new() },
        number(clearances.ceiling_m),
        number(clearances.behind_release_m()),
    ]
}
