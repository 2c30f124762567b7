use std::cell::RefCell;

use ode_solvers::continuous_output_model::ContinuousOutputModel;
use ode_solvers::dop_shared::{IntegrationError, OutputType, System};
use ode_solvers::dopri5::Dopri5;
use undulift_chain::{Chain, Inertial, Segment};
use undulift_gait::{Commands, Instant};

use crate::state::{Scaled, Units};
use crate::{Attitude, Equations, FlightError, Glider, State, Trajectory, release};

/// Steps a flight may take; at the default tolerance a flight takes a few hundred.
const MOST_STEPS: u32 = 200_000;

/// A twentieth of a cycle, or this where the gait stands still, s.
const STILL_STEP_S: f64 = 0.02;
const STEPS_PER_CYCLE: f64 = 20.0;

/// How closely landing and inversion are located on the interpolant, s.
const EVENT_S: f64 = 1e-11;

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
    /// Looks at each step: at its start, and after each of its parts.
    pub(crate) looks: Vec<Look>,
}

impl Flight {
    /// What the joints did.
    pub fn commands(&self) -> &Commands {
        self.equations.commands()
    }
}

/// What was seen at one time.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Look {
    pub(crate) time_s: f64,
    pub(crate) state: State,
    pub(crate) attitude: Attitude,
}

/// Flies a glider from release to its end.
///
/// # Errors
///
/// [`FlightError`] where the glider can't be released or followed. Tumbling, landing and running
/// out of time are results.
pub fn fly(glider: &Glider, settings: &Settings) -> Result<Flight, FlightError> {
    check(settings)?;
    let mut equations = Equations::new(glider)?;
    let start = release(&mut equations, &glider.launch, settings.floor_m)?;
    Flying::new(equations, *settings, reach_m(&glider.chain)).from(start)
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

/// A flight in the making.
struct Flying {
    equations: RefCell<Equations>,
    settings: Settings,
    reach_m: f64,
    units: Units,
    trajectory: Trajectory,
    looks: Vec<Look>,
    inverted_at_s: Option<f64>,
    steps: u32,
}

/// One smooth piece as the integrator sees it.
struct Piece<'a> {
    equations: &'a RefCell<Equations>,
    inside_s: f64,
    ends: &'a RefCell<Vec<Look>>,
    settings: Settings,
    reach_m: f64,
    stop_when_inverted: bool,
}

impl System<f64, Scaled> for Piece<'_> {
    fn system(&self, time_s: f64, state: &Scaled, rates: &mut Scaled) {
        let at = Instant { time_s, piece_s: self.inside_s };
        self.equations.borrow_mut().derivative(at, state, rates);
    }

    /// Stops behind the first step that ends below the floor or on its back; where exactly it
    /// happened is found on the interpolant afterwards.
    fn solout(&mut self, time_s: f64, scaled: &Scaled, _rates: &Scaled) -> bool {
        let mut equations = self.equations.borrow_mut();
        let at = Instant { time_s, piece_s: self.inside_s };
        let state = equations.units().state(scaled);
        let attitude = equations.attitude(at, &state);
        self.ends.borrow_mut().push(Look { time_s, state, attitude });
        let near_floor = state.place_m.z - self.settings.floor_m < self.reach_m;
        (self.stop_when_inverted && attitude.uprightness() <= 0.0)
            || (near_floor && equations.lowest_corner_m(at, &state) <= self.settings.floor_m)
    }
}

impl Flying {
    fn new(equations: Equations, settings: Settings, reach_m: f64) -> Self {
        let units = *equations.units();
        Self {
            equations: RefCell::new(equations),
            settings,
            reach_m,
            units,
            trajectory: Trajectory::new(units),
            looks: Vec::new(),
            inverted_at_s: None,
            steps: 0,
        }
    }

