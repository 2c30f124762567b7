//! Gaits: exact derivatives, tables against a general-purpose library, the start ramp.

use std::f64::consts::{PI, TAU};

use approx::assert_relative_eq;
use proptest::prelude::*;
use serde::Deserialize;
use undulift_chain::{Axis, Chain, Joint, Segment};
use undulift_gait::{
    Clock, Commands, Gait, GaitTable, Instant, Interpolation, Pattern, Start, Taper, Wave,
};
use undulift_tests::gliders::{STILL, running};
use undulift_tests::read_json;

const SEGMENT: Segment =
    Segment { length_m: 0.1, width_m: 0.1, thickness_m: 0.02, structure_kg: 0.05 };

fn chain(n: usize, joint: impl Fn(usize) -> Joint) -> Chain {
    Chain::new(vec![SEGMENT; n], (0..n - 1).map(joint).collect(), Vec::new()).unwrap()
}

fn universal(n: usize) -> Chain {
    chain(n, |_| Joint { yaw: true, pitch: true, ..Joint::default() })
}

fn lively(sharpness: f64) -> Wave {
    Wave {
        frequency_hz: 1.3,
        lateral_amplitude_rad: 1.4,
        lateral_waves: 1.2,
        sharpness,
        vertical_amplitude_rad: 0.2,
        vertical_ratio: 3,
        vertical_lag_rad: 0.7,
        turn_rad: 0.3,
        arch_rad: -0.2,
        taper: Taper { head: 0.3, head_length: 0.4, tail: 1.5, tail_length: 0.2 },
    }
}

/// Rates and accelerations against central differences, whose error falls fourfold when the step
/// is halved: wave of several sharpnesses, in the ramp and beyond it, and a cubic table.
#[test]
fn twin_rates_and_accelerations_are_the_derivatives() {
    let held = Start::Held { delay_s: 0.1, spin_up_s: 0.5 };
    let waves = [0.0, 1e-5, 0.3, 2.0, 9.0].map(|sharpness| Pattern::Wave(lively(sharpness)));
    let columns = (0..14).map(|axis| (0..9).map(|row| f64::from(axis * row % 5)).collect());
    let table = GaitTable::new(0.2, columns.collect(), None, None, Interpolation::Cubic).unwrap();
    let chain = universal(8);
    for pattern in waves.into_iter().chain([Pattern::Table(table)]) {
        let gait = Gait { pattern, phase_rad: 0.4, start: held };
        let commands = Commands::new(&gait, &chain).unwrap();
        for time_s in [0.23, 0.37, 0.55, 0.81, 1.93] {
            let error = |h: f64| {
                let mut rooms = [-h, 0.0, h].map(|step| {
                    let mut room = commands.room();
                    commands.accelerations(Instant::at(time_s + step), &mut room);
                    room
                });
                let [before, here, after] = &mut rooms;
                let mut worst = [0.0_f64; 2];
                for axis in 0..commands.axes().len() {
                    let rate = (after.angles_rad[axis] - before.angles_rad[axis]) / (2.0 * h);
                    let acceleration =
                        (after.rates_rad_s[axis] - before.rates_rad_s[axis]) / (2.0 * h);
                    worst[0] = worst[0].max((rate - here.rates_rad_s[axis]).abs());
                    worst[1] = worst[1].max((acceleration - here.accelerations_rad_s2[axis]).abs());
                }
                worst
            };
            let (coarse, fine) = (error(2e-3), error(1e-3));
            for k in 0..2 {
                // A cubic table's rate is a parabola, whose central difference is exact; none of
                // these times lies within a step of a row.
                let halved = coarse[k] / fine[k];
                assert!(
                    (3.7..4.3).contains(&halved) || coarse[k] < 1e-9,
                    "t = {time_s}: {coarse:?} then {fine:?} in {:?}",
                    gait.pattern
                );
            }
        }
    }
}

/// A serpenoid body's joints swing by 2A·sin(πk/n), not A·sin(πk/n): for n 10, A = π/3 and one wave
/// .647 204 rad (Hirose, *Biologically Inspired Robots*, 1993; digits computed).
#[test]
fn published_serpenoid_joint_amplitude() {
    let wave = Wave { frequency_hz: 1.0, lateral_amplitude_rad: PI / 3.0, ..STILL };
    let commands = Commands::new(&running(wave), &universal(10)).unwrap();
    let mut room = commands.room();
    let mut largest = [0.0_f64; 9];
    for step in 0..20_000 {
        commands.rates(Instant::at(f64::from(step) / 20_000.0), &mut room);
        for (largest, angle_rad) in largest.iter_mut().zip(&room.angles_rad) {
            *largest = largest.max(angle_rad.abs());
        }
    }
    for largest in largest {
        assert_relative_eq!(largest, 0.647_204, epsilon = 1e-6);
    }
}

