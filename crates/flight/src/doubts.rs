//! What to doubt about a flight's figures, each with its number.

use undulift_aero::Section;
use undulift_chain::{Axis, AxisOf, Shape, overlapping_segments};
use undulift_gait::{Commands, Instant};

use crate::bands::Stretched;
use crate::{Bands, Equations, Flight, Glider, LastCycle, Summary};

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

/// Instants of a cycle at which overlaps are looked for.
const OVERLAP_INSTANTS: usize = 48;

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

/// How far a joint axis is asked to go.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct JointPeak {
    /// Which.
    pub of: AxisOf,
    /// Largest absolute command, rad.
    pub angle_rad: f64,
    /// When, s.
    pub at_s: f64,
    /// Largest allowed, rad.
    pub travel_rad: Option<f64>,
}

impl JointPeak {
    /// Whether the command goes beyond the travel.
    pub fn exceeds(&self) -> bool {
        self.travel_rad.is_some_and(|travel_rad| self.angle_rad > travel_rad)
    }
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
fn added_mass_ratio(glider: &Glider) -> f64 {
    let segments = glider.chain.segments();
    let volume_m3: f64 = segments.iter().map(|s| s.width_m * s.width_m * s.length_m).sum();
    std::f64::consts::FRAC_PI_4 * glider.air.density_kg_m3 * volume_m3 / glider.chain.mass_kg()
}

/// Largest absolute command of each axis over a flight, refined between samples.
pub fn joint_peaks(glider: &Glider, equations: &mut Equations, time_s: f64) -> Vec<JointPeak> {
    let commands = equations.commands().clone();
    let joints = glider.chain.joints();
    let times_s = sample_times_s(&commands, time_s, 200);
    let mut peaks: Vec<JointPeak> = commands
        .axes()
        .iter()
        .map(|&of| JointPeak {
            of,
            angle_rad: 0.0,
            at_s: 0.0,
            travel_rad: joints[of.joint_idx].travel_rad(of.axis),
        })
        .collect();
    for &at_s in &times_s {
        let motion = equations.motion(Instant::at(at_s));
        for (peak, angle_rad) in peaks.iter_mut().zip(&motion.angles_rad) {
            if angle_rad.abs() > peak.angle_rad {
                (peak.angle_rad, peak.at_s) = (angle_rad.abs(), at_s);
            }
        }
    }
    let apart_s = times_s.get(1).copied().unwrap_or(0.0);
    for (axis_idx, peak) in peaks.iter_mut().enumerate() {
        refine(equations, axis_idx, peak, apart_s, time_s);
    }
    peaks
}

fn refine(
    equations: &mut Equations,
    axis_idx: usize,
    peak: &mut JointPeak,
    apart_s: f64,
    end_s: f64,
) {
    let (mut from_s, mut to_s) = ((peak.at_s - apart_s).max(0.0), (peak.at_s + apart_s).min(end_s));
    let mut angle = |at_s: f64| equations.motion(Instant::at(at_s)).angles_rad[axis_idx].abs();
    for _ in 0..40 {
        let third_s = (to_s - from_s) / 3.0;
        let [early, late] = [from_s + third_s, to_s - third_s].map(&mut angle);
        if early < late { from_s += third_s } else { to_s -= third_s }
    }
    let at_s = 0.5 * (from_s + to_s);
    let angle_rad = angle(at_s);
    if angle_rad > peak.angle_rad {
        (peak.angle_rad, peak.at_s) = (angle_rad, at_s);
    }
}

/// Times over a flight, `per_cycle` to a cycle; a still gait needs only one.
fn sample_times_s(commands: &Commands, time_s: f64, per_cycle: usize) -> Vec<f64> {
    let Some(cycle_s) = commands.cycle_s() else { return vec![0.0] };
    let steps = (time_s / cycle_s * per_cycle as f64).ceil().clamp(1.0, 1e6) as usize;
    (0..=steps).map(|k| time_s * k as f64 / steps as f64).collect()
}

/// The first overlap of a flight, with the number of pairs that overlap at some instant. In the
/// running wave the shape repeats, so a cycle after the start says it all.
fn overlap(glider: &Glider, flight: &Flight) -> Option<Doubt> {
    let commands = flight.equations.commands();
    let mut motion = commands.room();
    let n_joints = glider.chain.joints().len();
    let mut first: Option<((usize, usize), f64)> = None;
    let mut pairs = std::collections::BTreeSet::new();
    let past_start_s = commands.clock().time_of_s(std::f64::consts::TAU).unwrap_or(0.0);
    let span_s = flight.time_s.min(past_start_s + commands.cycle_s().unwrap_or(0.0));
    for at_s in sample_times_s(commands, span_s, OVERLAP_INSTANTS) {
        commands.rates(Instant::at(at_s), &mut motion);
        let (mut yaw_rad, mut pitch_rad) = (vec![0.0; n_joints], vec![0.0; n_joints]);
        for (of, &angle_rad) in commands.axes().iter().zip(&motion.angles_rad) {
            match of.axis {
                Axis::Yaw => yaw_rad[of.joint_idx] = angle_rad,
                Axis::Pitch => pitch_rad[of.joint_idx] = angle_rad,
            }
        }
        let shape = Shape::of(&glider.chain, &yaw_rad, &pitch_rad);
        let overlapping = overlapping_segments(glider.chain.segments(), &shape);
        if let Some(&pair) = overlapping.first() {
            first.get_or_insert((pair, at_s));
        }
        pairs.extend(overlapping);
    }
    first.map(|((ahead, behind), at_s)| Doubt::Overlap {
        segments: (ahead + 1, behind + 1),
        at_s,
        pairs: pairs.len(),
    })
}
