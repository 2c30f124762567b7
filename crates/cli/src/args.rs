use std::path::PathBuf;

use clap::{Parser, Subcommand};
use undulift_design::Override;

use crate::driven::FaultAsked;

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

/// Tune numbers of a design: of all that keep what is required, find those that do best at what is
/// wanted.
///
/// What may vary, what is wanted and what is required stands in the design's `[search]`, or without
/// that heading in a file of its own. Required without being asked: that it lands, and what `fly`
/// and `budget` end with status 1 for (tilt, joint travel, torque factor, speed, heat, currents);
/// a limit of the search's own on the same side of a quantity replaces the design's, and
/// `limits = "ignored"` leaves all of them out but the landing.
///
/// The folder gets best.toml, which flies from where it stands, history.csv with every evaluation,
/// run.json and what is needed to go on. Ctrl-C ends after the generation under way, with status 130;
/// what was killed goes on as well, and comes to the same. Exit status 1 means that nothing found
/// keeps all that is required; best.toml is then what misses least.
#[derive(Debug, clap::Args)]
#[command(after_long_help = "Examples:
  undulift tune designs/reed-16.toml designs/search-reed-16.toml --out tuned
  undulift tune mine.toml --out tuned --evaluations 20000 --seed 7
  undulift tune --resume tuned
  undulift fly tuned/best.toml && undulift budget tuned/best.toml")]
pub struct Tune {
    /// A design file (TOML).
    #[arg(value_name = "DESIGN", required_unless_present = "resume")]
    pub design: Option<PathBuf>,

    /// What to search for (TOML) [default: the design's own `[search]`].
    #[arg(value_name = "SEARCH")]
    pub search: Option<PathBuf>,

    /// The folder for all that is found; it is made, and must not hold anything yet.
    #[arg(long, value_name = "FOLDER", required_unless_present = "resume")]
    pub out: Option<PathBuf>,

    /// Go on with the search of this folder where it was ended or killed.
    #[arg(long, value_name = "FOLDER",
        conflicts_with_all = ["design", "search", "out", "evaluations", "seed", "sets"])]
    pub resume: Option<PathBuf>,

    /// How many candidates to try [default: as the search says, else 6000].
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u32).range(1..=10_000_000))]
    pub evaluations: Option<u32>,

    /// Seed of candidates and launches: the same seed comes to the same.
    #[arg(long, value_name = "S", default_value_t = 1)]
    pub seed: u64,

    /// Threads to fly on [default: all cores]; the result is the same.
    #[arg(long, value_name = "T", value_parser = clap::value_parser!(u16).range(1..=1024))]
    pub threads: Option<u16>,

    /// Don't ask how the best moves and what holds it back, which takes some short searches more.
    #[arg(long)]
    pub brief: bool,

    /// Print JSON.
    #[arg(long)]
    pub json: bool,

    /// Use another value than the file's, such as gait.frequency_hz=1.1; may be given again.
    #[arg(long = "set", value_name = "KEY=VALUE", value_parser = Override::parse)]
    pub sets: Vec<Override>,
}

/// Write the gait as a table for firmware: whole numbers at equal steps, checked before anything is
/// written.
///
/// A table has three blocks: a start, the loop that repeats, and a return to straight. Exit status 1
/// means that it was refused and nothing written: a joint is asked for more than its travel, its
/// servo's speed at the battery's voltage or its pulses, the table doesn't fit, or no table keeps
/// within --tolerance.
#[derive(Debug, clap::Args)]
#[command(after_long_help = "Examples:
  undulift table designs/reed-16.toml --format csv --out reed.csv
  undulift table designs/reed-16.toml --steps 32 --format c --out reed.h --flash-kb 8
  undulift table designs/reed-16.toml --tolerance 1% --format c --out reed.h --trade trade.csv
  undulift table designs/reed-16.toml --format json --out reed.json --clock 1.02 --late 3")]
pub struct Table {
    /// A design file (TOML).
    #[arg(value_name = "DESIGN")]
    pub design: PathBuf,

