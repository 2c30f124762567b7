//! One smooth piece of a flight, integrated.

use std::cell::RefCell;

use ode_solvers::continuous_output_model::ContinuousOutputModel;
use ode_solvers::dop_shared::{IntegrationError, OutputType, System};
use ode_solvers::dopri5::Dopri5;
use undulift_gait::Instant;

use crate::flying::{Look, MOST_STEPS};
use crate::state::Scaled;
use crate::stepping::Evolves;
use crate::turning::{Hybrid, Turning};
use crate::{Equations, FlightError, Settings, State};

/// What a piece is watched for.
pub(crate) struct Watch<'a> {
    pub(crate) equations: &'a RefCell<Equations>,
    pub(crate) ends: &'a RefCell<Vec<Look>>,
    pub(crate) inside_s: f64,
    pub(crate) settings: Settings,
    pub(crate) reach_m: f64,
}

/// How a piece is stepped through.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Steps {
    pub(crate) from_s: f64,
    pub(crate) until_s: f64,
    /// To begin with, s; 0: found.
    pub(crate) first_s: f64,
    pub(crate) longest_s: f64,
    pub(crate) tolerance: f64,
    pub(crate) most: u32,
}

/// All joints follow their commands.
pub(crate) struct Following<'a>(pub(crate) Watch<'a>);

/// Some don't.
pub(crate) struct Loose<'a> {
    pub(crate) watch: Watch<'a>,
    pub(crate) hybrid: &'a mut Hybrid,
    pub(crate) turning: &'a Turning,
}

impl Watch<'_> {
    fn at(&self, time_s: f64) -> Instant {
        Instant { time_s, piece_s: self.inside_s }
    }

    /// Stops behind the first step that ends below the floor or on its back; where exactly it
    /// happened is found on the interpolant afterwards.
    fn stops(&self, time_s: f64, state: &State) -> bool {
        let mut equations = self.equations.borrow_mut();
        let at = self.at(time_s);
        let look = Look::new(time_s, state, equations.attitude(at, state));
        self.ends.borrow_mut().push(look);
        let floor_m = self.settings.floor_m;
        let near_floor = state.place_m.z - floor_m < self.reach_m;
        (!self.settings.through_inversion && look.attitude.uprightness() <= 0.0)
            || (near_floor && equations.lowest_corner_m(at, state) <= floor_m)
    }
}

impl System<f64, Scaled> for Following<'_> {
    fn system(&self, time_s: f64, state: &Scaled, rates: &mut Scaled) {
        self.0.equations.borrow_mut().derivative(self.0.at(time_s), state, rates);
    }

    fn solout(&mut self, time_s: f64, scaled: &Scaled, _rates: &Scaled) -> bool {
        let state = self.0.equations.borrow().units().state(scaled);
        self.0.stops(time_s, &state)
    }
}

impl Evolves for Loose<'_> {
    fn rates(&mut self, time_s: f64, state: &[f64], rates: &mut [f64]) {
        let mut equations = self.watch.equations.borrow_mut();
        let at = self.watch.at(time_s);
        self.hybrid.derivative(&mut equations, self.turning, at, state, rates);
    }

    fn stops(&mut self, time_s: f64, state: &[f64]) -> bool {
        let units = *self.watch.equations.borrow().units();
        self.watch.stops(time_s, &units.long_state(state, &self.turning.axes))
    }
}

/// Integrates a piece over which all joints follow their commands; returns what the integrator
/// leaves of it and how many steps were tried.
pub(crate) fn integrate(
    system: Following<'_>,
    steps: Steps,
    start: Scaled,
) -> Result<(ContinuousOutputModel<f64, Scaled>, u32), FlightError> {
    let mut stepper = Dopri5::from_param(
        system,
        steps.from_s,
        steps.until_s,
        steps.until_s - steps.from_s,
        start,
        steps.tolerance,
        steps.tolerance,
        0.9,
        0.04,
        0.2,
        10.0,
        steps.longest_s,
        steps.first_s.min(steps.longest_s),
        steps.most,
        // Never: a stiff flight is slow, not wrong, and the bound on steps ends it.
        u32::MAX,
        OutputType::Continuous,
    );
    let mut model = ContinuousOutputModel::new();
    let refused = |error| match error {
        IntegrationError::MaxNumStepReached { x, .. } => {
            FlightError::TooManySteps { steps: MOST_STEPS, time_s: x }
        }
        IntegrationError::StepSizeUnderflow { x } | IntegrationError::StiffnessDetected { x } => {
            FlightError::StepTooSmall { time_s: x }
        }
    };
    let stats = stepper.integrate_with_continuous_output_model(&mut model).map_err(refused)?;
    Ok((model, stats.accepted_steps + stats.rejected_steps))
}
