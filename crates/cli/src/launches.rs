//! `undulift fly --launches`: the same design, let go many times.

use std::path::Path;

use serde_json::{Map, Value, json};
use undulift_design::quantities::{Quantity, of_flight};
use undulift_design::{Design, Scatter};
use undulift_flight::{Bands, End, FlightError, Settings, Spread, Summary, fly_driven, summary};

use crate::args::{Fly, Joints};
use crate::{driven, json, many, people, trace_file, whole_file};

/// Many launches of a design, flown.
pub struct Launches {
    pub seed: u64,
    pub landed_share: f64,
    /// Share landed that never turned over.
    pub upright_share: f64,
    /// Share landed without rolling or pitching beyond the design's limit.
    pub good_share: f64,
    /// Launches that could not be let go or followed.
    pub refused: usize,
    /// Percentiles by the key of what is printed.
    pub spread: Vec<(&'static str, Spread)>,
    names: Vec<String>,
    flown: Vec<Launched>,
}

/// One launch.
struct Launched {
    drawn: Vec<f64>,
    result: Result<Summary, FlightError>,
}

/// Flies a design as often as was asked.
pub fn fly_all(
    args: &Fly,
    n_launches: u32,
    design: &Design,
    settings: &Settings,
) -> anyhow::Result<Launches> {
    let scatter = Scatter::of(design);
    let threads = args.threads.map_or(0, usize::from);
    // Servos and battery may differ from launch to launch, what fails doesn't.
    let faults = driven::drives(args, design)?.faults;
    let driven = args.joints == Joints::Driven;
    let flown = many::each(n_launches, threads, &design.name, |launch| {
        let (changed, drawn) = scatter.launch(design, args.seed, launch);
        let drives = changed.drives(driven, faults.clone());
        let flight = fly_driven(&changed.glider, &drives, settings);
        let result = flight.map(|mut flight| summary(&changed.glider, &mut flight));
        Launched { drawn, result }
    })?;
    Ok(Launches::new(design, args.seed, scatter.columns(), flown))
}

impl Launches {
    fn new(design: &Design, seed: u64, names: Vec<String>, flown: Vec<Launched>) -> Self {
        let summaries: Vec<&Summary> =
            flown.iter().filter_map(|flown| flown.result.as_ref().ok()).collect();
        let share = |fits: &dyn Fn(&Summary) -> bool| {
            let fitting = summaries.iter().filter(|summary| fits(summary)).count();
            fitting as f64 / flown.len().max(1) as f64
        };
        let landed = |summary: &Summary| summary.end == End::Landed;
        let upright = |summary: &Summary| landed(summary) && !summary.inverted;
        let tilt = |summary: &Summary| summary.peak_roll_rad.max(summary.peak_pitch_rad);
        let limit_rad = design.limits.tilt_rad;
        Self {
            seed,
            landed_share: share(&landed),
            upright_share: share(&upright),
            good_share: share(&|summary| upright(summary) && tilt(summary) <= limit_rad),
            refused: flown.len() - summaries.len(),
            spread: spread(&summaries),
            names,
            flown,
        }
    }

    /// Percentiles of one printed quantity.
    pub fn of(&self, key: &str) -> Option<&Spread> {
        self.spread.iter().find(|(name, _)| *name == key).map(|(_, spread)| spread)
    }

    /// The two keys that JSON gains.
    pub fn put_into(&self, object: &mut Map<String, Value>) {
        let spread =
            self.spread.iter().map(|(key, spread)| ((*key).to_owned(), json::percentiles(spread)));
        object.insert("launches".into(), json!(self.flown.len()));
        object.insert("seed".into(), json!(self.seed));
        object.insert("spread".into(), Value::Object(spread.collect()));
        object.insert("landed_share".into(), json!(self.landed_share));
        object.insert("upright_share".into(), json!(self.upright_share));
        object.insert("good_share".into(), json!(self.good_share));
        object.insert("refused".into(), json!(self.refused));
    }

