//! What tuning a demo costs, and what a second thread brings: items a second are evaluations.
//! `cargo bench -p undulift-search --bench tuning`.

use std::convert::Infallible;
use std::path::Path;

use divan::Bencher;
use undulift_design::Tuning;
use undulift_flight::Settings;
use undulift_search::tuning::{Judge, Run, Store, Tried};

/// Some ten generations.
const EVALUATIONS: usize = 120;

fn main() {
    divan::main();
}

/// Keeps nothing.
struct Nowhere;

impl Store for Nowhere {
    type Error = Infallible;

    fn keep(&mut self, _: &[Tried], _: &Run, _: bool) -> Result<(), Infallible> {
        Ok(())
    }
}

/// Eight numbers of `reed-16`, all limits, loads every 10 ms; threads as given.
#[divan::bench(args = [1, 2], sample_count = 10)]
fn reed_16(bencher: Bencher, threads: usize) {
    let designs = Path::new(env!("CARGO_MANIFEST_DIR")).join("../../designs");
    let design = undulift_design::read(&designs.join("reed-16.toml"), &[]).expect("reads");
    let tuning = Tuning::read(&designs.join("search-reed-16.toml"), &design).expect("reads");
    let judge = Judge::new(&design, &tuning, 1, Settings::default()).expect("a sound search");
    let pool = rayon::ThreadPoolBuilder::new().num_threads(threads).build().expect("threads");
    bencher.counter(divan::counter::ItemsCount::new(EVALUATIONS)).bench_local(|| {
        let mut run = Run::new(&judge, EVALUATIONS).expect("a plan");
        pool.install(|| run.go_on(&judge, &mut Nowhere, &|| false)).map(drop).expect("no store")
    });
}
