//! What can be said of a glider before it flies.

use nalgebra::Vector3;
use undulift_aero::STANDARD_GRAVITY_M_S2;
use undulift_chain::{Chain, Shape};
use undulift_gait::{Commands, Instant, Pattern};

use crate::doubts::added_mass_ratio;
use crate::overlaps::{Overlap, overlaps, shape_of};
use crate::{Equations, FlightError, Glider};

/// Instants of a cycle over which the gap is averaged.
const GAP_LOOKS: usize = 96;

/// Steps of incidence among which the best ratio of lift to drag is looked for.
const INCIDENCE_STEPS: u32 = 900;

/// Rounds in which glide speed and Reynolds number settle on each other.
const SPEED_ROUNDS: usize = 20;

/// Estimates and ratios that tell whether the model holds, without a flight.
#[derive(Debug, Clone, PartialEq)]
pub struct Outlook {
    /// Centre of mass of the straight body, from the middle of the nose, m: x forward, y left, z up.
    pub centre_of_mass_m: Vector3<f64>,
    /// Weight over planform, Pa.
    pub wing_loading_pa: f64,
    /// √(2·wing loading/(ρ·C_R)) with C_R = √(C_l² + C_d²) at each section's best C_l/C_d, averaged
    /// by planform, m/s; absent without air.
    pub glide_speed_m_s: Option<f64>,
    /// Reynolds numbers of the smallest and largest chord at that speed.
    pub reynolds: Option<[f64; 2]>,
    /// π f c̄/U at that speed.
    pub reduced_frequency: Option<f64>,
    /// Mean distance along the body's axis between places half a wave apart, in mean chords; absent
    /// where the body is shorter than half a wave, for a table, and without a lateral wave.
    pub gap_chords: Option<f64>,
    /// Mass of the air that a flat chain carries with it, (π/4)ρΣc²L, over the chain's own.
    pub added_mass_ratio: f64,
    /// Segments that overlap in the running gait.
    pub overlaps: Vec<Overlap>,
}

/// Looks at a glider without flying it.
///
/// # Errors
///
/// [`FlightError::Gait`] if the gait doesn't fit the chain.
pub fn outlook(glider: &Glider) -> Result<Outlook, FlightError> {
    let commands = Commands::new(&glider.gait, &glider.chain)?;
    let chain = &glider.chain;
    let glide_speed_m_s = glide_speed_m_s(glider);
    let viscous_speed = glider.air.density_kg_m3 / glider.air.viscosity_pa_s;
    let chords_m = chain.segments().iter().map(|segment| segment.width_m);
    let [least_m, most_m] = chords_m.fold([f64::INFINITY, 0.0], |ends: [f64; 2], chord| {
        [ends[0].min(chord), ends[1].max(chord)]
    });
    let straight = vec![0.0; chain.joints().len()];
    let cycle_s = commands.steady_cycle_s().unwrap_or([0.0, 0.0]);
    Ok(Outlook {
        centre_of_mass_m: Shape::of(chain, &straight, &straight).centre_of_mass_m(chain),
        wing_loading_pa: wing_loading_pa(chain),
        glide_speed_m_s,
        reynolds: glide_speed_m_s
            .map(|speed_m_s| [least_m, most_m].map(|chord_m| viscous_speed * speed_m_s * chord_m)),
        reduced_frequency: glide_speed_m_s.map(|speed_m_s| {
            std::f64::consts::PI * glider.gait.frequency_hz() * chain.mean_chord_m() / speed_m_s
        }),
        gap_chords: gap_chords(glider, &commands)?,
        added_mass_ratio: added_mass_ratio(glider),
        overlaps: overlaps(chain, &commands, cycle_s),
    })
}

/// Weight over planform, Pa.
pub(crate) fn wing_loading_pa(chain: &Chain) -> f64 {
    chain.mass_kg() * STANDARD_GRAVITY_M_S2 / chain.planform_m2()
}

