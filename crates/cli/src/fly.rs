//! `undulift fly`.

use std::path::Path;

use rayon::prelude::*;
use serde_json::{Map, Value, json};
use undulift_design::quantities::{Quantity, of_flight};
use undulift_design::{Design, DesignErrors};
use undulift_flight::{
    Bands, Doubt, End, Equations, Flight, FlightError, JointPeak, Settings, Summary, bands, doubts,
    fly, joint_peaks, summary,
};

use crate::args::Fly;
use crate::{Outcome, doubts as words, people, terminal, trace_file};

/// A design that has flown.
pub struct Flown {
    pub design: Design,
    pub flight: Flight,
    pub summary: Summary,
    pub bands: Bands,
    pub doubts: Vec<Doubt>,
    pub missed: Vec<Missed>,
}

/// A limit that a flight missed.
#[derive(Debug, Clone)]
pub enum Missed {
    NotLanded { end: End, time_s: f64 },
    Roll { peak_deg: f64, limit_deg: f64 },
    Pitch { peak_deg: f64, limit_deg: f64 },
    Travel(JointPeak),
}

/// Why a design didn't fly.
enum Failed {
    Design(DesignErrors),
    Flight { name: String, error: FlightError },
}

pub fn run(args: &Fly) -> anyhow::Result<Outcome> {
    if args.trace.is_some() && args.designs.len() > 1 {
        anyhow::bail!("--trace takes one design, not {}; run them one by one", args.designs.len());
    }
    let settings = Settings {
        tolerance: args.tolerance,
        max_time_s: args.max_time_s,
        through_inversion: args.through_inversion,
        floor_m: 0.0,
    };
    let flown: Vec<Result<Flown, Failed>> =
        args.designs.par_iter().map(|path| fly_one(path, args, &settings)).collect();
    let mut outcome = Outcome::WithinLimits;
    let mut done = Vec::new();
    for result in flown {
        match result {
            Ok(flown) => done.push(flown),
            Err(failed) => {
                failed.tell();
                outcome = Outcome::CouldNotRun;
            }
        }
    }
    if let (Some(path), [flown]) = (&args.trace, &mut done[..]) {
        trace_file::write(path, flown, args.every_ms * 1e-3)?;
    }
    if args.json {
        print_json(&done, args.designs.len() == 1)?;
    } else {
        for (k, flown) in done.iter().enumerate() {
            let gap = if k == 0 { "" } else { "\n" };
            terminal::answer(&format!("{gap}{}", people::answer(flown, args.trace.as_deref())))?;
            tell_doubts(flown);
        }
    }
    for flown in &done {
        for missed in &flown.missed {
            outcome = outcome.max(Outcome::LimitMissed);
            terminal::tell_limit(&format!("{}: {}", flown.design.name, missed.in_words()));
        }
    }
    Ok(outcome)
}

fn fly_one(path: &Path, args: &Fly, settings: &Settings) -> Result<Flown, Failed> {
    let design = undulift_design::read(path, &args.sets).map_err(Failed::Design)?;
    let flight = fly(&design.glider, settings);
    let in_flight = |error| Failed::Flight { name: design.name.clone(), error };
    let mut flight = flight.map_err(in_flight)?;
    let summary = summary(&design.glider, &mut flight);
    let bands = bands(&design.glider, &mut flight);
    let doubts = doubts(&design.glider, &flight, &summary, &bands);
    let mut equations = Equations::new(&design.glider).map_err(in_flight)?;
    let peaks = joint_peaks(&design.glider, &mut equations, flight.time_s);
    let missed = missed_limits(&design, &summary, &peaks);
    Ok(Flown { flight, summary, bands, doubts, missed, design })
}

fn missed_limits(design: &Design, summary: &Summary, peaks: &[JointPeak]) -> Vec<Missed> {
    let mut missed = Vec::new();
    if summary.end != End::Landed {
        missed.push(Missed::NotLanded { end: summary.end, time_s: summary.time_s });
    }
    let limit_rad = design.limits.tilt_rad;
    let limit_deg = limit_rad.to_degrees();
    if summary.peak_roll_rad > limit_rad {
        missed.push(Missed::Roll { peak_deg: summary.peak_roll_rad.to_degrees(), limit_deg });
    }
    if summary.peak_pitch_rad > limit_rad {
        missed.push(Missed::Pitch { peak_deg: summary.peak_pitch_rad.to_degrees(), limit_deg });
    }
    missed.extend(peaks.iter().filter(|peak| peak.exceeds()).map(|&peak| Missed::Travel(peak)));
    missed
}

impl Missed {
    pub fn in_words(&self) -> String {
        match self {
            Self::NotLanded { end: End::Inverted, time_s } => {
                format!("it turned over {time_s:.2} s after release")
            }
            Self::NotLanded { time_s, .. } => {
                format!("it was still in the air after {time_s:.1} s")
            }
            Self::Roll { peak_deg, limit_deg } => {
                format!(
                    "it rolled by {peak_deg:.1}°, more than the {limit_deg:.1}° of [limits] tilt_deg"
                )
            }
            Self::Pitch { peak_deg, limit_deg } => format!(
                "it pitched by {peak_deg:.1}°, more than the {limit_deg:.1}° of [limits] tilt_deg"
            ),
            Self::Travel(peak) => format!(
                "joint {} is asked for {:.1}° of {} at t = {:.2} s, but its travel is {:.1}°",
                peak.of.joint_idx + 1,
                peak.angle_rad.to_degrees(),
                peak.of.axis.word(),
                peak.at_s,
                peak.travel_rad.unwrap_or(f64::INFINITY).to_degrees()
            ),
        }
    }
}

impl Failed {
    fn tell(&self) {
        match self {
            Self::Design(errors) => terminal::tell_diagnostic(errors),
            Self::Flight { name, error } => terminal::tell_error(&format!("{name}: {error}")),
        }
    }
}

fn tell_doubts(flown: &Flown) {
    for doubt in &flown.doubts {
        let (doubt, hint) = words::in_words(doubt);
        terminal::tell_warning(&doubt);
        terminal::tell_hint(&hint);
    }
}

fn print_json(done: &[Flown], single: bool) -> anyhow::Result<()> {
    let value = match done {
        [] => return Ok(()),
        [flown] if single => object(flown),
        _ => Value::Array(done.iter().map(object).collect()),
    };
    terminal::answer(&format!("{value:#}\n"))
}

/// One flight with all that is printed of it.
fn object(flown: &Flown) -> Value {
    let mut object = Map::new();
    object.insert("design".into(), json!(flown.design.name));
    object.insert("version".into(), json!(env!("CARGO_PKG_VERSION")));
    object.insert("input_sha256".into(), json!(flown.design.input_sha256));
    for (key, quantity) in of_flight(&flown.summary, &flown.bands) {
        let value = match quantity {
            Quantity::Number(value) => json!(value),
            Quantity::None => Value::Null,
            Quantity::Band(ends) => json!(ends),
            Quantity::Word(word) => json!(word),
        };
        object.insert(key.into(), value);
    }
    let doubts = flown.doubts.iter().map(|doubt| words::in_words(doubt).0);
    let missed = flown.missed.iter().map(Missed::in_words);
    object.insert("warnings".into(), missed.chain(doubts).collect());
    Value::Object(object)
}