    fn from(mut self, start: State) -> Result<Flight, FlightError> {
        let mut time_s = 0.0;
        let mut state = start;
        loop {
            let next_s = self.equations.borrow().commands().next_break_s(time_s);
            let until_s =
                next_s.map_or(self.settings.max_time_s, |s| s.min(self.settings.max_time_s));
            let ends = self.integrate(time_s, until_s, &state)?;
            if time_s == 0.0 {
                let first = self.look(0.0);
                self.looks.push(first);
            }
            for step_end in ends {
                if let Some((end_s, end)) = self.look_along(step_end) {
                    return Ok(self.ended(end_s, end));
                }
            }
            if until_s >= self.settings.max_time_s {
                let end_s = self.settings.max_time_s;
                return Ok(self.ended(end_s, End::TimeUp));
            }
            time_s = until_s;
            state = self.trajectory.state(until_s);
        }
    }

    /// Integrates one smooth piece; returns what is seen at the ends of its steps.
    fn integrate(
        &mut self,
        from_s: f64,
        until_s: f64,
        start: &State,
    ) -> Result<Vec<Look>, FlightError> {
        let inside_s = 0.5 * (from_s + until_s);
        let ends = RefCell::new(Vec::new());
        let piece = Piece {
            equations: &self.equations,
            inside_s,
            ends: &ends,
            settings: self.settings,
            reach_m: self.reach_m,
            stop_when_inverted: !self.settings.through_inversion,
        };
        let cycle_s = self.equations.borrow().commands().cycle_s();
        let longest_s = cycle_s.map_or(STILL_STEP_S, |cycle_s| cycle_s / STEPS_PER_CYCLE);
        let tolerance = self.settings.tolerance;
        let mut stepper = Dopri5::from_param(
            piece,
            from_s,
            until_s,
            until_s - from_s,
            self.units.scaled(start),
            tolerance,
            tolerance,
            0.9,
            0.04,
            0.2,
            10.0,
            longest_s,
            0.0,
            MOST_STEPS - self.steps,
            // Never: a stiff flight is slow, not wrong, and the bound on steps ends it.
            u32::MAX,
            OutputType::Continuous,
        );
        let mut model = ContinuousOutputModel::new();
        let stats = stepper.integrate_with_continuous_output_model(&mut model).map_err(
            |error| match error {
                IntegrationError::MaxNumStepReached { x, .. } => {
                    FlightError::TooManySteps { steps: MOST_STEPS, time_s: x }
                }
                IntegrationError::StepSizeUnderflow { x }
                | IntegrationError::StiffnessDetected { x } => {
                    FlightError::StepTooSmall { time_s: x }
                }
            },
        )?;
        drop(stepper);
        self.steps += stats.accepted_steps + stats.rejected_steps;
        self.trajectory.push(from_s, inside_s, model);
        Ok(ends.into_inner())
    }

    /// What is seen at a time.
    fn look(&self, time_s: f64) -> Look {
        let state = self.trajectory.state(time_s);
        let at = self.trajectory.instant(time_s);
        let attitude = self.equations.borrow_mut().attitude(at, &state);
        Look { time_s, state, attitude }
    }

    /// Looks along the step that follows the last look; returns its end if the flight ends in it.
    fn look_along(&mut self, step_end: Look) -> Option<(f64, End)> {
        let start = *self.looks.last().expect("the release is looked at first");
        let part_s = (step_end.time_s - start.time_s) / PARTS as f64;
        for part in 1..=PARTS {
            let before = *self.looks.last().expect("never empty");
            let look = match part {
                PARTS => step_end,
                _ => self.look(start.time_s + part_s * part as f64),
            };
            let landed_s = self.landing_between(&before, &look);
            let inverted_s = self.inversion_between(&before, &look);
            if let Some(event) = self.first_end(landed_s, inverted_s) {
                // The last step is looked at anew, up to the end only.
                self.looks.truncate(self.looks.len() + 1 - part);
                self.look_at_last_step(start.time_s, event.0);
                return Some(event);
            }
            self.looks.push(look);
        }
        None
    }

