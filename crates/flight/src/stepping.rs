//! Dormand and Prince's method for states of any length.
//!
//! The pair and the interpolant are those of `ode_solvers`, which states of known length go through.
//! Where a length isn't known to the compiler that makes some sixty vectors a step, a sixth of what a
//! driven flight took; this makes none but the path. It tells, besides, how long a first step had
//! best been, since driven flights begin anew at every command; and as none lasts long, the control
//! of steps remembers nothing.

use crate::FlightError;
use crate::flying::MOST_STEPS;
use crate::integration::Steps;
use crate::path::Path;

/// What changes at rates that its state tells.
pub(crate) trait Evolves {
    /// Fills in the rates of a state.
    fn rates(&mut self, time_s: f64, state: &[f64], rates: &mut [f64]);

    /// Looks at the end of a step; returns whether to stop there.
    fn stops(&mut self, time_s: f64, state: &[f64]) -> bool;
}

/// Stages, and the time of each in steps.
const STAGES: usize = 7;
const TIMES: [f64; STAGES] = [0.0, 1.0 / 5.0, 3.0 / 10.0, 4.0 / 5.0, 8.0 / 9.0, 1.0, 1.0];

/// What each stage but the first is made from, of the rates of those before it
/// (E. Hairer, S. P. Nørsett, G. Wanner, *Solving Ordinary Differential Equations I*, 1993, II.5).
const WEIGHTS: [&[f64]; STAGES - 1] = [
    &[1.0 / 5.0],
    &[3.0 / 40.0, 9.0 / 40.0],
    &[44.0 / 45.0, -56.0 / 15.0, 32.0 / 9.0],
    &[19372.0 / 6561.0, -25360.0 / 2187.0, 64448.0 / 6561.0, -212.0 / 729.0],
    &[9017.0 / 3168.0, -355.0 / 33.0, 46732.0 / 5247.0, 49.0 / 176.0, -5103.0 / 18656.0],
    &[35.0 / 384.0, 0.0, 500.0 / 1113.0, 125.0 / 192.0, -2187.0 / 6784.0, 11.0 / 84.0],
];

/// Fifth order less fourth.
const ERROR: [f64; STAGES] = [
    71.0 / 57600.0,
    0.0,
    -71.0 / 16695.0,
    71.0 / 1920.0,
    -17253.0 / 339_200.0,
    22.0 / 525.0,
    -1.0 / 40.0,
];

/// Of the interpolant's last term (ibid., II.6).
const BETWEEN: [f64; STAGES] = [
    -12_715_105_075.0 / 11_282_082_432.0,
    0.0,
    87_487_479_700.0 / 32_700_410_799.0,
    -10_690_763_975.0 / 1_880_347_072.0,
    701_980_252_875.0 / 199_316_789_632.0,
    -1_453_857_185.0 / 822_651_844.0,
    69_997_945.0 / 29_380_423.0,
];

/// The next step is so much shorter than would just do, and differs by no more than these factors.
const SAFETY: f64 = 0.9;
const LEAST_FACTOR: f64 = 0.2;
const MOST_FACTOR: f64 = 10.0;

/// A step that is not known yet, in longest ones; the first error finds a better.
const FIRST_STEP: f64 = 0.01;

/// One integration on its way.
struct Stepper {
    time_s: f64,
    state: Vec<f64>,
    next: Vec<f64>,
    rates: [Vec<f64>; STAGES],
    errors: Vec<f64>,
    tolerance: f64,
}

/// Where an integration went.
pub(crate) struct Integrated {
    pub(crate) path: Path,
    /// Steps tried.
    pub(crate) tried: u32,
    /// How long its first step would best have been, s: a first step for one that is like it.
    pub(crate) first_s: f64,
}

/// Integrates from a state on.
pub(crate) fn integrate(
    system: &mut impl Evolves,
    steps: Steps,
    start: Vec<f64>,
) -> Result<Integrated, FlightError> {
    let mut path = Path::new(steps.from_s, start.len());
    let mut stepper = Stepper::new(&steps, start);
    system.rates(stepper.time_s, &stepper.state, &mut stepper.rates[0]);
    let guess_s = if steps.first_s > 0.0 { steps.first_s } else { FIRST_STEP * steps.longest_s };
    let mut step_s = guess_s.min(steps.longest_s);
    let (mut first_s, mut refused) = (None, false);
    for tried in 1..=steps.most {
        let time_s = stepper.time_s;
        if 0.1 * step_s <= f64::EPSILON * time_s {
            return Err(FlightError::StepTooSmall { time_s });
        }
        // No crumb is left for a step of its own.
        let last = time_s + 1.01 * step_s > steps.until_s;
        if last {
            step_s = steps.until_s - time_s;
        }
        let error = stepper.attempt(system, step_s);
        let fitting_s = fitting_s(step_s, error);
        let accepted = error <= 1.0;
        if accepted {
            stepper.accept(step_s, &mut path);
            let first_s = *first_s.get_or_insert(fitting_s);
            if system.stops(stepper.time_s, &stepper.state) || last {
                return Ok(Integrated { path, tried, first_s });
            }
        }
        // After a step that went too far the next goes no further.
        let longest_s = if refused { step_s } else { steps.longest_s };
        refused = !accepted;
        step_s = fitting_s.min(longest_s);
    }
    Err(FlightError::TooManySteps { steps: MOST_STEPS, time_s: stepper.time_s })
}

/// How long a step should have been, or the next should be, s.
///
/// - `error`: of a step, in units of what is allowed; it grows with the step's fifth power
fn fitting_s(step_s: f64, error: f64) -> f64 {
    if error.is_nan() {
        return step_s * LEAST_FACTOR;
    }
    step_s * (SAFETY * error.powf(-0.2)).clamp(LEAST_FACTOR, MOST_FACTOR)
}

