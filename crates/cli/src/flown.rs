//! A design that has flown, with all that is told of it.

use undulift_design::Design;
use undulift_flight::{Bands, Doubt, End, Flight, Summary};

use crate::driven::Driven;
use crate::joints;
use crate::launches::Launches;

/// A design that has flown.
pub struct Flown {
    pub design: Design,
    pub flight: Flight,
    pub summary: Summary,
    pub bands: Bands,
    pub doubts: Vec<Doubt>,
    pub missed: Vec<Missed>,
    pub joints_missed: Vec<joints::Missed>,
    pub launches: Option<Launches>,
    pub driven: Option<Driven>,
}

/// A limit that a flight missed.
#[derive(Debug, Clone)]
pub enum Missed {
    NotLanded { end: End, time_s: f64 },
    Roll { peak_deg: f64, limit_deg: f64 },
    Pitch { peak_deg: f64, limit_deg: f64 },
}

impl Missed {
    pub fn in_words(&self) -> String {
        match self {
            Self::NotLanded { end: End::Inverted, time_s } => {
                format!("it turned over {time_s:.2} s after release")
            }
            Self::NotLanded { time_s, .. } => {
                format!("it was still in the air after {time_s:.1} s")
            }
            Self::Roll { peak_deg, limit_deg } => {
                format!(
                    "it rolled by {peak_deg:.1}°, more than the {limit_deg:.1}° of [limits] tilt_deg"
                )
            }
            Self::Pitch { peak_deg, limit_deg } => format!(
                "it pitched by {peak_deg:.1}°, more than the {limit_deg:.1}° of [limits] tilt_deg"
            ),
        }
    }
}
