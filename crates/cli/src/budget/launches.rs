//! Many launches of a design, each with its budget.

use std::fmt::Write;

use serde_json::{Map, Value, json};
use undulift_design::{Design, Scatter};
use undulift_flight::{End, Spread};

use super::asking::{Judged, in_flight};
use crate::args::Budget as Args;
use crate::{json, launches::counted, many, people};

/// What is told of a launch, with label, unit and digits; without a label only scripts get it.
const FIGURES: [(&str, &str, &str, usize); 8] = [
    ("least_margin", "Least margin", "", 2),
    ("battery.peak_current_a", "Battery gives", " A", 1),
    ("battery.least_voltage_v", "  at least", " V", 2),
    ("battery.energy_j_per_drop", "Energy a drop", " J", 1),
    ("battery.drops_per_charge", "Drops a charge", "", 0),
    ("battery.regulator_peak_current_a", "Regulator gives", " A", 1),
    ("hinge_force_n", "Hinges carry", " N", 2),
    ("hinge_moment_nm", "  and", " N·m", 3),
];

/// Many launches of a design, flown and judged.
pub struct Launches {
    seed: u64,
    number: usize,
    passing_share: f64,
    landed_share: f64,
    /// Launches that could not be let go or followed.
    refused: usize,
    spread: Vec<Option<Spread>>,
    /// Of each axis: peak torque, N·m, and least margin.
    pub axes: Vec<[Option<Spread>; 2]>,
}

/// One launch that flew.
struct Launched {
    passes: bool,
    landed: bool,
    figures: [Option<f64>; FIGURES.len()],
    axes: Vec<[Option<f64>; 2]>,
}

impl Launches {
    /// Flies and judges them, each on its own.
    pub fn fly(design: &Design, number: u32, args: &Args) -> anyhow::Result<Self> {
        let scatter = Scatter::of(design);
        let threads = args.threads.map_or(0, usize::from);
        let launched = many::each(number, threads, &design.name, |launch| {
            let (changed, _) = scatter.launch(design, args.seed, launch);
            in_flight(&changed, args).ok().map(|judged| Launched::of(&judged))
        })?;
        let flown: Vec<Launched> = launched.into_iter().flatten().collect();
        let share = |fits: fn(&Launched) -> bool| {
            flown.iter().filter(|launched| fits(launched)).count() as f64 / f64::from(number)
        };
        let percentiles = |figure: &dyn Fn(&Launched) -> Option<f64>| {
            Spread::of(flown.iter().filter_map(figure).collect())
        };
        let n_axes = flown.first().map_or(0, |launched| launched.axes.len());
        let of_axis = |axis: usize, which: usize| percentiles(&|one| one.axes[axis][which]);
        Ok(Self {
            seed: args.seed,
            number: number as usize,
            passing_share: share(|launched| launched.passes),
            landed_share: share(|launched| launched.landed),
            refused: number as usize - flown.len(),
            spread: (0..FIGURES.len()).map(|at| percentiles(&|one| one.figures[at])).collect(),
            axes: (0..n_axes).map(|axis| [0, 1].map(|which| of_axis(axis, which))).collect(),
        })
    }

    /// Keys that JSON gains.
    pub fn put_into(&self, object: &mut Map<String, Value>) {
        let known = FIGURES.iter().zip(&self.spread);
        let spread = known.filter_map(|((key, ..), spread)| {
            Some(((*key).to_owned(), json::percentiles(&(*spread)?)))
        });
        object.insert("launches".into(), json!(self.number));
        object.insert("seed".into(), json!(self.seed));
        object.insert("spread".into(), Value::Object(spread.collect()));
        object.insert("passing_share".into(), json!(self.passing_share));
        object.insert("landed_share".into(), json!(self.landed_share));
        object.insert("refused".into(), json!(self.refused));
    }

    /// Lines for people.
    pub fn answer(&self) -> String {
        let mut text = format!("  {}, seed {}\n", counted(self.number), self.seed);
        let mut line = |label: &str, value: String| people::line(&mut text, label, &value);
        let percent = |share: f64| format!("{:.1} %", 100.0 * share);
        let landed = percent(self.landed_share);
        line("Pass", format!("{}; {landed} land upright", percent(self.passing_share)));
        if self.refused > 0 {
            let why = "on the floor or inverted at release, or too fast to follow";
            line("Not let go", format!("{}: {why}", counted(self.refused)));
        }
        line("", people::percentile_names());
        for ((_, label, unit, digits), spread) in FIGURES.iter().zip(&self.spread) {
            if let Some(spread) = spread {
                line(label, people::percentiles(spread, *digits, unit));
            }
        }
        text
    }

    /// A table over the joints.
    pub fn joints(&self, judged: &Judged) -> String {
        let mut text = "    joint         peak N·m, 95 % below   margin, 95 % above\n".to_owned();
        for (of, [peak, margin]) in judged.axes.iter().zip(&self.axes) {
            let or_none = |value: Option<f64>, digits: usize| match value {
                Some(value) => format!("{value:.digits$}"),
                None => "-".into(),
            };
            // Writing to a string can't fail.
            let _ = writeln!(
                text,
                "    {:>3} {:<7}   {:>20}{:>21}",
                of.joint_idx + 1,
                of.axis.word(),
                or_none(peak.map(|spread| spread.p95), 3),
                or_none(margin.map(|spread| spread.p05), 2)
            );
        }
        text
    }
}

impl Launched {
    fn of(judged: &Judged) -> Self {
        let asked = &judged.asked;
        let hinges = asked.hinges.iter().copied().reduce(|a, b| a.most(b));
        let battery = asked.budget.battery;
        let figures = [
            asked.budget.least_margin,
            battery.and_then(|battery| battery.peak_current_a),
            battery.and_then(|battery| battery.least_voltage_v),
            battery.and_then(|battery| battery.energy_j_per_drop),
            battery.and_then(|battery| battery.drops_per_charge),
            battery.and_then(|battery| battery.regulator_peak_current_a),
            hinges.map(|hinge| hinge.force_n),
            hinges.map(|hinge| hinge.moment_nm),
        ];
        let axes = asked.budget.axes.iter();
        Self {
            passes: judged.passes(),
            landed: judged.end() == Some(End::Landed),
            figures,
            axes: axes.map(|axis| [Some(axis.peak_torque_nm), axis.least_margin]).collect(),
        }
    }
}