    fn look_at_last_step(&mut self, from_s: f64, end_s: f64) {
        let part_s = (end_s - from_s) / PARTS as f64;
        for part in 1..=PARTS {
            let to_s = if part == PARTS { end_s } else { from_s + part_s * part as f64 };
            let look = self.look(to_s);
            self.looks.push(look);
        }
    }

    fn first_end(&mut self, landed_s: Option<f64>, inverted_s: Option<f64>) -> Option<(f64, End)> {
        if let Some(inverted_s) = inverted_s {
            let landed_before = landed_s.is_some_and(|landed_s| landed_s <= inverted_s);
            if !landed_before {
                self.inverted_at_s.get_or_insert(inverted_s);
                if !self.settings.through_inversion {
                    return Some((inverted_s, End::Inverted));
                }
            }
        }
        landed_s.map(|landed_s| (landed_s, End::Landed))
    }

    fn landing_between(&self, before: &Look, after: &Look) -> Option<f64> {
        let floor_m = self.settings.floor_m;
        if after.state.place_m.z - floor_m > self.reach_m {
            return None;
        }
        let clearance_m = |time_s: f64| {
            let at = self.trajectory.instant(time_s);
            let state = self.trajectory.state(time_s);
            self.equations.borrow_mut().lowest_corner_m(at, &state) - floor_m
        };
        (clearance_m(after.time_s) <= 0.0)
            .then(|| first_at_or_below_zero(before.time_s, after.time_s, clearance_m))
    }

    fn inversion_between(&self, before: &Look, after: &Look) -> Option<f64> {
        let turns_over = before.attitude.uprightness() > 0.0 && after.attitude.uprightness() <= 0.0;
        turns_over.then(|| {
            let uprightness = |time_s| self.look(time_s).attitude.uprightness();
            first_at_or_below_zero(before.time_s, after.time_s, uprightness)
        })
    }

    fn ended(self, time_s: f64, end: End) -> Flight {
        Flight {
            end,
            time_s,
            inverted_at_s: self.inverted_at_s,
            trajectory: self.trajectory,
            steps: self.steps,
            equations: self.equations.into_inner(),
            looks: self.looks,
        }
    }
}

/// Where a quantity that is above 0 at the start and not at the end crosses.
///
/// False position with the Illinois correction, and halving where that closes in too slowly.
///
/// # Source
///
/// Dowell & Jarratt, *A modified regula falsi method*, BIT 11, 1971.
fn first_at_or_below_zero(from_s: f64, to_s: f64, quantity: impl Fn(f64) -> f64) -> f64 {
    let (mut above_s, mut below_s) = (from_s, to_s);
    let (mut above, mut below) = (quantity(above_s), quantity(below_s));
    let mut halve = false;
    while below_s - above_s > EVENT_S {
        let width_s = below_s - above_s;
        let share = if halve { 0.5 } else { (above / (above - below)).clamp(0.01, 0.99) };
        let time_s = above_s + share * width_s;
        let value = quantity(time_s);
        if value > 0.0 {
            (above_s, above, below) = (time_s, value, 0.5 * below);
        } else {
            (below_s, below, above) = (time_s, value, 0.5 * above);
        }
        halve = below_s - above_s > 0.5 * width_s;
    }
    below_s
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Roots by hand, of functions that bend either way; each takes few evaluations.
    #[test]
    fn analytic_crossings_are_found() {
        let cases: [(&dyn Fn(f64) -> f64, f64); 4] = [
            (&|t| 2.0 - t * t, 2_f64.sqrt()),
            (&|t| (1.0 - t).exp() - 1.0, 1.0),
            (&|t| 1.0 - t.powi(9), 1.0),
            (&|t| 0.3 - t, 0.3),
        ];
        for (quantity, root) in cases {
            let evaluations = std::cell::Cell::new(0);
            let found = first_at_or_below_zero(0.0, 3.0, |t| {
                evaluations.set(evaluations.get() + 1);
                quantity(t)
            });
            assert!((found - root).abs() < 2.0 * EVENT_S, "{found} {root}");
            assert!(evaluations.get() < 60, "{}", evaluations.get());
        }
    }
}
