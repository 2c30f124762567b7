//! How many drops tell something, in metres of this robot in this hall.

use serde_json::{Value, json};
use undulift_droptest::{DropError, drops_for_mean, drops_to_tell_apart, most_failing_share};

use crate::args;
use crate::people::line;

/// How often a difference is seen where there is none.
const LEVEL: f64 = 0.05;
/// Drops without failure that many have time for.
const FEW: usize = 10;
/// Without failure, these show that at most 5 % fail, at 95 % confidence.
const FOR_FIVE_PERCENT: usize = 59;

/// Counts, and what they are for.
pub struct HowMany {
    /// From drop to drop of one robot, m.
    sd_m: f64,
    within_m: f64,
    for_mean: Result<usize, DropError>,
    difference_m: f64,
    power: f64,
    to_tell_apart: Result<usize, DropError>,
}

impl HowMany {
    /// From the highest release; nothing where too few drops were flown to say how they scatter.
    pub fn of(args: &args::Drop, sd_m: Option<f64>) -> Option<Self> {
        // What doesn't scatter at all is still measured by hand.
        let sd_m = sd_m?.max(1e-3);
        let within_m = args.within_m.unwrap_or(0.5 * sd_m);
        let difference_m = args.difference_m.unwrap_or(sd_m);
        Some(Self {
            sd_m,
            within_m,
            for_mean: drops_for_mean(within_m / sd_m),
            difference_m,
            power: args.power,
            to_tell_apart: drops_to_tell_apart(difference_m / sd_m, LEVEL, args.power),
        })
    }

    /// For people.
    pub fn answer(&self, text: &mut String) {
        let count = |drops: &Result<usize, DropError>| match drops {
            Ok(drops) => drops.to_string(),
            Err(_) => "more than 100 000".into(),
        };
        let Self { sd_m, within_m, difference_m, power, .. } = self;
        let mean = format!(
            "distances of one robot scatter by {sd_m:.2} m (sd); {} drops give their mean to ±{within_m:.2} m",
            count(&self.for_mean)
        );
        line(text, "How many drops", &mean);
        let apart = format!(
            "{} each tell two gaits apart by {difference_m:.2} m (level {LEVEL}, power {power})",
            count(&self.to_tell_apart)
        );
        line(text, "", &apart);
        let failing = format!(
            "none failed in {FEW}: at most {:.0} % fail, at 95 % confidence; in {FOR_FIVE_PERCENT}: at most 5 %",
            100.0 * most_failing_share(FEW)
        );
        line(text, "", &failing);
    }

    /// For scripts.
    pub fn object(&self) -> Value {
        let none_failed =
            |drops| json!({ "drops": drops, "most_failing_share": most_failing_share(drops) });
        json!({
            "distance_sd_m": self.sd_m,
            "for_mean": { "within_m": self.within_m, "drops": self.for_mean.as_ref().ok() },
            "to_tell_apart": {
                "difference_m": self.difference_m,
                "level": LEVEL,
                "power": self.power,
                "drops_each": self.to_tell_apart.as_ref().ok(),
            },
            "none_failed": [none_failed(FEW), none_failed(FOR_FIVE_PERCENT)],
        })
    }
}
