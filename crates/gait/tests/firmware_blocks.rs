//! Blocks of a table: what is sampled, how it begins and ends, what it is checked against.

use std::f64::consts::{FRAC_PI_2, PI};

use approx::assert_relative_eq;
use proptest::prelude::*;
use undulift_chain::{Axis, AxisOf, Chain, Joint, Segment, joint_axes};
use undulift_gait::firmware::{
    Block, Blocks, Board, Channel, Ends, FirmwareTable, Miss, Preamble, Reach, Scale, Timing, Unit,
    misses, whole_frames,
};
use undulift_gait::{
    Commands, Gait, GaitError, GaitTable, Instant, Interpolation, Pattern, Start, Taper, Wave,
};
use undulift_servo::Pulse;

fn chain() -> Chain {
    let segment = Segment { length_m: 0.1, width_m: 0.1, thickness_m: 0.02, structure_kg: 0.05 };
    let joint = Joint { yaw: true, pitch: true, ..Joint::default() };
    Chain::new(vec![segment; 5], vec![joint; 4], vec![]).unwrap()
}

fn wave(frequency_hz: f64) -> Wave {
    Wave {
        frequency_hz,
        lateral_amplitude_rad: 1.2,
        lateral_waves: 1.3,
        sharpness: 0.8,
        vertical_amplitude_rad: 0.2,
        vertical_ratio: 2,
        vertical_lag_rad: 1.0,
        turn_rad: 0.1,
        arch_rad: 0.1,
        taper: Taper::default(),
    }
}

fn commands(frequency_hz: f64, start: Start) -> Commands {
    let gait = Gait { pattern: Pattern::Wave(wave(frequency_hz)), phase_rad: 0.6, start };
    Commands::new(&gait, &chain()).unwrap()
}

fn axes() -> Vec<AxisOf> {
    joint_axes(chain().joints())
}

fn limits(speed_rad_s: f64) -> Ends {
    Ends { speeds_rad_s: vec![Some(speed_rad_s); axes().len()], ..Ends::default() }
}

fn told(commands: &Commands, at_s: f64) -> Vec<f64> {
    let mut motion = commands.room();
    commands.rates(Instant::at(at_s), &mut motion);
    motion.angles_rad
}

fn preamble(blocks: &Blocks, scale: Scale) -> Preamble {
    let numbered = (0..).zip(axes());
    Preamble {
        design: "test".into(),
        version: "0".into(),
        input_sha256: "0".into(),
        scale,
        step_s: blocks.step_s,
        delay_s: blocks.delay_s,
        channels: numbered.map(|(number, of)| Channel::plain(number, of)).collect(),
    }
}

fn fine(blocks: &Blocks) -> FirmwareTable {
    let scale = Scale { unit: Unit::Rad, resolution: 1e-8 };
    FirmwareTable::of(preamble(blocks, scale), &axes(), blocks).unwrap()
}

/// Largest step between rows over the time between them, rad/s.
fn fastest(rows: &[Vec<f64>], step_s: f64) -> f64 {
    let steps = rows.windows(2).flat_map(|pair| pair[0].iter().zip(&pair[1]));
    steps.map(|(a, b)| (b - a).abs() / step_s).fold(0.0, f64::max)
}

/// A gait that is held and then spins up is told row by row what the flight is told: its ramp is a
/// whole number of double steps here, so nothing is made longer, and rows come at
/// `delay_s` + k steps, the loop's after the start's without a seam.
#[test]
fn twin_a_held_start_is_the_flight_s_own() {
    let start = Start::Held { delay_s: 0.13, spin_up_s: 0.4 };
    let commands = commands(1.25, start);
    let blocks = Blocks::of(&commands, 40, &limits(1e3)).unwrap();
    assert_eq!((blocks.delay_s, blocks.start.len()), (0.13, 50));
    let rows = blocks.start.iter().chain(&blocks.cycle).chain(&blocks.cycle);
    for (k, row) in rows.enumerate() {
        let own_rad = told(&commands, 0.13 + 0.02 * k as f64);
        for (a, b) in row.iter().zip(&own_rad) {
            assert_relative_eq!(a, b, epsilon = 1e-12);
        }
    }
}

