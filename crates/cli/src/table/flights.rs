//! Flights of a table, whole and with timing faults.

use anyhow::Context;
use undulift_flight::Settings;
use undulift_gait::firmware::{FirmwareTable, Timing};
use undulift_search::{TableFlight, fly_gait, fly_table};

use super::job::Job;

/// What a table's flights came to.
pub struct Flights {
    /// The gait's own, and the table's.
    pub whole: Option<[TableFlight; 2]>,
    /// Faults in words, each with its flight.
    pub faulty: Vec<(String, TableFlight)>,
    /// Why there are none.
    pub unflown: Option<String>,
}

impl Flights {
    /// - `table`: that is written
    pub fn of(job: &Job<'_>, table: &FirmwareTable) -> anyhow::Result<Self> {
        let settings = Settings::default();
        let faults = faults(job, table)?;
        let fly = |table: &FirmwareTable| {
            let gait_table = table.gait_table(&job.axes, job.between())?;
            fly_table(&job.design, gait_table, &settings)
        };
        let whole = fly_gait(&job.design, job.between(), &settings)
            .and_then(|reference| Ok([reference, fly(table)?]));
        let (whole, unflown) = match whole {
            Ok(whole) => (Some(whole), None),
            Err(error) if faults.is_empty() => (None, Some(error.to_string())),
            Err(error) => return Err(error).with_context(|| job.design.name.clone()),
        };
        let fly_faulty = |(words, table): (String, FirmwareTable)| {
            let flight = fly(&table).with_context(|| format!("{}: {words}", job.design.name))?;
            Ok((words, flight))
        };
        let faulty = faults.into_iter().map(fly_faulty).collect::<anyhow::Result<_>>()?;
        Ok(Self { whole, faulty, unflown })
    }
}

/// Every fault that was asked for, in words and as the servos get it.
fn faults(job: &Job<'_>, table: &FirmwareTable) -> anyhow::Result<Vec<(String, FirmwareTable)>> {
    let mut faults = Vec::new();
    if let Some(number) = job.args.late {
        let wired = job.wiring.iter().find(|channel| channel.number == number);
        let wired = wired.with_context(|| {
            let numbers: Vec<String> =
                job.wiring.iter().map(|channel| channel.number.to_string()).collect();
            format!("--late {number}: nothing is on that channel; there are {}", numbers.join(", "))
        })?;
        let own = job.channels.iter().find(|channel| channel.of == wired.of);
        let own = own.context("every axis has a channel")?.number;
        let words = format!("channel {number} ({}) a row late", wired.name());
        faults.push((words, Timing { late: Some(own), ..Timing::default() }));
    }
    if let Some(every) = job.args.drop_every {
        let words = format!("one row in {every} lost");
        faults.push((words, Timing { drop_every: Some(every as usize), ..Timing::default() }));
    }
    if let Some(clock) = job.args.clock {
        faults
            .push((format!("clock {clock} times as fast"), Timing { clock, ..Timing::default() }));
    }
    let on_table = |(words, timing): (String, Timing)| {
        let faulty = timing.on(table);
        let faulty = faulty.with_context(|| {
            format!("{words}: that repeats only after more than 65535 rows; choose another number")
        })?;
        Ok((words, faulty))
    };
    faults.into_iter().map(on_table).collect()
}
