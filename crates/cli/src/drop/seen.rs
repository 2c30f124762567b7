//! What was seen at the rungs so far, in words and as JSON.

use serde_json::{Value, json};
use undulift_droptest::{Narrowed, Reading};
use undulift_flight::Spread;

use super::object;
use crate::json;
use crate::people::line;

/// For people.
pub fn answer(reading: &Reading, text: &mut String) {
    let goes = format!(
        "{} drops; of ladders by robots of the plan, {:.1} in 100 go as badly with it or worse; below 1 means stop",
        reading.seen,
        100.0 * reading.surprise
    );
    line(text, "Seen so far", &goes);
    if !reading.stops.is_empty() {
        line(text, "Verdict", "STOP; see below. What is to come can't be told by it");
        return;
    }
    if let (Some(lift), Some(drag)) = (&reading.lift, &reading.drag) {
        let factor = |Spread { p05, p50, p95 }: &Spread| format!("{p50:.2} ({p05:.2} to {p95:.2})");
        let like =
            format!("lift × {} and drag × {} of what is computed", factor(lift), factor(drag));
        line(text, "This robot", &like);
    }
    line(text, "Drops to come", "by what was seen, 5 % to 95 %; in brackets by the plan:");
    let header = format!(
        "{:>6}{:>6}{:>30}{:>16}{:>12}{:>8}{:>8}",
        "height", "seen", "distance m", "time s", "tilt", "over", "missed"
    );
    line(text, "", &header);
    for rung in &reading.rungs {
        line(text, "", &row(rung));
    }
    let verdict = match reading.next {
        Some(next) => next.to_string(),
        None => "go on from the highest release, with drops as they are to come".into(),
    };
    line(text, "Verdict", &verdict);
}

fn row(rung: &Narrowed) -> String {
    let Narrowed { height_m, seen, before, now, .. } = rung;
    let (Some(before), Some(now)) = (before, now) else {
        return format!("{height_m:>6.1}{seen:>6}  no drop could be flown");
    };
    let pair = |spread: &Spread, digits: usize| {
        format!("{:.digits$} to {:.digits$}", spread.p05, spread.p95)
    };
    let distance = format!("{} ({})", pair(&now.distance_m, 1), pair(&before.distance_m, 1));
    format!(
        "{height_m:>6.1}{seen:>6}{distance:>30}{:>16}{:>12}{:>8}{:>8}",
        pair(&now.time_s, 2),
        format!("to {:.0}°", now.peak_tilt_rad.p95.to_degrees()),
        format!("{:.1} %", 100.0 * rung.turned_over),
        format!("{:.1} %", 100.0 * rung.missed_catch),
    )
}

/// What to doubt.
pub fn warnings(reading: &Reading) -> Vec<String> {
    let mut warnings = Vec::new();
    if !reading.skipped_m.is_empty() {
        let skipped_m: Vec<String> =
            reading.skipped_m.iter().map(|height_m| format!("{height_m:.1} m")).collect();
        warnings.push(format!(
            "nothing was seen from {}, below the highest; a ladder is climbed one height at a time",
            skipped_m.join(", ")
        ));
    }
    warnings
}

/// For scripts.
pub fn object(reading: &Reading) -> Value {
    let rung = |rung: &Narrowed| {
        let mut object = rung.now.as_ref().map_or_else(serde_json::Map::new, object::bands);
        let before = rung.before.as_ref().map(object::bands);
        object.insert("height_m".into(), json!(rung.height_m));
        object.insert("seen".into(), json!(rung.seen));
        object.insert("effective_flights".into(), json!(rung.effective));
        object.insert("turned_over_share".into(), json!(rung.turned_over));
        object.insert("missed_catch_share".into(), json!(rung.missed_catch));
        object.insert("touching_share".into(), json!(rung.touching));
        object.insert("before".into(), json!(before));
        Value::Object(object)
    };
    json!({
        "verdict": if reading.stops.is_empty() { "go_on" } else { "stop" },
        "reasons": reading.stops.iter().map(ToString::to_string).collect::<Vec<_>>(),
        "drops": reading.seen,
        "next_height_m": reading.next.map(|next| next.height_m),
        "next_drops": reading.next.map(|next| next.drops),
        "chance": reading.surprise,
        "lift_scale": reading.lift.as_ref().map(json::percentiles),
        "drag_scale": reading.drag.as_ref().map(json::percentiles),
        "warnings": warnings(reading),
        "ladder": reading.rungs.iter().map(rung).collect::<Vec<_>>(),
    })
}