/// A ramp that isn't a whole number of steps is made longer by less than two, and still leads into
/// the loop: beyond its end the start goes on as the loop does.
#[test]
fn twin_an_odd_ramp_still_meets_the_loop() {
    let start = Start::Held { delay_s: 0.0, spin_up_s: 0.517 };
    let blocks = Blocks::of(&commands(1.25, start), 40, &limits(1e3)).unwrap();
    // Half of 0.517 s is 12.9 steps: 13 behind, and one period to the loop's first row.
    assert_eq!(blocks.start.len(), 13 + 40);
    let n = blocks.start.len();
    for back in 1..=27 {
        for (a, b) in blocks.start[n - back].iter().zip(&blocks.cycle[40 - back]) {
            assert_relative_eq!(a, b, epsilon = 1e-12);
        }
    }
}

/// From straight and back to it: no step faster than nine tenths of what joints do or, where the loop
/// comes near to that itself, than halfway from it to their limit; and with one step less one would
/// be.
#[test]
fn twin_start_and_return_are_as_short_as_speeds_allow() {
    let running = commands(0.5, Start::Running);
    let wave_rad_s = fastest(&Blocks::of(&running, 100, &limits(1e3)).unwrap().cycle, 0.02);
    for times in [1.02, 1.2, 1.6, 3.0] {
        let limit_rad_s = times * wave_rad_s;
        let most_rad_s = (0.9 * limit_rad_s).max(0.5 * (limit_rad_s + wave_rad_s)) * (1.0 + 1e-12);
        let blocks = Blocks::of(&running, 100, &limits(limit_rad_s)).unwrap();
        let start = [&blocks.start[..], &blocks.cycle[..1]].concat();
        let (up, down) = (fastest(&start, 0.02), fastest(&blocks.stop, 0.02));
        assert!(up.max(down) <= most_rad_s, "{times}: {up} and {down} of {most_rad_s}");
        assert!(blocks.start[0].iter().chain(blocks.stop.last().unwrap()).all(|a| *a == 0.0));
        assert_eq!(blocks.stop[0], blocks.cycle[0]);
        let shorter_s = 0.02 * (blocks.start.len() - 1) as f64;
        let shorter = Ends { start_s: Some(shorter_s), ..limits(limit_rad_s) };
        let shorter = Blocks::of(&running, 100, &shorter).unwrap();
        let start = [&shorter.start[..], &shorter.cycle[..1]].concat();
        assert!(fastest(&start, 0.02) > most_rad_s);
    }
}

/// Broken-line interpolation of a function g over steps h is off by at most h²/8·max|g″| (C. de Boor,
/// *A Practical Guide to Splines*, rev. ed., 2001, ch. III (3)). The bound is met within a quarter
/// for a step this short, and falls fourfold with half the step.
#[test]
fn analytic_straight_lines_keep_their_bound() {
    let commands = commands(1.25, Start::Running);
    let mut motion = commands.room();
    let mut most = vec![0.0_f64; axes().len()];
    for look in 0..8000 {
        commands.accelerations(Instant::at(1e-4 * f64::from(look)), &mut motion);
        for (most, own) in most.iter_mut().zip(&motion.accelerations_rad_s2) {
            *most = most.max(own.abs());
        }
    }
    let most = most.into_iter().fold(0.0, f64::max);
    let mut before: Option<f64> = None;
    for rows in [32, 64, 128] {
        let blocks = Blocks::of(&commands, rows, &limits(1e3)).unwrap();
        let found = fine(&blocks).deviation(&commands, &axes(), Interpolation::Linear).angle_rad;
        let bound = blocks.step_s.powi(2) / 8.0 * most + 0.5e-8;
        assert!(found <= bound && found > 0.75 * bound, "{rows}: {found} of {bound}");
        if let Some(before) = before {
            assert_relative_eq!(before / found, 4.0, max_relative = 0.05);
        }
        before = Some(found);
    }
}

