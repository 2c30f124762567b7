//! The search as a whole: runs, restarts, finish and the ledger.

use argmin::core::Error;
use nalgebra::{DMatrix, DVector};
use rand::{Rng, SeedableRng};
use rand_xoshiro::Xoshiro256PlusPlus;
use rayon::prelude::*;
use serde::{Deserialize, Serialize};

use super::cma::{Axes, Cma};
use super::faces::stopped;
use super::simplex::{Scorer, Simplex, Tried};
use super::stall::has_stalled;
use super::{Objective, OptimiserError, Plan, Score, Strategy};

/// Shortest axis of the first simplex: about a converged best it looks around once more.
const SHORTEST_AXIS: f64 = 1e-4;

/// A search under way, with all it needs to go on.
#[derive(Debug, Clone, Serialize, Deserialize)]
pub struct Search {
    plan: Plan,
    rng: Xoshiro256PlusPlus,
    evaluations: usize,
    run: Cma,
    best: Option<Best>,
    stage: Stage,
    /// From the second generation of its stage.
    simplex: Option<Simplex>,
    over: bool,
}

#[derive(Debug, Clone, Serialize, Deserialize)]
struct Best {
    unit: Vec<f64>,
    score: Score,
    /// Principal axes of the candidates among which it was found.
    axes: DMatrix<f64>,
}

/// Which method made a generation.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
pub enum Stage {
    /// Covariance matrix adaptation.
    Cma {
        /// 0 for the first run.
        restart: usize,
        /// Candidates of a whole generation.
        population: usize,
    },
    /// The downhill simplex that finishes.
    Simplex,
}

/// What was tried at once.
#[derive(Debug, Clone, PartialEq)]
pub struct Generation {
    /// In the order of asking; none where the search is over.
    pub candidates: Vec<(Vec<f64>, Score)>,
    /// What they were tried for.
    pub stage: Stage,
}

impl Search {
    /// A search that has scored nothing yet.
    ///
    /// # Errors
    ///
    /// Where a number of the plan is out of range.
    pub fn new(plan: Plan) -> Result<Self, OptimiserError> {
        plan.check()?;
        let default = Strategy::default_population(plan.start.len());
        let population = plan.population.unwrap_or(default);
        Ok(Self {
            rng: Xoshiro256PlusPlus::seed_from_u64(plan.seed),
            evaluations: 0,
            run: Cma::new(&plan.start, plan.step, population),
            best: None,
            stage: Stage::Cma { restart: 0, population },
            simplex: None,
            over: false,
            plan,
        })
    }

    /// One whole generation, scored in parallel on the current rayon pool.
    ///
    /// The first has the start before the candidates that are drawn. The last of a stage may be cut
    /// short by the evaluations.
    ///
    /// # Panics
    ///
    /// If the objective has another number of numbers than the plan's start.
    pub fn advance(&mut self, objective: &impl Objective) -> Generation {
        assert_eq!(objective.n(), self.plan.start.len(), "numbers of the objective and the start");
        let score_all = |units: &[Vec<f64>]| units.par_iter().map(|u| objective.score(u)).collect();
        self.advance_with(&mut |units| Ok(score_all(units))).expect("an objective always answers")
    }

    /// As [`Search::advance`], with scores from anywhere; after an error it can't go on.
    pub(crate) fn advance_with(&mut self, score: &mut Scorer) -> Result<Generation, Error> {
        let mut score = |units: &[Vec<f64>]| -> Result<Vec<Score>, Error> {
            Ok(score(units)?.into_iter().map(Score::or_unjudged).collect())
        };
        let stage = self.stage;
        let candidates = match (self.over, stage) {
            (true, _) => Vec::new(),
            (false, Stage::Cma { .. }) => self.advance_cma(&mut score)?,
            (false, Stage::Simplex) => self.advance_simplex(&mut score)?,
        };
        self.over |= self.evaluations == self.plan.evaluations;
        Ok(Generation { candidates, stage })
    }

    /// Whether there is nothing left to do: the evaluations are spent, or the simplex is level.
    pub fn is_over(&self) -> bool {
        self.over
    }

