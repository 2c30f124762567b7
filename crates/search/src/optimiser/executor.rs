//! The search as a solver of argmin's, for its executor with its observers and time limits.
//!
//! One iteration is one generation. Argmin sees scores as one number, in the same order; counts and
//! the end are the search's own.

use argmin::core::{
    CostFunction, Error, KV, PopulationState, Problem, Solver, SyncAlias, TerminationReason,
    TerminationStatus,
};

use super::{Objective, Score, Search};

/// An objective as a cost function of argmin's.
#[derive(Debug, Clone, Copy)]
pub struct Scored<'a, T>(pub &'a T);

impl<T: Objective> CostFunction for Scored<'_, T> {
    type Param = Vec<f64>;
    type Output = Score;

    fn cost(&self, unit: &Vec<f64>) -> Result<Score, Error> {
        Ok(self.0.score(unit))
    }
}

type State = PopulationState<Vec<f64>, f64>;

impl<O> Solver<O, State> for Search
where
    O: CostFunction<Param = Vec<f64>, Output = Score> + SyncAlias,
{
    fn name(&self) -> &str {
        "covariance matrix adaptation, then a downhill simplex"
    }

    fn next_iter(
        &mut self,
        problem: &mut Problem<O>,
        mut state: State,
    ) -> Result<(State, Option<KV>), Error> {
        let generation = self.advance_with(&mut |units| problem.bulk_cost(units))?;
        if let Some((unit, score)) = self.best() {
            state = state.individual(unit.to_vec()).cost(score.as_one_number());
        }
        let population = generation.candidates.into_iter().map(|(unit, _)| unit).collect();
        Ok((state.population(population), None))
    }

    fn terminate(&mut self, _: &State) -> TerminationStatus {
        match self.is_over() {
            true => TerminationStatus::Terminated(TerminationReason::SolverConverged),
            false => TerminationStatus::NotTerminated,
        }
    }
}
