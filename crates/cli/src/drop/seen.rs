//! What was seen at the rungs so far, in words and as JSON.

use serde_json::{Value, json};
use undulift_droptest::{Narrowed, Reading};
use undulift_flight::Spread;

use super::object;
use crate::json;
use crate::people::line;

/// Drops from a height that say more than chance.
const FEW: usize = 3;

/// For people.
pub fn answer(reading: &Reading, text: &mut String) {
    let goes = format!(
        "{} drops; chance that a robot of the plan goes with it as badly or worse {:.3} (below 0.01: stop)",
        reading.seen, reading.surprise
    );
    line(text, "Seen so far", &goes);
    if let (Some(lift), Some(drag)) = (&reading.lift, &reading.drag) {
        let factor = |Spread { p05, p50, p95 }: &Spread| format!("{p50:.2} ({p05:.2} to {p95:.2})");
        let like = format!(
            "lift × {} and drag × {} of what is computed; as much is known as from {:.0} flown drops",
            factor(lift),
            factor(drag),
            reading.effective
        );
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
    let verdict = match (reading.stops.is_empty(), reading.next_m) {
        (true, Some(next_m)) => format!("go on, to {next_m:.1} m, with drops as they are to come"),
        (true, None) => "go on from the highest release, with drops as they are to come".into(),
        (false, _) => "STOP; see below".into(),
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
    let highest = reading.rungs.iter().rfind(|rung| rung.seen > 0);
    if let Some(rung) = highest.filter(|rung| rung.seen < FEW) {
        warnings.push(format!(
            "{} of {FEW} drops or more was seen from {:.1} m: that says little; drop it again before going higher",
            rung.seen, rung.height_m
        ));
    }
    if reading.power < 1.0 {
        warnings.push(
            "what was seen says more than the flown drops can tell, so bands are wider than they could be; \
             more --flights make them narrower"
                .into(),
        );
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
        "next_height_m": reading.next_m,
        "chance": reading.surprise,
        "lift_scale": reading.lift.as_ref().map(json::percentiles),
        "drag_scale": reading.drag.as_ref().map(json::percentiles),
        "effective_flights": reading.effective,
        "warnings": warnings(reading),
        "ladder": reading.rungs.iter().map(rung).collect::<Vec<_>>(),
    })
}
