//! Equations of motion: how a chain turns, what the air does to it, how its state changes.
//!
//! Axes follow their commands but for those that the state itself carries.

use nalgebra::{Matrix3, Vector3};
use undulift_aero::STANDARD_GRAVITY_M_S2;
use undulift_chain::Segment;
use undulift_dynamics::{Centroidal, Frames, Mechanics, Outside};
use undulift_gait::{Commands, Instant, Motion};
use undulift_lanes::{LANES, Triple, f64x4, lanes};

use crate::attitude::{BodyFrame, BodyRoom};
use crate::loads::{AirLoads, StripAir, Through};
use crate::state::{LooseAxis, Scaled, Units};
use crate::{Attitude, FlightError, Glider, State, Wrench};

/// A glider laid out for the inner loop, with the room for one evaluation.
#[derive(Debug, Clone)]
pub struct Equations {
    commands: Commands,
    mechanics: Mechanics,
    loads: AirLoads,
    body: BodyFrame,
    boxes: Vec<FourBoxes>,
    wind_world_m_s: Vector3<f64>,
    units: Units,
    room: Room,
}

#[derive(Debug, Clone)]
struct Room {
    motion: Motion,
    joints: Joints,
    frames: Frames,
    body: BodyRoom,
}

/// Angles and rates of joints of which some don't follow their commands, by axis.
#[derive(Debug, Clone)]
struct Joints {
    angles_rad: Vec<f64>,
    rates_rad_s: Vec<f64>,
}

/// Boxes of four neighbouring segments: half their sides, and what lifts lanes past the tail out of
/// the way.
#[derive(Debug, Clone, Copy)]
struct FourBoxes {
    half_length_m: f64x4,
    half_width_m: f64x4,
    half_thickness_m: f64x4,
    absent_m: f64x4,
}

/// The shape at one instant, and how it turns for a given momentum.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Moving {
    pub(crate) centroidal: Centroidal,
    pub(crate) head_to_world: Matrix3<f64>,
    pub(crate) angular_velocity_rad_s: Triple<f64>,
}

impl Equations {
    /// Lays out a glider.
    ///
    /// # Errors
    ///
    /// [`FlightError::Gait`] if the gait doesn't fit the chain.
    pub fn new(glider: &Glider) -> Result<Self, FlightError> {
        let commands = Commands::new(&glider.gait, &glider.chain)?;
        let mechanics = Mechanics::new(&glider.chain);
        let body = BodyFrame::new(&glider.chain);
        let motion = commands.room();
        let joints = Joints {
            angles_rad: motion.angles_rad.clone(),
            rates_rad_s: motion.rates_rad_s.clone(),
        };
        let room = Room { motion, joints, frames: mechanics.room(), body: body.room() };
        Ok(Self {
            commands,
            mechanics,
            loads: AirLoads::new(glider),
            body,
            boxes: glider.chain.segments().chunks(LANES).map(FourBoxes::new).collect(),
            wind_world_m_s: glider.wind_world_m_s,
            units: Units::of(&glider.chain),
            room,
        })
    }

    /// What the joints do.
    pub fn commands(&self) -> &Commands {
        &self.commands
    }

    pub(crate) fn units(&self) -> &Units {
        &self.units
    }

    pub(crate) fn wind_world_m_s(&self) -> Vector3<f64> {
        self.wind_world_m_s
    }

    /// Joint commands of an instant: angles and rates, yaw axes first.
    pub fn motion(&mut self, at: Instant) -> &Motion {
        self.commands.rates(at, &mut self.room.motion);
        &self.room.motion
    }

    /// Joint commands of an instant with their accelerations.
    pub(crate) fn full_motion(&mut self, at: Instant) -> &Motion {
        self.commands.accelerations(at, &mut self.room.motion);
        &self.room.motion
    }

    /// Joint commands as they were last asked for.
    pub(crate) fn last_motion(&self) -> &Motion {
        &self.room.motion
    }

    /// First stage: joint motion, frames and centroidal sums of an instant.
    ///
    /// - `loose`: axes that don't follow their commands
    #[inline]
    pub fn shape(&mut self, at: Instant, loose: &[LooseAxis]) -> Centroidal {
        self.place_segments(at, loose);
        self.mechanics.centroidal(&self.room.frames)
    }

