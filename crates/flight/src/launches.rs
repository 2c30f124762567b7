//! Many flights at once.

use rayon::prelude::*;

use crate::{FlightError, Glider, Settings, Summary, fly, summary};

/// Flies many gliders, in parallel on the threads of the pool that this is called in; the results
/// stand in the order of the launches and don't depend on the number of threads.
///
/// - `make`: the glider of a launch, counted from 0
/// - `each`: called after every flight, on the thread that flew it; `false` starts no more flights
/// - returns a result for each launch, absent where it wasn't started
pub fn fly_launches(
    launches: usize,
    settings: &Settings,
    make: impl Fn(usize) -> Glider + Sync,
    each: impl Fn() -> bool + Sync,
) -> Vec<Option<Result<Summary, FlightError>>> {
    let stopped = std::sync::atomic::AtomicBool::new(false);
    (0..launches)
        .into_par_iter()
        .map(|launch| {
            if stopped.load(std::sync::atomic::Ordering::Relaxed) {
                return None;
            }
            let glider = make(launch);
            let flown = fly(&glider, settings).map(|mut flight| summary(&glider, &mut flight));
            if !each() {
                stopped.store(true, std::sync::atomic::Ordering::Relaxed);
            }
            Some(flown)
        })
        .collect()
}
