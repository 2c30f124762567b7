//! Many flights at once: threads, and how far they have come.

use anyhow::Context;
use indicatif::{ProgressBar, ProgressDrawTarget, ProgressStyle};
use rayon::prelude::*;

/// Does something for each launch, counted from 0; the results stand in the launches' order.
///
/// - `n_threads`: 0 for as many as there are cores
/// - `name`: told beside the bar
pub fn each<T: Send>(
    launches: u32,
    n_threads: usize,
    name: &str,
    fly: impl Fn(u64) -> T + Sync,
) -> anyhow::Result<Vec<T>> {
    let bar = bar(u64::from(launches), name);
    let flown = threads(n_threads)?.install(|| {
        let counted = |launch: u32| {
            let flown = fly(u64::from(launch));
            bar.inc(1);
            flown
        };
        (0..launches).into_par_iter().map(counted).collect()
    });
    bar.finish_and_clear();
    Ok(flown)
}

/// Threads to fly on.
///
/// - `n_threads`: 0 for as many as there are cores
pub fn threads(n_threads: usize) -> anyhow::Result<rayon::ThreadPool> {
    let pool = rayon::ThreadPoolBuilder::new().num_threads(n_threads).build();
    pool.context("can't start threads")
}

/// A bar that is drawn on terminals only.
pub fn bar(flights: u64, name: &str) -> ProgressBar {
    let style = ProgressStyle::with_template("{msg} {wide_bar} {pos}/{len} flights, {eta} left");
    let bar = ProgressBar::with_draw_target(Some(flights), ProgressDrawTarget::stderr());
    bar.set_style(style.unwrap_or_else(|_| ProgressStyle::default_bar()));
    bar.set_message(name.to_owned());
    bar
}
