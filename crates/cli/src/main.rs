//! The `undulift` command: flags, files, exit codes and the words that people read.
//!
//! Answers go to standard output, all else to standard error. Exit status: 0 done and within
//! limits; 1 done, but a limit is missed; 2 could not run.

mod args;
mod budget;
mod check;
mod doubts;
mod flown;
mod fly;
mod joints;
mod json;
mod launches;
mod new;
mod people;
mod size;
mod table;
mod terminal;
mod trace_file;
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
}

impl From<DesignErrors> for Refused {
    fn from(errors: DesignErrors) -> Self {
        Self::Design(errors)
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
        }
    }
}

impl From<Outcome> for ExitCode {
    fn from(outcome: Outcome) -> Self {
        ExitCode::from(match outcome {
            Outcome::WithinLimits => 0,
            Outcome::LimitMissed => 1,
            Outcome::CouldNotRun => 2,
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
