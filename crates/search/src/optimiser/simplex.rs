//! The finish: argmin's Nelder–Mead, from the best found.
//!
//! It walks one score at a time, except for its first corners. It is free to leave the box and is
//! mirrored into it, as candidates are, and it sees scores as one number.

use std::cell::RefCell;
use std::collections::VecDeque;

use argmin::core::{CostFunction, Error, IterState, Problem, Solver, State};
use argmin::solver::neldermead::NelderMead;
use nalgebra::{DMatrix, DVectorView};
use serde::{Deserialize, Serialize};

use super::Score;
use super::mirror::mirrored;

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
    /// Scores a corner at the end of each axis about the best, all at once.
    ///
    /// - `best`: not mirrored
    /// - `axes`: one a column
    pub(crate) fn new(
        best: &[f64],
        best_score: Score,
        axes: &DMatrix<f64>,
        score: &mut Scorer,
    ) -> Result<(Self, Tried), Error> {
        let best = DVectorView::from_slice(best, best.len());
        let corners: Vec<Vec<f64>> =
            axes.column_iter().map(|axis| (best + axis).as_slice().to_vec()).collect();
        let units: Vec<Vec<f64>> = corners.iter().map(mirrored).collect();
        let scores = score(&units)?;
        let all = std::iter::once(&best_score).chain(&scores);
        let known = Known(RefCell::new(all.map(Score::as_one_number).collect()));
        let mut walk = Walk::new([vec![best.as_slice().to_vec()], corners].concat());
        walk.init(&mut Problem::new(known), NoState::new())?;
        Ok((Self { walk }, units.into_iter().zip(scores).collect()))
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

    /// Whether all corners cost the same, to a standard deviation of rounding.
    pub(crate) fn is_level(&mut self) -> bool {
        Solver::<Known, NoState>::terminate(&mut self.walk, &NoState::new()).terminated()
    }
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
        let unit = mirrored(free);
        let score = (self.score.borrow_mut())(std::slice::from_ref(&unit))?[0];
        tried.push((unit, score));
        Ok(score.as_one_number())
    }
}
