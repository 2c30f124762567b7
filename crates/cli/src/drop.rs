//! `undulift drop`.

mod object;
mod people;
mod rows;
mod sheets;

use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};

use anyhow::Context;
use undulift_design::{Design, DesignErrors, Hall};
use undulift_droptest::{
    Drop, Dropping, Measuring, Misfit, Plan, Rung, cautions_in_a_line, misfits,
};

use crate::args;
use crate::tune::watch_for_ctrl_c;
use crate::{Outcome, json, many, terminal};

/// Drops from each lower rung of the ladder, at most.
const DROPS_A_RUNG: usize = 200;

/// Faults whose outermost holds 95 % of all, at 95 % confidence.
const FAULTS_WANTED: usize = 59;

/// All that is told of a plan.
pub struct Told<'a> {
    args: &'a args::Drop,
    design: Design,
    hall: &'a Hall,
    plan: Plan,
    rungs: Vec<Rung>,
    misfits: Vec<Misfit>,
    measuring: Measuring,
    /// Whether all drops that were asked for were flown.
    complete: bool,
    reach_m: f64,
}

pub fn run(args: &args::Drop) -> anyhow::Result<Outcome> {
    sheets::check(&args.sheets)?;
    let (design, hall) = match read(args) {
        Ok(read) => read,
        Err(refused) => {
            refused.iter().for_each(|errors| terminal::tell_diagnostic(errors));
            return Ok(Outcome::CouldNotRun);
        }
    };
    let stopped = Arc::new(AtomicBool::new(false));
    watch_for_ctrl_c(&stopped)?;
    let (told, drops) = plan(args, design, &hall, &stopped)?;
    if let Some(path) = &args.csv {
        rows::write(path, &drops)?;
    }
    sheets::write(&told)?;
    tell(&told)
}

/// Design and hall, or the mistakes of both.
fn read(args: &args::Drop) -> Result<(Design, Hall), Vec<DesignErrors>> {
    match (undulift_design::read(&args.design, &args.sets), Hall::read(&args.hall)) {
        (Ok(design), Ok(hall)) => Ok((design, hall)),
        (design, hall) => Err(design.err().into_iter().chain(hall.err()).collect()),
    }
}

fn plan<'a>(
    args: &'a args::Drop,
    design: Design,
    hall: &'a Hall,
    stopped: &AtomicBool,
) -> anyhow::Result<(Told<'a>, Vec<Drop>)> {
    let dropping = Dropping::new(&design, hall, args.seed);
    let (highest_m, lower_m) =
        hall.release.heights_m.split_last().context("a hall has a release height")?;
    let around = dropping.around();
    let flights = args.flights as usize;
    let a_rung = flights.min(DROPS_A_RUNG);
    let bar = many::bar((flights + a_rung * lower_m.len()) as u64, &design.name);
    let each = || {
        bar.inc(1);
        !stopped.load(Ordering::Relaxed)
    };
    let (drops, mut rungs) = many::threads(args.threads.map_or(0, usize::from))?.install(|| {
        let drops = dropping.fly(*highest_m, flights, true, each);
        let lower = lower_m.iter().map(|&height_m| {
            let drops = dropping.fly(height_m, a_rung, false, each);
            Rung::of(height_m, &drops, &around)
        });
        (drops, lower.collect::<Vec<Rung>>())
    });
    bar.finish_and_clear();
    let plan = Plan::of(&drops, &around).with_context(|| design.name.clone())?;
    rungs.push(Rung::of(*highest_m, &drops, &around));
    let refused = drops.iter().find_map(|drop| drop.result.as_ref().err());
    let thick = design.glider.chain.segments().iter().map(|segment| segment.thickness_m);
    let thickness_m = thick.fold(0.0, f64::max);
    let misfits = misfits(&plan, &around, thickness_m, refused.map(ToString::to_string));
    let measuring = Measuring::of(&design, hall.camera);
    let complete = !stopped.load(Ordering::Relaxed);
    let reach_m = around.reach_m;
    Ok((Told { args, design, hall, plan, rungs, misfits, measuring, complete, reach_m }, drops))
}

fn tell(told: &Told<'_>) -> anyhow::Result<Outcome> {
    if told.args.json {
        json::print(vec![object::object(told)], 1)?;
    } else {
        terminal::answer(&people::answer(told))?;
    }
    let launch_m = told.design.glider.launch.height_m;
    let highest_m = told.rungs.last().map_or(launch_m, |rung| rung.height_m);
    if (highest_m - launch_m).abs() > 1e-9 {
        terminal::tell_warning(&format!(
            "the design is let go at {launch_m:.1} m, but the hall's highest release is {highest_m:.1} m, \
             which is what was flown"
        ));
    }
    let faults = told.plan.furthest.map_or(0, |furthest| furthest.of);
    if told.hall.faults.share > 0.0 && faults < FAULTS_WANTED {
        let flights = (FAULTS_WANTED as f64 / told.hall.faults.share * 1.3).ceil();
        terminal::tell_warning(&format!(
            "{faults} faults say little of where all of them end: {FAULTS_WANTED} hold 95 % at 95 % \
             confidence; --flights {flights:.0} gives about as many"
        ));
    }
    for misfit in &told.misfits {
        terminal::tell_limit(&format!("{}: {misfit}", told.design.name));
    }
    terminal::tell_warning(&cautions_in_a_line());
    if !told.complete {
        terminal::tell_warning(&format!(
            "ended by Ctrl-C: {} of {} drops were flown, and what is told is of those alone",
            told.plan.drops, told.args.flights
        ));
        return Ok(Outcome::Interrupted);
    }
    Ok(if told.misfits.is_empty() { Outcome::WithinLimits } else { Outcome::LimitMissed })
}
