use undulift_chain::{Chain, Inertial, Segment};
use undulift_gait::Commands;

use crate::course::Flying;
use crate::state::State;
use crate::turning::Hybrid;
use crate::{Attitude, Drives, Equations, FlightError, Glider, Trajectory, release};

/// Steps a flight may take; at the default tolerance a flight takes a few hundred.
pub(crate) const MOST_STEPS: u32 = 200_000;

/// Parts of a step between which attitude and corners are looked at, beside its ends.
pub(crate) const PARTS: usize = 4;

/// How a flight is computed and when it ends.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Settings {
    /// Relative and absolute, on the scaled state.
    pub tolerance: f64,
    /// Longest flight, s.
    pub max_time_s: f64,
    /// Fly on to the floor after the body has turned over.
    pub through_inversion: bool,
    /// Height of what ends the flight, m: the floor, or something that catches.
    pub floor_m: f64,
}

impl Default for Settings {
    fn default() -> Self {
        Self { tolerance: 1e-6, max_time_s: 30.0, through_inversion: false, floor_m: 0.0 }
    }
}

/// How a flight ended.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum End {
    /// A corner reached the floor.
    Landed,
    /// The body turned over.
    Inverted,
    /// Still in the air at the longest time.
    TimeUp,
}

/// A computed flight.
#[derive(Debug, Clone)]
pub struct Flight {
    /// How it ended.
    pub end: End,
    /// Release to end, s.
    pub time_s: f64,
    /// When the body turned over, if it did, s.
    pub inverted_at_s: Option<f64>,
    /// State at any time.
    pub trajectory: Trajectory,
    /// Steps taken.
    pub steps: u32,
    pub(crate) equations: Equations,
    /// For axes that don't follow their commands; absent where all do.
    pub(crate) hybrid: Option<Hybrid>,
    /// Looks at each step: at its start, and after each of its parts.
    pub(crate) looks: Vec<Look>,
}

impl Flight {
    /// What the joints were told.
    pub fn commands(&self) -> &Commands {
        self.equations.commands()
    }

    /// Equal steps from release, and the end: when a table of the flight has its rows, s.
    ///
    /// - `every_s`: between rows; above 0
    pub fn row_times_s(&self, every_s: f64) -> impl Iterator<Item = f64> + use<> {
        // A last whole step that falls on the end, but for rounding, is the end.
        let whole = (self.time_s / every_s - 1e-9).floor() as u64;
        (0..=whole).map(move |row| row as f64 * every_s).chain([self.time_s])
    }
}

/// What was seen at one time.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Look {
    pub(crate) time_s: f64,
    /// Of the centre of mass, m.
    pub(crate) height_m: f64,
    pub(crate) velocity_m_s: nalgebra::Vector3<f64>,
    pub(crate) attitude: Attitude,
}

impl Look {
    pub(crate) fn new(time_s: f64, state: &State, attitude: Attitude) -> Self {
        Self { time_s, height_m: state.place_m.z, velocity_m_s: state.velocity_m_s, attitude }
    }
}

/// Flies a glider whose joints follow their commands from release to its end.
///
/// # Errors
///
/// [`FlightError`] where the glider can't be released or followed. Tumbling, landing and running
/// out of time are results.
pub fn fly(glider: &Glider, settings: &Settings) -> Result<Flight, FlightError> {
    let equations = Equations::new(glider)?;
    let n_axes = equations.commands().axes().len();
    let drives = Drives::commanded(n_axes);
    drives.check(&glider.gait, n_axes)?;
    fly_from_release(glider, equations, &drives, settings)
}

/// Flies a glider whose joints servos turn, or nothing does.
///
/// # Errors
///
/// [`FlightError`] where the drives don't fit the chain, or the glider can't be released or
/// followed.
pub fn fly_driven(
    glider: &Glider,
    drives: &Drives,
    settings: &Settings,
) -> Result<Flight, FlightError> {
    let equations = Equations::new(glider)?;
    drives.check(&glider.gait, equations.commands().axes().len())?;
    fly_from_release(glider, equations, drives, settings)
}

fn fly_from_release(
    glider: &Glider,
    mut equations: Equations,
    drives: &Drives,
    settings: &Settings,
) -> Result<Flight, FlightError> {
    check(settings)?;
    let start = release(&mut equations, &glider.launch, settings.floor_m)?;
    Flying::new(glider, equations, drives, *settings, reach_m(&glider.chain)).from(start)
}

/// No corner is ever further from the centre of mass than this, whatever the shape, m.
fn reach_m(chain: &Chain) -> f64 {
    let corner = |segment: &Segment| segment.half_extents_m().norm() + segment.length_m;
    let farthest_corner_m = chain.segments().iter().map(corner).fold(0.0, f64::max);
    // Masses may sit far outside their segments, and take the centre of mass with them.
    let centre = |inertial: &Inertial| inertial.centre_m.norm();
    let farthest_centre_m = chain.inertials().iter().map(centre).fold(0.0, f64::max);
    chain.length_m() + farthest_corner_m + farthest_centre_m
}

fn check(settings: &Settings) -> Result<(), FlightError> {
    let refuse = |quantity, value, allowed| Err(FlightError::Setting { quantity, value, allowed });
    if !(1e-13..=1e-2).contains(&settings.tolerance) {
        return refuse("tolerance", settings.tolerance, "from 1e-13 to 1e-2");
    }
    if !(settings.max_time_s > 0.0 && settings.max_time_s <= 3600.0) {
        return refuse("longest time in s", settings.max_time_s, "above 0 and at most 3600");
    }
    if !settings.floor_m.is_finite() {
        return refuse("height of the floor in m", settings.floor_m, "a number");
    }
    Ok(())
}
