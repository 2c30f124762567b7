//! `undulift budget`: its arguments.

use std::path::PathBuf;

use undulift_design::Override;

use super::numbers::{every_ms, load_factor, seconds};

/// Ask whether the servos can do it: torque, speed, power, heat and battery, joint by joint.
///
/// By default over the flight; or at rest on the bench: held out level and straight, in the shape
/// of its release, or in the poses of a file. Exit status 1 means that a limit is missed: the
/// torque factor of `[limits]`, a servo's speed, heat or travel, the battery's or its regulator's
/// current. With --launches the single design launch decides it, too.
#[derive(Debug, clap::Args)]
#[command(after_long_help = "Examples:
  undulift budget designs/reed-16.toml
  undulift budget designs/reed-16.toml --launches 50 --seed 7
  undulift budget designs/reed-16.toml --case held-out --clamp 8 --load-factor 3
  undulift budget designs/reed-16.toml --case release --at-s 0.4 --clamp 8
  undulift fly designs/reed-16.toml --trace poses.csv &&
    undulift budget designs/reed-16.toml --case poses.csv --clamp 8
  undulift budget designs/reed-16.toml --drops 10 --rest-s 60 --histories torques.csv")]
pub struct Budget {
    /// A design file (TOML).
    #[arg(value_name = "DESIGN")]
    pub design: PathBuf,

    /// What the joints bear: flight, held-out, release, or a CSV file of poses.
    ///
    /// flight: the design's flight. held-out: level and straight, held by --clamp. release: the
    /// shape and attitude of its release, held by the grip or --clamp. A file holds one pose a row,
    /// each held still by --clamp: columns yaw_1_deg, pitch_1_deg and so on for the axes that there
    /// are, and if you like roll_deg and pitch_deg of the body, which is level without them. Other
    /// columns are left unread, so that a trace of `fly` serves, too. At most 100000 rows.
    #[arg(long, value_name = "CASE", default_value = "flight")]
    pub case: Case,

    /// The segment that holds the body on the bench, from 1 at the head; in the shape of its
    /// release it is the grip's unless given.
    #[arg(long, value_name = "SEGMENT", value_parser = clap::value_parser!(u32).range(1..=128))]
    pub clamp: Option<u32>,

    /// With --case release: hold the shape that the gait has this long after release, s.
    #[arg(long, value_name = "T", value_parser = seconds)]
    pub at_s: Option<f64>,

    /// Weights for each newton of weight on the bench, more than 1 for being caught.
    #[arg(long, value_name = "G", default_value_t = 1.0, value_parser = load_factor)]
    pub load_factor: f64,

    /// Drops one after another, for the heat.
    #[arg(long, value_name = "N", default_value_t = 1,
        value_parser = clap::value_parser!(u32).range(1..=100_000))]
    pub drops: u32,

    /// Rest between drops, s.
    #[arg(long, value_name = "S", default_value_t = 0.0, value_parser = seconds)]
    pub rest_s: f64,

    /// Make the budget of this many launches more, each a little different.
    ///
    /// What differs stands in the design's `[spread]`, as for `undulift fly --launches`. At most
    /// 100000.
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u32).range(1..=100_000))]
    pub launches: Option<u32>,

    /// Seed of the launches: the same seed gives the same launches.
    #[arg(long, value_name = "S", default_value_t = 1, requires = "launches")]
    pub seed: u64,

    /// Threads to fly the launches on [default: all cores]; the result is the same.
    #[arg(long, value_name = "T", requires = "launches",
        value_parser = clap::value_parser!(u16).range(1..=1024))]
    pub threads: Option<u16>,

    /// Add a table of what each hinge carries at most.
    #[arg(long)]
    pub hinges: bool,

    /// Write joint torques (rotor inertia left out), speeds and what the hinges carry along the
    /// flight as CSV.
    #[arg(long, value_name = "FILE.csv")]
    pub histories: Option<PathBuf>,

    /// Time between rows of the histories, ms.
    #[arg(long, value_name = "MS", default_value_t = 5.0, requires = "histories",
        value_parser = every_ms)]
    pub every_ms: f64,

    /// Relative and absolute tolerance of the integration, from 1e-13 to 1e-2.
    #[arg(long, value_name = "TOL", default_value = "1e-6")]
    pub tolerance: f64,

    /// Print JSON.
    #[arg(long)]
    pub json: bool,

    /// Use another value than the file's, such as gait.frequency_hz=1.1; may be given again.
    #[arg(long = "set", value_name = "KEY=VALUE", value_parser = Override::parse)]
    pub sets: Vec<Override>,
}

/// What the joints bear.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Case {
    /// The design's flight.
    Flight,
    /// Level and straight, held by --clamp.
    HeldOut,
    /// The shape and attitude of its release, held by the grip or --clamp.
    Release,
    /// Poses of a file, held by --clamp.
    File(PathBuf),
}

impl std::str::FromStr for Case {
    type Err = std::convert::Infallible;

    fn from_str(text: &str) -> Result<Self, Self::Err> {
        Ok(match text {
            "flight" => Self::Flight,
            "held-out" => Self::HeldOut,
            "release" => Self::Release,
            file => Self::File(file.into()),
        })
    }
}
