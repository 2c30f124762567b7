//! What to doubt about a flight's figures, each with its number.

use undulift_aero::Section;

use crate::bands::Stretched;
use crate::overlaps::{overlaps, overlaps_on_the_way};
use crate::{Bands, Flight, Glider, LastCycle, Outlook, Summary};

/// Reduced frequency above which quasi-steady loads lag what a wing would do. 0.1 is often quoted;
/// 0.05 is the stricter limit (Leishman, *Principles of Helicopter Aerodynamics*, from memory).
const QUASI_STEADY_LIMIT: f64 = 0.05;

/// Added mass over the robot's own above which leaving it out shows (our choice).
const ADDED_MASS_LIMIT: f64 = 0.05;

/// Speed lost over the last cycle, as height, over the height lost, above which its glide ratio
/// isn't a steady glide's (our choice).
const STEADY_SHARE: f64 = 0.1;

/// Share of the load below which a doubt isn't worth a line.
const WORTH_SAYING: f64 = 0.05;

/// Something that makes a figure less than certain.
#[derive(Debug, Clone, PartialEq)]
pub enum Doubt {
    /// Loads respond at once in the model; in air they lag.
    Unsteady {
        /// π f c̄/Ū.
        reduced_frequency: f64,
    },
    /// Coefficients were held constant below the lowest Reynolds number of a section's table.
    ReynoldsBelow {
        /// The section's name.
        section: String,
        /// That number.
        lowest: f64,
        /// Of the load, 0 to 1.
        share: f64,
    },
    /// The same, above the highest.
    ReynoldsAbove {
        /// The section's name.
        section: String,
        /// That number.
        highest: f64,
        /// Of the load, 0 to 1.
        share: f64,
    },
    /// Coefficients came from a completion rather than a measurement.
    NotMeasured {
        /// The section's name.
        section: String,
        /// Incidences between which it was measured, rad.
        measured_rad: [f64; 2],
        /// Of the load, 0 to 1.
        share: f64,
    },
    /// At the estimated glide speed a section is used outside its table's Reynolds numbers.
    ReynoldsOutside {
        /// The section's name.
        section: String,
        /// Lowest and highest of its table.
        known: [f64; 2],
        /// Lowest and highest that the body's chords meet.
        met: [f64; 2],
    },
    /// Only some of a section's rows were measured.
    PartlyMeasured {
        /// The section's name.
        section: String,
        /// Incidences between which they were, rad.
        measured_rad: [f64; 2],
    },
    /// Runs of the body half a wave apart lie close behind each other.
    NarrowGap {
        /// Mean distance along the body's axis, mean chords.
        chords: f64,
    },
    /// The last cycle was still a dive, or a climb out of one.
    NotSteady {
        /// What it came down and what its speed lost.
        last_cycle: LastCycle,
    },
    /// The air that moves with the body is left out.
    AddedMass {
        /// (π/4)ρΣc²L over the mass.
        ratio: f64,
    },
    /// Segments take the same space.
    Overlap {
        /// Counted from 1 at the head.
        segments: (usize, usize),
        /// When in the flight, s.
        at_s: f64,
        /// Pairs that overlap at some instant.
        pairs: usize,
    },
    /// Whether it stays upright hangs on the pressure centre, the number known least.
    PressureCentre {
        /// Name of the section.
        section: String,
        /// Assumed, fraction of the chord from the leading edge.
        assumed: f64,
    },
}

/// Collects what to doubt about a flight.
pub fn doubts(glider: &Glider, flight: &Flight, summary: &Summary, bands: &Bands) -> Vec<Doubt> {
    let mut doubts = Vec::new();
    if let Some(reduced_frequency) = summary.reduced_frequency.filter(|&k| k > QUASI_STEADY_LIMIT) {
        doubts.push(Doubt::Unsteady { reduced_frequency });
    }
    for (section, stretched) in glider.sections.iter().zip(&bands.stretched) {
        doubts.extend(stretched_doubts(section, stretched));
    }
    doubts.extend(
        summary
            .last_cycle
            .filter(|cycle| cycle.speed_height_m.abs() > STEADY_SHARE * cycle.drop_m.abs())
            .map(|last_cycle| Doubt::NotSteady { last_cycle }),
    );
    let ratio = added_mass_ratio(glider);
    if ratio > ADDED_MASS_LIMIT {
        doubts.push(Doubt::AddedMass { ratio });
    }
    doubts.extend(overlap(glider, flight));
    doubts.extend(foremost_pressure_centre(&glider.sections));
    doubts
}

