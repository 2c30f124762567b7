//! `undulift drop`.

mod how_many;
mod object;
mod people;
mod rows;
mod seen;
mod sheets;

use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};

use anyhow::Context;
use undulift_design::{Design, DesignErrors, Hall, SeenDrop, read_seen};
use undulift_droptest::{
    Drop, DropError, Dropping, Flown, Ladder, Measuring, Misfit, Plan, Reading, Rung, Truth,
    cautions_in_a_line, misfits,
};

use crate::args;
use crate::tune::watch_for_ctrl_c;
use crate::{Outcome, json, many, terminal, whole_file};
use how_many::HowMany;

/// Drops from each lower rung of the ladder, at most.
const DROPS_A_RUNG: usize = 200;

/// And at most, where what was seen is read by them.
const DROPS_READ_BY: usize = 20_000;

/// Drops whose outermost holds 95 % of all, at 95 % confidence.
const FOR_RANKS: usize = 59;

/// Sound drops that may turn over without a word, %.
const MOST_TURNED_OVER: f64 = 2.0;

/// All that is told of a plan.
pub struct Told<'a> {
    args: &'a args::Drop,
    design: &'a Design,
    hall: &'a Hall,
    plan: Plan,
    rungs: Vec<Rung>,
    misfits: Vec<Misfit>,
    measuring: Measuring,
    /// Absent where too few drops were flown to say.
    how_many: Option<HowMany>,
    /// Of what was seen, where anything was.
    reading: Option<(Reading, &'a [SeenDrop])>,
    /// Whether all drops that were asked for were flown.
    complete: bool,
    reach_m: f64,
}

pub fn run(args: &args::Drop) -> anyhow::Result<Outcome> {
    sheets::check(&args.sheets)?;
    let read = [&args.design, &args.hall].into_iter().chain(&args.seen);
    whole_file::ensure_apart(read, args.csv.iter().chain(&args.sheets))?;
    let asked = match Asked::read(args) {
        Ok(asked) => asked,
        Err(refused) => {
            refused.iter().for_each(|errors| terminal::tell_diagnostic(errors));
            return Ok(Outcome::CouldNotRun);
        }
    };
    let stopped = Arc::new(AtomicBool::new(false));
    watch_for_ctrl_c(&stopped)?;
    let dropping = Dropping::new(&asked.design, &asked.hall, args.seed);
    let threads = many::threads(args.threads.map_or(0, usize::from))?;
    let ladder = threads.install(|| fly(args, &asked, &dropping, &stopped));
    let complete = !stopped.load(Ordering::Relaxed);
    if let (Some(path), Some(drops)) = (&args.csv, ladder.last()) {
        rows::write(path, drops, complete)?;
    }
    let told = threads.install(|| told(args, &asked, &dropping, &ladder, complete));
    if !complete && told.is_err() {
        let flown = ladder.last().map_or(0, Vec::len);
        terminal::tell_warning(&format!(
            "ended by Ctrl-C: {flown} of {} drops were flown, too few to tell anything of",
            args.flights
        ));
        return Ok(Outcome::Interrupted);
    }
    let told = told?;
    sheets::write(&told)?;
    tell(&told)
}

/// What the files say.
struct Asked {
    design: Design,
    hall: Hall,
    seen: Option<Vec<SeenDrop>>,
}

impl Asked {
    /// All that was asked for, or the mistakes of all files.
    fn read(args: &args::Drop) -> Result<Self, Vec<DesignErrors>> {
        let hall = Hall::read(&args.hall);
        // What was seen belongs to the heights of a hall that can be read.
        let seen = match (&args.seen, &hall) {
            (Some(path), Ok(hall)) => read_seen(path, &hall.release.heights_m).map(Some),
            _ => Ok(None),
        };
        match (undulift_design::read(&args.design, &args.sets), hall, seen) {
            (Ok(design), Ok(hall), Ok(seen)) => Ok(Self { design, hall, seen }),
            (design, hall, seen) => {
                Err([design.err(), hall.err(), seen.err()].into_iter().flatten().collect())
            }
        }
    }
}

/// Drops from each height of the ladder, those from the highest with faults.
fn fly(
    args: &args::Drop,
    asked: &Asked,
    dropping: &Dropping<'_>,
    stopped: &AtomicBool,
) -> Vec<Vec<Drop>> {
    let heights_m = &asked.hall.release.heights_m;
    let flights = args.flights as usize;
    // What was seen is read by as many drops from each height.
    let most = if asked.seen.is_some() { DROPS_READ_BY } else { DROPS_A_RUNG };
    let drops = |rung_idx: usize| {
        if rung_idx + 1 == heights_m.len() { flights } else { flights.min(most) }
    };
    let all: usize = (0..heights_m.len()).map(drops).sum();
    let bar = many::bar(all as u64, &asked.design.name);
    let each = || {
        bar.inc(1);
        !stopped.load(Ordering::Relaxed)
    };
    let rung = |(rung_idx, height_m): (usize, &f64)| {
        let with_faults = rung_idx + 1 == heights_m.len();
        dropping.fly(*height_m, drops(rung_idx), with_faults, each)
    };
    // The highest first: what Ctrl-C leaves is of most use there.
    let mut ladder: Vec<Vec<Drop>> = heights_m.iter().enumerate().rev().map(rung).collect();
    bar.finish_and_clear();
    ladder.reverse();
    ladder
}

