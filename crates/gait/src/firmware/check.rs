use std::fmt;

use crate::firmware::{Blocks, FirmwareTable};

/// How far a loop may be from closing, rad: rounding in the times at which it is asked.
const CLOSED_RAD: f64 = 1e-6;

/// A part of a table.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Block {
    /// To the loop.
    Start,
    /// The loop.
    Loop,
    /// To rest.
    Stop,
}

impl Block {
    /// All of them, in order.
    pub const ALL: [Block; 3] = [Block::Start, Block::Loop, Block::Stop];

    /// As files have it.
    pub fn word(self) -> &'static str {
        match self {
            Block::Start => "start",
            Block::Loop => "loop",
            Block::Stop => "stop",
        }
    }
}

/// What one axis can do.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Reach {
    /// Fastest, unloaded, rad/s.
    pub speed_rad_s: Option<f64>,
    /// Furthest each way, rad.
    pub travel_rad: Option<f64>,
}

/// What the board can do.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Board {
    /// Between pulses, s: a row can't be shorter.
    pub pulse_frame_s: Option<f64>,
    /// For the table, bytes.
    pub flash_bytes: Option<usize>,
}

/// Where a number stands.
#[derive(Debug, Clone, PartialEq)]
pub struct Spot {
    /// The axis: `yaw_1`.
    pub axis: String,
    /// In which block.
    pub block: Block,
    /// From 1.
    pub row: usize,
}

/// A limit that a table misses.
#[derive(Debug, Clone, PartialEq)]
pub enum Miss {
    /// The loop doesn't come back to its first row.
    Open {
        /// Where.
        at: Spot,
        /// How far off, rad.
        gap_rad: f64,
    },
    /// A step is faster than the servo turns.
    Speed {
        /// The row it begins at.
        at: Spot,
        /// Asked for, rad/s.
        speed_rad_s: f64,
        /// Unloaded, rad/s.
        limit_rad_s: f64,
    },
    /// An angle is beyond the joint's travel.
    Travel {
        /// Where.
        at: Spot,
        /// Asked for, rad.
        angle_rad: f64,
        /// Each way, rad.
        limit_rad: f64,
    },
    /// A pulse is outside what the servo's figures cover.
    Pulse {
        /// Where.
        at: Spot,
        /// Asked for, µs.
        pulse_us: f64,
        /// Shortest and longest, µs.
        limits_us: [f64; 2],
    },
    /// Rows are shorter than pulses are apart.
    Frame {
        /// Between rows, s.
        step_s: f64,
        /// Between pulses, s.
        limit_s: f64,
    },
    /// It doesn't fit the board.
    Flash {
        /// It takes.
        bytes: usize,
        /// There are.
        limit_bytes: usize,
    },
}

impl Miss {
    /// Whether both miss the same limit.
    pub fn is_like(&self, other: &Self) -> bool {
        std::mem::discriminant(self) == std::mem::discriminant(other)
    }

    /// How far it is over its limit, in a number that grows with it.
    fn excess(&self) -> f64 {
        match self {
            Miss::Open { gap_rad, .. } => gap_rad.abs(),
            Miss::Speed { speed_rad_s, limit_rad_s, .. } => speed_rad_s / limit_rad_s,
            Miss::Travel { angle_rad, limit_rad, .. } => angle_rad.abs() / limit_rad,
            Miss::Pulse { pulse_us, limits_us: [least_us, most_us], .. } => {
                (pulse_us - most_us).max(least_us - pulse_us)
            }
            Miss::Frame { .. } | Miss::Flash { .. } => 0.0,
        }
    }
}

/// Holds a table against what joints and board can do; of each axis and kind the worst is given,
/// the worst of all first.
///
/// - `reaches`: by channel
/// - `blocks`: that it was made of
pub fn misses(
    table: &FirmwareTable,
    blocks: &Blocks,
    reaches: &[Reach],
    axes: &[undulift_chain::AxisOf],
    board: Board,
) -> Vec<Miss> {
    let mut misses = Vec::new();
    let step_s = table.preamble.step_s;
    if let Some(limit_s) = board.pulse_frame_s
        && step_s < limit_s * (1.0 - 1e-9)
    {
        misses.push(Miss::Frame { step_s, limit_s });
    }
    let bytes = table.c_type().map_or(4 * cells(table), |c_type| table.flash_bytes(c_type));
    if let Some(limit_bytes) = board.flash_bytes
        && bytes > limit_bytes
    {
        misses.push(Miss::Flash { bytes, limit_bytes });
    }
    for (at, reach) in reaches.iter().enumerate() {
        let track = Track { table, at };
        misses.extend(track.open(blocks, axes));
        misses.extend(reach.speed_rad_s.and_then(|limit| track.too_fast(limit)));
        misses.extend(reach.travel_rad.and_then(|limit| track.too_far(limit)));
        misses.extend(track.out_of_pulses());
    }
    misses.sort_by(|a, b| b.excess().total_cmp(&a.excess()));
    misses
}

fn cells(table: &FirmwareTable) -> usize {
    table.blocks().iter().map(|rows| rows.len()).sum::<usize>() * table.preamble.channels.len()
}

