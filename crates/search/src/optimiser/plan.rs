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
    /// Share of the evaluations that is kept for the simplex: from 0, below 1. Default 0.15, which
    /// suits several processors, since a simplex uses one; alone, 0.3 found better bests of smooth
    /// functions. None is kept where that is less than two for each corner.
    pub finish: f64,
    /// Costs that differ by less than this for long mean a restart, or the end of a simplex. Default
    /// 1e−12.
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

#[cfg(test)]
mod tests {
    use super::*;

    fn refusal(change: impl Fn(&mut Plan)) -> String {
        let mut plan = Plan::new(vec![0.5, 0.5], 100, 1);
        plan.check().unwrap();
        change(&mut plan);
        plan.check().unwrap_err().to_string()
    }

    /// The ranges are those of the fields' own documentation.
    #[test]
    fn analytic_numbers_out_of_range_are_named() {
        assert!(refusal(|plan| plan.start.clear()).contains("nothing varies"));
        assert!(refusal(|plan| plan.start[1] = 1.5).contains("number 2 of the start is 1.5"));
        assert!(refusal(|plan| plan.start[0] = f64::NAN).contains("number 1 of the start is NaN"));
        assert!(refusal(|plan| plan.evaluations = 0).contains("`evaluations` is 0"));
        assert!(refusal(|plan| plan.step = 0.0).contains("`step` is 0"));
        assert!(refusal(|plan| plan.step = f64::NAN).contains("`step` is NaN"));
        assert!(refusal(|plan| plan.population = Some(3)).contains("`population` is 3"));
        assert!(refusal(|plan| plan.population = Some(101)).contains("from 4 to the evaluations"));
        assert!(refusal(|plan| plan.finish = 1.0).contains("`finish` is 1"));
        assert!(refusal(|plan| plan.cost_tolerance = -1.0).contains("`cost_tolerance` is -1"));
        assert!(refusal(|plan| plan.step_tolerance = 1.0).contains("`step_tolerance` is 1"));
    }

    /// By hand: 15 % of 100 is 15, enough for 2 × (6 + 1) but not for 2 × (7 + 1).
    #[test]
    fn analytic_evaluations_are_kept_where_they_suffice() {
        let kept = |n, evaluations| Plan::new(vec![0.5; n], evaluations, 1).kept_for_simplex();
        assert_eq!((kept(6, 100), kept(7, 100)), (15, 0));
        let nearly_all = Plan { finish: 1.0 - f64::EPSILON, ..Plan::new(vec![0.5], 100, 1) };
        assert_eq!(nearly_all.kept_for_simplex(), 99);
    }
}
