//! `undulift check`.

use std::fmt::Write;
use std::path::Path;

use serde_json::{Value, json};
use undulift_chain::Axis;
use undulift_design::Design;
use undulift_flight::{Doubt, Outlook, Overlap, doubts_ahead, outlook};
use undulift_gait::{Commands, Peak};

use crate::args::Check;
use crate::{Outcome, doubts as words, joints, json, people, terminal};

/// A design that was looked at.
struct Looked {
    design: Design,
    outlook: Outlook,
    cycle_s: Option<f64>,
    peaks: Vec<Peak>,
    doubts: Vec<Doubt>,
    missed: Vec<joints::Missed>,
}

pub fn run(args: &Check) -> anyhow::Result<Outcome> {
    let mut outcome = Outcome::WithinLimits;
    let mut done = Vec::new();
    for path in &args.designs {
        match look(path, args) {
            Ok(looked) => done.push(looked),
            Err(refused) => {
                refused.tell();
                outcome = Outcome::CouldNotRun;
            }
        }
    }
    if args.json {
        json::print(done.iter().map(object).collect(), args.designs.len())?;
    } else {
        for (k, looked) in done.iter().enumerate() {
            let gap = if k == 0 { "" } else { "\n" };
            terminal::answer(&format!("{gap}{}", answer(looked)))?;
            words::tell(&looked.doubts);
            tell_overlaps(&looked.outlook);
        }
    }
    for looked in &done {
        if !looked.missed.is_empty() {
            outcome = outcome.max(Outcome::LimitMissed);
        }
        joints::tell(&looked.design.name, &looked.missed);
    }
    Ok(outcome)
}

fn look(path: &Path, args: &Check) -> Result<Looked, crate::Refused> {
    let design = undulift_design::read(path, &args.sets)?;
    let in_flight = |error| crate::Refused::flight(&design.name, error);
    let outlook = outlook(&design.glider).map_err(in_flight)?;
    let commands = Commands::new(&design.glider.gait, &design.glider.chain)
        .map_err(|error| in_flight(error.into()))?;
    let [from_s, to_s] = commands.steady_cycle_s().unwrap_or([0.0, 0.0]);
    let peaks = commands.peaks(from_s, to_s);
    let doubts = doubts_ahead(&design.glider, &outlook);
    let missed =
        joints::beyond_travel(&design, &peaks).chain(joints::beyond_speed(&design, &peaks));
    let missed = missed.collect();
    Ok(Looked { cycle_s: commands.cycle_s(), outlook, peaks, doubts, missed, design })
}

fn tell_overlaps(outlook: &Outlook) {
    const MOST: usize = 5;
    for overlap in outlook.overlaps.iter().take(MOST) {
        terminal::tell_warning(&in_words(overlap));
    }
    if outlook.overlaps.len() > MOST {
        let more = outlook.overlaps.len() - MOST;
        terminal::tell_warning(&format!("{more} more pairs of segments overlap; --json lists all"));
    }
    if !outlook.overlaps.is_empty() {
        terminal::tell_hint("lower the amplitude, use more waves, or make the body narrower there");
    }
}

fn in_words(overlap: &Overlap) -> String {
    format!(
        "segments {} and {} take the same space for {:.0} % of the cycle, first at t = {:.3} s",
        overlap.ahead_idx + 1,
        overlap.behind_idx + 1,
        100.0 * overlap.share,
        overlap.first_at_s
    )
}

fn answer(looked: &Looked) -> String {
    let (design, outlook) = (&looked.design, &looked.outlook);
    let chain = &design.glider.chain;
    let mut text = format!(
        "{}  {} segments, {:.2} m, {:.3} kg\n",
        design.name,
        chain.n_segments(),
        chain.length_m(),
        chain.mass_kg()
    );
    let mut line = |label: &str, value: String| people::line(&mut text, label, &value);
    line("Mass", people::mass(design));
    line("Centre of mass", centre(looked));
    line("Wing", wing(looked));
    if let (Some(speed_m_s), Some(reduced)) = (outlook.glide_speed_m_s, outlook.reduced_frequency) {
        line(
            "Glide speed",
            format!(
                "{speed_m_s:.1} m/s at the best lift to drag (rough: flights may take half or twice)"
            ),
        );
        line("Reduced frequency", format!("{reduced:.3} at that speed (doubtful above 0.05)"));
    }
    if let Some(chords) = outlook.gap_chords {
        line("Gap", format!("{chords:.1} mean chords, half a wave apart (doubtful under 2)"));
    }
    let moved = 100.0 * outlook.added_mass_ratio;
    line("Air moved", format!("{moved:.1} % of the mass (doubtful above 5 %)"));
    line("Gait", gait(looked));
    text.push_str(&joint_table(looked));
    text
}