impl Stepper {
    fn new(steps: &Steps, state: Vec<f64>) -> Self {
        let room = || vec![0.0; state.len()];
        Self {
            time_s: steps.from_s,
            next: room(),
            rates: std::array::from_fn(|_| room()),
            errors: room(),
            tolerance: steps.tolerance,
            state,
        }
    }

    /// Goes through the stages; returns the error in units of what is allowed.
    fn attempt(&mut self, system: &mut impl Evolves, step_s: f64) -> f64 {
        for (stage, weights) in (1..).zip(WEIGHTS) {
            let (known, unknown) = self.rates.split_at_mut(stage);
            self.next.copy_from_slice(&self.state);
            add_weighted(&mut self.next, known, weights, step_s);
            system.rates(self.time_s + TIMES[stage] * step_s, &self.next, &mut unknown[0]);
        }
        self.errors.fill(0.0);
        add_weighted(&mut self.errors, &self.rates, &ERROR, step_s);
        let squares =
            self.errors.iter().zip(&self.state).zip(&self.next).map(|((error, from), to)| {
                (error / (self.tolerance * (1.0 + from.abs().max(to.abs())))).powi(2)
            });
        (squares.sum::<f64>() / self.state.len() as f64).sqrt()
    }

    /// The last stage's state is the next step's first.
    fn accept(&mut self, step_s: f64, path: &mut Path) {
        let [first, .., last] = &self.rates;
        path.push(step_s, [&self.state, &self.next], [first, last], |between| {
            add_weighted(between, &self.rates, &BETWEEN, step_s);
        });
        std::mem::swap(&mut self.state, &mut self.next);
        self.rates.swap(0, STAGES - 1);
        self.time_s += step_s;
    }
}

/// Adds rates, weighted, over a step.
fn add_weighted(to: &mut [f64], rates: &[Vec<f64>], weights: &[f64], step_s: f64) {
    for (rates, weight) in rates.iter().zip(weights).filter(|(_, weight)| **weight != 0.0) {
        let factor = weight * step_s;
        for (to, rate) in to.iter_mut().zip(rates) {
            *to += factor * rate;
        }
    }
}

#[cfg(test)]
mod tests {
    use nalgebra::DVector;
    use ode_solvers::System;
    use ode_solvers::dopri5::Dopri5;

    use super::*;

    /// A pendulum of unit length and gravity: angle and rate.
    struct Pendulum;

    impl Evolves for Pendulum {
        fn rates(&mut self, _time_s: f64, state: &[f64], rates: &mut [f64]) {
            rates.copy_from_slice(&[state[1], -state[0].sin()]);
        }

        fn stops(&mut self, _time_s: f64, state: &[f64]) -> bool {
            state[0] < -1.0
        }
    }

    impl System<f64, DVector<f64>> for Pendulum {
        fn system(&self, _time_s: f64, state: &DVector<f64>, rates: &mut DVector<f64>) {
            Evolves::rates(&mut Pendulum, 0.0, state.as_slice(), rates.as_mut_slice());
        }
    }

    /// Doubles every time that as much is left, and has no value at 1 s.
    struct Runaway;

    impl Evolves for Runaway {
        fn rates(&mut self, _time_s: f64, state: &[f64], rates: &mut [f64]) {
            rates[0] = state[0] * state[0];
        }

        fn stops(&mut self, _time_s: f64, _state: &[f64]) -> bool {
            false
        }
    }

    fn steps(until_s: f64, tolerance: f64, most: u32) -> Steps {
        Steps { from_s: 0.0, until_s, first_s: 0.0, longest_s: 1.0, tolerance, most }
    }

    /// Along the whole path, between the ends of its steps too, against the library's method of
    /// the same order at a much lower tolerance; it stops behind the first step that should stop it.
    #[test]
    fn twin_pendulum_follows_the_library() {
        let start = [2.0, 0.0];
        let found = integrate(&mut Pendulum, steps(20.0, 1e-8, 1000), start.to_vec()).unwrap();
        let start = DVector::from_column_slice(&start);
        let mut library = Dopri5::new(Pendulum, 0.0, 10.0, 0.01, start, 1e-13, 1e-13);
        library.integrate().unwrap();
        let along = library.x_out().iter().zip(library.y_out());
        let mut samples = 0;
        for (&time_s, state) in along.take_while(|(_, state)| state[0] > -1.0) {
            let at = found.path.at(time_s);
            assert!((at[0] - state[0]).abs() < 1e-6, "{time_s}: {at:?} {state}");
            assert!((at[1] - state[1]).abs() < 1e-6, "{time_s}: {at:?} {state}");
            samples += 1;
        }
        assert!(samples > 200);
        let end = found.path.at(20.0)[0];
        assert!((-2.0..-1.0).contains(&end), "{end}");
    }

    /// 1/(1 − t) up to 0.9 s; past 1 s there is nothing to be found, and few steps don't get far.
    #[test]
    fn analytic_runaway() {
        let to = |until_s, most| integrate(&mut Runaway, steps(until_s, 1e-9, most), vec![1.0]);
        let found = to(0.9, 1000).unwrap();
        for time_s in [0.3, 0.7777, 0.9] {
            let expected = 1.0 / (1.0 - time_s);
            assert!((found.path.at(time_s)[0] / expected - 1.0).abs() < 1e-7, "{time_s}");
        }
        let refused = to(1.1, 100_000).err().expect("nothing there");
        assert!(
            matches!(refused, FlightError::StepTooSmall { time_s } if (time_s - 1.0).abs() < 1e-6)
        );
        let refused = to(0.9, 3).err().expect("too few");
        assert!(matches!(refused, FlightError::TooManySteps { time_s, .. } if time_s < 0.9));
    }
}
