//! How axes turn that don't follow their commands.
//!
//! Torque is known of some axes, motion of the others; articulated bodies give the accelerations of
//! both. Servos keep the temperature of the air.

use nalgebra::Vector3;
use undulift_chain::Chain;
use undulift_dynamics::{Articulated, Drive, Outside};
use undulift_gait::{Instant, Motion};
use undulift_servo::{FedLoop, Servo};

use crate::equations::Moving;
use crate::state::{LooseAxis, Scaled, Units};
use crate::{Equations, Mode, State, Wrench};

/// Numbers of the body in a long state: the scaled state, then angles of all loose axes, then rates.
const BODY: usize = 13;

/// What turns the loose axes over one smooth piece of a flight.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Turning {
    /// As they stand in the state.
    pub(crate) axes: Vec<Turned>,
    /// Commands that hold over the piece, by axis, rad; absent: they go on.
    pub(crate) told_rad: Option<Vec<f64>>,
}

/// One loose axis.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Turned {
    pub(crate) axis_idx: usize,
    pub(crate) by: By,
    /// That its angle is scaled by, rad.
    pub(crate) unit_rad: f64,
    /// That its rate is scaled by, rad/s.
    pub(crate) unit_rad_s: f64,
}

/// What turns it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) enum By {
    Servo { fed: FedLoop, rotor_kg_m2: f64 },
    Nothing,
    Lock,
}

/// Room and figures for chains with loose axes.
#[derive(Debug, Clone)]
pub(crate) struct Hybrid {
    servos: Vec<Servo>,
    articulated: Articulated,
    drives: Vec<Drive>,
    outside: Vec<Outside>,
    state: State,
}

impl Turning {
    /// What a servo is told and does: command less angle, rad.
    pub(crate) fn error_rad(&self, commands: &Motion, axis: &LooseAxis) -> f64 {
        let told_rad = self.told_rad.as_ref().unwrap_or(&commands.angles_rad);
        told_rad[axis.axis_idx] - axis.angle_rad
    }
}

impl Hybrid {
    pub(crate) fn new(chain: &Chain, servos: &[Servo], n_axes: usize) -> Self {
        Self {
            servos: servos.to_vec(),
            articulated: Articulated::new(chain),
            drives: vec![Drive::Motion(0.0); n_axes],
            outside: vec![Outside::default(); chain.n_segments()],
            state: State::default(),
        }
    }

    /// Time derivative of the long state.
    pub(crate) fn derivative(
        &mut self,
        equations: &mut Equations,
        turning: &Turning,
        at: Instant,
        long: &[f64],
        rates: &mut [f64],
    ) {
        let mut state = std::mem::take(&mut self.state);
        let units = *equations.units();
        units.read_long(long, &turning.axes, &mut state);
        let moving = equations.moving(at, &state);
        let loads = self.accelerate(equations, turning, at, &moving, &state);
        let body = equations.body_rates(&state, &moving, loads);
        rates[..BODY].copy_from_slice(body.as_slice());
        let n = turning.axes.len();
        for (k, (axis, turned)) in state.loose.iter().zip(&turning.axes).enumerate() {
            let acceleration_rad_s2 = self.articulated.accelerations_rad_s2()[axis.axis_idx];
            rates[BODY + k] = axis.rate_rad_s / turned.unit_rad;
            rates[BODY + n + k] = acceleration_rad_s2 / turned.unit_rad_s;
        }
        self.state = state;
    }

    /// Accelerations of all axes at an instant, by axis, rad/s².
    pub(crate) fn accelerations_rad_s2(
        &mut self,
        equations: &mut Equations,
        turning: &Turning,
        at: Instant,
        state: &State,
    ) -> &[f64] {
        let moving = equations.moving(at, state);
        self.accelerate(equations, turning, at, &moving, state);
        self.articulated.accelerations_rad_s2()
    }

