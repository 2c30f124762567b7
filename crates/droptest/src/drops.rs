//! Thousands of drops: what differs, what fails, where each ends.
//!
//! A drop hangs on the seed and its own number alone, so the same seed gives the same drops on any
//! number of threads. What differs is the design's own spread of launches, and besides
//!
//! - **model doubt**: strip theory was found to give 35 % too little lift and 40 % too much drag
//!   beside gliding snakes (an abstract in J. Exp. Biol.), so lift × 1.54^u and drag × 0.71^u, u
//!   uniform from −1 to 1: as much better as worse;
//! - **servo strength**: the wave's amplitudes × 0.9 to 1;
//! - **draught**: level wind from anywhere, uniform up to the hall's.
//!
//! Doubt and strength are one robot's [`Truth`], the same in all of its drops, and so are its mass, lift,
//! drag and pressure centre, where the spread has them; release and draught differ from drop to drop.

use std::f64::consts::TAU;
use std::sync::atomic::{AtomicBool, Ordering};

use rand::{Rng, SeedableRng};
use rand_xoshiro::Xoshiro256PlusPlus;
use rayon::prelude::*;
use undulift_aero::Air;
use undulift_design::{Design, Hall, Scatter};
use undulift_flight::{Fault, FlightError, Settings, Summary, fly, fly_driven, summary, trace};

use crate::clearances::{Around, Clearances};
use crate::fault::{FaultKind, weaken};

/// Lift and drag of real bodies over computed ones, at the far end of what was found.
pub const LIFT_DOUBT: f64 = 1.54;
/// The same of drag.
pub const DRAG_DOUBT: f64 = 0.71;
/// Least that servos leave of the wave's amplitudes.
pub const WEAKEST_WAVE: f64 = 0.9;

/// Pairs of drops that scatter is found from, at most and at least.
const MOST_PAIRS: usize = 1000;
const FEWEST_PAIRS: usize = 20;

/// Longest drop that is followed, s.
const LONGEST_S: f64 = 300.0;
/// Absolute temperature of 0 °C, K (exact).
const ZERO_CELSIUS_K: f64 = 273.15;

/// What is the same in all drops of one robot, and isn't known beforehand.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Truth {
    /// u of the doubt in the model, −1 (less lift, more drag) to 1.
    pub doubt: f64,
    /// Part of the wave's amplitudes that the servos reach.
    pub wave: f64,
}

impl Truth {
    /// Any of those that a plan takes to be possible, all alike.
    pub fn draw(random: &mut impl Rng) -> Self {
        let doubt = random.random_range(-1.0..=1.0);
        Self { doubt, wave: random.random_range(WEAKEST_WAVE..=1.0) }
    }

    /// Real lift over computed lift.
    pub fn lift(&self) -> f64 {
        LIFT_DOUBT.powf(self.doubt)
    }

    /// Real drag over computed drag.
    pub fn drag(&self) -> f64 {
        DRAG_DOUBT.powf(self.doubt)
    }

    fn change(&self, design: &mut Design) {
        design.glider.scales.lift *= self.lift();
        design.glider.scales.drag *= self.drag();
        weaken(design, self.wave);
    }
}

/// A drop that was flown.
#[derive(Debug, Clone, PartialEq)]
pub struct Drop {
    /// From 0.
    pub number: usize,
    /// What robot and air were like.
    pub truth: Truth,
    /// What failed; absent in a sound drop.
    pub fault: Option<FaultKind>,
    /// How it went.
    pub result: Result<Outcome, FlightError>,
}

/// How a drop went.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Outcome {
    /// Of the centre of mass at the end, m.
    pub place_m: [f64; 2],
    /// What is told of any flight, to the catch or the floor.
    pub summary: Summary,
    /// Roll and pitch at the end, rad.
    pub tilt_rad: [f64; 2],
    /// Whether the catch took it; the floor always does.
    pub caught: bool,
    /// On the way.
    pub clearances: Clearances,
}

impl Outcome {
    /// Larger of roll and pitch on the way, rad.
    pub fn peak_tilt_rad(&self) -> f64 {
        self.summary.peak_roll_rad.max(self.summary.peak_pitch_rad)
    }
}

/// What is dropped, and where.
#[derive(Debug, Clone)]
pub struct Dropping<'h> {
    design: Design,
    scatter: Scatter,
    around: Around<'h>,
    seed: u64,
    n_axes: usize,
}

impl<'h> Dropping<'h> {
    /// A design in a hall's air.
    pub fn new(design: &Design, hall: &'h Hall, seed: u64) -> Self {
        let scatter = Scatter::of(design);
        let mut design = design.clone();
        if let Some(temperature_c) = hall.temperature_c {
            let pressure_pa = design.glider.air.pressure_pa;
            design.glider.air = Air::at(temperature_c + ZERO_CELSIUS_K, pressure_pa);
        }
        let n_axes = undulift_chain::joint_axes(design.glider.chain.joints()).len();
        // A straight body reaches furthest.
        let widest_m = design.glider.chain.segments().iter().map(|s| s.width_m).fold(0.0, f64::max);
        let reach_m = (0.5 * design.glider.chain.length_m()).hypot(0.5 * widest_m);
        Self { design, scatter, around: Around { hall, reach_m }, seed, n_axes }
    }

