//! The `undulift` command: flags, files, exit codes and the words that people read.
//!
//! Answers go to standard output, all else to standard error. Exit status: 0 done and within
//! limits; 1 done, but a limit is missed; 2 could not run; 130 ended by Ctrl-C with all kept.

mod args;
mod budget;
mod check;
mod doubts;
mod driven;
mod drop;
mod flown;
mod fly;
mod joints;
mod json;
mod launches;
mod many;
mod new;
mod people;
mod size;
mod table;
mod terminal;
mod trace_file;
mod tune;
mod whole_file;

use std::process::ExitCode;

use args::{Args, Command};
use clap::{CommandFactory, Parser};
use undulift_design::DesignErrors;
use undulift_flight::FlightError;

/// How a command ended when it ran.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
enum Outcome {
    WithinLimits,
    LimitMissed,
    CouldNotRun,
    /// Ended by Ctrl-C, with all that was found kept.
    Interrupted,
}

fn complete(shell: clap_complete::Shell) -> anyhow::Result<Outcome> {
    let mut script = Vec::new();
    clap_complete::generate(shell, &mut Args::command(), "undulift", &mut script);
    terminal::answer(&String::from_utf8(script)?)?;
    Ok(Outcome::WithinLimits)
}

/// Why nothing could be done with a design.
enum Refused {
    Design(DesignErrors),
    Flight { name: String, error: FlightError },
    Asked(anyhow::Error),
}

impl From<DesignErrors> for Refused {
    fn from(errors: DesignErrors) -> Self {
        Self::Design(errors)
    }
}

impl From<anyhow::Error> for Refused {
    fn from(error: anyhow::Error) -> Self {
        Self::Asked(error)
    }
}

impl Refused {
    fn flight(name: &str, error: FlightError) -> Self {
        Self::Flight { name: name.to_owned(), error }
    }

    fn tell(&self) {
        match self {
            Self::Design(errors) => terminal::tell_diagnostic(errors),
            Self::Flight { name, error } => terminal::tell_error(&format!("{name}: {error}")),
            Self::Asked(error) => terminal::tell_error(&format!("{error:#}")),
        }
    }
}

impl From<Outcome> for ExitCode {
    fn from(outcome: Outcome) -> Self {
        ExitCode::from(match outcome {
            Outcome::WithinLimits => 0,
            Outcome::LimitMissed => 1,
            Outcome::CouldNotRun => 2,
            // As shells report a program that Ctrl-C ended.
            Outcome::Interrupted => 130,
        })
    }
}

fn main() -> ExitCode {
    // Wrong flags end here with status 2, help and version with 0.
    let args = Args::parse();
    let outcome = match &args.command {
        Command::Fly(fly) => fly::run(fly),
        Command::Check(check) => check::run(check),
        Command::Budget(args) => budget::run(args),
        Command::Size(args) => size::run(args),
        Command::Tune(args) => tune::run(args),
        Command::Drop(args) => drop::run(args),
        Command::Table(args) => table::run(args),
        Command::New(new) => new::run(new),
        Command::Completions(completions) => complete(completions.shell),
    };
    match outcome {
        Ok(outcome) => outcome.into(),
        Err(error) if terminal::is_closed_pipe(&error) => ExitCode::SUCCESS,
        Err(error) => {
            terminal::tell_error(&format!("{error:#}"));
            Outcome::CouldNotRun.into()
        }
    }
}
