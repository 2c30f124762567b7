//! What the joints bear on the bench, without flight or air.

use nalgebra::{Matrix3, Vector3};
use undulift_aero::STANDARD_GRAVITY_M_S2;
use undulift_chain::{Axis, Chain, Shape, attitude_along_axis, joint_axes, nearest_rotation};
use undulift_dynamics::{Held, JointLoads, JointMotion, Outside, joint_loads};
use undulift_gait::Instant;

use crate::{Attitude, Equations, FlightError, Glider};

/// How the body is held.
#[derive(Debug, Clone, PartialEq)]
pub enum Pose {
    /// Level and straight.
    HeldOut,
    /// In the shape that the gait has at a time, in the attitude of its release.
    Gait {
        /// After release, s; 0 for the shape of the release itself.
        at_s: f64,
    },
    /// In any shape. Its body frame is that of headings and elevations summed from the nose, less
    /// their length-weighted mean along the body.
    Angles {
        /// Yaw axes from the head, then pitch axes from the head: shape (axes).
        angles_rad: Vec<f64>,
        /// Right side down.
        roll_rad: f64,
        /// Nose up.
        pitch_rad: f64,
    },
}

/// A body that one segment is held by, at rest.
#[derive(Debug, Clone)]
pub struct Clamped<'a> {
    glider: &'a Glider,
    equations: Equations,
    clamp_idx: usize,
    weight_m_s2: Vector3<f64>,
}

impl<'a> Clamped<'a> {
    /// - `clamp_idx`: the segment that is held, from 0 at the head
    /// - `load_factor`: weights for each newton of weight; 1 at rest, more for being caught
    ///
    /// # Errors
    ///
    /// [`FlightError::Gait`] if the gait doesn't fit the chain; [`FlightError::NoSuchSegment`].
    pub fn new(
        glider: &'a Glider,
        clamp_idx: usize,
        load_factor: f64,
    ) -> Result<Self, FlightError> {
        let segments = glider.chain.n_segments();
        if clamp_idx >= segments {
            return Err(FlightError::NoSuchSegment { segment: clamp_idx + 1, segments });
        }
        let equations = Equations::new(glider)?;
        let weight_m_s2 = Vector3::new(0.0, 0.0, -STANDARD_GRAVITY_M_S2 * load_factor);
        Ok(Self { glider, equations, clamp_idx, weight_m_s2 })
    }

    /// Loads in its joints.
    ///
    /// # Errors
    ///
    /// [`FlightError::PoseAngles`].
    pub fn loads(&mut self, pose: &Pose) -> Result<JointLoads, FlightError> {
        let axes = self.equations.commands().axes().len();
        let (angles_rad, root_to_world) = match pose {
            Pose::HeldOut => (vec![0.0; axes], Matrix3::identity()),
            Pose::Gait { at_s } => self.of_gait(*at_s),
            Pose::Angles { angles_rad, .. } if angles_rad.len() != axes => {
                return Err(FlightError::PoseAngles { found: angles_rad.len(), axes });
            }
            Pose::Angles { angles_rad, roll_rad, pitch_rad } => {
                let body_to_world = Attitude::from_angles(*roll_rad, *pitch_rad, 0.0).body_to_world;
                let body_to_root = body_in_root(&self.glider.chain, angles_rad);
                (angles_rad.clone(), body_to_world * body_to_root.transpose())
            }
        };
        let still = vec![0.0; axes];
        let motion = JointMotion {
            angles_rad: &angles_rad,
            rates_rad_s: &still,
            accelerations_rad_s2: &still,
        };
        let gravity_m_s2 = root_to_world.tr_mul(&self.weight_m_s2);
        let outside = vec![Outside::default(); self.glider.chain.n_segments()];
        let held = Held::Clamped { segment_idx: self.clamp_idx };
        Ok(joint_loads(&self.glider.chain, motion, held, gravity_m_s2, &outside))
    }

    /// Joint angles of the gait at a time, and root axes to world in the attitude of the release.
    fn of_gait(&mut self, at_s: f64) -> (Vec<f64>, Matrix3<f64>) {
        let launch = &self.glider.launch;
        let attitude = Attitude::from_angles(launch.roll_rad, launch.pitch_rad, launch.yaw_rad);
        let at = Instant::at(at_s);
        let root_to_world =
            attitude.body_to_world * self.equations.body_in_root(at, &[]).transpose();
        let axes = self.equations.commands().axes().len();
        (self.equations.motion(at).angles_rad[..axes].to_vec(), root_to_world)
    }
}

/// Loads in the joints of a body that one segment is held by, at rest.
///
/// # Errors
///
/// As for [`Clamped::new`] and [`Clamped::loads`].
pub fn bench_loads(
    glider: &Glider,
    pose: Pose,
    clamp_idx: usize,
    load_factor: f64,
) -> Result<JointLoads, FlightError> {
    Clamped::new(glider, clamp_idx, load_factor)?.loads(&pose)
}

/// Body axes to root axes of a shape that no gait tells the headings of.
fn body_in_root(chain: &Chain, angles_rad: &[f64]) -> Matrix3<f64> {
    let n_joints = chain.joints().len();
    let (mut yaw_rad, mut pitch_rad) = (vec![0.0; n_joints], vec![0.0; n_joints]);
    for (of, &angle_rad) in joint_axes(chain.joints()).iter().zip(angles_rad) {
        match of.axis {
            Axis::Yaw => yaw_rad[of.joint_idx] = angle_rad,
            Axis::Pitch => pitch_rad[of.joint_idx] = angle_rad,
        }
    }
    let shape = Shape::of(chain, &yaw_rad, &pitch_rad);
    let along = [yaw_rad, pitch_rad].map(|angles_rad| from_nose_less_mean(chain, &angles_rad));
    let of_segment = |segment: usize| {
        let straight = attitude_along_axis(along[0][segment], along[1][segment]);
        shape.rotations[segment] * straight.transpose() * chain.inertials()[segment].mass_kg
    };
    nearest_rotation(&(0..chain.n_segments()).map(of_segment).sum())
}

/// Sums of joint angles from the nose, less their mean by length: shape (n).
fn from_nose_less_mean(chain: &Chain, angles_rad: &[f64]) -> Vec<f64> {
    let summed = |sum_rad: &mut f64, angle_rad: &f64| {
        *sum_rad += angle_rad;
        Some(*sum_rad)
    };
    let behind = angles_rad.iter().scan(0.0, summed);
    let sums_rad: Vec<f64> = std::iter::once(0.0).chain(behind).collect();
    let shares = chain.lengths_m().into_iter().map(|length_m| length_m / chain.length_m());
    let mean_rad: f64 = sums_rad.iter().zip(shares).map(|(sum, share)| sum * share).sum();
    sums_rad.into_iter().map(|sum_rad| sum_rad - mean_rad).collect()
}