    /// Scores asked for so far.
    pub fn evaluations(&self) -> usize {
        self.evaluations
    }

    /// What it was asked to do.
    pub fn plan(&self) -> &Plan {
        &self.plan
    }

    /// Best so far: the least cost, or the least violation while nothing is feasible.
    pub fn best(&self) -> Option<(&[f64], Score)> {
        self.best.as_ref().map(|best| (best.unit.as_slice(), best.score))
    }

    /// What the next generation is for; what the last one was, where the search is over.
    pub fn stage(&self) -> Stage {
        self.stage
    }

    fn advance_cma(&mut self, score: &mut Scorer) -> Result<Tried, Error> {
        let axes = self.run.axes();
        let steps = self.run.draw(&axes, &mut self.rng);
        let start = (self.evaluations == 0).then(|| self.plan.start.clone());
        let n_before = start.iter().len();
        let drawn = steps.iter().map(|step| stopped(&self.run.place(step)));
        let units: Vec<Vec<f64>> = start.into_iter().chain(drawn).take(self.left()).collect();
        let scores = score(&units)?;
        self.evaluations += units.len();
        for (unit, score) in units.iter().zip(&scores) {
            if self.is_best(score) {
                let axes = self.run.spread(&axes, SHORTEST_AXIS);
                self.best = Some(Best { unit: unit.clone(), score: *score, axes });
            }
        }
        self.learn(&axes, &steps, &scores[n_before..]);
        Ok(units.into_iter().zip(scores).collect())
    }

    /// From a whole generation; then decides what comes next.
    fn learn(&mut self, axes: &Axes, steps: &[DVector<f64>], scores: &[Score]) {
        if scores.len() == steps.len() {
            let mut order: Vec<usize> = (0..steps.len()).collect();
            order.sort_by(|&one, &other| scores[one].order(&scores[other]));
            let ranked: Vec<Score> = order.iter().map(|&at| scores[at]).collect();
            self.run.learn(axes, &order.iter().map(|&at| &steps[at]).collect::<Vec<_>>());
            if has_stalled(&mut self.run, axes, &ranked, &self.plan) {
                self.restart();
            }
        }
        if self.plan.kept_for_simplex() > 0 && self.left() < self.run.population {
            self.stage = Stage::Simplex;
        }
    }

    /// Begins again anywhere in the box, with twice the candidates.
    fn restart(&mut self) {
        let mean: Vec<f64> = self.plan.start.iter().map(|_| self.rng.random()).collect();
        let population = self.run.population.saturating_mul(2);
        self.run = Cma::new(&mean, self.plan.step, population);
        if let Stage::Cma { restart, .. } = self.stage {
            self.stage = Stage::Cma { restart: restart + 1, population };
        }
    }

    fn advance_simplex(&mut self, score: &mut Scorer) -> Result<Tried, Error> {
        let left = self.left();
        let best = self.best.as_ref().expect("the start was scored before");
        let tried = match &mut self.simplex {
            Some(simplex) => simplex.advance(left, score)?,
            None => {
                let Best { unit, score: best_score, axes } = best;
                let tolerance = self.plan.cost_tolerance;
                let (simplex, tried) = Simplex::new(unit, *best_score, axes, tolerance, score)?;
                self.simplex = Some(simplex);
                tried
            }
        };
        self.evaluations += tried.len();
        for (unit, score) in &tried {
            if self.is_best(score)
                && let Some(best) = &mut self.best
            {
                (best.unit, best.score) = (unit.clone(), *score);
            }
        }
        self.over = self.simplex.as_mut().is_some_and(Simplex::is_level);
        Ok(tried)
    }

    fn is_best(&self, score: &Score) -> bool {
        self.best.as_ref().is_none_or(|best| score.order(&best.score).is_lt())
    }

    /// Evaluations left for the stage.
    fn left(&self) -> usize {
        let kept = match self.stage {
            Stage::Cma { .. } => self.plan.kept_for_simplex(),
            Stage::Simplex => 0,
        };
        self.plan.evaluations - kept - self.evaluations
    }
}
