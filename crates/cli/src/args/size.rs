//! `undulift size`: its arguments.

use std::path::PathBuf;

use undulift_design::Override;

/// Choose servos of a catalogue: every joint that the design drives gets one, and what can do it is
/// ranked.
///
/// All pairs of one servo for yaw and one for pitch are flown, each with its own masses, then the
/// promising mixes: one servo for the middle joints of an axis, another for as many at either end.
/// Kept is what passes as in `undulift budget` and lands upright in a glide, within `[limits]
/// tilt_deg`. Exit status 1 means that nothing does; the nearest miss is told then.
#[derive(Debug, clap::Args)]
#[command(after_long_help = "Examples:
  undulift size designs/hasty-16.toml --from designs/servos.toml
  undulift size designs/reed-16.toml --from designs/servos.toml --want cheapest --write mine.toml")]
pub struct Size {
    /// A design file (TOML); which joints it drives with a servo matters, not with which.
    #[arg(value_name = "DESIGN")]
    pub design: PathBuf,

    /// The catalogue to choose from: a file of [servo.NAME] tables.
    #[arg(long, value_name = "CATALOGUE.toml")]
    pub from: PathBuf,

    /// What comes first of those that can do it.
    #[arg(long, value_enum, default_value_t = Wish::Lightest)]
    pub want: Wish,

    /// Write the design with the best servos in it, so that it needs no catalogue; it replaces a
    /// file that exists.
    #[arg(long, value_name = "FILE")]
    pub write: Option<PathBuf>,

    /// Threads to fly on [default: all cores]; the result is the same.
    #[arg(long, value_name = "T", value_parser = clap::value_parser!(u16).range(1..=1024))]
    pub threads: Option<u16>,

    /// Print JSON.
    #[arg(long)]
    pub json: bool,

    /// Use another value than the file's, such as gait.frequency_hz=1.1; may be given again.
    #[arg(long = "set", value_name = "KEY=VALUE", value_parser = Override::parse)]
    pub sets: Vec<Override>,
}

/// What comes first of servos that can do it.
#[derive(Debug, Clone, Copy, PartialEq, Eq, clap::ValueEnum)]
pub enum Wish {
    /// Least mass of all servos.
    Lightest,
    /// Longest way in the flight.
    Furthest,
    /// Least price of all servos; those without a price come last.
    Cheapest,
}
