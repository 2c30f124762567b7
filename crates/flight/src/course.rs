//! A flight in the making: piece after smooth piece, from release to its end.

use std::cell::RefCell;

use undulift_gait::Instant;

use crate::driving::Driving;
use crate::flying::{Look, MOST_STEPS};
use crate::integration::{Following, Loose, Steps, Watch, integrate};
use crate::stepping::{self, Integrated};
use crate::trajectory::Course;
use crate::turning::Turning;
use crate::{Drives, End, Equations, Flight, FlightError, Glider, Settings, State, Trajectory};

/// A twentieth of a cycle, or this where the gait stands still, s.
const STILL_STEP_S: f64 = 0.02;
const STEPS_PER_CYCLE: f64 = 20.0;

/// Where steps are short, looks are taken this many times as often as longest steps would end.
const LOOKS_PER_STEP: f64 = 4.0;

/// Breaks nearer to each other than this are one, s.
const TOGETHER_S: f64 = 1e-9;

/// A flight in the making.
pub(crate) struct Flying {
    pub(crate) equations: RefCell<Equations>,
    /// For axes that don't follow their commands; absent where all do.
    driving: Option<Driving>,
    pub(crate) settings: Settings,
    pub(crate) reach_m: f64,
    pub(crate) trajectory: Trajectory,
    pub(crate) looks: Vec<Look>,
    pub(crate) inverted_at_s: Option<f64>,
    steps: u32,
    /// That the last piece with loose axes had best begun with, s.
    first_step_s: f64,
}

impl Flying {
    pub(crate) fn new(
        glider: &Glider,
        equations: Equations,
        drives: &Drives,
        settings: Settings,
        reach_m: f64,
    ) -> Self {
        let air_k = glider.air.temperature_k;
        let driving = (!drives.all_commanded()).then(|| Driving::new(&glider.chain, drives, air_k));
        let trajectory = Trajectory::new(*equations.units());
        Self {
            equations: RefCell::new(equations),
            driving,
            settings,
            reach_m,
            trajectory,
            looks: Vec::new(),
            inverted_at_s: None,
            steps: 0,
            first_step_s: 0.0,
        }
    }

    pub(crate) fn from(mut self, start: State) -> Result<Flight, FlightError> {
        let mut time_s = 0.0;
        let mut state = start;
        loop {
            let turning = self.start_piece(time_s, &mut state);
            let until_s = self.next_break_s(time_s).min(self.settings.max_time_s);
            let ends = self.integrate([time_s, until_s], &state, turning)?;
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

    /// What turns loose axes from a time on; absent where all follow their commands.
    fn start_piece(&mut self, time_s: f64, state: &mut State) -> Option<Turning> {
        let at = Instant { time_s, piece_s: 0.5 * (time_s + self.next_break_s(time_s)) };
        self.driving.as_mut()?.start_piece(self.equations.get_mut(), at, state)
    }

    /// The next time after this one at which a piece ends.
    fn next_break_s(&self, time_s: f64) -> f64 {
        let of_commands = self.equations.borrow().commands().next_break_s(time_s);
        let of_drives = self.driving.as_ref().and_then(Driving::next_break_s);
        let later = of_drives.filter(|&break_s| break_s > time_s);
        let breaks_s = [of_commands, later];
        let breaks_s = || breaks_s.iter().flatten();
        let first_s = breaks_s().fold(self.settings.max_time_s, |a, b| a.min(*b));
        // Rows and frames that fall together but for rounding leave no room for a step between them.
        let together = breaks_s().filter(|&&break_s| break_s - first_s < TOGETHER_S);
        together.fold(first_s, |a, b| a.max(*b)).min(self.settings.max_time_s)
    }

    /// Integrates one smooth piece; returns what is seen at the ends of its steps.
    fn integrate(
        &mut self,
        [from_s, until_s]: [f64; 2],
        start: &State,
        turning: Option<Turning>,
    ) -> Result<Vec<Look>, FlightError> {
        let ends = RefCell::new(Vec::new());
        let watch = Watch {
            equations: &self.equations,
            ends: &ends,
            inside_s: 0.5 * (from_s + until_s),
            settings: self.settings,
            reach_m: self.reach_m,
        };
        let units = *self.equations.borrow().units();
        let mut steps = self.steps_of(from_s, until_s);
        let any_loose = turning.is_some();
        let inside_s = watch.inside_s;
        let (course, tried) = match (turning, &mut self.driving) {
            (Some(turning), Some(Driving { hybrid, .. })) => {
                // Pieces are short, and one is like the next.
                steps.first_s = self.first_step_s;
                let start = units.long(start, &turning.axes);
                let mut system = Loose { watch, hybrid, turning: &turning };
                let Integrated { path, tried, first_s } =
                    stepping::integrate(&mut system, steps, start)?;
                self.first_step_s = first_s;
                (Course::Loose(path, turning), tried)
            }
            _ => {
                let (model, tried) = integrate(Following(watch), steps, units.scaled(start))?;
                (Course::Following(model), tried)
            }
        };
        self.steps += tried;
        self.trajectory.push(from_s, inside_s, course);
        let mut ends = ends.into_inner();
        if any_loose {
            thin_out(&mut ends, from_s, steps.longest_s / LOOKS_PER_STEP);
        }
        Ok(ends)
    }

    fn steps_of(&self, from_s: f64, until_s: f64) -> Steps {
        let cycle_s = self.equations.borrow().commands().cycle_s();
        Steps {
            from_s,
            until_s,
            first_s: 0.0,
            longest_s: cycle_s.map_or(STILL_STEP_S, |cycle_s| cycle_s / STEPS_PER_CYCLE),
            tolerance: self.settings.tolerance,
            most: MOST_STEPS - self.steps,
        }
    }

    /// What is seen at a time.
    pub(crate) fn look(&self, time_s: f64) -> Look {
        let state = self.trajectory.state(time_s);
        let at = self.trajectory.instant(time_s);
        Look::new(time_s, &state, self.equations.borrow_mut().attitude(at, &state))
    }

    fn ended(self, time_s: f64, end: End) -> Flight {
        Flight {
            end,
            time_s,
            inverted_at_s: self.inverted_at_s,
            trajectory: self.trajectory,
            steps: self.steps,
            equations: self.equations.into_inner(),
            hybrid: self.driving.map(|driving| driving.hybrid),
            looks: self.looks,
        }
    }
}

/// Keeps the last, and of those before as many as lie this far apart.
fn thin_out(ends: &mut Vec<Look>, from_s: f64, apart_s: f64) {
    let Some(last) = ends.pop() else { return };
    let mut kept_s = from_s;
    ends.retain(|look| {
        let far = look.time_s - kept_s >= apart_s && last.time_s - look.time_s >= apart_s;
        kept_s = if far { look.time_s } else { kept_s };
        far
    });
    ends.push(last);
}
