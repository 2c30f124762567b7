//! `undulift fly`.

use std::path::Path;

use rayon::prelude::*;
use serde_json::Value;
use undulift_design::Design;
use undulift_design::quantities::of_flight;
use undulift_flight::{End, Settings, Summary, bands, doubts, fly_driven, summary};

use crate::args::Fly;
use crate::flown::{Flown, Missed};
use crate::launches;
use crate::{
    Outcome, Refused, doubts as words, driven, joints, json, people, terminal, trace_file,
    whole_file,
};

pub fn run(args: &Fly) -> anyhow::Result<Outcome> {
    for (flag, given) in [("--trace", args.trace.is_some()), ("--csv", args.csv.is_some())] {
        let n_designs = args.designs.len();
        if given && n_designs > 1 {
            anyhow::bail!("{flag} takes one design, not {n_designs}; run them one by one");
        }
    }
    whole_file::ensure_apart(&args.designs, args.trace.iter().chain(&args.csv))?;
    let settings = Settings {
        tolerance: args.tolerance,
        max_time_s: args.max_time_s,
        through_inversion: args.through_inversion,
        floor_m: 0.0,
    };
    let flown: Vec<Result<Flown, Refused>> =
        args.designs.par_iter().map(|path| fly_one(path, args, &settings)).collect();
    let mut outcome = Outcome::WithinLimits;
    let mut done = Vec::new();
    for result in flown {
        match result {
            Ok(flown) => done.push(flown),
            Err(refused) => {
                refused.tell();
                outcome = Outcome::CouldNotRun;
            }
        }
    }
    if let (Some(path), [flown]) = (&args.trace, &mut done[..]) {
        trace_file::write(path, flown, args.every_ms * 1e-3)?;
    }
    if let Some(n_launches) = args.launches {
        for flown in &mut done {
            let launches = launches::fly_all(args, n_launches, &flown.design, &settings)?;
            flown.launches = Some(launches);
        }
    }
    if let (Some(path), [Flown { launches: Some(launches), .. }]) = (&args.csv, &done[..]) {
        launches.write(path)?;
    }
    if args.json {
        json::print(done.iter().map(object).collect(), args.designs.len())?;
    } else {
        for (k, flown) in done.iter().enumerate() {
            let gap = if k == 0 { "" } else { "\n" };
            terminal::answer(&format!("{gap}{}", people::answer(flown, args)))?;
            words::tell(&flown.doubts);
        }
    }
    for flown in &done {
        if !(flown.missed.is_empty() && flown.joints_missed.is_empty()) {
            outcome = outcome.max(Outcome::LimitMissed);
        }
        for missed in &flown.missed {
            terminal::tell_limit(&format!("{}: {}", flown.design.name, missed.in_words()));
        }
        joints::tell(&flown.design.name, &flown.joints_missed);
    }
    Ok(outcome)
}

fn fly_one(path: &Path, args: &Fly, settings: &Settings) -> Result<Flown, Refused> {
    let design = undulift_design::read(path, &args.sets)?;
    let drives = driven::drives(args, &design)?;
    let flight = fly_driven(&design.glider, &drives, settings);
    let mut flight = flight.map_err(|error| Refused::flight(&design.name, error))?;
    let summary = summary(&design.glider, &mut flight);
    let bands = bands(&design.glider, &mut flight);
    let doubts = doubts(&design.glider, &flight, &summary, &bands);
    let peaks = flight.commands().peaks(0.0, flight.time_s);
    let driven = driven::Driven::of(args, &design, &drives, &mut flight, settings);
    let joints_missed = match &driven {
        Some(driven) => driven.beyond_travel(&design, &peaks),
        None => joints::beyond_travel(&design, &peaks).collect(),
    };
    let missed = missed_limits(&design, &summary);
    let launches = None;
    Ok(Flown { flight, summary, bands, doubts, missed, joints_missed, launches, driven, design })
}

fn missed_limits(design: &Design, summary: &Summary) -> Vec<Missed> {
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
    missed
}

/// One flight with all that is printed of it.
fn object(flown: &Flown) -> Value {
    let mut object = json::heading(&flown.design);
    for (key, quantity) in of_flight(&flown.summary, &flown.bands) {
        object.insert(key.into(), json::value(quantity));
    }
    let doubts = flown.doubts.iter().map(|doubt| words::in_words(doubt).0);
    let missed = flown.missed.iter().map(Missed::in_words);
    let joints_missed = flown.joints_missed.iter().map(joints::Missed::in_words);
    let missed = missed.chain(joints_missed);
    object.insert("warnings".into(), missed.chain(doubts).collect());
    if let Some(driven) = &flown.driven {
        object.insert("driven".into(), driven.object());
    }
    if let Some(launches) = &flown.launches {
        launches.put_into(&mut object);
    }
    Value::Object(object)
}
