//! A flight in words for people.

use std::fmt::Write;

use undulift_design::Design;
use undulift_flight::{End, Spread};

use crate::args::Fly;
use crate::doubts::thousands;
use crate::flown::Flown;

/// A last cycle flatter than this, flown forward, is called a glide.
const GLIDE: f64 = 0.5;

/// The whole answer, some ten lines.
pub fn answer(flown: &Flown, args: &Fly) -> String {
    let mut text = heading(flown);
    let mut line = |label: &str, value: String| self::line(&mut text, label, &value);
    line(ending_label(flown.summary.end), ending(flown));
    line("Glide ratio", glide_ratio(flown));
    line("Along the body", along(flown));
    line("At the end", at_end(flown));
    line("Largest tilt", tilt(flown));
    line("On the strips", strips(flown));
    line("Mass", mass(&flown.design));
    line("Wing loading", wing_loading(flown));
    if let Some(driven) = &flown.driven {
        driven.answer(&mut text);
    }
    if let Some(launches) = &flown.launches {
        text.push_str(&launches.answer(flown.design.limits.tilt_rad.to_degrees()));
    }
    for path in [&args.trace, &args.csv].into_iter().flatten() {
        self::line(&mut text, "Wrote", &path.display().to_string());
    }
    text
}

/// A labelled line of an answer.
pub fn line(text: &mut String, label: &str, value: &str) {
    // Writing to a string can't fail.
    let _ = writeln!(text, "  {label:<18}{value}");
}

/// Names over columns of [`percentiles`].
pub fn percentile_names() -> String {
    format!("{:>9}{:>9}{:>9}", "5 %", "median", "95 %")
}

/// What many launches come to.
pub fn percentiles(spread: &Spread, digits: usize, unit: &str) -> String {
    let Spread { p05, p50, p95 } = spread;
    format!("{p05:>9.digits$}{p50:>9.digits$}{p95:>9.digits$}{unit}")
}

fn heading(flown: &Flown) -> String {
    let (glider, summary) = (&flown.design.glider, &flown.summary);
    format!(
        "{}  {} segments, {:.2} m, {:.3} kg, let go at {:.1} m with {:.1} m/s\n",
        flown.design.name,
        glider.chain.n_segments(),
        glider.chain.length_m(),
        summary.mass_kg,
        glider.launch.height_m,
        glider.launch.speed_m_s
    )
}

fn ending_label(end: End) -> &'static str {
    match end {
        End::Landed => "Landed",
        End::Inverted => "Turned over",
        End::TimeUp => "Time is up",
    }
}

fn ending(flown: &Flown) -> String {
    let summary = &flown.summary;
    let where_to = format!(
        "{:.2} s after release, {:.2} m away, {}",
        summary.time_s,
        summary.distance_m,
        sideways(summary.side_drift_m)
    );
    match (summary.end, flown.flight.inverted_at_s) {
        (End::Landed, Some(at_s)) => format!("{where_to}; turned over at {at_s:.2} s"),
        (End::Landed, None) if is_glide(flown) => format!("upright in a glide, {where_to}"),
        (End::Landed, None) => format!("upright, {}: {where_to}", why_no_glide(flown)),
        (End::Inverted | End::TimeUp, _) => {
            let way = if summary.drop_m < 0.0 { "risen" } else { "come down" };
            format!("{where_to}, having {way} {:.2} m", summary.drop_m.abs())
        }
    }
}

fn is_glide(flown: &Flown) -> bool {
    flown.summary.forward_airspeed_m_s > 0.0
        && flown.summary.last_cycle_glide_ratio.is_some_and(|ratio| ratio >= GLIDE)
}

fn why_no_glide(flown: &Flown) -> &'static str {
    let summary = &flown.summary;
    match summary.last_cycle_glide_ratio {
        None => "with no cycle to judge a glide by",
        Some(_) if summary.forward_airspeed_m_s <= 0.0 => "but tail first, so not in a glide",
        Some(_) => "but too steep for a glide",
    }
}

fn sideways(drift_m: f64) -> String {
    let side = if drift_m < 0.0 { "right" } else { "left" };
    format!("{:.2} m to the {side}", drift_m.abs())
}

fn glide_ratio(flown: &Flown) -> String {
    let summary = &flown.summary;
    let whole = match summary.glide_ratio {
        Some(ratio) => format!("{ratio:.2} over {:.2} m of drop", summary.drop_m),
        None => "none, as it didn't come down".into(),
    };
    match summary.last_cycle_glide_ratio {
        _ if summary.end == End::Inverted => format!("{whole}, until it turned over"),
        Some(ratio) => format!("{whole}, {ratio:.2} over the last cycle"),
        None if flown.design.glider.gait.frequency_hz() == 0.0 => {
            format!("{whole}; the gait stands still, so there is no last cycle")
        }
        None if flown.flight.last_cycle_start_s().is_none() => {
            format!("{whole}; the flight was over before a cycle was")
        }
        None => format!("{whole}; in the last cycle it didn't come down"),
    }
}

fn along(flown: &Flown) -> String {
    let forward_m_s = flown.summary.forward_airspeed_m_s;
    let way = if forward_m_s < 0.0 { "tail first" } else { "head first" };
    let over = match flown.flight.last_cycle_start_s() {
        Some(_) => "the last cycle",
        None => "the flight",
    };
    let lying = match flown.flight.inverted_at_s {
        Some(_) if flown.summary.end == End::Landed => ", in part on its back",
        _ => "",
    };
    format!("{:.1} m/s of air, {way}, over {over}{lying}", forward_m_s.abs())
}

fn at_end(flown: &Flown) -> String {
    let summary = &flown.summary;
    format!(
        "{:.1} m/s, {:.1}° below level, sinking {:.1} m/s, {:.1} J",
        summary.speed_m_s,
        summary.glide_angle_rad.to_degrees(),
        summary.sink_m_s,
        summary.landing_energy_j
    )
}

fn tilt(flown: &Flown) -> String {
    format!(
        "{:.1}° of roll, {:.1}° of pitch (limit {:.0}°)",
        flown.summary.peak_roll_rad.to_degrees(),
        flown.summary.peak_pitch_rad.to_degrees(),
        flown.design.limits.tilt_rad.to_degrees()
    )
}

fn strips(flown: &Flown) -> String {
    let (Some(alpha_rad), Some(reynolds)) = (flown.bands.alpha_rad, flown.bands.reynolds) else {
        return "no air met them".into();
    };
    let [low, high] = alpha_rad.map(f64::to_degrees);
    let [slow, fast] = reynolds.map(thousands);
    format!(
        "incidence {low:.0}° to {high:.0}°, Reynolds number {slow} to {fast}, for nine tenths of the load"
    )
}

/// Where the mass is.
pub fn mass(design: &Design) -> String {
    let split = design.glider.chain.mass_split();
    format!(
        "{:.3} kg: structure {:.3}, servos {:.3}, battery {:.3}, payload {:.3}",
        split.total_kg(),
        split.structure_kg,
        split.servos_kg,
        split.battery_kg,
        split.payload_kg
    )
}

fn wing_loading(flown: &Flown) -> String {
    let summary = &flown.summary;
    let unsteady = match summary.reduced_frequency {
        Some(reduced) => format!(", reduced frequency {reduced:.3}"),
        None => String::new(),
    };
    format!("{:.1} Pa on {:.4} m²{unsteady}", summary.wing_loading_pa, summary.planform_m2)
}
