//! Limits that a flight misses, beside those of its servos.

use undulift_design::Design;
use undulift_flight::{End, Flight, Summary};

use crate::travel::beyond_travel;

/// A last cycle flatter than this, flown forward, is called a glide.
const GLIDE: f64 = 0.5;

/// A limit that is missed, in words, with how many times over.
pub(crate) type Missed = (String, f64);

/// What keeps a flight from being an upright glide within the design's tilt.
pub(crate) fn of_flight(design: &Design, summary: &Summary) -> Vec<Missed> {
    let mut missed = Vec::new();
    match summary.end {
        End::Inverted => {
            missed.push((format!("turned over after {:.2} s", summary.time_s), f64::INFINITY));
        }
        End::TimeUp => missed.push(("never landed".into(), f64::INFINITY)),
        End::Landed if summary.forward_airspeed_m_s <= 0.0 => {
            missed.push(("flew tail first".into(), f64::INFINITY));
        }
        End::Landed => match summary.last_cycle_glide_ratio {
            Some(ratio) if ratio >= GLIDE => {}
            Some(ratio) => missed.push((
                format!("last cycle's glide ratio {ratio:.2}, below {GLIDE:.2}"),
                GLIDE / ratio,
            )),
            None => missed.push(("no cycle to judge a glide by".into(), f64::INFINITY)),
        },
    }
    let limit_rad = design.limits.tilt_rad;
    for (word, peak_rad) in [("roll", summary.peak_roll_rad), ("pitch", summary.peak_pitch_rad)] {
        if peak_rad > limit_rad {
            let [peak_deg, limit_deg] = [peak_rad, limit_rad].map(f64::to_degrees);
            missed.push((
                format!("{peak_deg:.1}° of {word}, above {limit_deg:.1}°"),
                peak_rad / limit_rad,
            ));
        }
    }
    missed
}

/// Joints that are asked to go further than their travel.
pub(crate) fn of_travel(design: &Design, flight: &Flight) -> Vec<Missed> {
    let peaks = flight.commands().peaks(0.0, flight.time_s);
    let missed = beyond_travel(&design.glider.chain, &peaks);
    missed.map(|missed| (missed.to_string(), missed.times_over())).collect()
}
