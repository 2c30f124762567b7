//! `undulift table`: its arguments.

use std::path::PathBuf;

use undulift_design::Override;

use super::numbers::{above_0, within};

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