/// Waves travel from nose to tail: what the first joint does, a joint further back does later.
#[test]
fn analytic_waves_travel_from_nose_to_tail() {
    let wave = Wave { frequency_hz: 1.0, lateral_amplitude_rad: 1.0, ..STILL };
    let commands = Commands::new(&running(wave), &universal(10)).unwrap();
    let mut room = commands.room();
    let mut at = |time_s: f64, joint: usize| {
        commands.rates(Instant::at(time_s), &mut room);
        room.angles_rad[joint]
    };
    // One wave on the body, tenths of it apart.
    for time_s in [0.0, 0.13, 0.62] {
        assert_relative_eq!(at(time_s, 0), at(time_s + 0.3, 3), epsilon = 1e-12);
    }
}

/// By hand: positive turn points the tail left of the nose, half of it on each side of the middle;
/// positive arch lets both ends hang. Alternating joints put an axis only where there is one.
#[test]
fn analytic_turn_and_arch_share_out_over_the_axes_there_are() {
    let wave = Wave { turn_rad: 0.6, arch_rad: 0.4, ..STILL };
    let mut room;
    let commands = Commands::new(&running(wave), &universal(4)).unwrap();
    room = commands.room();
    commands.rates(Instant::at(0.0), &mut room);
    for joint in 0..3 {
        // A quarter of the body lies between neighbouring midpoints.
        assert_relative_eq!(room.angles_rad[joint], 0.15, epsilon = 1e-15);
        assert_relative_eq!(room.angles_rad[3 + joint], 0.1, epsilon = 1e-15);
    }
    let alternate = chain(4, |k| Joint { yaw: k % 2 == 0, pitch: k % 2 == 1, ..Joint::default() });
    let commands = Commands::new(&running(wave), &alternate).unwrap();
    let axes: Vec<(usize, Axis)> =
        commands.axes().iter().map(|of| (of.joint_idx, of.axis)).collect();
    assert_eq!(axes, [(0, Axis::Yaw), (2, Axis::Yaw), (1, Axis::Pitch)]);
    room = commands.room();
    commands.rates(Instant::at(0.0), &mut room);
    // Yaw spans {1}, {2, 3}, {4} lie at 1/8, 1/2, 7/8; pitch spans {1, 2}, {3, 4} at 1/4 and 3/4.
    for (found, expected) in room.angles_rad.iter().zip([0.225, 0.225, 0.2]) {
        assert_relative_eq!(*found, expected, epsilon = 1e-15);
    }
    let (mut headings, mut elevations) = ([0.0; 4], [0.0; 4]);
    commands.attitudes(&room, &mut headings, &mut elevations);
    for (found, expected) in headings.iter().zip([-0.225, 0.0, 0.0, 0.225]) {
        assert_relative_eq!(*found, expected, epsilon = 1e-15);
    }
    for (found, expected) in elevations.iter().zip([-0.1, -0.1, 0.1, 0.1]) {
        assert_relative_eq!(*found, expected, epsilon = 1e-15);
    }
    let yaw_only = chain(4, |_| Joint { yaw: true, ..Joint::default() });
    let commands = Commands::new(&running(wave), &yaw_only).unwrap();
    room = commands.room();
    commands.rates(Instant::at(0.0), &mut room);
    commands.attitudes(&room, &mut headings, &mut elevations);
    assert_eq!(elevations, [0.0; 4], "an axis that the chain lacks counts 0");
}

#[derive(Deserialize)]
struct Splines {
    tables: Vec<Spline>,
}

#[derive(Deserialize)]
struct Spline {
    step_s: f64,
    values: Vec<f64>,
    times_s: Vec<f64>,
    value: Vec<f64>,
    first_derivative_per_s: Vec<f64>,
    second_derivative_per_s2: Vec<f64>,
}

