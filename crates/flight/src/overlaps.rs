//! Segments that take the same space at some instant of the gait.

use std::collections::BTreeMap;

use undulift_chain::{Axis, Chain, Shape, overlapping_segments};
use undulift_gait::{Commands, Instant};

use crate::Flight;

/// Instants of a cycle at which overlaps are looked for.
const LOOKS_PER_CYCLE: f64 = 96.0;

/// Between looks at a flight whose joints don't follow their commands, s.
const LOOK_S: f64 = 5e-3;

/// Keeps a long flight of a fast gait affordable.
const MOST_LOOKS: f64 = 2000.0;

/// Two segments that overlap.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Overlap {
    /// The one nearer to the head, from 0.
    pub ahead_idx: usize,
    /// The other.
    pub behind_idx: usize,
    /// When it was first seen, s.
    pub first_at_s: f64,
    /// Share of the time in which it lasts, 0 to 1.
    pub share: f64,
}

/// Pairs of segments, neighbours left out, whose boxes share space at some instant of a stretch.
pub fn overlaps(chain: &Chain, commands: &Commands, [from_s, to_s]: [f64; 2]) -> Vec<Overlap> {
    let cycles = commands.cycle_s().map_or(0.0, |cycle_s| (to_s - from_s) / cycle_s);
    let looks = (cycles * LOOKS_PER_CYCLE).ceil().clamp(1.0, MOST_LOOKS) as usize;
    let mut motion = commands.room();
    let shapes = (0..looks).map(|look| {
        let time_s = from_s + (to_s - from_s) * look as f64 / looks as f64;
        commands.rates(Instant::at(time_s), &mut motion);
        (time_s, shape_of(chain, commands, &motion.angles_rad))
    });
    overlaps_of(chain, shapes)
}

/// The same over a whole flight, of joints as they were and not as they were told.
pub(crate) fn overlaps_on_the_way(chain: &Chain, flight: &Flight) -> Vec<Overlap> {
    let commands = flight.commands();
    let looks = (flight.time_s / LOOK_S).ceil().clamp(1.0, MOST_LOOKS) as usize;
    let mut motion = commands.room();
    let shapes = (0..=looks).map(|look| {
        let time_s = flight.time_s * look as f64 / looks as f64;
        commands.rates(flight.trajectory.instant(time_s), &mut motion);
        for axis in flight.trajectory.state(time_s).loose {
            motion.angles_rad[axis.axis_idx] = axis.angle_rad;
        }
        (time_s, shape_of(chain, commands, &motion.angles_rad))
    });
    overlaps_of(chain, shapes)
}

/// - `shapes`: at equal steps of time
fn overlaps_of(chain: &Chain, shapes: impl Iterator<Item = (f64, Shape)>) -> Vec<Overlap> {
    let mut looks = 0;
    let mut seen: BTreeMap<(usize, usize), (f64, usize)> = BTreeMap::new();
    for (time_s, shape) in shapes {
        looks += 1;
        for pair in overlapping_segments(chain.segments(), &shape) {
            seen.entry(pair).or_insert((time_s, 0)).1 += 1;
        }
    }
    let overlap = |((ahead_idx, behind_idx), (first_at_s, times))| Overlap {
        ahead_idx,
        behind_idx,
        first_at_s,
        share: times as f64 / looks as f64,
    };
    seen.into_iter().map(overlap).collect()
}

/// The shape of joint angles that are listed by axis.
pub(crate) fn shape_of(chain: &Chain, commands: &Commands, angles_rad: &[f64]) -> Shape {
    let n_joints = chain.joints().len();
    let (mut yaw_rad, mut pitch_rad) = (vec![0.0; n_joints], vec![0.0; n_joints]);
    for (of, &angle_rad) in commands.axes().iter().zip(angles_rad) {
        match of.axis {
            Axis::Yaw => yaw_rad[of.joint_idx] = angle_rad,
            Axis::Pitch => pitch_rad[of.joint_idx] = angle_rad,
        }
    }
    Shape::of(chain, &yaw_rad, &pitch_rad)
}
