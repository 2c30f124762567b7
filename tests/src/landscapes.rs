//! Functions whose minima are known, on boxes that are mapped onto the unit box.

use std::f64::consts::{E, TAU};

use undulift_search::optimiser::{Objective, Plan, Score, Search};

/// A function on a box.
pub struct OnBox<F> {
    /// Lower end of every number's range.
    pub low: Vec<f64>,
    /// Upper end.
    pub high: Vec<f64>,
    /// What it comes to there.
    pub function: F,
}

impl<F> OnBox<F> {
    /// The same range for all numbers.
    pub fn cube(n: usize, low: f64, high: f64, function: F) -> Self {
        Self { low: vec![low; n], high: vec![high; n], function }
    }

    /// A place of the unit box, in the function's own numbers.
    pub fn there(&self, unit: &[f64]) -> Vec<f64> {
        let ends = self.low.iter().zip(&self.high);
        unit.iter().zip(ends).map(|(u, (low, high))| low + u * (high - low)).collect()
    }
}

impl<F: Fn(&[f64]) -> Score + Sync> Objective for OnBox<F> {
    fn n(&self) -> usize {
        self.low.len()
    }

    fn score(&self, unit: &[f64]) -> Score {
        (self.function)(&self.there(unit))
    }
}

/// Searches to the end.
pub fn search(objective: &impl Objective, plan: Plan) -> Search {
    let mut search = Search::new(plan).unwrap();
    while !search.is_over() {
        search.advance(objective);
    }
    search
}

/// Cost of a search's best, which must be feasible.
pub fn least_cost(search: &Search) -> f64 {
    let (_, score) = search.best().unwrap();
    assert!(score.is_feasible(), "{score:?}");
    score.cost
}

/// A cost with nothing required.
pub fn free(cost: f64) -> Score {
    Score { cost, violation: 0.0 }
}

/// 0 at 0.
pub fn sphere(x: &[f64]) -> Score {
    free(x.iter().map(|x| x * x).sum())
}

/// 0 at 1.
pub fn rosenbrock(x: &[f64]) -> Score {
    let fold = |pair: &[f64]| 100.0 * (pair[0].powi(2) - pair[1]).powi(2) + (pair[0] - 1.0).powi(2);
    free(x.windows(2).map(fold).sum())
}

/// 0 at 0, among a lattice of other minima.
pub fn rastrigin(x: &[f64]) -> Score {
    free(x.iter().map(|x| x * x - 10.0 * (TAU * x).cos() + 10.0).sum())
}

/// 0 at 0, at the bottom of a funnel of other minima.
pub fn ackley(x: &[f64]) -> Score {
    let mean = |of: &dyn Fn(f64) -> f64| x.iter().map(|x| of(*x)).sum::<f64>() / x.len() as f64;
    let (squares, waves) = (mean(&|x| x * x), mean(&|x| (TAU * x).cos()));
    free(20.0 + E - 20.0 * (-0.2 * squares.sqrt()).exp() - waves.exp())
}

/// Problem g06 of Liang et al., CEC 2006.
pub fn g06() -> OnBox<fn(&[f64]) -> Score> {
    OnBox { low: vec![13.0, 0.0], high: vec![100.0, 100.0], function: g06_score }
}

fn g06_score(x: &[f64]) -> Score {
    let outside = 100.0 - (x[0] - 5.0).powi(2) - (x[1] - 5.0).powi(2);
    let inside = (x[0] - 6.0).powi(2) + (x[1] - 5.0).powi(2) - 82.81;
    Score {
        cost: (x[0] - 10.0).powi(3) + (x[1] - 20.0).powi(3),
        violation: outside.max(0.0) + inside.max(0.0),
    }
}

/// Problem g08 of Liang et al., CEC 2006.
pub fn g08() -> OnBox<fn(&[f64]) -> Score> {
    OnBox { low: vec![0.0; 2], high: vec![10.0; 2], function: g08_score }
}

fn g08_score(x: &[f64]) -> Score {
    let above = x[0].powi(2) - x[1] + 1.0;
    let right = 1.0 - x[0] + (x[1] - 4.0).powi(2);
    let waves = (TAU * x[0]).sin().powi(3) * (TAU * x[1]).sin();
    Score {
        cost: -waves / (x[0].powi(3) * (x[0] + x[1])),
        violation: above.max(0.0) + right.max(0.0),
    }
}
