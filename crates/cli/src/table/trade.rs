//! What coarser tables cost.

use std::fmt::Write;

use serde_json::{Value, json};
use undulift_search::{Coarsest, Trial};

use super::job::Job;
use super::people::flight_object;
use super::percent;

/// A line for each number of rows: its coarsest table within the tolerance, or else its finest.
pub fn answer(hunted: &Coarsest, tolerance: f64, job: &Job<'_>) -> String {
    let mut text = format!(
        "{}  {} tables flown; of each number of rows the coarsest within {}\n",
        job.design.name,
        hunted.trials.iter().filter(|trial| trial.flight.is_some()).count(),
        percent(tolerance)
    );
    // Writing to a string can't fail.
    let _ = writeln!(
        text,
        "       rows   rows/s   bits   one count   glide   off %   dist. m   roll °   pitch °"
    );
    let period_s = job.commands.cycle_s().unwrap_or(0.0);
    for trial in shown(hunted, tolerance) {
        let is_best = hunted.best.as_ref() == Some(trial);
        let mark = match (is_best, trial.is_within(tolerance)) {
            (true, _) => "best",
            (_, true) => "",
            _ => "off",
        };
        let rate_hz = trial.rows as f64 / period_s;
        let resolution = format!("{} {}", tidy(trial.scale.resolution), trial.scale.unit.word());
        let _ = write!(text, "  {mark:<4} {:>4}   {rate_hz:>6.2}", trial.rows);
        let _ = match &trial.flight {
            Some(flight) => writeln!(
                text,
                "   {:>4}   {resolution:>9}   {:>5}   {:>5}   {:>7.2}   {:>6.1}   {:>7.1}",
                trial.bits,
                or_none(flight.glide_ratio, 3),
                or_none(trial.off.map(|off| 100.0 * off), 2),
                flight.distance_m,
                flight.peak_roll_rad.to_degrees(),
                flight.peak_pitch_rad.to_degrees()
            ),
            None => writeln!(text, "      -   {resolution:>9}   joints or board can't do it"),
        };
    }
    text.push_str(
        "  best: the fewest rows × bits of those within it together with every finer table tried\n",
    );
    text
}

fn or_none(value: Option<f64>, digits: usize) -> String {
    value.map_or("-".into(), |value| format!("{value:.digits$}"))
}

fn tidy(value: f64) -> f64 {
    (value * 1e9).round() / 1e9
}

fn shown(hunted: &Coarsest, tolerance: f64) -> Vec<&Trial> {
    let mut shown: Vec<&Trial> = Vec::new();
    let trials: Vec<&Trial> = hunted.trials.iter().collect();
    for of_rows in trials.chunk_by(|a, b| a.rows == b.rows) {
        let within = |trial: &&&Trial| trial.is_within(tolerance);
        let best = of_rows.iter().find(|trial| hunted.best.as_ref() == Some(**trial));
        let coarsest = of_rows.iter().rfind(within);
        shown.extend(best.or(coarsest).or(of_rows.first()));
    }
    shown
}

/// All tables as CSV.
pub fn csv(hunted: &Coarsest, tolerance: f64) -> anyhow::Result<String> {
    let mut table = csv::Writer::from_writer(Vec::new());
    table.write_record([
        "rows",
        "unit",
        "resolution",
        "bits",
        "glide_ratio",
        "off_percent",
        "distance_m",
        "peak_roll_deg",
        "peak_pitch_deg",
        "within",
    ])?;
    for trial in &hunted.trials {
        let of_flight =
            |value: Option<f64>| value.map(|value| value.to_string()).unwrap_or_default();
        let flight = trial.flight.as_ref();
        table.write_record([
            trial.rows.to_string(),
            trial.scale.unit.word().into(),
            tidy(trial.scale.resolution).to_string(),
            flight.map(|_| trial.bits.to_string()).unwrap_or_default(),
            of_flight(flight.and_then(|flight| flight.glide_ratio)),
            of_flight(trial.off.map(|off| 100.0 * off)),
            of_flight(flight.map(|flight| flight.distance_m)),
            of_flight(flight.map(|flight| flight.peak_roll_rad.to_degrees())),
            of_flight(flight.map(|flight| flight.peak_pitch_rad.to_degrees())),
            trial.is_within(tolerance).to_string(),
        ])?;
    }
    Ok(String::from_utf8(table.into_inner()?)?)
}

pub fn objects(hunted: &Coarsest, tolerance: f64) -> Value {
    let object = |trial: &Trial| {
        json!({
            "rows": trial.rows,
            "unit": trial.scale.unit.word(),
            "resolution": tidy(trial.scale.resolution),
            "bits": trial.bits,
            "flown": trial.flight.as_ref().map(flight_object),
            "off": trial.off,
            "within": trial.is_within(tolerance),
        })
    };
    hunted.trials.iter().map(object).collect()
}