    #[inline]
    fn place_segments(&mut self, at: Instant, loose: &[LooseAxis]) {
        // Where every axis is loose nobody asks what it was told.
        if loose.is_empty() || loose.len() < self.commands.axes().len() {
            self.commands.rates(at, &mut self.room.motion);
        }
        let Room { motion, joints, frames, .. } = &mut self.room;
        let (angles_rad, rates_rad_s) = joints.of(motion, loose);
        self.mechanics.frames(angles_rad, rates_rad_s, frames);
    }

    /// Angles and rates of all axes at an instant, by axis.
    pub(crate) fn joints(&mut self, at: Instant, loose: &[LooseAxis]) -> (&[f64], &[f64]) {
        self.commands.rates(at, &mut self.room.motion);
        self.joints_as_last(loose)
    }

    /// The same with the commands as they were last asked for.
    pub(crate) fn joints_as_last(&mut self, loose: &[LooseAxis]) -> (&[f64], &[f64]) {
        let n_axes = self.commands.axes().len();
        let Room { motion, joints, .. } = &mut self.room;
        let (angles_rad, rates_rad_s) = joints.of(motion, loose);
        (&angles_rad[..n_axes], &rates_rad_s[..n_axes])
    }

    /// Frames as the last call of [`Equations::shape`] left them.
    pub(crate) fn frames(&self) -> &Frames {
        &self.room.frames
    }

    /// Frames of the last instant that a moving chain was asked for at, and rates of all its axes,
    /// some of which don't follow their commands.
    pub(crate) fn loose_frames(&self) -> (&Frames, &[f64]) {
        (&self.room.frames, &self.room.joints.rates_rad_s[..self.commands.axes().len()])
    }

    /// Frames of an instant, as if all joints stood still.
    pub(crate) fn frames_at_rest(&mut self, at: Instant, loose: &[LooseAxis]) -> &Frames {
        self.commands.rates(at, &mut self.room.motion);
        let Room { motion, joints, frames, .. } = &mut self.room;
        let (angles_rad, rates_rad_s) = joints.of(motion, loose);
        let still = vec![0.0; rates_rad_s.len()];
        self.mechanics.frames(angles_rad, &still, frames);
        frames
    }

    /// The shape of an instant, turning as a state's momentum makes it.
    #[inline]
    pub(crate) fn moving(&mut self, at: Instant, state: &State) -> Moving {
        let centroidal = self.shape(at, &state.loose);
        let head_to_world = *state.head_to_world.to_rotation_matrix().matrix();
        let momentum: Triple<f64> = head_to_world.tr_mul(&state.momentum_kg_m2_s).into();
        let angular_velocity_rad_s =
            centroidal.inertia_kg_m2.solve(momentum - centroidal.momentum_kg_m2_s);
        Moving { centroidal, head_to_world, angular_velocity_rad_s }
    }

    #[inline]
    fn through(&self, moving: &Moving, state: &State) -> Through {
        let velocity =
            moving.head_to_world.tr_mul(&(state.velocity_m_s - self.wind_world_m_s)).into();
        Through::new(&moving.centroidal, velocity, moving.angular_velocity_rad_s)
    }

    /// Air loads at an instant, moment about the centre of mass; world axes.
    pub fn air_loads(&mut self, at: Instant, state: &State) -> Wrench {
        let moving = self.moving(at, state);
        self.air_loads_on(&moving, state)
    }

    #[inline]
    fn air_loads_on(&self, moving: &Moving, state: &State) -> Wrench {
        let about_origin = self.loads.wrench(&self.room.frames, &self.through(moving, state));
        self.about_centre_in_world(moving, about_origin)
    }

    /// - `about_origin`: root axes
    #[inline]
    fn about_centre_in_world(&self, moving: &Moving, about_origin: Wrench) -> Wrench {
        let force = about_origin.force_n;
        let moment = about_origin.moment_nm - moving.centroidal.centre_m.cross(force);
        let to_world = |v: Triple<f64>| (moving.head_to_world * Vector3::from(v)).into();
        Wrench { force_n: to_world(force), moment_nm: to_world(moment) }
    }

