//! The finish: argmin's Nelder–Mead, from the best found.
//!
//! It walks one score at a time, except for its first corners. What it asks beyond the box is stopped
//! at the faces, as candidates are, and it sees scores as one number.

use std::cell::RefCell;
use std::collections::VecDeque;

use argmin::core::{CostFunction, Error, IterState, Problem, Solver, State};
use argmin::solver::neldermead::NelderMead;
use nalgebra::{DMatrix, DVector, DVectorView};
use serde::{Deserialize, Serialize};

use super::Score;
use super::faces::stopped;

/// Scores candidates, in their order.
pub(crate) type Scorer<'a> = dyn FnMut(&[Vec<f64>]) -> Result<Vec<Score>, Error> + 'a;

/// Candidates with their scores.
pub(crate) type Tried = Vec<(Vec<f64>, Score)>;

type Walk = NelderMead<Vec<f64>, f64>;
type NoState = IterState<Vec<f64>, (), (), (), (), f64>;

/// A simplex under way.
#[derive(Clone, Serialize, Deserialize)]
pub(crate) struct Simplex {
    walk: Walk,
}

impl std::fmt::Debug for Simplex {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.debug_struct("Simplex").finish_non_exhaustive()
    }
}

impl Simplex {
    /// Scores a corner at one end of each axis about the best, all at once.
    ///
    /// - `axes`: one a column
    /// - `tolerance`: standard deviation of the corners' costs below which it is level
    pub(crate) fn new(
        best: &[f64],
        best_score: Score,
        axes: &DMatrix<f64>,
        tolerance: f64,
        score: &mut Scorer,
    ) -> Result<(Self, Tried), Error> {
        let corners: Vec<Vec<f64>> =
            axes.column_iter().map(|axis| farther_end(best, &axis.into_owned())).collect();
        let scores = score(&corners)?;
        let all = std::iter::once(&best_score).chain(&scores);
        let known = Known(RefCell::new(all.map(Score::as_one_number).collect()));
        let all_corners = [vec![best.to_vec()], corners.clone()].concat();
        let mut walk = Walk::new(all_corners).with_sd_tolerance(tolerance)?;
        walk.init(&mut Problem::new(known), NoState::new())?;
        Ok((Self { walk }, corners.into_iter().zip(scores).collect()))
    }

    /// One step: one score or two, or one for each corner where it shrinks.
    ///
    /// Where it would need more than `left`, it stops there, and so it must not be asked again.
    pub(crate) fn advance(&mut self, left: usize, score: &mut Scorer) -> Result<Tried, Error> {
        let desk = Desk { left, score: RefCell::new(score), tried: RefCell::default() };
        let mut problem = Problem::new(desk);
        let outcome = self.walk.next_iter(&mut problem, NoState::new());
        let desk = problem.take_problem().expect("argmin gives a problem back");
        let tried = desk.tried.into_inner();
        match outcome {
            Err(error) if tried.len() < left => Err(error),
            _ => Ok(tried),
        }
    }

    /// Whether all corners cost the same, within the tolerance.
    pub(crate) fn is_level(&mut self) -> bool {
        Solver::<Known, NoState>::terminate(&mut self.walk, &NoState::new()).terminated()
    }
}

/// The end of an axis that is farther away after both are stopped at the faces.
fn farther_end(middle: &[f64], axis: &DVector<f64>) -> Vec<f64> {
    let middle = DVectorView::from_slice(middle, middle.len());
    let end = |sign: f64| DVector::from_vec(stopped(&(middle + sign * axis)));
    let (one, other) = (end(1.0), end(-1.0));
    let farther =
        if other.metric_distance(&middle) > one.metric_distance(&middle) { other } else { one };
    farther.as_slice().to_vec()
}

/// Answers in the order of asking.
struct Known(RefCell<VecDeque<f64>>);

impl CostFunction for Known {
    type Param = Vec<f64>;
    type Output = f64;

    fn cost(&self, _: &Vec<f64>) -> Result<f64, Error> {
        Ok(self.0.borrow_mut().pop_front().expect("as many costs as corners"))
    }
}

/// Passes on what the simplex asks, keeps the answers, and refuses more than may be asked.
struct Desk<'a, 'b> {
    left: usize,
    score: RefCell<&'a mut Scorer<'b>>,
    tried: RefCell<Tried>,
}

impl CostFunction for Desk<'_, '_> {
    type Param = Vec<f64>;
    type Output = f64;

    fn cost(&self, free: &Vec<f64>) -> Result<f64, Error> {
        let mut tried = self.tried.borrow_mut();
        if tried.len() == self.left {
            return Err(Error::msg("no evaluation is left"));
        }
        let unit = stopped(free);
        let score = (self.score.borrow_mut())(std::slice::from_ref(&unit))?[0];
        tried.push((unit, score));
        Ok(score.as_one_number())
    }
}
