//! How well servos followed their commands.

use undulift_gait::Peak;

use crate::Flight;
use crate::turning::By;

/// Between looks, s.
const LOOK_S: f64 = 1e-3;

/// How closely the ends of a saturation are found, s.
const END_S: f64 = 1e-6;

/// How well the servos of a flight followed.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Tracking {
    /// When and where servos gave all they had, by axis, then by time.
    pub saturations: Vec<Saturation>,
    /// Furthest from a command; absent without driven axes.
    pub largest: Option<TrackingError>,
    /// Of every axis that didn't follow its command: how far and how fast it turned.
    pub peaks: Vec<Peak>,
}

/// A stretch over which one servo gave all it had.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Saturation {
    /// In the order of [`undulift_chain::joint_axes`].
    pub axis_idx: usize,
    /// After release, s.
    pub from_s: f64,
    /// After release, s.
    pub to_s: f64,
}

/// An axis far from its command.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct TrackingError {
    /// In the order of [`undulift_chain::joint_axes`].
    pub axis_idx: usize,
    /// Command less angle, rad.
    pub error_rad: f64,
    /// After release, s.
    pub at_s: f64,
}

/// Looks at every driven axis of a flight once a millisecond; shorter saturations may be missed.
pub fn tracking(flight: &mut Flight) -> Tracking {
    let looks = (flight.time_s / LOOK_S).ceil().max(1.0) as usize;
    let time_of = |look: usize, end_s: f64| (look as f64 * LOOK_S).min(end_s);
    let n_axes = flight.commands().axes().len();
    let mut began_s = vec![None; n_axes];
    let mut found = Tracking::default();
    for look in 0..=looks {
        let time_s = time_of(look, flight.time_s);
        let mut saturated = vec![false; n_axes];
        found.raise_peaks(flight, time_s);
        for (axis_idx, error_rad, all) in follow(flight, time_s) {
            saturated[axis_idx] = all;
            if found.largest.is_none_or(|most| error_rad.abs() > most.error_rad.abs()) {
                found.largest = Some(TrackingError { axis_idx, error_rad, at_s: time_s });
            }
        }
        let before_s = time_of(look.saturating_sub(1), flight.time_s);
        for (axis_idx, began_s) in began_s.iter_mut().enumerate() {
            match (*began_s, saturated[axis_idx]) {
                (None, true) => *began_s = Some(change(flight, axis_idx, [before_s, time_s])),
                (Some(from_s), false) => {
                    let to_s = change(flight, axis_idx, [before_s, time_s]);
                    found.saturations.push(Saturation { axis_idx, from_s, to_s });
                    *began_s = None;
                }
                _ => {}
            }
        }
    }
    let still = began_s.into_iter().enumerate();
    found.saturations.extend(still.filter_map(|(axis_idx, from_s)| {
        Some(Saturation { axis_idx, from_s: from_s?, to_s: flight.time_s })
    }));
    let order = |s: &Saturation| (s.axis_idx, s.from_s);
    found.saturations.sort_by(|a, b| order(a).partial_cmp(&order(b)).expect("finite times"));
    found
}

impl Tracking {
    fn raise_peaks(&mut self, flight: &Flight, time_s: f64) {
        for axis in flight.trajectory.state(time_s).loose {
            let of = flight.commands().axes()[axis.axis_idx];
            let known = self.peaks.iter().position(|peak| peak.of == of);
            let place = known.unwrap_or_else(|| {
                let none = -1.0;
                let (angle_rad, rate_rad_s) = (none, none);
                self.peaks.push(Peak {
                    of,
                    angle_rad,
                    angle_at_s: 0.0,
                    rate_rad_s,
                    rate_at_s: 0.0,
                });
                self.peaks.len() - 1
            });
            let peak = &mut self.peaks[place];
            if axis.angle_rad.abs() > peak.angle_rad {
                (peak.angle_rad, peak.angle_at_s) = (axis.angle_rad.abs(), time_s);
            }
            if axis.rate_rad_s.abs() > peak.rate_rad_s {
                (peak.rate_rad_s, peak.rate_at_s) = (axis.rate_rad_s.abs(), time_s);
            }
        }
    }
}

/// Of every driven axis: which, command less angle in rad, and whether its servo gives all it has.
fn follow(flight: &mut Flight, time_s: f64) -> Vec<(usize, f64, bool)> {
    let Some(turning) = flight.trajectory.turning(time_s) else { return Vec::new() };
    let state = flight.trajectory.state(time_s);
    let commands = flight.equations.motion(flight.trajectory.instant(time_s));
    let axes = turning.axes.iter().zip(&state.loose);
    let driven = axes.filter_map(|(turned, axis)| match turned.by {
        By::Servo { fed, .. } => {
            let error_rad = turning.error_rad(commands, axis);
            Some((turned.axis_idx, error_rad, fed.is_saturated(error_rad, axis.rate_rad_s)))
        }
        By::Nothing | By::Lock => None,
    });
    driven.collect()
}

/// When an axis begins or ends to be saturated between two looks.
fn change(flight: &mut Flight, axis_idx: usize, [mut from_s, mut to_s]: [f64; 2]) -> f64 {
    let mut saturated_at = |time_s| {
        follow(flight, time_s).iter().any(|&(of, _, saturated)| of == axis_idx && saturated)
    };
    let at_end = saturated_at(to_s);
    if saturated_at(from_s) == at_end {
        return from_s;
    }
    while to_s - from_s > END_S {
        let middle_s = 0.5 * (from_s + to_s);
        if saturated_at(middle_s) == at_end { to_s = middle_s } else { from_s = middle_s }
    }
    to_s
}