/// Rows that are held are off by at most a step's turn, h·max|g′|.
#[test]
fn analytic_held_rows_are_a_step_behind() {
    let commands = commands(1.25, Start::Running);
    let blocks = Blocks::of(&commands, 64, &limits(1e3)).unwrap();
    let table = fine(&blocks);
    let found = table.deviation(&commands, &axes(), Interpolation::Hold).angle_rad;
    let peaks = commands.peaks(0.0, 0.8);
    let most_rad_s = peaks.iter().map(|peak| peak.rate_rad_s).fold(0.0, f64::max);
    let bound = blocks.step_s * most_rad_s;
    assert!(found <= bound && found > 0.8 * bound, "{found} of {bound}");
}

/// Frames by hand: 1.25 Hz at 50 Hz are 40; 1.3 Hz are 38.46, between 50/38 and 50/39 Hz; two are
/// the fewest.
#[test]
fn analytic_whole_frames() {
    assert_eq!(whole_frames(1.25, 50.0), Ok(40));
    assert_eq!(whole_frames(25.0, 50.0), Ok(2));
    let Err(GaitError::PartFrame { frames, nearest_hz: [slow_hz, fast_hz], .. }) =
        whole_frames(1.3, 50.0)
    else {
        panic!("38.46 frames were taken");
    };
    assert_relative_eq!(frames, 38.461_538, max_relative = 1e-6);
    assert_relative_eq!(slow_hz, 50.0 / 39.0, max_relative = 1e-14);
    assert_relative_eq!(fast_hz, 50.0 / 38.0, max_relative = 1e-14);
    assert!(whole_frames(slow_hz, 50.0).is_ok() && whole_frames(fast_hz, 50.0).is_ok());
    let Err(GaitError::PartFrame { nearest_hz, .. }) = whole_frames(50.0, 50.0) else {
        panic!("one frame was taken");
    };
    assert_eq!(nearest_hz, [50.0 / 3.0, 25.0]);
}

/// Too many rows, a gait that stands and a start that takes for ever are refused.
#[test]
fn twin_impossible_blocks_are_refused() {
    let running = commands(1.25, Start::Running);
    for rows in [0, 1, 65_536, 1_000_000] {
        let refused = Blocks::of(&running, rows, &limits(1e3)).unwrap_err();
        assert!(matches!(refused, GaitError::RowCount { most: 65_535, .. }), "{refused}");
    }
    let long = Ends { start_s: Some(60.0), ..limits(1e3) };
    let refused = Blocks::of(&running, 60_000, &long).unwrap_err();
    assert!(matches!(refused, GaitError::RowCount { of: "the start or return", .. }), "{refused}");
    let held = commands(1.25, Start::Held { delay_s: 0.0, spin_up_s: 60.0 });
    let refused = Blocks::of(&held, 60_000, &limits(1e3)).unwrap_err();
    assert!(matches!(refused, GaitError::RowCount { of: "the start", .. }), "{refused}");
    let still = commands(0.0, Start::Running);
    assert_eq!(Blocks::of(&still, 8, &limits(1.0)), Err(GaitError::Stands));
}

proptest! {
    /// An angle and its count are never more than half a count apart, whatever the unit, resolution,
    /// side and trim.
    #[test]
    fn analytic_rounding_is_half_a_count(
        angle_rad in -FRAC_PI_2..FRAC_PI_2,
        (reversed, offset_us) in (any::<bool>(), -50.0..50.0_f64),
        (low, high) in (600.0..1200.0_f64, 1800.0..2400.0_f64),
        coarser in 1.0..300.0_f64,
    ) {
        let of = AxisOf { joint_idx: 0, axis: Axis::Yaw };
        let pulse = Pulse { minus_90_us: low, centre_us: 1500.0, plus_90_us: high };
        let channel = Channel { reversed, offset_us, pulse, ..Channel::plain(0, of) };
        for unit in Unit::ALL {
            let scale = Scale { unit, resolution: unit.fine_resolution() * coarser };
            let count = scale.count(channel.value(unit, angle_rad)).unwrap();
            let back_rad = channel.angle_rad(unit, scale.value(count));
            let half_rad = 0.5 * scale.resolution * channel.rad_per(unit);
            prop_assert!((back_rad - angle_rad).abs() <= half_rad * (1.0 + 1e-9) + 1e-12);
        }
    }
}

