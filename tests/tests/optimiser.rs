//! The optimiser: minima it must find, and what must hold of any search.

use std::sync::atomic::{AtomicUsize, Ordering};

use approx::assert_abs_diff_eq;
use argmin::core::Executor;
use proptest::prelude::{ProptestConfig, any, prop_assert, prop_assert_eq, proptest};
use serde::Deserialize;
use undulift_search::optimiser::{
    Generation, Objective, Plan, Score, Scored, Search, Stage, Strategy,
};
use undulift_tests::landscapes::{
    OnBox, ackley, free, g06, g08, least_cost, rastrigin, rosenbrock, search, sphere,
};
use undulift_tests::read_json;

const SEEDS: std::ops::Range<u64> = 1..6;

fn assert_all_below(limit: f64, objective: &impl Objective, plan: impl Fn(u64) -> Plan) {
    for seed in SEEDS {
        let cost = least_cost(&search(objective, plan(seed)));
        assert!(cost < limit, "seed {seed}: {cost:e}");
    }
}

/// By their definitions; Ackley's at (1, 1, …) is 20·(1 − e^(−1/5)).
#[test]
fn analytic_values_of_the_functions() {
    for function in [sphere, rastrigin, ackley] {
        assert_abs_diff_eq!(function(&[0.0; 7]).cost, 0.0, epsilon = 1e-15);
    }
    assert_eq!(rosenbrock(&[1.0; 7]).cost, 0.0);
    assert_abs_diff_eq!(ackley(&[1.0; 7]).cost, 3.625_384_9, epsilon = 5e-8);
}

#[test]
fn analytic_one_hollow() {
    let plan = |seed| Plan::new(vec![0.9; 10], 2000, seed);
    assert_all_below(1e-9, &OnBox::cube(10, -4.0, 4.0, sphere), plan);
    let plan = |seed| Plan::new(vec![0.5; 10], 10_000, seed);
    assert_all_below(1e-9, &OnBox::cube(10, -4.0, 4.0, rosenbrock), plan);
}

#[test]
fn analytic_many_hollows() {
    let plan = |seed| Plan::new(vec![0.9; 10], 5000, seed);
    assert_all_below(1e-9, &OnBox::cube(10, -32.0, 32.0, ackley), plan);
    let plan = |seed| Plan::new(vec![0.9; 5], 100_000, seed);
    assert_all_below(1e-9, &OnBox::cube(5, -5.12, 5.12, rastrigin), plan);
}

/// Half of the numbers would be least beyond a face, by 0.1: at the face they cost 0.01 each.
#[test]
fn analytic_minima_at_faces() {
    let hollow = |k: usize, x: f64| if k.is_multiple_of(2) { x + 0.1 } else { x - 0.4 };
    let cost = |x: &[f64]| (0..10).map(|k| hollow(k, x[k]).powi(2)).sum::<f64>() - 0.05;
    let cut = OnBox::cube(10, 0.0, 1.0, |x: &[f64]| free(cost(x)));
    assert_all_below(1e-9, &cut, |seed| Plan::new(vec![0.5; 10], 10_000, seed));
    let slope = |x: &[f64]| free(x.iter().zip(1..).map(|(x, k)| x * f64::from(k)).sum());
    let slope = OnBox::cube(10, 0.0, 1.0, slope);
    for seed in SEEDS {
        assert_eq!(least_cost(&search(&slope, Plan::new(vec![0.5; 10], 3000, seed))), 0.0);
    }
}

/// Liang et al., Problem definitions and evaluation criteria for the CEC 2006 special session:
/// g06 at two curved limits at once, g08 within them.
#[test]
fn published_constrained_minima() {
    let problems = [
        (g06(), -6_961.813_875_580_15, [14.095, 0.842_960_79], 1e-6),
        (g08(), -0.095_825_041_418_035_9, [1.227_971_353, 4.245_373_366], 1e-12),
    ];
    for (problem, least, place, accuracy) in problems {
        for seed in SEEDS {
            let search = search(&problem, Plan::new(vec![0.5; 2], 3000, seed));
            assert_abs_diff_eq!(least_cost(&search), least, epsilon = accuracy);
            let found = problem.there(search.best().unwrap().0);
            assert_abs_diff_eq!(found[..], place[..], epsilon = 1e-7);
        }
    }
}

/// Nothing is feasible; the least violation is 0.1, where all numbers are 0.3.
#[test]
fn analytic_least_infeasible() {
    let violation = |x: &[f64]| 0.1 + x.iter().map(|x| (x - 0.3).powi(2)).sum::<f64>();
    let score = |x: &[f64]| Score { cost: -x[0], violation: violation(x) };
    let search = search(&OnBox::cube(6, 0.0, 1.0, score), Plan::new(vec![0.9; 6], 2000, 1));
    let (unit, score) = search.best().unwrap();
    assert_abs_diff_eq!(score.violation, 0.1, epsilon = 1e-9);
    assert_abs_diff_eq!(unit, &[0.3; 6][..], epsilon = 1e-4);
}

