use nalgebra::{UnitQuaternion, Vector3};
use undulift_gait::Instant;
use undulift_lanes::{LANES, Triple};

use crate::{Attitude, Equations, FlightError, Launch, State};

/// The state at release.
///
/// The body frame takes the launch's roll, pitch and yaw. Without a grip the chain is let go with
/// no angular momentum and its centre at the launch velocity; with one, the gripped segment doesn't
/// turn and moves at the launch velocity, and the rest follows from the moving shape. A spin comes
/// on top and leaves the centre's velocity alone.
///
/// - `floor_m`: height of what ends the flight
///
/// # Errors
///
/// [`FlightError::ReleasedOnFloor`], [`FlightError::ReleasedInverted`].
pub fn release(
    equations: &mut Equations,
    launch: &Launch,
    floor_m: f64,
) -> Result<State, FlightError> {
    let at = Instant::at(0.0);
    let attitude = Attitude::from_angles(launch.roll_rad, launch.pitch_rad, launch.yaw_rad);
    if attitude.uprightness() <= 0.0 {
        let tilt_deg = attitude.uprightness().clamp(-1.0, 1.0).acos().to_degrees();
        return Err(FlightError::ReleasedInverted { tilt_deg });
    }
    let body_to_root = equations.body_in_root(at, &[]);
    let head_to_world = attitude.body_to_world * body_to_root.transpose();
    let launch_m_s =
        Vector3::new(launch.climb_rad.cos(), 0.0, launch.climb_rad.sin()) * launch.speed_m_s;
    let centroidal = equations.shape(at, &[]);
    let (velocity_m_s, momentum) = match launch.grip_segment_idx {
        None => (launch_m_s, Vector3::zeros()),
        Some(segment_idx) => {
            let four = &equations.frames().fours[segment_idx / LANES];
            let lane = segment_idx % LANES;
            // The head turns so that the gripped segment doesn't.
            let head_rad_s = Triple::zero() - four.angular_velocity_rad_s.lane(lane);
            let apart_m = four.front_m.lane(lane) - centroidal.centre_m;
            let of_segment = head_rad_s.cross(apart_m) + four.front_velocity_m_s.lane(lane)
                - centroidal.velocity_m_s;
            let momentum = centroidal.inertia_kg_m2.times(head_rad_s) + centroidal.momentum_kg_m2_s;
            (
                launch_m_s - head_to_world * Vector3::from(of_segment),
                head_to_world * Vector3::from(momentum),
            )
        }
    };
    let inertia_world =
        head_to_world * centroidal.inertia_kg_m2.matrix() * head_to_world.transpose();
    let state = State {
        place_m: Vector3::new(0.0, 0.0, launch.height_m),
        head_to_world: UnitQuaternion::from_matrix(&head_to_world),
        velocity_m_s,
        momentum_kg_m2_s: momentum + inertia_world * launch.spin_world_rad_s,
        loose: Vec::new(),
    };
    let lowest_m = equations.lowest_corner_m(at, &state) - floor_m;
    if lowest_m > 0.0 { Ok(state) } else { Err(FlightError::ReleasedOnFloor { lowest_m }) }
}
