//! `undulift tune`.

mod folder;
mod object;
mod people;
mod record;

use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};

use anyhow::{Context, anyhow, bail};
use undulift_design::{Design, Override, Tuning};
use undulift_flight::Settings;
use undulift_search::tuning::{Closing, Ended, Judge, Run, brief_closing, closing};

use crate::args::Tune as Args;
use crate::{Outcome, Refused, json, many, terminal};
use folder::{Folder, Keeping};
use record::{Asked, Record};

/// Evaluations where neither flag nor file says how many.
const EVALUATIONS: u32 = 6000;

/// A search that is set up.
struct Set {
    record: Record,
    judge: Judge,
    run: Run,
    folder: Folder,
}

pub fn run(args: &Args) -> anyhow::Result<Outcome> {
    let pool = many::threads(args.threads.map_or(0, usize::from))?;
    pool.install(|| {
        let set = match (&args.resume, &args.design, &args.out) {
            (Some(folder), ..) => resumed(folder)?,
            (None, Some(design), Some(out)) => begun(args, design, out)?,
            _ => bail!("a design and --out FOLDER are needed, or --resume FOLDER"),
        };
        match set {
            Ok(set) => search(set, args),
            Err(refused) => {
                refused.tell();
                Ok(Outcome::CouldNotRun)
            }
        }
    })
}

/// A new search.
fn begun(args: &Args, design: &Path, out: &Path) -> anyhow::Result<Result<Set, Refused>> {
    folder::check_free(out)?;
    let asked = Asked {
        design: design.to_owned(),
        search: args.search.clone(),
        sets: args.sets.iter().map(|set| set.text().to_owned()).collect(),
        evaluations: args.evaluations,
        seed: args.seed,
    };
    let (record, judge) = match read(&asked, &args.sets)? {
        Ok(read) => read,
        Err(refused) => return Ok(Err(refused)),
    };
    judge.check_wish()?;
    tell_moved_start(&judge);
    let run = Run::new(&judge, record.evaluations as usize)?;
    let folder = Folder::new(out, &record, &judge, &run)?;
    Ok(Ok(Set { record, judge, run, folder }))
}

/// A search that goes on.
fn resumed(path: &Path) -> anyhow::Result<Result<Set, Refused>> {
    let (folder, record, run) = Folder::open(path)?;
    let sets = record.sets.iter().map(|set| Override::parse(set)).collect::<Result<Vec<_>, _>>()?;
    let (again, judge) = match read(&record.asked(), &sets)? {
        Ok(read) => read,
        Err(refused) => return Ok(Err(refused)),
    };
    record.check_same(&again, path)?;
    if !run.is_of(&judge) {
        bail!("{} isn't of the search that run.json tells", folder.state_path().display());
    }
    Ok(Ok(Set { record, judge, run, folder }))
}

/// Reads design and search.
fn read(asked: &Asked, sets: &[Override]) -> anyhow::Result<Result<(Record, Judge), Refused>> {
    let read = || -> Result<(Design, Tuning), undulift_design::DesignErrors> {
        let design = undulift_design::read(&asked.design, sets)?;
        let tuning = match &asked.search {
            Some(path) => Tuning::read(path, &design)?,
            None => Tuning::of_design(&design)?,
        };
        Ok((design, tuning))
    };
    let (design, tuning) = match read() {
        Ok(read) => read,
        Err(errors) => return Ok(Err(errors.into())),
    };
    let evaluations = asked.evaluations.or(tuning.evaluations).unwrap_or(EVALUATIONS);
    let settings = Settings::default();
    let judge =
        Judge::new(&design, &tuning, asked.seed, settings).with_context(|| design.name.clone())?;
    let record = Record::new(asked, &design, &tuning, evaluations, &settings)?;
    Ok(Ok((record, judge)))
}

fn tell_moved_start(judge: &Judge) {
    let start = judge.values(&judge.start());
    for (one, start) in judge.varied().iter().zip(start) {
        let (key, own) = (one.knob.key(), one.knob.value(judge.design()));
        if own < one.low || own > one.high {
            terminal::tell_warning(&format!(
                "{key} is {own} in the design, outside of {} to {}: the search begins at {start}",
                one.low, one.high
            ));
        }
    }
}

fn search(set: Set, args: &Args) -> anyhow::Result<Outcome> {
    let Set { record, judge, mut run, folder } = set;
    let stopped = Arc::new(AtomicBool::new(false));
    watch_for_ctrl_c(&stopped)?;
    let launches = u64::from(judge.launches());
    let bar = many::bar(launches * u64::from(record.evaluations), &judge.design().name);
    bar.set_position(launches * run.ledger().tried() as u64);
    bar.reset_eta();
    let mut keeping = Keeping { folder, judge: &judge, record: &record, bar: &bar };
    let ended = run.go_on(&judge, &mut keeping, &|| stopped.load(Ordering::Relaxed));
    let Keeping { folder, .. } = keeping;
    let ended = ended.map_err(|error| {
        let shown = folder.path().display();
        anyhow!(
            "{error:#}; all that was found before is kept: when that is mended, go on with: \
             undulift tune --resume {shown}"
        )
    })?;
    if ended == Ended::Stopped {
        bar.finish_and_clear();
        tell_stopped(&judge, &run, &record, folder.path());
        return Ok(Outcome::Interrupted);
    }
    folder.write_best(&judge, &record, run.ledger())?;
    let closing = match args.brief {
        true => brief_closing(&judge, &run),
        false => closing(&judge, &run, &|searches| {
            bar.set_message(format!("{}, asking what holds it back", judge.design().name));
            bar.set_length(searches as u64);
        }),
    };
    bar.finish_and_clear();
    let closing = &closing.context("nothing was tried")?;
    tell(&Told { judge: &judge, run: &run, record: &record, closing, folder }, args.json)
}

/// The first Ctrl-C asks for an end, the second ends at once.
pub fn watch_for_ctrl_c(stopped: &Arc<AtomicBool>) -> anyhow::Result<()> {
    let stopped = Arc::clone(stopped);
    ctrlc::set_handler(move || {
        if stopped.swap(true, Ordering::Relaxed) {
            std::process::exit(130);
        }
    })
    .context("can't watch for Ctrl-C")
}

fn tell_stopped(judge: &Judge, run: &Run, record: &Record, folder: &Path) {
    let best = run.ledger().best().map(|best| people::in_short(judge, best));
    terminal::tell_warning(&format!(
        "ended after {} of {} evaluations; {}",
        run.ledger().tried(),
        record.evaluations,
        best.unwrap_or_default()
    ));
    terminal::tell_hint(&format!("go on with: undulift tune --resume {}", folder.display()));
}

/// All that is told of a search.
struct Told<'a> {
    judge: &'a Judge,
    run: &'a Run,
    record: &'a Record,
    closing: &'a Closing,
    folder: Folder,
}

fn tell(told: &Told<'_>, as_json: bool) -> anyhow::Result<Outcome> {
    if as_json {
        json::print(vec![object::object(told)], 1)?;
    } else {
        terminal::answer(&people::answer(told))?;
    }
    people::tell_ridge(told);
    if told.closing.after.is_feasible() {
        return Ok(Outcome::WithinLimits);
    }
    people::tell_misses(told);
    Ok(Outcome::LimitMissed)
}

/// A path from the root, as text.
fn full(path: &Path) -> anyhow::Result<String> {
    let full: PathBuf = std::path::absolute(path)?;
    let text = full.to_str().map(str::to_owned);
    text.with_context(|| format!("the path {} isn't text in UTF-8", path.display()))
}
