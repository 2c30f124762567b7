//! A table in words, and as JSON.

use std::path::PathBuf;

use serde_json::{Value, json};
use undulift_gait::firmware::{Channel, FirmwareTable, Scale, Unit};
use undulift_search::{Coarsest, TableFlight};

use super::flights::Flights;
use super::job::Job;
use super::{percent, trade};
use crate::json;
use crate::people::line;

pub fn answer(
    job: &Job<'_>,
    table: &FirmwareTable,
    flights: &Flights,
    written: &[PathBuf],
    hunted: Option<&Coarsest>,
) -> String {
    let mut text = String::new();
    if let (Some(hunted), Some(tolerance)) = (hunted, job.args.tolerance) {
        text.push_str(&trade::answer(hunted, tolerance, job));
        text.push('\n');
    }
    text.push_str(&heading(job, table));
    line(&mut text, "Blocks", &blocks(table));
    line(&mut text, "Room", &room(job, table));
    line(&mut text, "Columns", &columns(&table.preamble.channels, table.preamble.scale.unit));
    line(&mut text, "Off the gait", &off_the_gait(job, table));
    if let Some([own, of_table]) = &flights.whole {
        line(&mut text, "As computed", &flown(own, None));
        line(&mut text, "By the table", &flown(of_table, Some(own)));
        for (words, flight) in &flights.faulty {
            line(&mut text, "With a fault", &format!("{words}: {}", flown(flight, Some(own))));
        }
    }
    let files: Vec<String> = written.iter().map(|path| path.display().to_string()).collect();
    line(&mut text, "Wrote", &files.join(", "));
    text
}

fn heading(job: &Job<'_>, table: &FirmwareTable) -> String {
    let Scale { unit, resolution } = table.preamble.scale;
    let (rows, step_s) = (table.cycle.len(), table.preamble.step_s);
    format!(
        "{}  a loop of {rows} rows in {:.4} s, {:.2} rows a second, one count {resolution} {}\n",
        job.design.name,
        step_s * rows as f64,
        1.0 / step_s,
        match unit {
            Unit::Us => "µs",
            _ => unit.word(),
        }
    )
}

fn blocks(table: &FirmwareTable) -> String {
    let step_s = table.preamble.step_s;
    let seconds = |rows: usize| rows as f64 * step_s;
    let delay = match table.preamble.delay_s {
        0.0 => String::new(),
        delay_s => format!("{delay_s:.3} s after the trigger, "),
    };
    format!(
        "{delay}start {} rows ({:.2} s), loop {}, stop {} ({:.2} s)",
        table.start.len(),
        seconds(table.start.len()),
        table.cycle.len(),
        table.stop.len(),
        seconds(table.stop.len() - 1)
    )
}

fn room(job: &Job<'_>, table: &FirmwareTable) -> String {
    let of = match job.args.flash_kb {
        Some(kb) => format!(" of {}", (kb * 1024.0) as usize),
        None => String::new(),
    };
    match table.c_type() {
        Ok(c_type) => format!(
            "{} bytes{of} as {} ({} bits are used), CRC-32 0x{:08X}",
            table.flash_bytes(c_type),
            c_type.name(),
            table.bits(),
            table.crc32(c_type)
        ),
        Err(_) => format!("{} bits a number, too many for a C header", table.bits()),
    }
}

fn columns(channels: &[Channel], unit: Unit) -> String {
    let turned: Vec<String> =
        channels.iter().filter(|channel| channel.reversed).map(Channel::name).collect();
    let turned = match turned.is_empty() {
        true => String::new(),
        false => format!("; reversed: {}", turned.join(", ")),
    };
    let trimmed = channels.iter().filter(|channel| channel.offset_us != 0.0).count();
    let trimmed = match (unit, trimmed) {
        (Unit::Us, 1..) => format!("; {trimmed} with an offset"),
        _ => String::new(),
    };
    let first = channels.first().map(Channel::name).unwrap_or_default();
    let last = channels.last().map(Channel::name).unwrap_or_default();
    format!("{}, {first} to {last}{turned}{trimmed}", channels.len())
}

fn off_the_gait(job: &Job<'_>, table: &FirmwareTable) -> String {
    let worst = table.deviation(&job.commands, &job.axes, job.between());
    let channel = &table.preamble.channels[worst.channel];
    let Scale { unit, resolution } = table.preamble.scale;
    let half_rad = 0.5 * resolution * channel.rad_per(unit);
    format!(
        "at most {:.2}°, at {}; rounding alone {:.3}°",
        worst.angle_rad.to_degrees(),
        channel.name(),
        half_rad.to_degrees()
    )
}

/// - `reference`: to tell how far it is off
fn flown(flight: &TableFlight, reference: Option<&TableFlight>) -> String {
    let glide = match flight.glide_ratio {
        Some(ratio) => format!("glide ratio {ratio:.3}"),
        None => "no glide ratio".into(),
    };
    let off = match reference {
        Some(reference) => match flight.off(reference) {
            Some(off) => format!(" ({} off)", percent((off * 1e4).round() / 1e4)),
            None => " (it ended otherwise)".into(),
        },
        None => String::new(),
    };
    format!(
        "{glide}{off}, {:.2} m, {:.1}° of roll, {:.1}° of pitch",
        flight.distance_m,
        flight.peak_roll_rad.to_degrees(),
        flight.peak_pitch_rad.to_degrees()
    )
}

pub fn object(
    job: &Job<'_>,
    table: &FirmwareTable,
    flights: &Flights,
    written: &[PathBuf],
    hunted: Option<&Coarsest>,
) -> Value {
    let mut object = json::heading(&job.design);
    let Scale { unit, resolution } = table.preamble.scale;
    let worst = table.deviation(&job.commands, &job.axes, job.between());
    let c_type = table.c_type().ok();
    let of_table = json!({
        "rows": table.cycle.len(),
        "start_rows": table.start.len(),
        "stop_rows": table.stop.len(),
        "step_s": table.preamble.step_s,
        "rate_hz": 1.0 / table.preamble.step_s,
        "delay_s": table.preamble.delay_s,
        "unit": unit.word(),
        "resolution": resolution,
        "bits": table.bits(),
        "bytes": c_type.map(|c_type| table.flash_bytes(c_type)),
        "crc32": c_type.map(|c_type| format!("{:08X}", table.crc32(c_type))),
        "largest_deviation_deg": worst.angle_rad.to_degrees(),
        "files": written.iter().map(|path| path.display().to_string()).collect::<Vec<_>>(),
    });
    object.insert("table".into(), of_table);
    let [own, of_table] = match &flights.whole {
        Some(flights) => flights.each_ref().map(flight_object),
        None => [Value::Null, Value::Null],
    };
    object.insert("computed".into(), own);
    object.insert("flown".into(), of_table);
    let fault = |(words, flight): &(String, TableFlight)| json!({ "fault": words, "flown": flight_object(flight) });
    object.insert("faults".into(), flights.faulty.iter().map(fault).collect());
    if let (Some(hunted), Some(tolerance)) = (hunted, job.args.tolerance) {
        object.insert("trade".into(), trade::objects(hunted, tolerance));
    }
    Value::Object(object)
}

pub fn flight_object(flight: &TableFlight) -> Value {
    json!({
        "glide_ratio": flight.glide_ratio,
        "distance_m": flight.distance_m,
        "peak_roll_deg": flight.peak_roll_rad.to_degrees(),
        "peak_pitch_deg": flight.peak_pitch_rad.to_degrees(),
    })
}
