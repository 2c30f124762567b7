//! The furthest and fastest that joints are told to go.

use undulift_chain::AxisOf;

use crate::commands::Laid;
use crate::{Commands, Instant, Motion};

/// Looks at a cycle of a smooth wave; a sharper one is looked at more often.
const LOOKS_PER_CYCLE: f64 = 256.0;

/// Looks at each row of a table.
const LOOKS_PER_ROW: f64 = 8.0;

/// Keeps a very long or very sharp gait affordable.
const MOST_LOOKS: f64 = 1e6;

/// Halvings by which a peak is closed in on between two looks.
const REFINEMENTS: usize = 60;

/// Extremes of one axis over a stretch of time.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Peak {
    /// Which axis.
    pub of: AxisOf,
    /// Largest absolute angle, rad.
    pub angle_rad: f64,
    /// When, s.
    pub angle_at_s: f64,
    /// Largest absolute rate, rad/s.
    pub rate_rad_s: f64,
    /// When, s.
    pub rate_at_s: f64,
}

/// Reads one number of one axis.
type Reading = fn(&Motion, usize) -> f64;

const ANGLE: Reading = |motion, axis_idx| motion.angles_rad[axis_idx].abs();
const RATE: Reading = |motion, axis_idx| motion.rates_rad_s[axis_idx].abs();

impl Commands {
    /// Largest absolute angles and rates of all axes from one time to another, in the order of
    /// [`Commands::axes`]: looked for often enough that no peak is passed over, then closed in on.
    /// Rows that are held ask for their steps over the time between them.
    pub fn peaks(&self, from_s: f64, to_s: f64) -> Vec<Peak> {
        if let Some(straight) = self.straightened() {
            return straight.peaks(from_s, to_s);
        }
        let looks = self.looks(to_s - from_s);
        let apart_s = (to_s - from_s) / looks as f64;
        let mut room = self.room();
        let mut highest = vec![[(0.0, from_s); 2]; self.axes().len()];
        for look in 0..=looks {
            let time_s = from_s + apart_s * look as f64;
            self.rates(Instant::at(time_s), &mut room);
            for (axis_idx, highest) in highest.iter_mut().enumerate() {
                for (reading, highest) in [ANGLE, RATE].into_iter().zip(highest) {
                    let value = reading(&room, axis_idx);
                    if value > highest.0 {
                        *highest = (value, time_s);
                    }
                }
            }
        }
        let axes = self.axes().iter().zip(highest).enumerate();
        axes.map(|(axis_idx, (&of, [angle, rate]))| {
            let mut close_in = |reading, (value, at_s): (f64, f64)| {
                let span_s = [(at_s - apart_s).max(from_s), (at_s + apart_s).min(to_s)];
                larger(self.close_in(reading, axis_idx, span_s, &mut room), (value, at_s))
            };
            let (angle_rad, angle_at_s) = close_in(ANGLE, angle);
            let (rate_rad_s, rate_at_s) = close_in(RATE, rate);
            Peak { of, angle_rad, angle_at_s, rate_rad_s, rate_at_s }
        })
        .collect()
    }

    /// One whole cycle at full speed, s: from where the start is over; none where the gait stands.
    pub fn steady_cycle_s(&self) -> Option<[f64; 2]> {
        let start_s = self.clock().settled_s();
        self.cycle_s().map(|cycle_s| [start_s, start_s + cycle_s])
    }

    fn looks(&self, span_s: f64) -> usize {
        let per_cycle = match self.laid() {
            Laid::Wave { sharpness, vertical_ratio, .. } => {
                LOOKS_PER_CYCLE * (1.0 + 0.5 * sharpness).max(0.5 * vertical_ratio)
            }
            Laid::Table(table) => LOOKS_PER_ROW * table.n_rows() as f64,
        };
        let cycles = self.cycle_s().map_or(0.0, |cycle_s| span_s / cycle_s);
        (cycles * per_cycle).ceil().clamp(1.0, MOST_LOOKS) as usize
    }

    /// Closes in on a peak by thirds.
    fn close_in(
        &self,
        reading: Reading,
        axis_idx: usize,
        [mut from_s, mut to_s]: [f64; 2],
        room: &mut Motion,
    ) -> (f64, f64) {
        let mut at = |time_s: f64| {
            self.rates(Instant::at(time_s), room);
            reading(room, axis_idx)
        };
        for _ in 0..REFINEMENTS {
            let third_s = (to_s - from_s) / 3.0;
            if at(from_s + third_s) < at(to_s - third_s) {
                from_s += third_s
            } else {
                to_s -= third_s
            }
        }
        let middle_s = 0.5 * (from_s + to_s);
        (at(middle_s), middle_s)
    }
}

/// The larger of two found values, with its time.
fn larger(a: (f64, f64), b: (f64, f64)) -> (f64, f64) {
    if b.0 > a.0 { b } else { a }
}
