//! What the joints bear along a flight.

use nalgebra::Vector3;
use undulift_aero::STANDARD_GRAVITY_M_S2;
use undulift_chain::Chain;
use undulift_dynamics::{Held, JointLoads, JointMotion, Wrench, joint_loads};
use undulift_gait::{Gait, Instant, Pattern};

use crate::{Flight, FlightError, Glider, State};

/// Loads and motion of all joints at equal steps of time and at the end.
#[derive(Debug, Clone, PartialEq)]
pub struct Histories {
    /// After release, s.
    pub times_s: Vec<f64>,
    /// Joint torque of each axis, rotor inertia left out, N·m: shape (times, axes).
    pub torques_nm: Vec<Vec<f64>>,
    /// rad/s: shape (times, axes).
    pub rates_rad_s: Vec<Vec<f64>>,
    /// rad/s²: shape (times, axes).
    pub accelerations_rad_s2: Vec<Vec<f64>>,
    /// Power of the air on the chain, W: shape (times).
    pub air_power_w: Vec<f64>,
    /// Kinetic energy and weight's, against a centre of mass on the floor, J: shape (times).
    pub energy_j: Vec<f64>,
    /// What each hinge carries, torque of its servos taken off: shape (times, joints).
    pub hinge_loads: Vec<Vec<HingeLoad>>,
    /// Largest wrench left at the nose, N or N·m, over the largest in any joint: a measure of how
    /// exactly the loads balance.
    pub left_at_nose: f64,
}

/// Sizes of what one hinge carries.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct HingeLoad {
    /// N.
    pub force_n: f64,
    /// N·m.
    pub moment_nm: f64,
}

impl HingeLoad {
    /// In every hinge.
    pub fn of(loads: &JointLoads) -> Vec<Self> {
        let size = |hinge: &Wrench| Self {
            force_n: hinge.force_n.norm(),
            moment_nm: hinge.moment_nm.norm(),
        };
        loads.hinges.iter().map(size).collect()
    }

    /// The larger force and the larger moment, which may be of different instants.
    pub fn most(self, other: Self) -> Self {
        Self {
            force_n: self.force_n.max(other.force_n),
            moment_nm: self.moment_nm.max(other.moment_nm),
        }
    }

    /// Largest of each hinge over rows: shape (joints), empty without rows.
    pub fn peaks(rows: &[Vec<Self>]) -> Vec<Self> {
        let mut peaks = rows.first().cloned().unwrap_or_default();
        for row in rows {
            peaks.iter_mut().zip(row).for_each(|(peak, load)| *peak = peak.most(*load));
        }
        peaks
    }
}

/// Joint loads along a flight.
///
/// - `every_s`: between rows; above 0
///
/// # Errors
///
/// [`FlightError::Impulses`] for a gait table with straight lines between its rows.
pub fn histories(
    glider: &Glider,
    flight: &mut Flight,
    every_s: f64,
) -> Result<Histories, FlightError> {
    refuse_impulses(&glider.gait)?;
    let mut found = Histories {
        times_s: Vec::new(),
        torques_nm: Vec::new(),
        rates_rad_s: Vec::new(),
        accelerations_rad_s2: Vec::new(),
        air_power_w: Vec::new(),
        energy_j: Vec::new(),
        hinge_loads: Vec::new(),
        left_at_nose: 0.0,
    };
    for time_s in flight.row_times_s(every_s) {
        let state = flight.trajectory.state(time_s);
        let at = flight.trajectory.instant(time_s);
        found.push(time_s, flight.joint_loads(&glider.chain, at, &state));
        let weight_n = glider.chain.mass_kg() * STANDARD_GRAVITY_M_S2;
        let kinetic_j = flight.equations.kinetic_energy_j(at, &state);
        found.energy_j.push(kinetic_j + weight_n * state.place_m.z);
        found.air_power_w.push(flight.equations.air_power_w(at, &state));
    }
    Ok(found)
}

/// Loads in the joints of a flying glider at one instant, with how its axes turn.
///
/// # Errors
///
/// [`FlightError::Impulses`] for a gait table with straight lines between its rows.
pub fn loads_at(glider: &Glider, flight: &mut Flight, time_s: f64) -> Result<Loaded, FlightError> {
    refuse_impulses(&glider.gait)?;
    let state = flight.trajectory.state(time_s);
    let at = flight.trajectory.instant(time_s);
    Ok(flight.joint_loads(&glider.chain, at, &state))
}

/// Straight lines between rows jump in rate, so their accelerations are impulses.
pub(crate) fn refuse_impulses(gait: &Gait) -> Result<(), FlightError> {
    match &gait.pattern {
        Pattern::Table(table) if table.interpolation().jumps() => Err(FlightError::Impulses),
        _ => Ok(()),
    }
}

/// One instant of all joints.
#[derive(Debug, Clone, PartialEq)]
pub struct Loaded {
    /// What goes through them.
    pub loads: JointLoads,
    /// By axis, rad/s.
    pub rates_rad_s: Vec<f64>,
    /// By axis, rad/s².
    pub accelerations_rad_s2: Vec<f64>,
}

impl Histories {
    fn push(&mut self, time_s: f64, loaded: Loaded) {
        let loads = loaded.loads;
        self.times_s.push(time_s);
        self.rates_rad_s.push(loaded.rates_rad_s);
        self.accelerations_rad_s2.push(loaded.accelerations_rad_s2);
        self.hinge_loads.push(HingeLoad::of(&loads));
        let size = |wrench: &Wrench| wrench.force_n.norm().max(wrench.moment_nm.norm());
        let largest = loads.joints.iter().map(size).fold(f64::MIN_POSITIVE, f64::max);
        self.left_at_nose = self.left_at_nose.max(size(&loads.left) / largest);
        self.torques_nm.push(loads.torques_nm);
    }
}

impl Flight {
    /// Loads in the joints at an instant, with the rates and accelerations of all axes.
    fn joint_loads(&mut self, chain: &Chain, at: Instant, state: &State) -> Loaded {
        let Self { equations, hybrid, trajectory, .. } = self;
        let n_axes = equations.commands().axes().len();
        let accelerations_rad_s2 = match (trajectory.turning(at.time_s), hybrid) {
            (Some(turning), Some(hybrid)) => {
                hybrid.accelerations_rad_s2(equations, turning, at, state).to_vec()
            }
            _ => equations.full_motion(at).accelerations_rad_s2[..n_axes].to_vec(),
        };
        let moving = equations.moving(at, state);
        let mut outside = Vec::new();
        equations.air_on_segments(&moving, state, &mut outside);
        let weight_m_s2 = Vector3::new(0.0, 0.0, -STANDARD_GRAVITY_M_S2);
        let gravity_m_s2 = state.head_to_world.inverse_transform_vector(&weight_m_s2);
        let (angles_rad, rates_rad_s) = equations.joints_as_last(&state.loose);
        let motion =
            JointMotion { angles_rad, rates_rad_s, accelerations_rad_s2: &accelerations_rad_s2 };
        let held = Held::Free { head_rad_s: moving.angular_velocity_rad_s.into() };
        Loaded {
            loads: joint_loads(chain, motion, held, gravity_m_s2, &outside),
            rates_rad_s: rates_rad_s.to_vec(),
            accelerations_rad_s2,
        }
    }
}