    /// Rows a second, above 0 and at most 10000; a period must be a whole number of them.
    #[arg(long, value_name = "HZ", group = "rows", value_parser = rate_hz,
        allow_negative_numbers = true)]
    pub rate: Option<f64>,

    /// Rows a period, 2 to 65535 [default: as many as pulses come in a period].
    #[arg(long, value_name = "N", group = "rows",
        value_parser = clap::value_parser!(u32).range(2..=65_535))]
    pub steps: Option<u32>,

    /// Find the coarsest table whose glide ratio stays so near: 1%, or 0.01.
    #[arg(long, value_name = "P%", group = "rows", value_parser = share)]
    pub tolerance: Option<f64>,

    /// What to write.
    #[arg(long, value_enum)]
    pub format: TableFormat,

    /// Where to; of a csv, FILE-start and FILE-stop hold start and return. Files that exist are
    /// replaced.
    #[arg(long, value_name = "FILE")]
    pub out: PathBuf,

    /// What numbers are in [default: deg in csv and json, rad in joint-trajectory; in c pulses where
    /// every axis has a servo, else cdeg].
    ///
    /// Pulses, and all of c, are by channel as `[wiring]` says, signs and offsets in; the rest are
    /// angles of joints.
    #[arg(long, value_enum)]
    pub unit: Option<TableUnit>,

    /// One count, in the unit [default: 0.01 deg, 1 cdeg, 0.0001 rad, 1 us].
    #[arg(long, value_name = "R", value_parser = resolution, conflicts_with = "tolerance")]
    pub resolution: Option<f64>,

    /// How the firmware goes from row to row; held rows are flown with servos.
    #[arg(long, value_enum, default_value_t = Between::Linear)]
    pub between: Between,

    /// Length of start and return, s [default: as short as the servos allow; the start of a gait
    /// that is held at release is its own].
    #[arg(long, value_name = "S", value_parser = wait_s)]
    pub start_s: Option<f64>,

    /// From the trigger to the first motion, s [default: the gait's own, or 0].
    #[arg(long, value_name = "S", value_parser = wait_s)]
    pub delay_s: Option<f64>,

    /// Room for the table's numbers, KB of 1024 bytes.
    #[arg(long, value_name = "K", value_parser = flash_kb)]
    pub flash_kb: Option<f64>,

    /// Between a servo's pulses, ms: rows can't be closer [default: `[firmware] update_hz`, or 20].
    #[arg(long, value_name = "MS", value_parser = frame_ms)]
    pub frame_ms: Option<f64>,

    /// With --tolerance: write what every table tried comes to, as CSV.
    #[arg(long, value_name = "FILE.csv", requires = "tolerance")]
    pub trade: Option<PathBuf>,

    /// Fly it with one channel late by a row, too.
    #[arg(long, value_name = "CHANNEL")]
    pub late: Option<u8>,

    /// Fly it with every Nth row lost, the row before it standing in, too.
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u32).range(2..=1000))]
    pub drop_every: Option<u32>,

    /// Fly it with a clock that runs this many times as fast, too.
    #[arg(long, value_name = "TIMES", value_parser = clock)]
    pub clock: Option<f64>,

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

/// What a table is written as.
#[derive(Debug, Clone, Copy, PartialEq, Eq, clap::ValueEnum)]
pub enum TableFormat {
    /// Comma-separated values, a file for each block.
    Csv,
    /// A C99 header with the numbers and their reader.
    C,
    /// trajectory_msgs/JointTrajectory messages, as YAML.
    JointTrajectory,
    /// One object.
    Json,
}

/// What a table's numbers are in.
#[derive(Debug, Clone, Copy, PartialEq, Eq, clap::ValueEnum)]
pub enum TableUnit {
    /// Degrees.
    Deg,
    /// Hundredths of a degree.
    Cdeg,
    /// Radians.
    Rad,
    /// Pulse microseconds.
    Us,
}

/// How firmware goes from row to row.
#[derive(Debug, Clone, Copy, PartialEq, Eq, clap::ValueEnum)]
pub enum Between {
    /// In straight lines.
    Linear,
    /// Each row stands until the next.
    Hold,
}

