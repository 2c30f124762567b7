//! The optimiser on functions whose minima are known.
//!
//! Functions of free numbers are searched on a cube of side 8 about where they are of interest,
//! mapped onto the unit box.

use undulift_search::optimiser::{Objective, Plan, Score, Search, Stage};

/// A function on a box, mapped onto the unit box.
struct OnBox<F> {
    low: Vec<f64>,
    high: Vec<f64>,
    function: F,
}

impl<F> OnBox<F> {
    fn cube(n: usize, low: f64, high: f64, function: F) -> Self {
        Self { low: vec![low; n], high: vec![high; n], function }
    }

    fn there(&self, unit: &[f64]) -> Vec<f64> {
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

fn free(cost: f64) -> Score {
    Score { cost, violation: 0.0 }
}

fn run(objective: &impl Objective, plan: Plan) -> Search {
    let mut search = Search::new(plan).unwrap();
    while !search.is_over() {
        search.advance(objective);
    }
    search
}

fn cost_of(search: &Search) -> f64 {
    let (_, score) = search.best().unwrap();
    assert!(score.is_feasible());
    score.cost
}

fn sphere(x: &[f64]) -> Score {
    free(x.iter().map(|x| x * x).sum())
}

fn rosenbrock(x: &[f64]) -> Score {
    free(x.windows(2).map(|w| 100.0 * (w[0] * w[0] - w[1]).powi(2) + (w[0] - 1.0).powi(2)).sum())
}

#[test]
fn analytic_sphere() {
    let search = run(&OnBox::cube(10, -4.0, 4.0, sphere), Plan::new(vec![0.9; 10], 3000, 1));
    assert!(cost_of(&search) < 1e-10, "{}", cost_of(&search));
    assert_eq!(search.evaluations(), 3000);
    assert_eq!(search.stage(), Stage::Simplex);
}

#[test]
fn analytic_rosenbrock() {
    let search = run(&OnBox::cube(10, -4.0, 4.0, rosenbrock), Plan::new(vec![0.5; 10], 10_000, 1));
    assert!(cost_of(&search) < 1e-10, "{}", cost_of(&search));
}