/// Where nothing can be judged, all evaluations go into looking for something that can.
#[test]
fn analytic_nothing_can_be_judged() {
    let blind = OnBox::cube(3, 0.0, 1.0, |_: &[f64]| free(f64::NAN));
    let search = search(&blind, Plan::new(vec![0.5; 3], 2000, 1));
    assert_eq!(search.best().unwrap().1, Score::UNJUDGED);
    assert_eq!(search.evaluations(), 2000);
}

/// Least just before 0, but not there: without tolerances a run shrinks towards it as far as it may,
/// then begins anew, and never asks for what is no number.
#[test]
fn analytic_no_tolerance_still_restarts() {
    let before = |x: &[f64]| {
        assert!((0.0..=1.0).contains(&x[0]), "{x:?}");
        free(if x[0] == 0.0 { 9.0 } else { x[0] })
    };
    let mut plan = Plan::new(vec![0.5], 20_000, 1);
    (plan.finish, plan.cost_tolerance, plan.step_tolerance) = (0.0, 0.0, 0.0);
    let search = search(&OnBox::cube(1, 0.0, 1.0, before), plan);
    assert!(least_cost(&search) < 1e-20, "{}", least_cost(&search));
    assert_eq!(search.evaluations(), 20_000);
    assert!(matches!(search.stage(), Stage::Cma { restart: 1.., .. }), "{:?}", search.stage());
}

#[derive(Deserialize)]
struct Reference {
    target: f64,
    condition: f64,
    rotation: Vec<Vec<f64>>,
    cases: Vec<Case>,
    constants: Vec<Constants>,
}

#[derive(Deserialize)]
struct Case {
    name: String,
    sigma: f64,
    median_evaluations: f64,
    starts: Vec<Vec<f64>>,
}

#[derive(Deserialize)]
struct Constants {
    n: usize,
    population: usize,
    parents_worth: f64,
    path_rate: f64,
    rank_one_rate: f64,
    rank_many_rate: f64,
    weights: Vec<f64>,
}

impl Reference {
    fn ellipsoid(&self, x: &[f64]) -> Score {
        let turned = self.rotation.iter().map(|row| row.iter().zip(x).map(|(r, x)| r * x).sum());
        let factor = |k: usize| self.condition.powf(k as f64 / (x.len() - 1) as f64);
        free(turned.enumerate().map(|(k, y): (usize, f64)| factor(k) * y * y).sum())
    }

    /// Scores until the generation that reaches the target, without the simplex. The cube is so
    /// large that its faces are never met; steps scale with it.
    fn evaluations(&self, case: &Case, start: &[f64], seed: u64) -> usize {
        let function = |x: &[f64]| match case.name.as_str() {
            "rosenbrock" => rosenbrock(x),
            _ => self.ellipsoid(x),
        };
        let side = 512.0;
        let cube = OnBox::cube(start.len(), -0.5 * side, 0.5 * side, function);
        let start = start.iter().map(|x| 0.5 + x / side).collect();
        let mut plan = Plan { step: case.sigma / side, ..Plan::new(start, 50_000, seed) };
        (plan.finish, plan.cost_tolerance, plan.step_tolerance) = (0.0, 0.0, 0.0);
        let mut search = Search::new(plan).unwrap();
        while !search.is_over() {
            search.advance(&cube);
            if least_cost(&search) <= self.target {
                return search.evaluations();
            }
        }
        usize::MAX
    }
}

/// The same starts and steps as `cma` 4.5.0 had, for which `searches.json` has the evaluations; the
/// random numbers differ, so that medians of 15 may be up to 1.3 apart.
#[test]
fn twin_no_slower_than_cma() {
    let reference: Reference = read_json("searches.json");
    for case in &reference.cases {
        let seeds = case.starts.iter().zip(0..);
        let of_start = |(start, seed): (&Vec<f64>, u64)| reference.evaluations(case, start, seed);
        let mut evaluations: Vec<usize> = seeds.map(of_start).collect();
        evaluations.sort();
        let median = evaluations[evaluations.len() / 2] as f64;
        let ratio = median / case.median_evaluations;
        println!("{}: median {median}, theirs {}, {ratio:.3}", case.name, case.median_evaluations);
        assert!(ratio <= 1.3, "{}: {evaluations:?}", case.name);
    }
}

