//! What the strips met: bands of incidence and Reynolds number, weighted by what they carry.

use crate::{Flight, Glider};

/// Between samples, s; the flight is cut into equal steps about this long.
const SAMPLE_S: f64 = 1e-3;

/// 5th and 95th percentiles over strips and time, weighted by dynamic pressure, chord and length.
#[derive(Debug, Clone, PartialEq)]
pub struct Bands {
    /// Incidence, rad; absent where no strip met air.
    pub alpha_rad: Option<[f64; 2]>,
    /// Reynolds number on the chord; absent where no strip met air.
    pub reynolds: Option<[f64; 2]>,
    /// For each of the glider's sections, what share of all weight stretched it.
    pub stretched: Vec<Stretched>,
}

/// Shares of the weight that met one section outside what is known of it, 0 to 1.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Stretched {
    /// Below its lowest Reynolds number.
    pub reynolds_below: f64,
    /// Above its highest.
    pub reynolds_above: f64,
    /// At incidences that were not measured, of a section that was measured in part.
    pub not_measured: f64,
}

/// Collects the bands of a flight.
pub fn bands(glider: &Glider, flight: &mut Flight) -> Bands {
    let samples = (flight.time_s / SAMPLE_S).round().max(1.0) as usize;
    let reynolds_per_speed_chord = glider.air.density_kg_m3 / glider.air.viscosity_pa_s;
    let mut alphas: Vec<(f64, f64)> = Vec::new();
    let mut reynolds_numbers: Vec<(f64, f64)> = Vec::new();
    let mut stretched = vec![Stretched::default(); glider.sections.len()];
    for sample in 0..=samples {
        let time_s = flight.time_s * sample as f64 / samples as f64;
        let state = flight.trajectory.state(time_s);
        let at = flight.trajectory.instant(time_s);
        let share = if sample == 0 || sample == samples { 0.5 } else { 1.0 };
        flight.equations.strips(at, &state, |strip| {
            let speed_squared = strip.u_y_m_s.powi(2) + strip.u_z_m_s.powi(2);
            let weight = share * speed_squared * strip.chord_m * strip.length_m;
            let alpha_rad = (-strip.u_z_m_s).atan2(strip.u_y_m_s.abs());
            let reynolds = reynolds_per_speed_chord * speed_squared.sqrt() * strip.chord_m;
            alphas.push((alpha_rad, weight));
            reynolds_numbers.push((reynolds, weight));
            let section_idx = glider.section_of[strip.segment_idx];
            let (section, stretched) = (&glider.sections[section_idx], &mut stretched[section_idx]);
            if let Some([low, high]) = section.reynolds_range() {
                stretched.reynolds_below += if reynolds < low { weight } else { 0.0 };
                stretched.reynolds_above += if reynolds > high { weight } else { 0.0 };
            }
            if let Some([low, high]) = section.measured_rad {
                let measured = (low..=high).contains(&alpha_rad);
                stretched.not_measured += if measured { 0.0 } else { weight };
            }
        });
    }
    let total: f64 = alphas.iter().map(|(_, weight)| weight).sum();
    let of_total = |weight: f64| if total > 0.0 { weight / total } else { 0.0 };
    Bands {
        alpha_rad: percentiles(&mut alphas, total),
        reynolds: percentiles(&mut reynolds_numbers, total),
        stretched: stretched
            .into_iter()
            .map(|weights| Stretched {
                reynolds_below: of_total(weights.reynolds_below),
                reynolds_above: of_total(weights.reynolds_above),
                not_measured: of_total(weights.not_measured),
            })
            .collect(),
    }
}

/// 5th and 95th percentiles of weighted values: each value stands at the middle of its own weight
/// in the running sum, and between neighbours the value runs straight.
fn percentiles(values: &mut [(f64, f64)], total: f64) -> Option<[f64; 2]> {
    if !(total > 0.0 && total.is_finite()) {
        return None;
    }
    values.sort_unstable_by(|a, b| a.0.total_cmp(&b.0));
    let mut running = 0.0;
    let mut before: Option<(f64, f64)> = None;
    let mut found = [None; 2];
    for &(value, weight) in values.iter() {
        let place = (running + 0.5 * weight) / total;
        running += weight;
        for (share, found) in [0.05, 0.95].into_iter().zip(&mut found) {
            if found.is_none() && place >= share {
                *found = Some(match before {
                    Some((place_before, value_before)) if place > place_before => {
                        let f = (share - place_before) / (place - place_before);
                        value_before + f * (value - value_before)
                    }
                    _ => value,
                });
            }
        }
        before = Some((place, value));
    }
    let last = values.last().map(|&(value, _)| value)?;
    Some(found.map(|found| found.unwrap_or(last)))
}
