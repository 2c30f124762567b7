//! `undulift tune`: its arguments.

use std::path::PathBuf;

use undulift_design::Override;

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