/// A table of one axis, in degrees.
fn made_of(start: &[i32], cycle: &[i32], stop: &[i32]) -> (FirmwareTable, Blocks) {
    let rows = |counts: &[i32]| counts.iter().map(|&count| vec![count]).collect::<Vec<_>>();
    let radians = |counts: &[i32]| -> Vec<Vec<f64>> {
        counts.iter().map(|&count| vec![f64::from(count).to_radians()]).collect()
    };
    let blocks = Blocks {
        step_s: 0.02,
        delay_s: 0.0,
        start: radians(start),
        closing: vec![f64::from(cycle[0]).to_radians()],
        cycle: radians(cycle),
        stop: radians(stop),
        head_heading_rad: vec![],
        head_elevation_rad: vec![],
    };
    let mut preamble = preamble(&blocks, Scale { unit: Unit::Deg, resolution: 1.0 });
    preamble.channels.truncate(1);
    let (start, cycle, stop) = (rows(start), rows(cycle), rows(stop));
    (FirmwareTable { preamble, start, cycle, stop, head_deg: None }, blocks)
}

/// Each limit by hand, with joint, row, value and limit: 20 ms a row, so that 1° is 50 °/s.
#[test]
fn analytic_limits_that_are_missed() {
    let (table, blocks) = made_of(&[0, 4], &[10, 20, 8], &[10, 0]);
    let told = |table: &FirmwareTable, blocks: &Blocks, reach: Reach, board: Board| {
        let misses = misses(table, blocks, &[reach], &axes()[..1], board);
        misses.iter().map(Miss::to_string).collect::<Vec<_>>().join("\n")
    };
    let free = (Reach::default(), Board::default());
    assert_eq!(told(&table, &blocks, free.0, free.1), "");
    let speed = |deg_s: f64| Reach { speed_rad_s: Some(deg_s.to_radians()), ..free.0 };
    assert_eq!(told(&table, &blocks, speed(600.1), free.1), "");
    assert_eq!(
        told(&table, &blocks, speed(599.9), free.1),
        "yaw_1, row 2 of the loop: the step to the next takes 600.0 °/s, but its servo turns no faster \
         than 599.9 °/s without load"
    );
    let travel = |deg: f64| Reach { travel_rad: Some(deg.to_radians()), ..free.0 };
    assert_eq!(told(&table, &blocks, travel(20.0), free.1), "");
    assert_eq!(
        told(&table, &blocks, travel(19.5), free.1),
        "yaw_1, row 2 of the loop: 20.00° is beyond its travel of 19.50°"
    );
    let frame = Board { pulse_frame_s: Some(0.02), flash_bytes: Some(7) };
    assert_eq!(told(&table, &blocks, free.0, frame), "");
    let frame = Board { pulse_frame_s: Some(0.0201), flash_bytes: Some(6) };
    assert_eq!(
        told(&table, &blocks, free.0, frame),
        "rows are 20.000 ms apart, but pulses come every 20.100 ms\n\
         the table takes 7 bytes, but there are 6"
    );
    let open = Blocks { closing: vec![0.0], ..blocks.clone() };
    assert_eq!(
        told(&table, &open, free.0, free.1),
        "yaw_1, row 3 of the loop: the loop doesn't close, the row after it is -10.000° from its first"
    );
    let mut pulses = made_of(&[1500], &[2480, 2501, 1600], &[1500]).0;
    pulses.preamble.scale.unit = Unit::Us;
    assert_eq!(
        told(&pulses, &blocks, free.0, free.1),
        "yaw_1, row 2 of the loop: a pulse of 2501 µs is outside the servo's 500 to 2500 µs"
    );
}

