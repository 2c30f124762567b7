//! What the strips met: bands of incidence and Reynolds number, weighted by what they carry.

use crate::weighted::percentiles;
use crate::{Flight, Glider};

/// Between samples, s; the flight is cut into equal steps about this long.
const SAMPLE_S: f64 = 1e-3;

/// The band's ends.
const ENDS: [f64; 2] = [0.05, 0.95];

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
    let n_values = samples * glider.chain.n_segments() * glider.strips_per_segment;
    let mut stand_ins: Vec<(f64, f64)> = Vec::with_capacity(n_values);
    let mut reynolds_squares: Vec<(f64, f64)> = Vec::with_capacity(n_values);
    let measured: Vec<Option<[f64; 2]>> = glider
        .sections
        .iter()
        .map(|section| section.measured_rad.map(|ends| ends.map(stand_in_of)))
        .collect();
    let mut stretched = vec![Stretched::default(); glider.sections.len()];
    for sample in 0..=samples {
        let time_s = flight.time_s * sample as f64 / samples as f64;
        let state = flight.trajectory.state(time_s);
        let at = flight.trajectory.instant(time_s);
        let share = if sample == 0 || sample == samples { 0.5 } else { 1.0 };
        flight.equations.strips(at, &state, |strip| {
            let speed_squared = strip.u_y_m_s.powi(2) + strip.u_z_m_s.powi(2);
            let weight = share * speed_squared * strip.chord_m * strip.length_m;
            let (side, up) = (strip.u_y_m_s.abs(), -strip.u_z_m_s);
            let stand_in = up / (side + up.abs()).max(f64::MIN_POSITIVE);
            let reynolds_squared =
                speed_squared * (reynolds_per_speed_chord * strip.chord_m).powi(2);
            stand_ins.push((stand_in, weight));
            reynolds_squares.push((reynolds_squared, weight));
            let section_idx = glider.section_of[strip.segment_idx];
            let (section, stretched) = (&glider.sections[section_idx], &mut stretched[section_idx]);
            if let Some([low, high]) = section.reynolds_range() {
                let (below, above) = (reynolds_squared < low * low, reynolds_squared > high * high);
                stretched.reynolds_below += if below { weight } else { 0.0 };
                stretched.reynolds_above += if above { weight } else { 0.0 };
            }
            if let Some([low, high]) = measured[section_idx] {
                let measured = (low..=high).contains(&stand_in);
                stretched.not_measured += if measured { 0.0 } else { weight };
            }
        });
    }
    let total: f64 = stand_ins.iter().map(|(_, weight)| weight).sum();
    let of_total = |weight: f64| if total > 0.0 { weight / total } else { 0.0 };
    Bands {
        // The stand-in and the square rise with what they stand for, so percentiles go through.
        alpha_rad: percentiles(&stand_ins, ENDS).map(|ends| ends.map(incidence)),
        reynolds: percentiles(&reynolds_squares, ENDS).map(|ends| ends.map(f64::sqrt)),
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

/// sin α/(cos α + |sin α|): rises with incidence and takes no trigonometry to find from a velocity.
fn stand_in_of(alpha_rad: f64) -> f64 {
    alpha_rad.sin() / (alpha_rad.cos() + alpha_rad.sin().abs())
}

/// Incidence of a stand-in, rad.
fn incidence(stand_in: f64) -> f64 {
    stand_in.atan2(1.0 - stand_in.abs())
}
