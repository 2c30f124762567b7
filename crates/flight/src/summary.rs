//! What a flight comes to.

use undulift_aero::STANDARD_GRAVITY_M_S2;

use crate::flying::{Look, PARTS};
use crate::outlook::wing_loading_pa;
use crate::{End, Flight, Glider};

/// Weights of Boole's rule over the four parts of a step.
const BOOLE: [f64; PARTS + 1] = [7.0 / 90.0, 32.0 / 90.0, 12.0 / 90.0, 32.0 / 90.0, 7.0 / 90.0];

/// How closely peaks of roll and pitch are located, s: a peak is flat, so its height is then met to
/// some millionths of a radian.
const PEAK_S: f64 = 1e-4;

/// What a flight comes to, in SI units and radians.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Summary {
    /// How it ended.
    pub end: End,
    /// Whether the body ever turned over.
    pub inverted: bool,
    /// Release to end, s.
    pub time_s: f64,
    /// Release height less the centre's height at the end, m.
    pub drop_m: f64,
    /// Of the centre of mass, horizontal, m.
    pub distance_m: f64,
    /// Distance over drop; absent unless it came down.
    pub glide_ratio: Option<f64>,
    /// The same over the last cycle of the gait; absent before one has passed.
    pub last_cycle_glide_ratio: Option<f64>,
    /// What the last cycle came down, and the height that its loss of speed was worth, m.
    pub last_cycle: Option<LastCycle>,
    /// At the end, below the horizontal, over the ground, rad.
    pub glide_angle_rad: f64,
    /// At the end, over the ground, m/s.
    pub speed_m_s: f64,
    /// At the end, m/s.
    pub sink_m_s: f64,
    /// To the left of the launch line at the end, m.
    pub side_drift_m: f64,
    /// Mean over the last cycle of the airspeed along the body, m/s.
    pub forward_airspeed_m_s: f64,
    /// Largest absolute roll, rad.
    pub peak_roll_rad: f64,
    /// Largest absolute pitch, rad.
    pub peak_pitch_rad: f64,
    /// Kinetic energy at the end, undulation and spin included, J.
    pub landing_energy_j: f64,
    /// kg.
    pub mass_kg: f64,
    /// Length times width over all segments, m².
    pub planform_m2: f64,
    /// Weight over planform, Pa.
    pub wing_loading_pa: f64,
    /// π f c̄/Ū: mean chord against the way flown in a cycle; absent without airspeed.
    pub reduced_frequency: Option<f64>,
}

/// Where the energy of the last cycle came from.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LastCycle {
    /// Height lost, m.
    pub drop_m: f64,
    /// Speed lost, as the height that it could climb to, m; negative where it became faster.
    pub speed_height_m: f64,
}

/// Sums up a flight.
///
/// - `glider`: the one that flew
pub fn summary(glider: &Glider, flight: &mut Flight) -> Summary {
    let chain = &glider.chain;
    let end_state = flight.trajectory.state(flight.time_s);
    let (place_m, velocity_m_s) = (end_state.place_m, end_state.velocity_m_s);
    let drop_m = glider.launch.height_m - place_m.z;
    let distance_m = place_m.xy().norm();
    let at_end = flight.trajectory.instant(flight.time_s);
    let (mass_kg, planform_m2) = (chain.mass_kg(), chain.planform_m2());
    let frequency_hz = glider.gait.frequency_hz();
    let airspeed_m_s = flight.mean(0.0, |flight, look| flight.airspeed_m_s(look));
    let reduced = std::f64::consts::PI * frequency_hz * chain.mean_chord_m() / airspeed_m_s;
    let cycle_from_s = flight.last_cycle_start_s();
    let cycle_start = cycle_from_s.map(|from_s| flight.trajectory.state(from_s));
    Summary {
        end: flight.end,
        inverted: flight.inverted_at_s.is_some(),
        time_s: flight.time_s,
        drop_m,
        distance_m,
        glide_ratio: ratio(distance_m, drop_m),
        last_cycle_glide_ratio: cycle_start.as_ref().and_then(|start| {
            let way_m = place_m - start.place_m;
            ratio(way_m.xy().norm(), -way_m.z)
        }),
        last_cycle: cycle_start.map(|start| LastCycle {
            drop_m: start.place_m.z - place_m.z,
            speed_height_m: (start.velocity_m_s.norm_squared() - velocity_m_s.norm_squared())
                / (2.0 * STANDARD_GRAVITY_M_S2),
        }),
        glide_angle_rad: (-velocity_m_s.z).atan2(velocity_m_s.xy().norm()),
        speed_m_s: velocity_m_s.norm(),
        sink_m_s: -velocity_m_s.z,
        side_drift_m: place_m.y,
        forward_airspeed_m_s: flight.mean(cycle_from_s.unwrap_or(0.0), |flight, look| {
            flight.air_velocity_m_s(look).dot(&look.attitude.forward())
        }),
        peak_roll_rad: flight.peak(|look| look.attitude.roll_rad().abs()),
        peak_pitch_rad: flight.peak(|look| look.attitude.pitch_rad().abs()),
        landing_energy_j: flight.equations.kinetic_energy_j(at_end, &end_state),
        mass_kg,
        planform_m2,
        wing_loading_pa: wing_loading_pa(chain),
        reduced_frequency: reduced.is_finite().then_some(reduced),
    }
}