/// Plan drop tests in a hall: where drops and faults end, whether the hall holds them, and a ladder of
/// release heights.
///
/// Thousands of drops from the hall's highest release, each a little different, some of them with
/// faults. Exit status 1 means that something doesn't fit: hall, catch, ladder or people; the reason
/// and a remedy are told. A plan is no permission: read safety/README.md first.
#[derive(Debug, clap::Args)]
#[command(after_long_help = "Examples:
  undulift drop designs/reed-16.toml designs/hall-gantry.toml
  undulift drop designs/reed-16.toml designs/hall-gantry.toml --flights 5000 --csv drops.csv")]
pub struct Drop {
    /// A design file (TOML).
    #[arg(value_name = "DESIGN")]
    pub design: PathBuf,

    /// A hall file (TOML), such as designs/hall-gantry.toml.
    #[arg(value_name = "HALL")]
    pub hall: PathBuf,

    /// How many drops from the highest release, faults included.
    #[arg(long, value_name = "N", default_value_t = 2000,
        value_parser = clap::value_parser!(u32).range(10..=1_000_000))]
    pub flights: u32,

    /// Seed of the drops: the same seed gives the same drops.
    #[arg(long, value_name = "S", default_value_t = 1)]
    pub seed: u64,

    /// Threads to fly on [default: all cores]; the result is the same.
    #[arg(long, value_name = "T", value_parser = clap::value_parser!(u16).range(1..=1024))]
    pub threads: Option<u16>,

    /// Write every drop from the highest release as a row of CSV.
    #[arg(long, value_name = "FILE.csv")]
    pub csv: Option<PathBuf>,

    /// Print JSON.
    #[arg(long)]
    pub json: bool,

    /// Use another value than the design's, such as gait.frequency_hz=1.1; may be given again.
    #[arg(long = "set", value_name = "KEY=VALUE", value_parser = Override::parse)]
    pub sets: Vec<Override>,
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

fn load_factor(text: &str) -> Result<f64, String> {
    within(text, [-1000.0, 1000.0])
}

fn seconds(text: &str) -> Result<f64, String> {
    within(text, [0.0, 1e6])
}

fn within(text: &str, [low, high]: [f64; 2]) -> Result<f64, String> {
    let value: f64 = text.parse().map_err(|_| "it must be a number".to_owned())?;
    if (low..=high).contains(&value) {
        Ok(value)
    } else {
        Err(format!("it must be from {low} to {high}"))
    }
}

/// More rows than this would fill a disk rather than tell something.
const LEAST_EVERY_MS: f64 = 1e-3;

fn every_ms(text: &str) -> Result<f64, String> {
    within(text, [LEAST_EVERY_MS, 1e6])
}

fn rate_hz(text: &str) -> Result<f64, String> {
    above_0(text, 10_000.0)
}

fn resolution(text: &str) -> Result<f64, String> {
    within(text, [1e-6, 1e4])
}

fn wait_s(text: &str) -> Result<f64, String> {
    within(text, [0.0, 60.0])
}

fn flash_kb(text: &str) -> Result<f64, String> {
    above_0(text, 1e6)
}

fn frame_ms(text: &str) -> Result<f64, String> {
    above_0(text, 1000.0)
}

fn clock(text: &str) -> Result<f64, String> {
    within(text, [0.5, 2.0])
}

/// A share, as such or in percent.
fn share(text: &str) -> Result<f64, String> {
    let percent = text.strip_suffix('%');
    let value: f64 = percent
        .unwrap_or(text)
        .trim()
        .parse()
        .map_err(|_| "it must be a number, with % or as a share of 1".to_owned())?;
    let share = if percent.is_some() { value / 100.0 } else { value };
    if share > 0.0 && share <= 0.5 {
        Ok(share)
    } else {
        Err("it must be above 0 and at most 50%".into())
    }
}

fn above_0(text: &str, most: f64) -> Result<f64, String> {
    let value: f64 = text.parse().map_err(|_| "it must be a number".to_owned())?;
    if value > 0.0 && value <= most {
        Ok(value)
    } else {
        Err(format!("it must be above 0 and at most {most}"))
    }
}