/// Mean gap below which one run of the body flies in another's wake (our choice).
const NARROW_GAP_CHORDS: f64 = 2.0;

/// Collects what to doubt about flights of a glider before it flies.
pub fn doubts_ahead(glider: &Glider, outlook: &Outlook) -> Vec<Doubt> {
    let mut doubts = Vec::new();
    let fast = |&reduced: &f64| reduced > QUASI_STEADY_LIMIT;
    doubts.extend(
        outlook
            .reduced_frequency
            .filter(fast)
            .map(|reduced_frequency| Doubt::Unsteady { reduced_frequency }),
    );
    let narrow = outlook.gap_chords.filter(|&chords| chords < NARROW_GAP_CHORDS);
    doubts.extend(narrow.map(|chords| Doubt::NarrowGap { chords }));
    if outlook.added_mass_ratio > ADDED_MASS_LIMIT {
        doubts.push(Doubt::AddedMass { ratio: outlook.added_mass_ratio });
    }
    for section in &glider.sections {
        let beyond = section.reynolds_range().zip(outlook.reynolds);
        let beyond = beyond.filter(|(known, met)| met[0] < known[0] || met[1] > known[1]);
        doubts.extend(beyond.map(|(known, met)| Doubt::ReynoldsOutside {
            section: section.name.clone(),
            known,
            met,
        }));
        doubts.extend(section.measured_rad.map(|measured_rad| Doubt::PartlyMeasured {
            section: section.name.clone(),
            measured_rad,
        }));
    }
    doubts.extend(foremost_pressure_centre(&glider.sections));
    doubts
}

fn stretched_doubts(section: &Section, stretched: &Stretched) -> Vec<Doubt> {
    let worth = |share: f64| (share > WORTH_SAYING).then_some(share);
    let name = || section.name.clone();
    let range = section.reynolds_range();
    let below = range.zip(worth(stretched.reynolds_below));
    let above = range.zip(worth(stretched.reynolds_above));
    let guessed = section.measured_rad.zip(worth(stretched.not_measured));
    [
        below.map(|([lowest, _], share)| Doubt::ReynoldsBelow { section: name(), lowest, share }),
        above.map(|([_, highest], share)| Doubt::ReynoldsAbove { section: name(), highest, share }),
        guessed.map(|(measured_rad, share)| Doubt::NotMeasured {
            section: name(),
            measured_rad,
            share,
        }),
    ]
    .into_iter()
    .flatten()
    .collect()
}

/// The section whose assumed pressure centre is nearest to its leading edge.
fn foremost_pressure_centre(sections: &[Section]) -> Option<Doubt> {
    let assumed = sections.iter().filter_map(|section| {
        let section_centre = section.assumed_pressure_centre()?;
        Some((section_centre, &section.name))
    });
    let (assumed, name) = assumed.min_by(|a, b| a.0.total_cmp(&b.0))?;
    Some(Doubt::PressureCentre { section: name.clone(), assumed })
}

/// Mass of the air that a flat chain carries with it, (π/4)ρΣc²L, over the chain's own.
pub(crate) fn added_mass_ratio(glider: &Glider) -> f64 {
    let segments = glider.chain.segments();
    let volume_m3: f64 = segments.iter().map(|s| s.width_m * s.width_m * s.length_m).sum();
    std::f64::consts::FRAC_PI_4 * glider.air.density_kg_m3 * volume_m3 / glider.chain.mass_kg()
}

/// The first overlap of a flight, with the number of pairs that overlap at some instant. In the
/// running wave the shape repeats, so a cycle after the start says it all.
fn overlap(glider: &Glider, flight: &Flight) -> Option<Doubt> {
    let commands = flight.equations.commands();
    let span_s = commands.steady_cycle_s().map_or(0.0, |cycle| cycle[1].min(flight.time_s));
    let found = match flight.hybrid {
        None => overlaps(&glider.chain, commands, [0.0, span_s]),
        Some(_) => overlaps_on_the_way(&glider.chain, flight),
    };
    let first = found.iter().min_by(|a, b| a.first_at_s.total_cmp(&b.first_at_s))?;
    Some(Doubt::Overlap {
        segments: (first.ahead_idx + 1, first.behind_idx + 1),
        at_s: first.first_at_s,
        pairs: found.len(),
    })
}
