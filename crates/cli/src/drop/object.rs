//! A plan as JSON.

use serde_json::{Value, json};
use undulift_droptest::{Area, Bands, Ellipse, Rung, held_by_outermost, mean_load_factor};
use undulift_flight::Spread;

use super::how_many::HowMany;
use super::{Told, seen};
use crate::json;

pub fn object(told: &Told<'_>) -> Value {
    let mut object = json::heading(told.design);
    let plan = &told.plan;
    let mut put = |key: &str, value: Value| object.insert(key.into(), value);
    put("input_sha256", json!(told.design.input_sha256_with(&told.hall.text)));
    put("design_sha256", json!(told.design.input_sha256));
    put("hall_sha256", json!(told.hall.sha256()));
    put("seed", json!(told.args.seed));
    put("complete", json!(told.complete));
    put("flights", json!(plan.drops));
    put("height_m", json!(told.hall.release.heights_m.last()));
    put("normal", normal(told));
    put("faults", faults(told));
    put("keep_out", area(&plan.keep_out));
    let people_m = Some(plan.least.people_m).filter(|people_m| people_m.is_finite());
    put(
        "clearances",
        json!({
            "walls_m": plan.least.walls_m,
            "people_m": people_m,
            "ceiling_m": plan.least.ceiling_m,
            "at_rig": area(&plan.least.at_rig),
            "behind_release_m": plan.least.behind_m,
        }),
    );
    let sink_m_s = plan.sound.bands.sink_m_s.p95;
    let weights = mean_load_factor(sink_m_s.max(0.0), told.hall.catch.stopping_m);
    put("mean_stop_weights", json!(weights));
    put("how_many", told.how_many.as_ref().map_or(Value::Null, HowMany::object));
    put("ladder", told.rungs.iter().map(rung).collect());
    put(
        "camera",
        json!({
            "frames_needed_per_s": told.measuring.frames_needed_per_s,
            "markers_needed": told.measuring.markers_needed,
            "fast_enough": told.measuring.is_fast_enough(),
            "markers_enough": told.measuring.has_markers(),
        }),
    );
    if let Some((reading, _)) = &told.reading {
        put("seen", seen::object(reading));
    }
    put("fits", json!(told.misfits.is_empty() && told.complete));
    let early = (!told.complete).then(|| "ended early: not all drops were flown".to_owned());
    put("reasons", told.misfits.iter().map(ToString::to_string).chain(early).collect());
    put("warnings", json!(told.warnings()));
    Value::Object(object)
}

fn spread(spread: Spread, times: f64) -> Value {
    let Spread { p05, p50, p95 } = spread;
    json!({ "p05": times * p05, "p50": times * p50, "p95": times * p95 })
}

/// Degrees in a radian.
const DEG: f64 = 180.0 / std::f64::consts::PI;

/// Percentiles by the key of what is told.
pub fn bands(bands: &Bands) -> serde_json::Map<String, Value> {
    let rows = [
        ("distance_m", bands.distance_m, 1.0),
        ("side_drift_m", bands.side_m, 1.0),
        ("time_s", bands.time_s, 1.0),
        ("speed_m_s", bands.speed_m_s, 1.0),
        ("sink_m_s", bands.sink_m_s, 1.0),
        ("energy_j", bands.energy_j, 1.0),
        ("peak_tilt_deg", bands.peak_tilt_rad, DEG),
        ("end_tilt_deg", bands.end_tilt_rad, DEG),
    ];
    rows.into_iter().map(|(key, of, times)| (key.to_owned(), spread(of, times))).collect()
}

fn normal(told: &Told<'_>) -> Value {
    let sound = &told.plan.sound;
    let mut normal = bands(&sound.bands);
    normal.insert("flights".into(), json!(sound.flown));
    normal.insert("refused".into(), json!(sound.refused));
    normal.insert("turned_over".into(), json!(sound.turned_over));
    normal.insert("missed_catch".into(), json!(sound.missed_catch));
    normal.insert("region95".into(), ellipse(&sound.region));
    Value::Object(normal)
}

fn ellipse(region: &Ellipse) -> Value {
    json!({
        "centre_m": region.centre_m,
        "semi_axes_m": region.semi_axes_m,
        "angle_deg": region.angle_rad.to_degrees(),
    })
}

fn faults(told: &Told<'_>) -> Value {
    let plan = &told.plan;
    let kinds = plan.faults.iter().map(|row| {
        json!({
            "kind": row.kind.key(),
            "flights": row.flown,
            "refused": row.refused,
            "furthest_m": (row.flown > 0).then_some(row.furthest_m),
        })
    });
    let furthest = plan.furthest.as_ref();
    json!({
        "flights": furthest.map_or(0, |furthest| furthest.of),
        "furthest_m": furthest.map(|furthest| furthest.distance_m),
        "furthest_at_m": furthest.map(|furthest| furthest.place_m),
        "furthest_kind": furthest.map(|furthest| furthest.kind.key()),
        "share_within_furthest": furthest.map(|furthest| held_by_outermost(furthest.of, 0.95)),
        "kinds": kinds.collect::<Value>(),
    })
}

fn area(area: &Area) -> Value {
    json!({ "along_m": area.along_m, "across_m": area.across_m })
}

fn rung(rung: &Rung) -> Value {
    let mut object = rung.bands.as_ref().map_or_else(serde_json::Map::new, bands);
    object.insert("height_m".into(), json!(rung.height_m));
    object.insert("flights".into(), json!(rung.drops));
    object.insert("region95".into(), json!(rung.region.as_ref().map(ellipse)));
    object.insert("to_film".into(), area(&rung.to_film));
    object.insert("film_height_m".into(), json!(rung.film_height_m));
    object.insert("mean_stop_weights".into(), json!(rung.stop_weights));
    Value::Object(object)
}
