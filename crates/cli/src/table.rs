//! `undulift table`.

mod flights;
mod job;
mod people;
mod trade;

use std::path::PathBuf;

use anyhow::Context;
use undulift_flight::Settings;
use undulift_gait::Commands;
use undulift_gait::firmware::{Blocks, FirmwareTable, Miss, Scale, Unit};
use undulift_search::{Coarsest, Hunt, MOST_ROWS_TRIED};

use crate::args::{Table as Args, TableFormat};
use crate::{Outcome, Refused, json, terminal, whole_file};
use flights::Flights;
use job::Job;

pub fn run(args: &Args) -> anyhow::Result<Outcome> {
    let read = undulift_design::read(&args.design, &args.sets);
    let read = read.and_then(|design| Ok((design.wiring()?, design)));
    let (wiring, design) = match read {
        Ok(read) => read,
        Err(errors) => {
            Refused::from(errors).tell();
            return Ok(Outcome::CouldNotRun);
        }
    };
    whole_file::ensure_apart([&args.design], [&args.out].into_iter().chain(&args.trade))?;
    let commands = Commands::new(&design.glider.gait, &design.glider.chain)
        .with_context(|| design.name.clone())?;
    let pool = rayon::ThreadPoolBuilder::new()
        .num_threads(args.threads.map_or(0, usize::from))
        .build()
        .context("can't start threads")?;
    let job = Job::new(args, design, commands, wiring)?;
    pool.install(|| job.run())
}

impl Job<'_> {
    fn run(&self) -> anyhow::Result<Outcome> {
        let hunted = self.args.tolerance.map(|tolerance| self.hunt(tolerance)).transpose()?;
        let (n_rows, scale) = match (&hunted, self.args.tolerance) {
            (Some(hunted), Some(tolerance)) => {
                let Some(best) = &hunted.best else {
                    if !self.args.json {
                        terminal::answer(&trade::answer(hunted, tolerance, self))?;
                    }
                    let why = format!(
                        "no table keeps the glide ratio within {} together with all finer ones; \
                         allow more, or closer rows with --frame-ms",
                        percent(tolerance)
                    );
                    return Ok(self.refuse(&why));
                };
                (Ok(best.rows), best.scale)
            }
            _ => (self.n_rows(), self.scale()),
        };
        match n_rows.and_then(|n_rows| self.table(n_rows, scale)) {
            Ok((blocks, table)) => self.write(&blocks, &table, hunted.as_ref()),
            Err(error) => Ok(self.refuse(&error.to_string())),
        }
    }

    fn hunt(&self, tolerance: f64) -> anyhow::Result<Coarsest> {
        let make = |n_rows: usize, scale: Scale| {
            let (blocks, table) = self.table(n_rows, scale).ok()?;
            table.c_type().ok()?;
            self.misses(&blocks, &table).is_empty().then_some(table)
        };
        let hunt = Hunt {
            design: &self.design,
            between: self.between(),
            tolerance,
            most_rows: self.most_rows().min(MOST_ROWS_TRIED),
            finest: self.scale(),
            make: &make,
            settings: Settings::default(),
        };
        hunt.coarsest().with_context(|| self.design.name.clone())
    }

    fn refuse(&self, why: &str) -> Outcome {
        terminal::tell_limit(&format!("{}: {why}", self.design.name));
        terminal::tell_hint(&format!("{} was not written", self.args.out.display()));
        Outcome::LimitMissed
    }

    fn write(
        &self,
        blocks: &Blocks,
        table: &FirmwareTable,
        hunted: Option<&Coarsest>,
    ) -> anyhow::Result<Outcome> {
        let missed = self.misses(blocks, table);
        if !missed.is_empty() {
            self.tell_missed(&missed);
            return Ok(Outcome::LimitMissed);
        }
        let mut files = match self.files(table) {
            Ok(files) => files,
            Err(error) => return Ok(self.refuse(&error.to_string())),
        };
        if let (Some(path), Some(hunted), Some(tolerance)) =
            (&self.args.trade, hunted, self.args.tolerance)
        {
            files.push((path.clone(), trade::csv(hunted, tolerance)?));
        }
        let flights = Flights::of(self, table)?;
        whole_file::write_all(&files)?;
        let written: Vec<PathBuf> = files.into_iter().map(|(path, _)| path).collect();
        if self.args.json {
            json::print(vec![people::object(self, table, &flights, &written, hunted)], 1)?;
        } else {
            terminal::answer(&people::answer(self, table, &flights, &written, hunted))?;
        }
        self.tell_doubts(table, &flights);
        Ok(Outcome::WithinLimits)
    }

    /// The worst of each kind, with the number of others.
    fn tell_missed(&self, missed: &[Miss]) {
        let mut told: Vec<&Miss> = Vec::new();
        for miss in missed {
            if told.iter().all(|other| !other.is_like(miss)) {
                let others = missed.iter().filter(|other| other.is_like(miss)).count() - 1;
                terminal::tell_limit(&format!("{}: {miss}{}", self.design.name, more(others)));
                told.push(miss);
            }
        }
        terminal::tell_hint(&format!("{} was not written", self.args.out.display()));
    }

    fn tell_doubts(&self, table: &FirmwareTable, flights: &Flights) {
        if let Some(unflown) = &flights.unflown {
            terminal::tell_warning(&format!("the table could not be flown: {unflown}"));
        }
        let unit = table.preamble.scale.unit;
        let offset = self.wiring.iter().any(|channel| channel.offset_us != 0.0);
        if unit != Unit::Us && self.args.format == TableFormat::C && offset {
            terminal::tell_warning(
                "the offsets of [wiring] are for pulses and not in these angles; firmware must add them",
            );
        }
    }
}

fn more(others: usize) -> String {
    match others {
        0 => String::new(),
        1 => "; so is one more channel".into(),
        others => format!("; so are {others} more channels"),
    }
}

/// A share in percent, without zeros at its end.
fn percent(share: f64) -> String {
    format!("{} %", (share * 1e6).round() / 1e4)
}