fn ratio(distance_m: f64, drop_m: f64) -> Option<f64> {
    (drop_m > 0.0).then(|| distance_m / drop_m)
}

impl Flight {
    /// When the last whole cycle began; absent before one has passed and where the gait stands.
    pub fn last_cycle_start_s(&self) -> Option<f64> {
        let clock = self.equations.commands().clock();
        let angle_rad = clock.angle_rad(self.time_s) - std::f64::consts::TAU;
        if angle_rad < 0.0 { None } else { clock.time_of_s(angle_rad) }
    }

    fn air_velocity_m_s(&self, look: &Look) -> nalgebra::Vector3<f64> {
        look.velocity_m_s - self.equations.wind_world_m_s()
    }

    fn airspeed_m_s(&self, look: &Look) -> f64 {
        self.air_velocity_m_s(look).norm()
    }

    fn look(&mut self, time_s: f64) -> Look {
        let state = self.trajectory.state(time_s);
        let at = self.trajectory.instant(time_s);
        Look::new(time_s, &state, self.equations.attitude(at, &state))
    }

    /// Time mean of a quantity from a time to the end, by Boole's rule over the steps.
    fn mean(&mut self, from_s: f64, quantity: impl Fn(&Self, &Look) -> f64) -> f64 {
        // Steps that lie wholly in the span are already looked at; the one that the span begins in
        // is looked at anew.
        let n_steps = (self.looks.len() - 1) / PARTS;
        let first_whole =
            (0..n_steps).find(|step| self.looks[step * PARTS].time_s >= from_s).unwrap_or(n_steps);
        let mut sum = 0.0;
        for step in first_whole..n_steps {
            sum += step_integral(self, &self.looks[step * PARTS..=(step + 1) * PARTS], &quantity);
        }
        let whole_from_s = self.looks[first_whole * PARTS].time_s;
        if whole_from_s > from_s {
            let part_s = (whole_from_s - from_s) / PARTS as f64;
            let looks: Vec<Look> =
                (0..=PARTS).map(|part| self.look(from_s + part_s * part as f64)).collect();
            sum += step_integral(self, &looks, &quantity);
        }
        sum / (self.time_s - from_s)
    }

    /// Largest value of a quantity, refined between looks.
    fn peak(&mut self, quantity: impl Fn(&Look) -> f64) -> f64 {
        let values: Vec<f64> = self.looks.iter().map(&quantity).collect();
        let top = (0..values.len()).fold(0, |top, k| if values[k] > values[top] { k } else { top });
        let mut from_s = self.looks[top.saturating_sub(1)].time_s;
        let mut to_s = self.looks[(top + 1).min(values.len() - 1)].time_s;
        let mut largest = values[top];
        while to_s - from_s > PEAK_S {
            let third_s = (to_s - from_s) / 3.0;
            let [early, late] = [from_s + third_s, to_s - third_s].map(|s| quantity(&self.look(s)));
            largest = largest.max(early).max(late);
            if early < late { from_s += third_s } else { to_s -= third_s }
        }
        largest
    }
}

fn step_integral(flight: &Flight, looks: &[Look], quantity: impl Fn(&Flight, &Look) -> f64) -> f64 {
    let length_s = looks[PARTS].time_s - looks[0].time_s;
    looks.iter().zip(BOOLE).map(|(look, weight)| weight * quantity(flight, look)).sum::<f64>()
        * length_s
}
