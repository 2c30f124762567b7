//! What the joints bear on the bench, without flight or air.

use nalgebra::Vector3;
use undulift_aero::STANDARD_GRAVITY_M_S2;
use undulift_dynamics::{Held, JointLoads, JointMotion, Outside, joint_loads};
use undulift_gait::Instant;

use crate::{Attitude, Equations, FlightError, Glider};

/// How the body is held.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Pose {
    /// Level and straight.
    HeldOut,
    /// In the shape and attitude of its release.
    Release,
}

/// Loads in the joints of a body that one segment is held by, at rest.
///
/// - `clamp_idx`: the segment that is held, from 0 at the head
/// - `load_factor`: weights for each newton of weight; 1 at rest, more for being caught
///
/// # Errors
///
/// [`FlightError::Gait`] if the gait doesn't fit the chain; [`FlightError::NoSuchSegment`].
pub fn bench_loads(
    glider: &Glider,
    pose: Pose,
    clamp_idx: usize,
    load_factor: f64,
) -> Result<JointLoads, FlightError> {
    let segments = glider.chain.n_segments();
    if clamp_idx >= segments {
        return Err(FlightError::NoSuchSegment { segment: clamp_idx + 1, segments });
    }
    let mut equations = Equations::new(glider)?;
    let weight_m_s2 = Vector3::new(0.0, 0.0, -STANDARD_GRAVITY_M_S2 * load_factor);
    let n_axes = equations.commands().axes().len();
    let still = vec![0.0; n_axes];
    let (angles_rad, gravity_m_s2) = match pose {
        Pose::HeldOut => (still.clone(), weight_m_s2),
        Pose::Release => {
            let launch = &glider.launch;
            let attitude = Attitude::from_angles(launch.roll_rad, launch.pitch_rad, launch.yaw_rad);
            let at = Instant::at(0.0);
            let root_to_world =
                attitude.body_to_world * equations.body_in_root(at, &[]).transpose();
            let angles_rad = equations.motion(at).angles_rad[..n_axes].to_vec();
            (angles_rad, root_to_world.tr_mul(&weight_m_s2))
        }
    };
    let motion =
        JointMotion { angles_rad: &angles_rad, rates_rad_s: &still, accelerations_rad_s2: &still };
    let outside = vec![Outside::default(); segments];
    let held = Held::Clamped { segment_idx: clamp_idx };
    Ok(joint_loads(&glider.chain, motion, held, gravity_m_s2, &outside))
}