    /// Lines for people.
    pub fn answer(&self, tilt_limit_deg: f64) -> String {
        let mut text = format!("  {}, seed {}\n", counted(self.flown.len()), self.seed);
        let mut line = |label: &str, value: String| people::line(&mut text, label, &value);
        let percent = |share: f64| format!("{:.1} %", 100.0 * share);
        line(
            "Landed upright",
            format!(
                "{}, {} within {tilt_limit_deg:.0}° of tilt",
                percent(self.upright_share),
                percent(self.good_share)
            ),
        );
        if self.refused > 0 {
            line(
                "Not let go",
                format!(
                    "{}: on the floor or inverted at release, or too fast to follow",
                    counted(self.refused)
                ),
            );
        }
        let rows = [
            ("Glide ratio", "glide_ratio", "", 2),
            ("  last cycle", "last_cycle_glide_ratio", "", 2),
            ("Distance", "distance_m", " m", 2),
            ("To the left", "side_drift_m", " m", 2),
            ("Time", "time_s", " s", 2),
            ("Along the body", "forward_airspeed_m_s", " m/s", 1),
            ("Sink at the end", "sink_m_s", " m/s", 1),
            ("Largest roll", "peak_roll_deg", "°", 1),
            ("Largest pitch", "peak_pitch_deg", "°", 1),
        ];
        line("", people::percentile_names());
        for (label, key, unit, digits) in rows {
            if let Some(spread) = self.of(key) {
                line(label, people::percentiles(spread, digits, unit));
            }
        }
        text
    }

    /// Writes a row for each launch: what was drawn, and how it went.
    pub fn write(&self, path: &Path) -> anyhow::Result<()> {
        whole_file::write(path, |file| {
            let mut table = csv::Writer::from_writer(file);
            // A launch that could not fly has no more to tell than that.
            let any = self.flown.iter().find_map(|flown| flown.result.as_ref().ok());
            let keys: Vec<&str> = match any {
                Some(summary) => quantities(summary).into_iter().map(|(key, _)| key).collect(),
                None => vec!["end"],
            };
            let drawn = self.names.iter().map(String::as_str);
            table.write_record(["launch"].into_iter().chain(drawn).chain(keys.iter().copied()))?;
            for (launch, flown) in self.flown.iter().enumerate() {
                let drawn = flown.drawn.iter().map(|&value| trace_file::number(value));
                let row = [(launch + 1).to_string()].into_iter().chain(drawn);
                table.write_record(row.chain(cells(&flown.result, keys.len())))?;
            }
            table.flush()?;
            Ok(())
        })
    }
}

/// So many launches.
pub fn counted(launches: usize) -> String {
    if launches == 1 { "1 launch".into() } else { format!("{launches} launches") }
}

/// What is printed of a flight, without the bands, which many launches leave out.
fn quantities(summary: &Summary) -> Vec<(&'static str, Quantity)> {
    let without = Bands { alpha_rad: None, reynolds: None, stretched: Vec::new() };
    let all = of_flight(summary, &without).into_iter();
    all.filter(|(key, _)| !["alpha_deg", "reynolds"].contains(key)).collect()
}

fn cells(result: &Result<Summary, FlightError>, n_columns: usize) -> Vec<String> {
    let Ok(summary) = result else {
        let mut cells = vec![String::new(); n_columns];
        cells[0] = "refused".into();
        return cells;
    };
    let cell = |(_, quantity)| match quantity {
        Quantity::Number(value) => trace_file::number(value),
        Quantity::Word(word) => word.to_owned(),
        Quantity::None | Quantity::Band(_) => String::new(),
    };
    quantities(summary).into_iter().map(cell).collect()
}

/// Percentiles of every quantity that is a number in some flight.
fn spread(summaries: &[&Summary]) -> Vec<(&'static str, Spread)> {
    let rows: Vec<_> = summaries.iter().map(|summary| quantities(summary)).collect();
    let keys = rows.first().into_iter().flatten().map(|(key, _)| *key).enumerate();
    keys.filter_map(|(column, key)| {
        let values = rows.iter().filter_map(|row| match row[column].1 {
            Quantity::Number(value) => Some(value),
            _ => None,
        });
        Some((key, Spread::of(values.collect())?))
    })
    .collect()
}
