//! What a generation of the optimiser costs beside its scores. `cargo bench -p undulift-search`.

use divan::Bencher;
use undulift_search::optimiser::{Objective, Plan, Score, Search};

fn main() {
    divan::main();
}

/// A score that costs next to nothing.
struct Sphere(usize);

impl Objective for Sphere {
    fn n(&self) -> usize {
        self.0
    }

    fn score(&self, unit: &[f64]) -> Score {
        Score { cost: unit.iter().map(|u| (u - 0.3).powi(2)).sum(), violation: 0.0 }
    }
}

/// The thirtieth generation of the default population: 10 candidates of 8 numbers, 14 of 30.
#[divan::bench(args = [8, 30], sample_size = 20)]
fn generation(bencher: Bencher, n: usize) {
    let mut search = Search::new(Plan::new(vec![0.5; n], usize::MAX, 1)).expect("sound");
    for _ in 1..30 {
        search.advance(&Sphere(n));
    }
    let again = || search.clone();
    bencher.with_inputs(again).bench_local_values(|mut search| search.advance(&Sphere(n)));
}
