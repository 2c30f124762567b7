//! What a derivative and a flight cost. `cargo bench -p undulift-flight`.

use divan::Bencher;
use rayon::prelude::*;
use undulift_flight::{
    Differs, Equations, Settings, State, draw, fly, fly_driven, release, summary,
};
use undulift_gait::{Commands, Instant};

mod robot;
use robot::{drives, robot};

const SIZES: [usize; 4] = [8, 16, 32, 64];

fn main() {
    divan::main();
}

/// Equations, and a state half a second into the flight.
fn in_flight(n: usize) -> (Equations, Instant, State) {
    let glider = robot(n);
    let mut equations = Equations::new(&glider).expect("flies");
    let mut state = release(&mut equations, &glider.launch, 0.0).expect("flies");
    state.velocity_m_s.z = -3.0;
    (equations, Instant::at(0.523), state)
}

/// The whole right-hand side.
#[divan::bench(args = SIZES, sample_size = 500)]
fn derivative(bencher: Bencher, n: usize) {
    let (mut equations, at, state) = in_flight(n);
    bencher.bench_local(|| equations.rates(divan::black_box(at), divan::black_box(&state)));
}

/// Its first part: joint commands.
#[divan::bench(args = SIZES, sample_size = 500)]
fn part_gait(bencher: Bencher, n: usize) {
    let glider = robot(n);
    let commands = Commands::new(&glider.gait, &glider.chain).expect("fits");
    let mut motion = commands.room();
    bencher.bench_local(|| commands.rates(divan::black_box(Instant::at(0.523)), &mut motion));
}

/// Its first two parts: joint commands, then frames and centroidal sums.
#[divan::bench(args = SIZES, sample_size = 500)]
fn part_gait_and_mechanics(bencher: Bencher, n: usize) {
    let (mut equations, at, _) = in_flight(n);
    bencher.bench_local(|| equations.shape(divan::black_box(at), &[]));
}

/// From a glider to where it landed.
#[divan::bench(args = SIZES)]
fn flight(bencher: Bencher, n: usize) {
    let glider = robot(n);
    bencher.bench_local(|| fly(&glider, &Settings::default()).expect("flies"));
}

/// The same with joints that servos turn.
#[divan::bench(args = SIZES, sample_count = 20)]
fn driven_flight(bencher: Bencher, n: usize) {
    let (glider, drives) = (robot(n), drives(n));
    bencher.bench_local(|| fly_driven(&glider, &drives, &Settings::default()).expect("flies"));
}

/// A commanded flight with what it comes to.
#[divan::bench]
fn flight_and_summary(bencher: Bencher) {
    let glider = robot(16);
    bencher.bench_local(|| {
        let mut flight = fly(&glider, &Settings::default()).expect("flies");
        summary(&glider, &mut flight)
    });
}

/// Many launches that differ, on one thread and on two: flights a second.
#[divan::bench(args = [1, 2], sample_count = 20)]
fn batch(bencher: Bencher, threads: usize) {
    const LAUNCHES: usize = 512;
    let glider = robot(16);
    let differs = [Differs::Factor { sd: 0.05 }, Differs::Normal { sd: 0.05 }];
    let fly_one = |launch: usize| {
        let changes = draw(&differs, 1, launch as u64);
        let mut glider = glider.clone();
        glider.launch.speed_m_s = changes[0].of(glider.launch.speed_m_s);
        glider.launch.roll_rad = changes[1].of(glider.launch.roll_rad);
        let mut flight = fly(&glider, &Settings::default()).expect("flies");
        summary(&glider, &mut flight)
    };
    let pool = rayon::ThreadPoolBuilder::new().num_threads(threads).build().expect("threads");
    bencher.counter(divan::counter::ItemsCount::new(LAUNCHES)).bench_local(|| {
        pool.install(|| (0..LAUNCHES).into_par_iter().map(fly_one).collect::<Vec<_>>())
    });
}