    /// Air loads on every segment at an instant, moment about its front end, root axes; returns
    /// those on the whole chain, moment about the centre of mass, world axes.
    pub(crate) fn air_on_segments(
        &self,
        moving: &Moving,
        state: &State,
        on_segments: &mut Vec<Outside>,
    ) -> Wrench {
        let through = self.through(moving, state);
        let about_origin = self.loads.on_segments(&self.room.frames, &through, on_segments);
        on_segments.truncate(self.mechanics.n_segments());
        self.about_centre_in_world(moving, about_origin)
    }

    /// Power of the air on the whole chain at an instant, W.
    pub(crate) fn air_power_w(&mut self, at: Instant, state: &State) -> f64 {
        let moving = self.moving(at, state);
        let mut outside = Vec::new();
        self.air_on_segments(&moving, state, &mut outside);
        // Over the ground: the chain's own motion, without the wind.
        let velocity: Triple<f64> = moving.head_to_world.tr_mul(&state.velocity_m_s).into();
        let head_rad_s = moving.angular_velocity_rad_s;
        let origin = velocity
            - head_rad_s.cross(moving.centroidal.centre_m)
            - moving.centroidal.velocity_m_s;
        let parts = outside.iter().enumerate().map(|(idx, outside)| {
            let (four, lane) = (&self.room.frames.fours[idx / LANES], idx % LANES);
            let front = origin
                + head_rad_s.cross(four.front_m.lane(lane))
                + four.front_velocity_m_s.lane(lane);
            let spin = head_rad_s + four.angular_velocity_rad_s.lane(lane);
            front.dot(outside.force_n.into()) + spin.dot(outside.moment_nm.into())
        });
        parts.sum()
    }

    /// What each strip meets at an instant.
    pub(crate) fn strips(&mut self, at: Instant, state: &State, mut each: impl FnMut(StripAir)) {
        let moving = self.moving(at, state);
        let through = self.through(&moving, state);
        self.loads.strips(&self.room.frames, &through).for_each(&mut each);
    }

    /// Time derivative of the scaled state.
    #[inline]
    pub(crate) fn derivative(&mut self, at: Instant, scaled: &Scaled, rates: &mut Scaled) {
        let state = self.units.state(scaled);
        let moving = self.moving(at, &state);
        let loads = self.air_loads_on(&moving, &state);
        *rates = self.body_rates(&state, &moving, loads);
    }

    /// Time derivative of the scaled state, loose axes left out.
    ///
    /// - `loads`: on the whole chain, moment about the centre of mass, world axes
    #[inline]
    pub(crate) fn body_rates(&self, state: &State, moving: &Moving, loads: Wrench) -> Scaled {
        let units = &self.units;
        let mass_kg = self.mechanics.mass_kg();
        let q = state.head_to_world.quaternion();
        let w = moving.angular_velocity_rad_s;
        let place = state.velocity_m_s / units.length_m;
        let force = loads.force_n;
        let accelerate = 1.0 / (mass_kg * units.speed_m_s);
        let twist = 1.0 / units.momentum_kg_m2_s;
        Scaled::from([
            place.x,
            place.y,
            place.z,
            -0.5 * (q.i * w.x + q.j * w.y + q.k * w.z),
            0.5 * (q.w * w.x + q.j * w.z - q.k * w.y),
            0.5 * (q.w * w.y + q.k * w.x - q.i * w.z),
            0.5 * (q.w * w.z + q.i * w.y - q.j * w.x),
            force.x * accelerate,
            force.y * accelerate,
            force.z * accelerate - STANDARD_GRAVITY_M_S2 / units.speed_m_s,
            loads.moment_nm.x * twist,
            loads.moment_nm.y * twist,
            loads.moment_nm.z * twist,
        ])
    }

