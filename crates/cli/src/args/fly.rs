//! `undulift fly`: its arguments.

use std::path::PathBuf;

use undulift_design::Override;

use super::numbers::every_ms;
use crate::driven::FaultAsked;

/// Fly designs from release to the floor, and say how it went.
///
/// Joints follow the gait exactly, unless --joints driven lets their servos turn them. Exit status 1 means that a flight did not land, rolled or pitched
/// beyond `[limits] tilt_deg`, or asked a joint to go beyond its travel.
#[derive(Debug, clap::Args)]
#[command(after_long_help = "Examples:
  undulift fly designs/reed-16.toml
  undulift fly designs/reed-16.toml --set gait.frequency_hz=1.0 --json
  undulift fly designs/reed-16.toml --trace reed-16.csv --every-ms 2
  undulift fly designs/reed-16.toml --joints driven --fault 14:yaw=locked@1.2
  undulift fly designs/reed-16.toml --launches 200 --seed 7 --csv launches.csv")]
pub struct Fly {
    /// Design files (TOML).
    #[arg(required = true, value_name = "DESIGN")]
    pub designs: Vec<PathBuf>,

    /// Print JSON: an object for one design, a list for several.
    #[arg(long)]
    pub json: bool,

    /// Write the flight as CSV, a row each output time; takes one design.
    #[arg(long, value_name = "FILE.csv")]
    pub trace: Option<PathBuf>,

    /// Time between rows of the trace, ms.
    #[arg(long, value_name = "MS", default_value_t = 5.0, requires = "trace", value_parser = every_ms)]
    pub every_ms: f64,

    /// Relative and absolute tolerance of the integration, from 1e-13 to 1e-2.
    #[arg(long, value_name = "TOL", default_value = "1e-6")]
    pub tolerance: f64,

    /// Longest flight, s, at most 3600.
    #[arg(long, value_name = "S", default_value_t = 30.0)]
    pub max_time_s: f64,

    /// Fly on to the floor after the body has turned over.
    #[arg(long)]
    pub through_inversion: bool,

    /// What turns the joints.
    #[arg(long, value_enum, default_value_t = Joints::Commanded)]
    pub joints: Joints,

    /// Let an axis fail, such as 5:yaw=limp or 5:yaw=locked@0.8; may be given again.
    ///
    /// JOINT counts from 1 at the head, AXIS is yaw or pitch. A limp axis turns freely, a locked one
    /// stops at once and holds its angle. SECONDS count from release, where it fails if none are
    /// given. End stops are left out: an axis that turns beyond its travel is told.
    #[arg(long = "fault", value_name = "JOINT:AXIS=limp|locked[@SECONDS]")]
    pub faults: Vec<FaultAsked>,

    /// Fly it this many times more, each launch a little different.
    ///
    /// What differs stands in the design's `[spread]`; without one, speed, attitude, spin and phase
    /// at release, lift, drag, pressure centre and mass do. At most 1000000.
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u32).range(1..=1_000_000))]
    pub launches: Option<u32>,

    /// Seed of the launches: the same seed gives the same launches.
    #[arg(long, value_name = "S", default_value_t = 1, requires = "launches")]
    pub seed: u64,

    /// Threads to fly the launches on [default: all cores]; the result is the same.
    #[arg(long, value_name = "T", requires = "launches",
        value_parser = clap::value_parser!(u16).range(1..=1024))]
    pub threads: Option<u16>,

    /// Write every launch as a row of CSV: what was drawn, and how it went; takes one design.
    #[arg(long, value_name = "FILE.csv", requires = "launches")]
    pub csv: Option<PathBuf>,

    /// Use another value than the file's, such as gait.frequency_hz=1.1; may be given again.
    ///
    /// Keys are dotted as in the file, list items count from 0: `body.length_m[3]=0.1`.
    #[arg(long = "set", value_name = "KEY=VALUE", value_parser = Override::parse)]
    pub sets: Vec<Override>,
}

/// What turns the joints.
#[derive(Debug, Clone, Copy, PartialEq, Eq, clap::ValueEnum)]
pub enum Joints {
    /// They follow the gait exactly, whatever torque that takes.
    Commanded,
    /// Their servos do as well as they can, on the battery's voltage, with the commands of
    /// `[firmware] update_hz`; a joint without a servo follows the gait.
    Driven,
}