    /// Finds the accelerations of all axes; returns the air's loads on the whole chain, moment
    /// about the centre of mass, world axes.
    ///
    /// - `moving`: of the same instant and state, the last that the equations were asked for
    fn accelerate(
        &mut self,
        equations: &mut Equations,
        turning: &Turning,
        at: Instant,
        moving: &Moving,
        state: &State,
    ) -> Wrench {
        let loads = equations.air_on_segments(moving, state, &mut self.outside);
        if turning.axes.len() == self.drives.len() {
            if turning.told_rad.is_none() {
                equations.motion(at);
            }
        } else {
            let follow = equations.full_motion(at).accelerations_rad_s2.iter();
            for (drive, &acceleration_rad_s2) in self.drives.iter_mut().zip(follow) {
                *drive = Drive::Motion(acceleration_rad_s2);
            }
        }
        for (turned, axis) in turning.axes.iter().zip(&state.loose) {
            self.drives[turned.axis_idx] = match turned.by {
                By::Servo { fed, rotor_kg_m2 } => {
                    let error_rad = turning.error_rad(equations.last_motion(), axis);
                    Drive::Torque {
                        torque_nm: fed.torque_nm(error_rad, axis.rate_rad_s),
                        rotor_kg_m2,
                    }
                }
                By::Nothing => Drive::Torque { torque_nm: 0.0, rotor_kg_m2: 0.0 },
                By::Lock => Drive::Motion(0.0),
            };
        }
        let (frames, rates_rad_s) = equations.loose_frames();
        // Weight pulls all segments alike, so no joint feels it.
        self.articulated.solve(
            frames,
            rates_rad_s,
            &self.drives,
            moving.angular_velocity_rad_s.into(),
            Vector3::zeros(),
            &self.outside,
        );
        loads
    }

    /// Stops locked axes at once: an impulse between neighbours, which leaves momentum and angular
    /// momentum of the whole alone and gives the axes that servos or nothing turn no push of their
    /// own.
    ///
    /// - `modes`: by axis, as they are from then on
    /// - `state`: at that time, its rates changed
    pub(crate) fn stop(
        &mut self,
        equations: &mut Equations,
        modes: &[Mode],
        at: Instant,
        state: &mut State,
    ) {
        self.drives.fill(Drive::Motion(0.0));
        for axis in &state.loose {
            self.drives[axis.axis_idx] = match modes[axis.axis_idx] {
                Mode::Driven { servo_idx } => Drive::Torque {
                    torque_nm: 0.0,
                    rotor_kg_m2: self.servos[servo_idx].rotor_inertia_at_output_kg_m2,
                },
                Mode::Limp => Drive::Torque { torque_nm: 0.0, rotor_kg_m2: 0.0 },
                Mode::Locked | Mode::Commanded => Drive::Motion(-axis.rate_rad_s),
            };
        }
        self.outside.fill(Outside::default());
        // Velocities change in an instant as accelerations would them in a second, from rest.
        let still = vec![0.0; self.drives.len()];
        let frames = equations.frames_at_rest(at, &state.loose);
        let (zero, outside) = (Vector3::zeros(), &self.outside);
        self.articulated.solve(frames, &still, &self.drives, zero, zero, outside);
        for axis in &mut state.loose {
            axis.rate_rad_s += self.articulated.accelerations_rad_s2()[axis.axis_idx];
        }
    }
}

impl Units {
    /// √(g/L), rad/s: of an axis that nothing holds.
    pub(crate) fn rate_rad_s(&self) -> f64 {
        self.speed_m_s / self.length_m
    }

    pub(crate) fn long(&self, state: &State, axes: &[Turned]) -> Vec<f64> {
        let pairs = state.loose.iter().zip(axes);
        let angles = pairs.clone().map(|(axis, turned)| axis.angle_rad / turned.unit_rad);
        let rates = pairs.map(|(axis, turned)| axis.rate_rad_s / turned.unit_rad_s);
        let body = self.scaled(state);
        let body = body.iter().copied();
        body.chain(angles).chain(rates).collect()
    }

    pub(crate) fn long_state(&self, long: &[f64], axes: &[Turned]) -> State {
        let mut state = State::default();
        self.read_long(long, axes, &mut state);
        state
    }

    pub(crate) fn read_long(&self, long: &[f64], axes: &[Turned], state: &mut State) {
        let mut loose = std::mem::take(&mut state.loose);
        *state = self.state(&Scaled::from_column_slice(&long[..BODY]));
        loose.clear();
        loose.extend(axes.iter().enumerate().map(|(k, turned)| LooseAxis {
            axis_idx: turned.axis_idx,
            angle_rad: long[BODY + k] * turned.unit_rad,
            rate_rad_s: long[BODY + axes.len() + k] * turned.unit_rad_s,
        }));
        state.loose = loose;
    }
}
