//! What the command line may say.

mod budget;
mod drop;
mod fly;
mod numbers;
mod size;
mod table;
mod tune;

use std::path::PathBuf;

use clap::{Parser, Subcommand};
use undulift_design::Override;

pub use budget::{Budget, Case};
pub use drop::Drop;
pub use fly::{Fly, Joints};
pub use size::{Size, Wish};
pub use table::{Between, Table, TableFormat, TableUnit};
pub use tune::Tune;

/// Flies snake-inspired gliding robots before anyone builds them.
///
/// A design file describes a chain of segments joined by servos, the wave that runs down it and how
/// it is let go. Exit status: 0 done and within limits, 1 done but a limit is missed, 2 could not
/// run.
#[derive(Debug, Parser)]
#[command(name = "undulift", version, propagate_version = true)]
pub struct Args {
    /// What to do.
    #[command(subcommand)]
    pub command: Command,
}

/// What to do.
#[derive(Debug, Subcommand)]
pub enum Command {
    Fly(Fly),
    Check(Check),
    Budget(Budget),
    Size(Size),
    Tune(Tune),
    Table(Table),
    Drop(Drop),
    New(New),
    Completions(Completions),
}

/// Write a design file to start from: every key with its meaning, unit and range.
///
/// It flies as it is. A file that exists is left alone unless --force is given.
#[derive(Debug, clap::Args)]
#[command(after_long_help = "Examples:
  undulift new mine.toml && undulift fly mine.toml
  undulift new mine.toml --from designs/sedge-10.toml")]
pub struct New {
    /// The file to write.
    #[arg(value_name = "FILE")]
    pub file: PathBuf,

    /// Start from this design instead; files that it names are found from the new place, too.
    #[arg(long, value_name = "DESIGN")]
    pub from: Option<PathBuf>,

    /// Replace a file that exists.
    #[arg(long)]
    pub force: bool,
}

/// Print what a shell needs to complete commands and flags.
#[derive(Debug, clap::Args)]
#[command(after_long_help = "Examples:
  undulift completions bash > ~/.local/share/bash-completion/completions/undulift
  undulift completions fish > ~/.config/fish/completions/undulift.fish")]
pub struct Completions {
    /// Which shell.
    pub shell: clap_complete::Shell,
}

/// Look at designs without flying them: masses, wing, joints, and where the model is stretched.
///
/// Over a whole cycle, what the gait asks of every joint is held against its travel and its servo's
/// no-load speed. Exit status 1 means that a joint is asked for more.
#[derive(Debug, clap::Args)]
#[command(after_long_help = "Examples:
  undulift check designs/reed-16.toml
  undulift check designs/reed-16.toml --set gait.frequency_hz=2.5 --json")]
pub struct Check {
    /// Design files (TOML).
    #[arg(required = true, value_name = "DESIGN")]
    pub designs: Vec<PathBuf>,

    /// Print JSON: an object for one design, a list for several.
    #[arg(long)]
    pub json: bool,

    /// Use another value than the file's, such as gait.frequency_hz=1.1; may be given again.
    #[arg(long = "set", value_name = "KEY=VALUE", value_parser = Override::parse)]
    pub sets: Vec<Override>,
}