/// `cma` 4.5.0 follows the same tutorial in these.
#[test]
fn twin_constants_are_those_of_cma() {
    for theirs in &read_json::<Reference>("searches.json").constants {
        let ours = Strategy::new(theirs.n, Strategy::default_population(theirs.n));
        assert_eq!(ours.population, theirs.population);
        let pairs = [
            (ours.parents_worth, theirs.parents_worth),
            (ours.path_rate, theirs.path_rate),
            (ours.rank_one_rate, theirs.rank_one_rate),
            (ours.rank_many_rate, theirs.rank_many_rate),
        ];
        for (ours, theirs) in pairs {
            assert_abs_diff_eq!(ours, theirs, epsilon = 1e-14);
        }
        assert_abs_diff_eq!(ours.weights[..], theirs.weights[..], epsilon = 1e-13);
    }
}

fn bytes(search: &Search) -> Vec<u8> {
    postcard::to_stdvec(search).unwrap()
}

/// Restarts and the simplex are among what is interrupted.
#[test]
fn twin_interrupted_goes_on_to_the_same_bits() {
    let problem = OnBox::cube(3, -5.12, 5.12, rastrigin);
    let plan = Plan::new(vec![0.9; 3], 4000, 5);
    let whole = search(&problem, plan.clone());
    for every in [1, 7, 40] {
        let mut parts = Search::new(plan.clone()).unwrap();
        let mut stages = Vec::new();
        for generation in 1.. {
            stages.push(parts.advance(&problem).stage);
            if generation % every == 0 {
                parts = postcard::from_bytes(&bytes(&parts)).unwrap();
            }
            if parts.is_over() {
                break;
            }
        }
        assert!(stages.iter().any(|stage| matches!(stage, Stage::Cma { restart: 2.., .. })));
        assert!(stages.contains(&Stage::Simplex));
        assert!(bytes(&parts) == bytes(&whole));
    }
}

#[test]
fn twin_threads_do_not_matter() {
    let on = |n_threads| {
        let pool = rayon::ThreadPoolBuilder::new().num_threads(n_threads).build().unwrap();
        pool.install(|| bytes(&search(&g06(), Plan::new(vec![0.5; 2], 2000, 3))))
    };
    assert!(on(1) == on(2));
}

/// Argmin's executor has the same search step by step.
#[test]
fn twin_executor_runs_the_same_search() {
    let problem = g06();
    let plan = Plan::new(vec![0.5; 2], 2000, 3);
    let solver = Search::new(plan.clone()).unwrap();
    let result = Executor::new(Scored(&problem), solver).run().unwrap();
    let ours = search(&problem, plan);
    assert!(bytes(&result.solver) == bytes(&ours));
    assert_eq!(result.state.best_individual.unwrap(), ours.best().unwrap().0);
    assert_eq!(result.state.best_cost, least_cost(&ours));
}

/// Counts how often it is asked, and checks that it is asked inside the box.
struct Counted(AtomicUsize, usize);

impl Objective for Counted {
    fn n(&self) -> usize {
        self.1
    }

    fn score(&self, unit: &[f64]) -> Score {
        self.0.fetch_add(1, Ordering::Relaxed);
        assert!(unit.len() == self.1 && unit.iter().all(|u| (0.0..=1.0).contains(u)));
        Score { cost: rastrigin(unit).cost, violation: (unit[0] - 0.5).max(0.0) }
    }
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(60))]

    /// Two ledgers: the search's own and the objective's. The best is the best of all that was
    /// tried, the start among it.
    #[test]
    fn twin_evaluations_are_never_exceeded(
        n in 1usize..9,
        evaluations in 1usize..600,
        finish in 0.0..1.0,
        population in proptest::option::of(4usize..50),
        step in 0.01..1.0,
        seed in any::<u64>(),
    ) {
        let population = population.filter(|population| *population <= evaluations);
        let start = vec![0.7; n];
        let plan = Plan { finish, population, step, ..Plan::new(start.clone(), evaluations, seed) };
        let counted = Counted(AtomicUsize::new(0), n);
        let mut search = Search::new(plan).unwrap();
        let mut tried = Vec::new();
        while !search.is_over() {
            tried.extend(search.advance(&counted).candidates);
        }
        let asked = counted.0.into_inner();
        prop_assert!(asked == search.evaluations() && asked == tried.len());
        prop_assert!(asked <= evaluations);
        prop_assert_eq!(&tried[0].0, &start);
        let best = tried.iter().min_by(|one, other| one.1.order(&other.1)).unwrap();
        prop_assert_eq!(search.best().unwrap(), (best.0.as_slice(), best.1));
        let spent: Generation = search.advance(&Counted(AtomicUsize::new(0), n));
        prop_assert!(spent.candidates.is_empty());
    }
}