/// One channel of a table.
struct Track<'a> {
    table: &'a FirmwareTable,
    at: usize,
}

impl Track<'_> {
    fn angle_rad(&self, count: i32) -> f64 {
        let preamble = &self.table.preamble;
        preamble.channels[self.at].angle_rad(preamble.scale.unit, preamble.scale.value(count))
    }

    fn spot(&self, block: Block, row: usize) -> Spot {
        Spot { axis: self.table.preamble.channels[self.at].name(), block, row: row + 1 }
    }

    /// All its counts, each with the next.
    fn steps(&self) -> impl Iterator<Item = (Block, usize, i32, Option<i32>)> + '_ {
        Block::ALL.into_iter().zip(self.table.blocks()).flat_map(move |(block, rows)| {
            let after = if block == Block::Stop { None } else { self.table.cycle.first() };
            let next = rows.iter().skip(1).map(Some).chain([after]);
            rows.iter().zip(next).enumerate().map(move |(k, (row, next))| {
                (block, k, row[self.at], next.map(|next| next[self.at]))
            })
        })
    }

    fn open(&self, blocks: &Blocks, axes: &[undulift_chain::AxisOf]) -> Option<Miss> {
        let of = self.table.preamble.channels[self.at].of;
        let column = axes.iter().position(|axis| *axis == of)?;
        let gap_rad = blocks.closing[column] - blocks.cycle[0][column];
        let at = self.spot(Block::Loop, blocks.cycle.len() - 1);
        (gap_rad.abs() > CLOSED_RAD).then_some(Miss::Open { at, gap_rad })
    }

    fn too_fast(&self, limit_rad_s: f64) -> Option<Miss> {
        let speeds = self.steps().filter_map(|(block, row, from, to)| {
            let turn_rad = self.angle_rad(to?) - self.angle_rad(from);
            Some((block, row, turn_rad.abs() / self.table.preamble.step_s))
        });
        let (block, row, speed_rad_s) = speeds.max_by(|a, b| a.2.total_cmp(&b.2))?;
        let at = self.spot(block, row);
        (speed_rad_s > limit_rad_s).then_some(Miss::Speed { at, speed_rad_s, limit_rad_s })
    }

    fn too_far(&self, limit_rad: f64) -> Option<Miss> {
        let angles = self.steps().map(|(block, row, count, _)| (block, row, self.angle_rad(count)));
        let (block, row, angle_rad) = angles.max_by(|a, b| a.2.abs().total_cmp(&b.2.abs()))?;
        let at = self.spot(block, row);
        (angle_rad.abs() > limit_rad + 1e-9).then_some(Miss::Travel { at, angle_rad, limit_rad })
    }

    fn out_of_pulses(&self) -> Option<Miss> {
        let preamble = &self.table.preamble;
        if preamble.scale.unit.per_rad().is_some() {
            return None;
        }
        let pulse = preamble.channels[self.at].pulse;
        let limits_us =
            [pulse.minus_90_us.min(pulse.plus_90_us), pulse.minus_90_us.max(pulse.plus_90_us)];
        let beyond_us = |us: f64| (us - limits_us[1]).max(limits_us[0] - us);
        let pulses =
            self.steps().map(|(block, row, count, _)| (block, row, preamble.scale.value(count)));
        let (block, row, pulse_us) =
            pulses.max_by(|a, b| beyond_us(a.2).total_cmp(&beyond_us(b.2)))?;
        let at = self.spot(block, row);
        (beyond_us(pulse_us) > 0.0).then_some(Miss::Pulse { at, pulse_us, limits_us })
    }
}

impl fmt::Display for Spot {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}, row {} of the {}", self.axis, self.row, self.block.word())
    }
}

impl fmt::Display for Miss {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Miss::Open { at, gap_rad } => write!(
                f,
                "{at}: the loop doesn't close, the row after it is {:.3}° from its first",
                gap_rad.to_degrees()
            ),
            Miss::Speed { at, speed_rad_s, limit_rad_s } => write!(
                f,
                "{at}: the step to the next takes {:.1} °/s, but its servo turns no faster than \
                 {:.1} °/s without load",
                speed_rad_s.to_degrees(),
                limit_rad_s.to_degrees()
            ),
            Miss::Travel { at, angle_rad, limit_rad } => write!(
                f,
                "{at}: {:.2}° is beyond its travel of {:.2}°",
                angle_rad.to_degrees(),
                limit_rad.to_degrees()
            ),
            Miss::Pulse { at, pulse_us, limits_us: [least_us, most_us] } => write!(
                f,
                "{at}: a pulse of {pulse_us:.0} µs is outside the servo's {least_us:.0} to \
                 {most_us:.0} µs"
            ),
            Miss::Frame { step_s, limit_s } => write!(
                f,
                "rows are {:.3} ms apart, but pulses come every {:.3} ms",
                step_s * 1e3,
                limit_s * 1e3
            ),
            Miss::Flash { bytes, limit_bytes } => {
                write!(f, "the table takes {bytes} bytes, but there are {limit_bytes}")
            }
        }
    }
}
