//! The body frame: roll, pitch and yaw of an undulating chain.

use nalgebra::{Matrix3, Rotation3, Vector3};
use undulift_chain::{Chain, nearest_rotation};
use undulift_dynamics::Frames;
use undulift_gait::{Commands, Motion};
use undulift_lanes::{LANES, Triple, f64x4, lanes, sin_cos_all};

/// How the body lies in the world.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Attitude {
    /// Body axes to world.
    pub body_to_world: Matrix3<f64>,
}

impl Attitude {
    /// From angles, z-y-x order.
    ///
    /// - `roll_rad` right side down, `pitch_rad` nose up, `yaw_rad` nose left
    pub fn from_angles(roll_rad: f64, pitch_rad: f64, yaw_rad: f64) -> Self {
        let about = |axis, angle| Rotation3::from_axis_angle(&axis, angle);
        let yaw = about(Vector3::z_axis(), yaw_rad);
        let pitch = about(Vector3::y_axis(), -pitch_rad);
        let roll = about(Vector3::x_axis(), roll_rad);
        Self { body_to_world: (yaw * pitch * roll).into_inner() }
    }

    /// Positive right side down, rad.
    pub fn roll_rad(&self) -> f64 {
        self.body_to_world[(2, 1)].atan2(self.body_to_world[(2, 2)])
    }

    /// Positive nose up, rad.
    pub fn pitch_rad(&self) -> f64 {
        self.body_to_world[(2, 0)].clamp(-1.0, 1.0).asin()
    }

    /// Positive nose left, rad.
    pub fn yaw_rad(&self) -> f64 {
        self.body_to_world[(1, 0)].atan2(self.body_to_world[(0, 0)])
    }

    /// Cosine of the angle between the body's dorsal axis and the vertical; upright above 0.
    pub fn uprightness(&self) -> f64 {
        self.body_to_world[(2, 2)]
    }

    /// The way the body points, world axes.
    pub fn forward(&self) -> Vector3<f64> {
        self.body_to_world.column(0).into_owned()
    }
}

/// Finds the body frame of a chain's shape: the rotation nearest to Σ m R Eᵀ, with E the attitude
/// that a segment would have in a body lying straight along its wave's axis.
#[derive(Debug, Clone)]
pub(crate) struct BodyFrame {
    n_segments: usize,
    masses_kg: Vec<f64x4>,
}

/// Room that finding a body frame takes.
#[derive(Debug, Clone)]
pub(crate) struct BodyRoom {
    angles_rad: [Vec<f64>; 2],
    sines: [Vec<f64>; 2],
    cosines: [Vec<f64>; 2],
}

impl BodyFrame {
    pub(crate) fn new(chain: &Chain) -> Self {
        let masses_kg = chain
            .inertials()
            .chunks(LANES)
            .map(|four| lanes(four, |inertial| inertial.mass_kg))
            .collect();
        Self { n_segments: chain.n_segments(), masses_kg }
    }

    pub(crate) fn room(&self) -> BodyRoom {
        let one = || vec![0.0; self.masses_kg.len() * LANES];
        let both = || [one(), one()];
        BodyRoom { angles_rad: both(), sines: both(), cosines: both() }
    }

    /// Body axes to root axes.
    ///
    /// - `motion`, `frames`: of the same instant
    pub(crate) fn in_root(
        &self,
        commands: &Commands,
        motion: &Motion,
        frames: &Frames,
        room: &mut BodyRoom,
    ) -> Matrix3<f64> {
        let n = self.n_segments;
        let [headings, elevations] = &mut room.angles_rad;
        commands.attitudes(motion, &mut headings[..n], &mut elevations[..n]);
        for which in 0..2 {
            sin_cos_all(&room.angles_rad[which], &mut room.sines[which], &mut room.cosines[which]);
        }
        let mut columns = [Triple::<f64x4>::zero(); 3];
        for (four_idx, (at, &mass_kg)) in frames.fours.iter().zip(&self.masses_kg).enumerate() {
            let lanes = |values: &[f64]| {
                let first = four_idx * LANES;
                f64x4::new([values[first], values[first + 1], values[first + 2], values[first + 3]])
            };
            let (sin_h, cos_h) = (lanes(&room.sines[0]), lanes(&room.cosines[0]));
            let (sin_e, cos_e) = (lanes(&room.sines[1]), lanes(&room.cosines[1]));
            // R Eᵀ = x Exᵀ + y Eyᵀ + z Ezᵀ, one column for each part of E's axes.
            let (x, y, z) = (at.x.times(mass_kg), at.y.times(mass_kg), at.z.times(mass_kg));
            let level = x.times(cos_e) - z.times(sin_e);
            columns[0] = columns[0] + level.times(cos_h) - y.times(sin_h);
            columns[1] = columns[1] + level.times(sin_h) + y.times(cos_h);
            columns[2] = columns[2] + x.times(sin_e) + z.times(cos_e);
        }
        nearest_rotation(&Matrix3::from_columns(
            &columns.map(|column| Vector3::from(column.over_lanes())),
        ))
    }
}