/// Periodic cubic splines by `scipy` 1.17.1 (`data/make_splines.py`).
#[test]
fn twin_cubic_tables_agree_with_a_general_library() {
    for spline in read_json::<Splines>("splines.json").tables {
        let columns = vec![spline.values.clone(); 2];
        let table =
            GaitTable::new(spline.step_s, columns, None, None, Interpolation::Cubic).unwrap();
        let gait = Gait { pattern: Pattern::Table(table), phase_rad: 0.0, start: Start::Running };
        let commands = Commands::new(&gait, &universal(2)).unwrap();
        let mut room = commands.room();
        let curve_scale: f64 =
            spline.second_derivative_per_s2.iter().fold(0.0, |m, v| f64::max(m, v.abs()));
        for (k, &time_s) in spline.times_s.iter().enumerate() {
            commands.accelerations(Instant::at(time_s), &mut room);
            assert_relative_eq!(room.angles_rad[1], spline.value[k], epsilon = 1e-11);
            assert_relative_eq!(
                room.rates_rad_s[1],
                spline.first_derivative_per_s[k],
                epsilon = 1e-11 * curve_scale * spline.step_s
            );
            assert_relative_eq!(
                room.accelerations_rad_s2[1],
                spline.second_derivative_per_s2[k],
                epsilon = 1e-11 * curve_scale
            );
        }
    }
}

/// A table made of a wave's own angles flies the wave: the spline's error falls as the fourth power
/// of its step. Phase offset and ramp are read the same way by both.
#[test]
fn twin_a_table_of_a_wave_is_the_wave() {
    let wave = Wave { taper: Taper::default(), ..lively(0.5) };
    let chain = universal(6);
    let start = Start::Held { delay_s: 0.07, spin_up_s: 0.3 };
    let wave_gait = Gait { pattern: Pattern::Wave(wave), phase_rad: 0.9, start };
    let of_wave = Commands::new(&wave_gait, &chain).unwrap();
    let error = |rows: usize| {
        let still = Commands::new(&running(wave), &chain).unwrap();
        let period_s = 1.0 / wave.frequency_hz;
        let mut room = still.room();
        let mut columns = vec![Vec::new(); 10];
        for row in 0..rows {
            still.rates(Instant::at(period_s * row as f64 / rows as f64), &mut room);
            columns.iter_mut().zip(&room.angles_rad).for_each(|(c, a)| c.push(*a));
        }
        let step_s = period_s / rows as f64;
        let table = GaitTable::new(step_s, columns, None, None, Interpolation::Cubic).unwrap();
        // θ = 2πkξ − Φ + φ, so a wave's phase offset sets its table back.
        let gait = Gait { pattern: Pattern::Table(table), phase_rad: 0.9, start };
        let of_table = Commands::new(&gait, &chain).unwrap();
        let (mut a, mut b) = (of_wave.room(), of_table.room());
        let mut worst = 0.0_f64;
        for step in 0..500 {
            let at = Instant::at(f64::from(step) * 3.1e-3);
            of_wave.rates(at, &mut a);
            of_table.rates(at, &mut b);
            for axis in 0..10 {
                worst = worst.max((a.angles_rad[axis] - b.angles_rad[axis]).abs());
            }
        }
        worst
    };
    let (coarse, fine) = (error(48), error(96));
    assert!(fine < 1e-5 && coarse / fine > 12.0, "{coarse:e} then {fine:e}");
}

/// The quintic ramp by hand: half the ramp's time is lost, rate and acceleration are continuous,
/// and the time at which a phase is reached inverts the phase.
#[test]
fn analytic_held_start() {
    let start = Start::Held { delay_s: 0.2, spin_up_s: 0.5 };
    let clock = Clock { frequency_hz: 2.0, start };
    assert_eq!(clock.angle_rad(0.1), 0.0);
    assert_relative_eq!(clock.angle_rad(1.0), TAU * 2.0 * 0.55, epsilon = 1e-12);
    // Middle of the ramp, u = ½: r = ½, ∫ = u⁶ − 3u⁵ + 2.5u⁴ = 5/64, r' = 15/8.
    let middle = clock.phase(0.45, 0.45);
    assert_relative_eq!(middle.angle_rad, TAU * 2.0 * 0.5 * 5.0 / 64.0, epsilon = 1e-12);
    assert_relative_eq!(middle.rate_rad_s, TAU, epsilon = 1e-12);
    assert_relative_eq!(middle.acceleration_rad_s2, TAU * 2.0 / 0.5 * 1.875, epsilon = 1e-9);
    for time_s in [0.3, 0.45, 0.69, 0.71, 3.0] {
        let back_s = clock.time_of_s(clock.angle_rad(time_s)).unwrap();
        assert_relative_eq!(back_s, time_s, epsilon = 1e-9);
    }
    assert_eq!(clock.next_break_s(0.0), Some(0.2));
    assert_relative_eq!(clock.next_break_s(0.2).unwrap(), 0.7, epsilon = 1e-15);
    assert_eq!(clock.next_break_s(0.7), None);
}

