//! What a search is asked to do.

use serde::{Deserialize, Serialize};

use super::OptimiserError;

/// What a search is asked to do. [`Plan::new`] fills in the defaults.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Plan {
    /// Scores it may ask for, from 1; never exceeded.
    pub evaluations: usize,
    /// Of its random numbers.
    pub seed: u64,
    /// Where it begins, in the unit box; scored first, so that the best is no worse.
    pub start: Vec<f64>,
    /// First standard deviation of candidates, in shares of a range: above 0, up to 1. Default 0.3.
    pub step: f64,
    /// Candidates of a generation before the first restart, from 4; default as [`Strategy`] says.
    ///
    /// [`Strategy`]: super::Strategy
    pub population: Option<usize>,
    /// Share of the evaluations that is kept for the simplex: from 0, below 1. Default 0.15; none
    /// is kept where that is less than two for each corner.
    pub finish: f64,
    /// Costs that differ by less than this for long mean a restart. Default 1e−12.
    pub cost_tolerance: f64,
    /// So does a standard deviation below this share of the first. Default 1e−12.
    pub step_tolerance: f64,
}

impl Plan {
    /// A plan with the defaults.
    pub fn new(start: Vec<f64>, evaluations: usize, seed: u64) -> Self {
        Self {
            evaluations,
            seed,
            start,
            step: 0.3,
            population: None,
            finish: 0.15,
            cost_tolerance: 1e-12,
            step_tolerance: 1e-12,
        }
    }

    /// Evaluations kept for the simplex.
    pub(crate) fn kept_for_simplex(&self) -> usize {
        let kept = (self.finish * self.evaluations as f64) as usize;
        // The start is always left for the first stage.
        if kept < 2 * (self.start.len() + 1) { 0 } else { kept.min(self.evaluations - 1) }
    }

    /// Refuses what can't be searched.
    pub(crate) fn check(&self) -> Result<(), OptimiserError> {
        if self.start.is_empty() {
            return Err(OptimiserError::NothingVaries);
        }
        let outside = self.start.iter().position(|value| !(0.0..=1.0).contains(value));
        if let Some(at) = outside {
            return Err(OptimiserError::StartOutside { nth: at + 1, value: self.start[at] });
        }
        let population = self.population.unwrap_or(4);
        let refuse =
            |name, value, allowed| Err(OptimiserError::OutOfRange { name, value, allowed });
        if self.evaluations == 0 {
            return refuse("evaluations", 0.0, "1 or more");
        }
        if !(self.step > 0.0 && self.step <= 1.0) {
            return refuse("step", self.step, "above 0 and at most 1");
        }
        if population < 4 || population > self.evaluations.max(4) {
            return refuse("population", population as f64, "from 4 to the evaluations");
        }
        if !(0.0..1.0).contains(&self.finish) {
            return refuse("finish", self.finish, "from 0 to less than 1");
        }
        if !(self.cost_tolerance >= 0.0 && self.cost_tolerance.is_finite()) {
            return refuse("cost_tolerance", self.cost_tolerance, "0 or more");
        }
        if !(0.0..1.0).contains(&self.step_tolerance) {
            return refuse("step_tolerance", self.step_tolerance, "from 0 to less than 1");
        }
        Ok(())
    }
}