/// Speed at which the resultant force at each section's best ratio carries the weight.
fn glide_speed_m_s(glider: &Glider) -> Option<f64> {
    let (air, chain) = (&glider.air, &glider.chain);
    let weight_n = chain.mass_kg() * STANDARD_GRAVITY_M_S2;
    let mut speed_m_s = 5.0;
    for _ in 0..SPEED_ROUNDS {
        // Sum of area times resultant coefficient, each section at its own chord's Reynolds number.
        let lifting_m2: f64 = chain
            .segments()
            .iter()
            .zip(&glider.section_of)
            .map(|(segment, &section_idx)| {
                let reynolds = air.density_kg_m3 * speed_m_s * segment.width_m / air.viscosity_pa_s;
                let resultant = best_resultant(glider, section_idx, reynolds);
                resultant * segment.width_m * segment.length_m
            })
            .sum();
        let pressure = 0.5 * air.density_kg_m3 * lifting_m2;
        if pressure.is_nan() || pressure <= 0.0 {
            return None;
        }
        speed_m_s = (weight_n / pressure).sqrt();
    }
    Some(speed_m_s)
}

/// √(C_l² + C_d²) at the incidence of the best C_l/C_d.
fn best_resultant(glider: &Glider, section_idx: usize, reynolds: f64) -> f64 {
    let section = &glider.sections[section_idx];
    let tables = section.prepared();
    let scales = glider.scales;
    let at = |step: u32| {
        let alpha_rad = f64::from(step) / f64::from(INCIDENCE_STEPS) * std::f64::consts::FRAC_PI_2;
        let [lift, drag, _] = tables.at(alpha_rad, reynolds);
        (scales.lift * lift, scales.drag * drag)
    };
    let better = |a: (f64, f64), b: (f64, f64)| if b.0 * a.1 > a.0 * b.1 { b } else { a };
    let (lift, drag) = (0..=INCIDENCE_STEPS).map(at).fold((0.0, f64::INFINITY), better);
    if drag.is_finite() { lift.hypot(drag) } else { at(INCIDENCE_STEPS).1 }
}

/// Mean over the body and a cycle of the distance between places half a wave apart.
fn gap_chords(glider: &Glider, commands: &Commands) -> Result<Option<f64>, FlightError> {
    let Pattern::Wave(wave) = &glider.gait.pattern else { return Ok(None) };
    let half_wave = 0.5 / wave.lateral_waves;
    let places = glider.chain.midpoint_fractions();
    let bends = wave.lateral_amplitude_rad != 0.0 && commands.n_yaw() > 0;
    let has_pair = places[0] + half_wave <= places[places.len() - 1];
    if !(bends && half_wave.is_finite() && has_pair) {
        return Ok(None);
    }
    let mut equations = Equations::new(glider)?;
    let [from_s, to_s] = commands.steady_cycle_s().unwrap_or([0.0, 0.0]);
    let (mut sum_m, mut count) = (0.0, 0_usize);
    for look in 0..GAP_LOOKS {
        let at = Instant::at(from_s + (to_s - from_s) * look as f64 / GAP_LOOKS as f64);
        let along = along_body_m(glider, commands, &mut equations, at);
        for (place, &here_m) in places.iter().zip(&along) {
            if let Some(there_m) = between(&places, &along, place + half_wave) {
                sum_m += (here_m - there_m).abs();
                count += 1;
            }
        }
    }
    Ok(Some(sum_m / count as f64 / glider.chain.mean_chord_m()))
}

/// Places of the segments' middles along the body's axis, m.
fn along_body_m(
    glider: &Glider,
    commands: &Commands,
    equations: &mut Equations,
    at: Instant,
) -> Vec<f64> {
    let forward = equations.body_in_root(at, &[]).column(0).into_owned();
    let shape = shape_of(&glider.chain, commands, &equations.motion(at).angles_rad);
    let segments = glider.chain.segments().iter().enumerate();
    segments
        .map(|(idx, segment)| {
            let middle_m = shape.fronts_m[idx] + shape.rotations[idx] * segment.middle_m();
            middle_m.dot(&forward)
        })
        .collect()
}

/// A value between rising places; absent outside them.
fn between(places: &[f64], values: &[f64], wanted: f64) -> Option<f64> {
    let after = places.partition_point(|&place| place < wanted);
    if after == 0 || after == places.len() {
        return None;
    }
    let f = (wanted - places[after - 1]) / (places[after] - places[after - 1]);
    Some(values[after - 1] + f * (values[after] - values[after - 1]))
}