/// A linear table is smooth between its rows, and says where they are, ramp or not.
#[test]
fn analytic_linear_tables_break_at_their_rows() {
    let columns = vec![vec![0.0, 0.4, 0.1, -0.3]; 2];
    let table = GaitTable::new(0.25, columns, None, None, Interpolation::Linear).unwrap();
    let gait = Gait { pattern: Pattern::Table(table), phase_rad: 0.3, start: Start::Running };
    let commands = Commands::new(&gait, &universal(2)).unwrap();
    let offset_s = 0.3 / TAU;
    let mut time_s = 0.0;
    for row in 0..8 {
        time_s = commands.next_break_s(time_s).unwrap();
        assert_relative_eq!(time_s, offset_s + 0.25 * f64::from(row), epsilon = 1e-12);
    }
    // On a row, the piece decides which slope is meant.
    let row_s = offset_s + 0.25;
    let mut room = commands.room();
    commands.rates(Instant { time_s: row_s, piece_s: row_s - 0.1 }, &mut room);
    assert_relative_eq!(room.rates_rad_s[0], 1.6, epsilon = 1e-12);
    commands.rates(Instant { time_s: row_s, piece_s: row_s + 0.1 }, &mut room);
    assert_relative_eq!(room.rates_rad_s[0], -1.2, epsilon = 1e-12);
    assert_relative_eq!(room.angles_rad[0], 0.4, epsilon = 1e-12);
}

/// A table without a head column is laid so that the length-weighted mean is 0; with one, the head
/// has it.
#[test]
fn analytic_table_headings_are_sums_from_the_nose() {
    let columns = vec![vec![0.2, 0.2], vec![0.1, 0.1], vec![0.05, 0.05], vec![0.0, 0.0]];
    let at = |head: Option<Vec<f64>>| {
        let table = GaitTable::new(0.5, columns.clone(), head, None, Interpolation::Cubic).unwrap();
        let gait = Gait { pattern: Pattern::Table(table), phase_rad: 0.0, start: Start::Running };
        let commands = Commands::new(&gait, &universal(3)).unwrap();
        let (mut headings, mut elevations) = ([0.0; 3], [0.0; 3]);
        let mut room = commands.room();
        commands.rates(Instant::at(0.3), &mut room);
        commands.attitudes(&room, &mut headings, &mut elevations);
        (headings, elevations)
    };
    let (headings, elevations) = at(None);
    let mean = (0.2 + 0.3) / 3.0;
    for (found, expected) in headings.iter().zip([0.0, 0.2, 0.3]) {
        assert_relative_eq!(*found, expected - mean, epsilon = 1e-15);
    }
    for (found, expected) in elevations.iter().zip([0.0, 0.05, 0.05]) {
        assert_relative_eq!(*found, expected - 0.1 / 3.0, epsilon = 1e-15);
    }
    let (headings, _) = at(Some(vec![0.7, 0.7]));
    for (found, expected) in headings.iter().zip([0.7, 0.9, 1.0]) {
        assert_relative_eq!(*found, expected, epsilon = 1e-15);
    }
}

proptest! {
    /// Any wave repeats after a cycle, and its commands are finite.
    #[test]
    fn analytic_waves_repeat(
        frequency_hz in 0.1..5.0_f64,
        amplitude in 0.0..3.0_f64,
        waves in 0.0..4.0_f64,
        sharpness in prop_oneof![Just(0.0), 0.0..1e-3_f64, 0.0..20.0_f64, Just(1000.0)],
        ratio in 1..6_u32,
        time_s in 0.0..3.0_f64,
    ) {
        let wave = Wave {
            frequency_hz,
            lateral_amplitude_rad: amplitude,
            lateral_waves: waves,
            sharpness,
            vertical_amplitude_rad: 0.3,
            vertical_ratio: ratio,
            ..STILL
        };
        let commands = Commands::new(&running(wave), &universal(5)).unwrap();
        let (mut now, mut later) = (commands.room(), commands.room());
        commands.accelerations(Instant::at(time_s), &mut now);
        commands.accelerations(Instant::at(time_s + 1.0 / frequency_hz), &mut later);
        for axis in 0..8 {
            let rate_scale = 1.0 + TAU * frequency_hz * (1.0 + sharpness) * f64::from(ratio);
            prop_assert!((now.angles_rad[axis] - later.angles_rad[axis]).abs() < 1e-11 * rate_scale);
            prop_assert!(now.accelerations_rad_s2[axis].is_finite());
        }
    }
}
