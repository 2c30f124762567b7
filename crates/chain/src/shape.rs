use nalgebra::{Matrix3, Rotation3, Vector3};

use crate::{Chain, Segment};

/// Where a set of joint angles puts the segments, in the root frame.
#[derive(Debug, Clone, PartialEq)]
pub struct Shape {
    /// Segment axes to root axes: shape (n).
    pub rotations: Vec<Matrix3<f64>>,
    /// Middles of the front ends, m: shape (n).
    pub fronts_m: Vec<Vector3<f64>>,
}

impl Shape {
    /// The shape of these joint angles.
    ///
    /// - `yaw_rad`, `pitch_rad`: shape (n − 1) each, 0 where a joint lacks the axis
    pub fn of(chain: &Chain, yaw_rad: &[f64], pitch_rad: &[f64]) -> Self {
        let n = chain.n_segments();
        assert!(yaw_rad.len() + 1 == n && pitch_rad.len() + 1 == n, "one angle a joint and axis");
        let mut rotations = vec![Matrix3::identity()];
        let mut fronts_m = vec![Vector3::zeros()];
        for (joint_idx, segment) in chain.segments()[..n - 1].iter().enumerate() {
            let rotation: Matrix3<f64> = rotations[joint_idx];
            fronts_m.push(fronts_m[joint_idx] - rotation.column(0) * segment.length_m);
            let yaw = Rotation3::from_axis_angle(&Vector3::z_axis(), yaw_rad[joint_idx]);
            let pitch = Rotation3::from_axis_angle(&Vector3::y_axis(), -pitch_rad[joint_idx]);
            rotations.push(rotation * (yaw * pitch).into_inner());
        }
        Self { rotations, fronts_m }
    }

    /// Centres of mass of the segments in the root frame, m: shape (n).
    pub fn centres_m<'a>(&'a self, chain: &'a Chain) -> impl Iterator<Item = Vector3<f64>> + 'a {
        let places = self.fronts_m.iter().zip(&self.rotations);
        places
            .zip(chain.inertials())
            .map(|((front_m, rotation), inertial)| front_m + rotation * inertial.centre_m)
    }

    /// Centre of mass of the whole chain in the root frame, m.
    pub fn centre_of_mass_m(&self, chain: &Chain) -> Vector3<f64> {
        let moment: Vector3<f64> = self
            .centres_m(chain)
            .zip(chain.inertials())
            .map(|(centre_m, inertial)| centre_m * inertial.mass_kg)
            .sum();
        moment / chain.mass_kg()
    }

    /// Reach of the chain's boxes from the root frame's origin against a direction, m.
    ///
    /// The smallest of `corner · up` over all corners of all boxes, so the lowest corner where
    /// `up_root` is the world's vertical in root axes.
    pub fn lowest_corner_m(&self, segments: &[Segment], up_root: Vector3<f64>) -> f64 {
        let boxes = self.fronts_m.iter().zip(&self.rotations).zip(segments);
        boxes
            .map(|((front_m, rotation), segment)| {
                let up_segment = rotation.tr_mul(&up_root);
                let middle = front_m.dot(&up_root) + segment.middle_m().dot(&up_segment);
                middle - segment.half_extents_m().dot(&up_segment.abs())
            })
            .fold(f64::INFINITY, f64::min)
    }
}