    /// Time derivatives of place (m/s), quaternion (w, x, y, z), velocity (m/s²) and momentum
    /// (N·m) at an instant, in that order.
    pub fn rates(&mut self, at: Instant, state: &State) -> [f64; 13] {
        let mut rates = Scaled::zeros();
        self.derivative(at, &self.units.scaled(state), &mut rates);
        let units = &self.units;
        std::array::from_fn(|k| {
            rates[k]
                * match k {
                    0..3 => units.length_m,
                    3..7 => 1.0,
                    7..10 => units.speed_m_s,
                    _ => units.momentum_kg_m2_s,
                }
        })
    }

    /// Body axes to root axes at an instant; leaves the frames of that instant behind.
    pub(crate) fn body_in_root(&mut self, at: Instant, loose: &[LooseAxis]) -> Matrix3<f64> {
        self.place_segments(at, loose);
        if !loose.is_empty() {
            self.commands.rates(at, &mut self.room.motion);
        }
        let Room { motion, frames, body, .. } = &mut self.room;
        self.body.in_root(&self.commands, motion, frames, body)
    }

    /// How the body lies at an instant; leaves the frames of that instant behind.
    pub fn attitude(&mut self, at: Instant, state: &State) -> Attitude {
        let body_to_root = self.body_in_root(at, &state.loose);
        let head_to_world = state.head_to_world.to_rotation_matrix();
        Attitude { body_to_world: head_to_world.matrix() * body_to_root }
    }

    /// Height of the lowest corner above the ground's z = 0 at an instant, m.
    pub fn lowest_corner_m(&mut self, at: Instant, state: &State) -> f64 {
        let centroidal = self.shape(at, &state.loose);
        let up: Triple<f64> = state.head_to_world.inverse_transform_vector(&Vector3::z()).into();
        let lanes = up.in_lanes();
        let lowest = self.boxes.iter().zip(&self.room.frames.fours).fold(
            f64x4::splat(f64::INFINITY),
            |lowest, (boxes, at)| {
                let along = at.x.dot(lanes);
                let corner = at.front_m.dot(lanes)
                    - boxes.half_length_m * (along + along.abs())
                    - boxes.half_width_m * at.y.dot(lanes).abs()
                    - boxes.half_thickness_m * at.z.dot(lanes).abs()
                    + boxes.absent_m;
                lowest.fast_min(corner)
            },
        );
        let lowest = lowest.to_array().into_iter().fold(f64::INFINITY, f64::min);
        state.place_m.z + lowest - centroidal.centre_m.dot(up)
    }

    /// Kinetic energy of the whole chain at an instant, undulation and spin included, J.
    pub fn kinetic_energy_j(&mut self, at: Instant, state: &State) -> f64 {
        let moving = self.moving(at, state);
        0.5 * self.mechanics.mass_kg() * state.velocity_m_s.norm_squared()
            + self.mechanics.energy_about_centre_j(
                &self.room.frames,
                &moving.centroidal,
                moving.angular_velocity_rad_s,
            )
    }
}

impl Joints {
    /// Commands with what loose axes do laid over them.
    #[inline]
    fn of<'a>(&'a mut self, motion: &'a Motion, loose: &[LooseAxis]) -> (&'a [f64], &'a [f64]) {
        if loose.is_empty() {
            return (&motion.angles_rad, &motion.rates_rad_s);
        }
        self.angles_rad.copy_from_slice(&motion.angles_rad);
        self.rates_rad_s.copy_from_slice(&motion.rates_rad_s);
        for axis in loose {
            self.angles_rad[axis.axis_idx] = axis.angle_rad;
            self.rates_rad_s[axis.axis_idx] = axis.rate_rad_s;
        }
        (&self.angles_rad, &self.rates_rad_s)
    }
}

impl FourBoxes {
    fn new(segments: &[Segment]) -> Self {
        let absent_m = |lane: usize| if lane < segments.len() { 0.0 } else { f64::INFINITY };
        Self {
            half_length_m: lanes(segments, |segment| segment.length_m / 2.0),
            half_width_m: lanes(segments, |segment| segment.width_m / 2.0),
            half_thickness_m: lanes(segments, |segment| segment.thickness_m / 2.0),
            absent_m: f64x4::new(std::array::from_fn(absent_m)),
        }
    }
}