    /// The hall about its point of release.
    pub fn around(&self) -> Around<'h> {
        self.around
    }

    /// Drops it from a height, some of them with faults, in parallel on the threads of the pool that
    /// this is called in.
    ///
    /// - `each`: called after every drop; `false` starts no more of them
    /// - returns what was flown, in the order of the drops
    pub fn fly(
        &self,
        height_m: f64,
        drops: usize,
        with_faults: bool,
        each: impl Fn() -> bool + Sync,
    ) -> Vec<Drop> {
        let stopped = AtomicBool::new(false);
        let longest_s = self.plain_time_s(height_m);
        let one = |number| {
            if stopped.load(Ordering::Relaxed) {
                return None;
            }
            let drop = self.one(height_m, number, with_faults, longest_s);
            if !each() {
                stopped.store(true, Ordering::Relaxed);
            }
            Some(drop)
        };
        let flown: Vec<Option<Drop>> = (0..drops).into_par_iter().map(one).collect();
        flown.into_iter().flatten().collect()
    }

    /// Time that the design's own flight takes; where there is none, that of a fall.
    fn plain_time_s(&self, height_m: f64) -> f64 {
        let mut design = self.design.clone();
        design.glider.launch.height_m = height_m;
        let flown = fly(&design.glider, &self.settings(true));
        flown.map_or_else(|_| crate::fall_time_s(height_m), |flight| flight.time_s)
    }

    fn settings(&self, to_catch: bool) -> Settings {
        let floor_m = if to_catch { self.around.hall.catch.height_m } else { 0.0 };
        Settings { max_time_s: LONGEST_S, through_inversion: true, floor_m, ..Settings::default() }
    }

    /// Sound drops of as many robots that are like these, in parallel.
    ///
    /// - `first`: number of the first robot, and of its launch
    pub fn fly_such(&self, truths: &[Truth], height_m: f64, first: usize) -> Vec<Drop> {
        let one =
            |(k, truth): (usize, &Truth)| self.fly_one(*truth, first + k, height_m, first + k);
        truths.par_iter().enumerate().map(one).collect()
    }

    /// How distances of one robot scatter from drop to drop (standard deviation), m: each of some sound
    /// drops again, by the same robot with another launch.
    ///
    /// - `first`: number of the first such launch
    /// - returns nothing where too few stayed upright
    pub fn scatter_m(&self, drops: &[Drop], height_m: f64, first: usize) -> Option<f64> {
        let upright_m = |drop: &Drop| {
            let summary = drop.result.as_ref().ok()?.summary;
            (!summary.inverted).then_some(summary.distance_m)
        };
        let sound: Vec<&Drop> =
            drops.iter().filter(|drop| drop.fault.is_none()).take(MOST_PAIRS).collect();
        let apart = |(k, drop): (usize, &&Drop)| {
            let again = self.fly_one(drop.truth, drop.number, height_m, first + k);
            Some((upright_m(drop)? - upright_m(&again)?).powi(2))
        };
        let squares: Vec<f64> = sound.par_iter().enumerate().filter_map(apart).collect();
        let pairs = squares.len();
        (pairs >= FEWEST_PAIRS).then(|| (0.5 * squares.iter().sum::<f64>() / pairs as f64).sqrt())
    }

    /// A sound drop of a robot that is like this.
    ///
    /// - `robot`: what is its own is drawn by this
    /// - `number`: of its launch
    pub fn fly_one(&self, truth: Truth, robot: usize, height_m: f64, number: usize) -> Drop {
        let (mut design, mut random) = self.launch(height_m, robot, number);
        // What all truths have in common is drawn after theirs.
        Truth::draw(&mut random);
        self.widen(&mut design, truth, &mut random);
        Drop { number, truth, fault: None, result: self.outcome(&design, Vec::new()) }
    }

    fn one(&self, height_m: f64, number: usize, with_faults: bool, longest_s: f64) -> Drop {
        let (mut design, mut random) = self.launch(height_m, number, number);
        let truth = Truth::draw(&mut random);
        self.widen(&mut design, truth, &mut random);
        let fault = FaultKind::draw(&self.around.hall.faults, &mut random);
        let fault = fault.filter(|_| with_faults);
        let faults = fault.map_or_else(Vec::new, |fault| {
            fault.strike(&mut design, self.n_axes, longest_s, &mut random)
        });
        Drop { number, truth, fault, result: self.outcome(&design, faults) }
    }

    /// The design of one launch, and what the rest of its drop is drawn from.
    fn launch(&self, height_m: f64, robot: usize, number: usize) -> (Design, Xoshiro256PlusPlus) {
        let (robot, launch) = (robot as u64, number as u64);
        let (mut design, _) = self.scatter.launch_of(&self.design, self.seed, robot, launch);
        let mut random = Xoshiro256PlusPlus::seed_from_u64(self.seed ^ 0x6472_6f70);
        // Each drop its own stream, far from all others.
        let own: u64 = random.random::<u64>() ^ (number as u64).wrapping_mul(0x9e37_79b9_7f4a_7c15);
        design.glider.launch.height_m = height_m;
        (design, Xoshiro256PlusPlus::seed_from_u64(own))
    }

    fn widen(&self, design: &mut Design, truth: Truth, random: &mut impl Rng) {
        truth.change(design);
        let (sin, cos) = random.random_range(0.0..TAU).sin_cos();
        let draught_m_s = self.around.hall.draught_m_s * random.random::<f64>();
        design.glider.wind_world_m_s.x += draught_m_s * cos;
        design.glider.wind_world_m_s.y += draught_m_s * sin;
    }

    fn outcome(&self, design: &Design, faults: Vec<Fault>) -> Result<Outcome, FlightError> {
        let drives = design.drives(false, faults);
        let mut flight = fly_driven(&design.glider, &drives, &self.settings(true))?;
        let end_m = flight.trajectory.state(flight.time_s).place_m;
        let caught = self.around.within_catch_m([end_m.x, end_m.y]) >= 0.0;
        if !caught && self.around.hall.catch.height_m > 0.0 {
            // What misses the catch goes on to the floor.
            flight = fly_driven(&design.glider, &drives, &self.settings(false))?;
        }
        let summary = summary(&design.glider, &mut flight);
        let last = trace(&mut flight, LONGEST_S).last().expect("a trace has an end");
        Ok(Outcome {
            place_m: [last.state.place_m.x, last.state.place_m.y],
            summary,
            tilt_rad: [last.attitude.roll_rad(), last.attitude.pitch_rad()],
            caught,
            clearances: self.around.of(&mut flight),
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;
    use std::path::Path;

    const BAR: &str = "[body]\nsegments = 2\nlength_m = 0.5\nwidth_m = 0.02\nthickness_m = 0.005\n\
        structure_kg = 0.5\nsection = \"plate\"\n[joints]\naxes = \"yaw\"\n[gait]\n\
        frequency_hz = 1.0\nlateral_amplitude_deg = 50.0\nlateral_waves = 1.0\n[launch]\n\
        height_m = 3.0\nspeed_m_s = 4.0\n";

    fn hall() -> Hall {
        let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("../../designs/hall-gantry.toml");
        Hall::read(&path).unwrap()
    }

    /// An abstract in J. Exp. Biol.: 35 % too little lift, 1/0.65 = 1.54, and 40 % too much drag,
    /// 1/1.4 = 0.71; both ends and their opposites are reached, and no more.
    #[test]
    fn published_doubt_reaches_both_ways() {
        let (hall, path) = (hall(), Path::new("bar.toml"));
        let design = undulift_design::read_text(path, BAR, &[]).unwrap();
        let dropping = Dropping::new(&design, &hall, 3);
        let mut random = Xoshiro256PlusPlus::seed_from_u64(5);
        let drawn: Vec<Design> = (0..2000)
            .map(|_| {
                let mut changed = design.clone();
                let truth = Truth::draw(&mut random);
                dropping.widen(&mut changed, truth, &mut random);
                changed
            })
            .collect();
        let ends = |of: fn(&Design) -> f64| {
            let values = drawn.iter().map(of);
            [values.clone().fold(f64::INFINITY, f64::min), values.fold(0.0, f64::max)]
        };
        let [low, high] = ends(|design| design.glider.scales.lift);
        assert_relative_eq!(low, 0.65, max_relative = 0.01);
        assert_relative_eq!(high, 1.0 / 0.65, max_relative = 0.01);
        let [low, high] = ends(|design| design.glider.scales.drag);
        assert_relative_eq!(low, 1.0 / 1.4, max_relative = 0.01);
        assert_relative_eq!(high, 1.4, max_relative = 0.01);
        let wind = ends(|design| design.glider.wind_world_m_s.norm());
        assert!(wind[0] < 0.01 && wind[1] > 0.29 && wind[1] <= 0.3, "{wind:?}");
        let better = drawn.iter().find(|design| design.glider.scales.lift > 1.5).unwrap();
        assert!(better.glider.scales.drag < 0.75);
    }

    /// Kinds come as often as their weights say: of 20 000 drops the standard error of a share of
    /// 0.1 is 0.002, and four of those are allowed.
    #[test]
    fn analytic_faults_come_as_often_as_asked() {
        let shares =
            undulift_design::FaultShares { share: 0.4, weights: [1.0, 0.0, 2.0, 0.0, 0.0, 1.0] };
        let mut random = Xoshiro256PlusPlus::seed_from_u64(9);
        let drawn: Vec<Option<FaultKind>> =
            (0..20_000).map(|_| FaultKind::draw(&shares, &mut random)).collect();
        let of = |kind| drawn.iter().filter(|drawn| **drawn == kind).count() as f64 / 20_000.0;
        assert_relative_eq!(of(None), 0.6, epsilon = 0.014);
        for (kind, share) in FaultKind::ALL.into_iter().zip([0.1, 0.0, 0.2, 0.0, 0.0, 0.1]) {
            assert_relative_eq!(of(Some(kind)), share, epsilon = 0.012);
        }
    }
}
