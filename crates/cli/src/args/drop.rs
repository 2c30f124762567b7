//! `undulift drop`: its arguments.

use std::path::PathBuf;

use undulift_design::Override;

use super::numbers::{metres, power};

/// Plan drop tests in a hall: where drops and faults end, whether the hall holds them, and a ladder of
/// release heights.
///
/// Thousands of drops from the hall's highest release, each a little different, some of them with
/// faults. Exit status 1 means that something doesn't fit: hall, catch, ladder or people; the reason
/// and a remedy are told. A plan is no permission: read safety/README.md first.
#[derive(Debug, clap::Args)]
#[command(after_long_help = "Examples:
  undulift drop designs/reed-16.toml designs/hall-gantry.toml
  undulift drop designs/reed-16.toml designs/hall-gantry.toml --flights 5000 --csv drops.csv
  undulift drop designs/reed-16.toml designs/hall-gantry.toml --seen seen.csv
  undulift drop designs/reed-16.toml designs/hall-gantry.toml --sheet sheet.html")]
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

    /// Say go on or stop by what was measured at the heights so far: a CSV file, one row a drop, with
    /// height_m, distance_m, side_m, time_s, peak_tilt_deg and ended (landed, inverted, missed_catch,
    /// touched or failed); cells that weren't measured stay empty.
    #[arg(long, value_name = "FILE.csv")]
    pub seen: Option<PathBuf>,

    /// Write the test sheet to print and take to the hall: FILE.html, or FILE.md for Markdown; may be
    /// given again.
    #[arg(long = "sheet", value_name = "FILE")]
    pub sheets: Vec<PathBuf>,

    /// Tell how many drops each tell two gaits apart by so many metres of distance [default: one standard
    /// deviation].
    #[arg(long, value_name = "M", value_parser = metres, allow_hyphen_values = true)]
    pub difference_m: Option<f64>,

    /// How often that difference is to be seen, where it is there.
    #[arg(long, value_name = "P", default_value_t = 0.8, value_parser = power,
        allow_hyphen_values = true)]
    pub power: f64,

    /// Tell how many drops give the mean distance to ± so many metres [default: half a standard
    /// deviation].
    #[arg(long, value_name = "M", value_parser = metres, allow_hyphen_values = true)]
    pub within_m: Option<f64>,

    /// Print JSON.
    #[arg(long)]
    pub json: bool,

    /// Use another value than the design's, such as gait.frequency_hz=1.1; may be given again.
    #[arg(long = "set", value_name = "KEY=VALUE", value_parser = Override::parse)]
    pub sets: Vec<Override>,
}