fn centre(looked: &Looked) -> String {
    let centre_m = looked.outlook.centre_of_mass_m;
    let behind_m = -centre_m.x;
    format!(
        "{:.3} m behind the nose when straight ({:.1} % of the length), {:.1} mm left, {:.1} mm up",
        behind_m,
        100.0 * behind_m / looked.design.glider.chain.length_m(),
        // Adding nothing turns a negative zero into zero.
        1e3 * centre_m.y + 0.0,
        1e3 * centre_m.z + 0.0
    )
}

fn wing(looked: &Looked) -> String {
    let chain = &looked.design.glider.chain;
    format!(
        "{:.4} m², mean chord {:.1} mm, wing loading {:.1} Pa",
        chain.planform_m2(),
        1e3 * chain.mean_chord_m(),
        looked.outlook.wing_loading_pa
    )
}

fn gait(looked: &Looked) -> String {
    match looked.cycle_s {
        Some(cycle_s) => format!("a cycle takes {cycle_s:.3} s; over it the joints are asked for"),
        None => "stands still; the joints are asked for".into(),
    }
}

/// A row for each joint: angle of travel, speed of no-load speed, for each of its axes.
fn joint_table(looked: &Looked) -> String {
    let n_joints = looked.design.glider.chain.joints().len();
    let mut text = String::new();
    for joint_idx in 0..n_joints {
        let of_joint = looked.peaks.iter().filter(|peak| peak.of.joint_idx == joint_idx);
        let parts: Vec<String> = of_joint.map(|peak| asked(&looked.design, peak)).collect();
        let parts = if parts.is_empty() { "fixed".into() } else { parts.join("   ") };
        // Writing to a string can't fail.
        let _ = writeln!(text, "    joint {:>3}   {}", joint_idx + 1, parts.trim_end());
    }
    text
}

fn asked(design: &Design, peak: &Peak) -> String {
    let word = match peak.of.axis {
        Axis::Yaw => "yaw  ",
        Axis::Pitch => "pitch",
    };
    let travel = joints::travel_rad(design, peak)
        .map_or("°       ".into(), |rad| format!(" of {:>3.0}°", rad.to_degrees()));
    let speed = joints::servo(design, peak).map_or(" °/s        ".into(), |(_, servo)| {
        format!(" of {:>4.0} °/s", servo.no_load_speed_rad_s.to_degrees())
    });
    let (angle, rate) = (peak.angle_rad.to_degrees(), peak.rate_rad_s.to_degrees());
    format!("{word} {angle:>5.1}{travel}, {rate:>4.0}{speed}")
}

fn object(looked: &Looked) -> Value {
    let (design, outlook) = (&looked.design, &looked.outlook);
    let chain = &design.glider.chain;
    let split = chain.mass_split();
    let mut object = json::heading(design);
    let mut put = |key: &str, value: Value| {
        object.insert(key.into(), value);
    };
    put("mass_kg", json!(chain.mass_kg()));
    put(
        "mass_split_kg",
        json!({
            "structure": split.structure_kg,
            "servos": split.servos_kg,
            "battery": split.battery_kg,
            "payload": split.payload_kg,
        }),
    );
    put("centre_of_mass_m", json!(outlook.centre_of_mass_m.as_slice()));
    put("planform_m2", json!(chain.planform_m2()));
    put("mean_chord_m", json!(chain.mean_chord_m()));
    put("wing_loading_pa", json!(outlook.wing_loading_pa));
    put("glide_speed_m_s", json!(outlook.glide_speed_m_s));
    put("reynolds", json!(outlook.reynolds));
    put("reduced_frequency", json!(outlook.reduced_frequency));
    put("gap_chords", json!(outlook.gap_chords));
    put("added_mass_ratio", json!(outlook.added_mass_ratio));
    put("cycle_s", json!(looked.cycle_s));
    put("joints", looked.peaks.iter().map(|peak| joint_object(design, peak)).collect());
    let overlaps = outlook.overlaps.iter().map(|overlap| {
        json!({
            "segments": [overlap.ahead_idx + 1, overlap.behind_idx + 1],
            "first_at_s": overlap.first_at_s,
            "share": overlap.share,
        })
    });
    put("overlaps", overlaps.collect());
    let missed = looked.missed.iter().map(joints::Missed::in_words);
    let doubts = looked.doubts.iter().map(|doubt| words::in_words(doubt).0);
    let overlaps = outlook.overlaps.iter().map(in_words);
    put("warnings", missed.chain(doubts).chain(overlaps).collect());
    Value::Object(object)
}

fn joint_object(design: &Design, peak: &Peak) -> Value {
    let servo = joints::servo(design, peak);
    json!({
        "joint": peak.of.joint_idx + 1,
        "axis": peak.of.axis.word(),
        "servo": servo.map(|(name, _)| name),
        "angle_deg": peak.angle_rad.to_degrees(),
        "angle_at_s": peak.angle_at_s,
        "travel_deg": joints::travel_rad(design, peak).map(f64::to_degrees),
        "speed_deg_s": peak.rate_rad_s.to_degrees(),
        "speed_at_s": peak.rate_at_s,
        "no_load_speed_deg_s": servo.map(|(_, servo)| servo.no_load_speed_rad_s.to_degrees()),
    })
}