/// By hand, four rows: a late channel has the row before; of every third row lost, the one before
/// it stands in, and the loop repeats after twelve rows; a fast clock shortens the steps.
#[test]
fn analytic_timing_faults() {
    let (table, _) = made_of(&[0], &[1, 2, 3, 4], &[0]);
    let sent = |timing: Timing| -> Option<(Vec<i32>, f64)> {
        let faulty = timing.on(&table)?;
        Some((faulty.cycle.iter().map(|row| row[0]).collect(), faulty.preamble.step_s))
    };
    let none = Timing::default();
    assert_eq!(sent(none), Some((vec![1, 2, 3, 4], 0.02)));
    assert_eq!(sent(Timing { late: Some(0), ..none }), Some((vec![4, 1, 2, 3], 0.02)));
    let lost = vec![1, 2, 2, 4, 1, 1, 3, 4, 4, 2, 3, 3];
    assert_eq!(sent(Timing { drop_every: Some(3), ..none }), Some((lost, 0.02)));
    assert_eq!(sent(Timing { clock: 1.25, ..none }).unwrap().1, 0.016);
    assert_eq!(sent(Timing { late: Some(9), ..none }), None);
    assert_eq!(sent(Timing { drop_every: Some(16_385), ..none }), None);
}

/// Whole numbers against fractions: what firmware sends, rounded, is the straight line between rows
/// of a gait's table, at 10 000 times over many periods; halves apart, where rounding goes by a hair.
#[test]
fn twin_whole_numbers_follow_the_gait_s_table() {
    let commands = commands(1.3, Start::Running);
    let blocks = Blocks::of(&commands, 37, &limits(1e3)).unwrap();
    let scale = Scale { unit: Unit::Cdeg, resolution: 1.0 };
    let table = FirmwareTable::of(preamble(&blocks, scale), &axes(), &blocks).unwrap();
    let mut same = table.clone();
    // The board's period is whole microseconds.
    same.preamble.step_s = f64::from(table.period_us()) * 1e-6 / 37.0;
    let gait_table: GaitTable = same.gait_table(&axes(), Interpolation::Linear).unwrap();
    let gait = Gait { pattern: Pattern::Table(gait_table), phase_rad: 0.0, start: Start::Running };
    let straight = Commands::new(&gait, &chain()).unwrap();
    for k in 0..10_000_u32 {
        let time_us = k.wrapping_mul(2_654_435_761) % 30_000_000;
        let angles_rad = told(&straight, f64::from(time_us) * 1e-6);
        let channel = k as usize % axes().len();
        let exact = angles_rad[channel] * 18_000.0 / PI;
        let sent = f64::from(table.loop_at(channel, time_us));
        assert!((sent - exact).abs() <= 0.5 + 1e-6, "{time_us} µs: {sent}, not {exact}");
    }
}

/// Blocks meet: start leads into the loop's first row and goes round it, the return begins there and
/// stays at its end.
#[test]
fn analytic_blocks_follow_each_other() {
    let (mut table, _) = made_of(&[0, 10], &[20, 30, 40, 30], &[20, 0]);
    table.preamble.delay_s = 1.0;
    let start = |ms: u32| table.start_at(0, 1000 * ms);
    assert_eq!([0, 500, 1000, 1010, 1020, 1030].map(start), [0, 0, 0, 5, 10, 15]);
    assert_eq!([1040, 1050, 1100, 1110, 1120].map(start), [20, 25, 30, 25, 20]);
    assert_eq!(table.loop_from_us(), 1_040_000);
    let stop = |ms: u32| table.stop_at(0, 1000 * ms);
    assert_eq!([0, 5, 10, 20, 30, 4_000_000].map(stop), [20, 15, 10, 0, 0, 0]);
    assert_eq!(Block::ALL.map(Block::word), ["start", "loop", "stop"]);
}