fn told<'a>(
    args: &'a args::Drop,
    asked: &'a Asked,
    dropping: &Dropping<'_>,
    ladder: &[Vec<Drop>],
    complete: bool,
) -> anyhow::Result<Told<'a>> {
    let Asked { design, hall, .. } = asked;
    let around = dropping.around();
    let heights_m = &hall.release.heights_m;
    let (drops, highest_m) =
        ladder.last().zip(heights_m.last().copied()).context("a hall has a release height")?;
    let plan = Plan::of(drops, &around).with_context(|| design.name.clone())?;
    let of_height = || heights_m.iter().zip(ladder);
    let rungs: Vec<Rung> =
        of_height().map(|(height_m, drops)| Rung::of(*height_m, drops, &around)).collect();
    let flown = of_height().map(|(&height_m, drops)| Flown { height_m, drops });
    let flown: Vec<Flown<'_>> = flown.collect();
    let read = |seen: &'a Vec<SeenDrop>| {
        // None of the launches that were flown is flown again.
        let first = args.flights as usize;
        let fly = |height_m: f64, truths: &[Truth]| dropping.fly_such(truths, height_m, first);
        Ok((Ladder::of(&flown).read(seen, args.seed, fly)?, &seen[..]))
    };
    // Heights that Ctrl-C left out tell nothing.
    let seen = asked.seen.as_ref().filter(|_| complete);
    let reading: Result<_, DropError> = seen.map(read).transpose();
    let refused = drops.iter().find_map(|drop| drop.result.as_ref().err());
    let thick = design.glider.chain.segments().iter().map(|segment| segment.thickness_m);
    let thickness_m = thick.fold(0.0, f64::max);
    let why_refused = refused.map(ToString::to_string);
    Ok(Told {
        args,
        design,
        hall,
        misfits: misfits(&plan, &rungs, &around, thickness_m, why_refused),
        plan,
        how_many: HowMany::of(args, dropping.scatter_m(drops, highest_m, args.flights as usize)),
        rungs,
        measuring: Measuring::of(design, hall.camera),
        reading: reading.with_context(|| design.name.clone())?,
        complete,
        reach_m: around.reach_m,
    })
}

impl Told<'_> {
    /// What to doubt.
    fn warnings(&self) -> Vec<String> {
        let mut warnings = Vec::new();
        let launch_m = self.design.glider.launch.height_m;
        let highest_m = self.rungs.last().map_or(launch_m, |rung| rung.height_m);
        if (highest_m - launch_m).abs() > 1e-9 {
            warnings.push(format!(
                "the design is let go at {launch_m:.1} m, but the hall's highest release is {highest_m:.1} m, \
                 which is what was flown"
            ));
        }
        if self.rungs.len() == 1 {
            warnings.push(format!(
                "{highest_m:.1} m is the only height: a ladder of lower ones shows a wrong model where it is \
                 harmless"
            ));
        }
        let faults = self.plan.furthest.map_or(0, |furthest| furthest.of);
        if self.hall.faults.share > 0.0 && faults < FOR_RANKS {
            let flights = (FOR_RANKS as f64 / self.hall.faults.share * 1.3).ceil();
            warnings.push(format!(
                "{faults} faults say little of where all of them end: {FOR_RANKS} hold 95 % at 95 % \
                 confidence; --flights {flights:.0} gives about as many"
            ));
        }
        let sound = &self.plan.sound;
        if sound.flown < FOR_RANKS {
            warnings.push(format!(
                "{} sound drops are too few for a region that asks for no distribution, and for anything \
                 rare: fly {FOR_RANKS} or more, better thousands",
                sound.flown
            ));
        }
        let turned_over = 100.0 * sound.turned_over as f64 / sound.flown.max(1) as f64;
        if turned_over > MOST_TURNED_OVER {
            warnings.push(format!(
                "{turned_over:.0} % of sound drops from {highest_m:.1} m turn over: tune the gait or stay lower \
                 before anyone drops it from there"
            ));
        }
        warnings.extend(self.reading.iter().flat_map(|(reading, _)| seen::warnings(reading)));
        warnings
    }
}

fn tell(told: &Told<'_>) -> anyhow::Result<Outcome> {
    if told.args.json {
        json::print(vec![object::object(told)], 1)?;
    } else {
        terminal::answer(&people::answer(told))?;
    }
    for warning in told.warnings() {
        terminal::tell_warning(&warning);
    }
    for stop in told.reading.iter().flat_map(|(reading, _)| &reading.stops) {
        terminal::tell_limit(&format!("{}: {stop}", told.design.name));
    }
    for misfit in &told.misfits {
        terminal::tell_limit(&format!("{}: {misfit}", told.design.name));
    }
    terminal::tell_warning(&cautions_in_a_line());
    if !told.complete {
        terminal::tell_warning(&format!(
            "ended by Ctrl-C: {} of {} drops were flown, and what is told is of those alone{}",
            told.plan.drops,
            told.args.flights,
            if told.args.seen.is_some() { "; what was seen isn't read by so few" } else { "" }
        ));
        return Ok(Outcome::Interrupted);
    }
    let go_on = told.reading.as_ref().is_none_or(|(reading, _)| reading.stops.is_empty());
    Ok(if told.misfits.is_empty() && go_on { Outcome::WithinLimits } else { Outcome::LimitMissed })
}
