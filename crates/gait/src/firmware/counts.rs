use undulift_chain::AxisOf;

use crate::firmware::{Blocks, Preamble};
use crate::{GaitError, GaitTable, Interpolation};

/// A gait table in whole counts.
#[derive(Debug, Clone, PartialEq)]
pub struct FirmwareTable {
    /// What it says of itself.
    pub preamble: Preamble,
    /// From the trigger's shape to the loop; rows × channels.
    pub start: Vec<Vec<i32>>,
    /// The loop.
    pub cycle: Vec<Vec<i32>>,
    /// From the loop's first row to rest.
    pub stop: Vec<Vec<i32>>,
    /// Heading and elevation of the head over the loop, degrees.
    pub head_deg: Option<[Vec<f64>; 2]>,
}

/// The type of a table's numbers in C: the shortest that holds them.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct CType {
    /// Whether it holds negative numbers.
    pub signed: bool,
    /// 8 or 16.
    pub bits: u32,
}

impl CType {
    /// As C calls it.
    pub fn name(self) -> &'static str {
        match (self.signed, self.bits) {
            (true, 8) => "int8_t",
            (true, _) => "int16_t",
            (false, 8) => "uint8_t",
            (false, _) => "uint16_t",
        }
    }

    fn range(self) -> [i64; 2] {
        let bits = self.bits - u32::from(self.signed);
        let most = (1_i64 << bits) - 1;
        [if self.signed { -most - 1 } else { 0 }, most]
    }

    fn holds(self, count: i32) -> bool {
        let [least, most] = self.range();
        (least..=most).contains(&i64::from(count))
    }
}

impl FirmwareTable {
    /// Rounds a gait's blocks to counts.
    ///
    /// - `axes`: of the blocks' columns
    ///
    /// # Errors
    ///
    /// [`GaitError::TooFine`] where 32 bits don't hold a count.
    pub fn of(preamble: Preamble, axes: &[AxisOf], blocks: &Blocks) -> Result<Self, GaitError> {
        let counts = |rows: &[Vec<f64>]| -> Result<Vec<Vec<i32>>, GaitError> {
            rows.iter().map(|row| preamble.counts(axes, row)).collect()
        };
        let degrees = |angles_rad: &[f64]| {
            // Millionths are far below anything that a flight tells.
            angles_rad.iter().map(|rad| (rad.to_degrees() * 1e6).round() / 1e6).collect()
        };
        let head_deg = [&blocks.head_heading_rad, &blocks.head_elevation_rad];
        Ok(Self {
            start: counts(&blocks.start)?,
            cycle: counts(&blocks.cycle)?,
            stop: counts(&blocks.stop)?,
            head_deg: Some(head_deg.map(|angles_rad| degrees(angles_rad))),
            preamble,
        })
    }

    /// Start, loop and return.
    pub fn blocks(&self) -> [&[Vec<i32>]; 3] {
        [&self.start, &self.cycle, &self.stop]
    }

    fn all_counts(&self) -> impl Iterator<Item = i32> + '_ {
        self.blocks().into_iter().flatten().flatten().copied()
    }

    /// The shortest type that holds it.
    ///
    /// # Errors
    ///
    /// [`GaitError::TooFine`] where 16 bits don't.
    pub fn c_type(&self) -> Result<CType, GaitError> {
        let signed = self.preamble.scale.unit.per_rad().is_some();
        let [byte, word] = [8, 16].map(|bits| CType { signed, bits });
        if self.all_counts().all(|count| byte.holds(count)) {
            return Ok(byte);
        }
        let wide = |row: &&Vec<i32>| row.iter().any(|&count| !word.holds(count));
        let Some(row) = self.blocks().into_iter().flatten().find(wide) else { return Ok(word) };
        let channel = row.iter().position(|&count| !word.holds(count)).expect("one is too wide");
        Err(self.preamble.too_fine(channel, f64::from(row[channel]), word.bits, word.range()[1]))
    }

    /// Bits that its counts need.
    pub fn bits(&self) -> u32 {
        let signed = self.preamble.scale.unit.per_rad().is_some();
        let holds = |bits: &u32| {
            let of_bits = CType { signed, bits: *bits };
            self.all_counts().all(|count| of_bits.holds(count))
        };
        (1 + u32::from(signed)..=32).find(holds).unwrap_or(32)
    }

    /// Bytes of its blocks in a C type.
    pub fn flash_bytes(&self, c_type: CType) -> usize {
        self.all_counts().count() * c_type.bits as usize / 8
    }

    /// CRC-32 of start, loop and return, row by row, each number with its lowest byte first.
    pub fn crc32(&self, c_type: CType) -> u32 {
        let bytes = self
            .all_counts()
            .flat_map(|count| count.to_le_bytes().into_iter().take(c_type.bits as usize / 8));
        crc32fast::hash(&bytes.collect::<Vec<u8>>())
    }

    /// The loop's period, µs, as boards count it.
    pub fn period_us(&self) -> u32 {
        micros(self.preamble.step_s * self.cycle.len() as f64)
    }

    /// Wait at the trigger, µs.
    pub fn delay_us(&self) -> u32 {
        micros(self.preamble.delay_s)
    }

    /// From the trigger to the loop's first row, µs.
    pub fn loop_from_us(&self) -> u32 {
        let rows = self.start.len() as u64 * u64::from(self.period_us());
        let n = self.cycle.len() as u64;
        let start_us = (2 * rows + n) / (2 * n);
        u32::try_from(start_us + u64::from(self.delay_us())).unwrap_or(u32::MAX)
    }

    /// What goes out on a channel at a time since the loop's first row: in straight lines between
    /// rows, to the nearest count, halves away from zero, in whole numbers only, as the reader in C
    /// has it.
    pub fn loop_at(&self, channel: usize, time_us: u32) -> i32 {
        let n = self.cycle.len();
        self.between(time_us, |row| self.cycle[row % n][channel])
    }

    /// The same at a time since the trigger.
    pub fn start_at(&self, channel: usize, time_us: u32) -> i32 {
        let n = self.cycle.len();
        self.between(time_us.saturating_sub(self.delay_us()), |row| match self.start.get(row) {
            Some(own) => own[channel],
            None => self.cycle[(row - self.start.len()) % n][channel],
        })
    }

    /// The same at a time since the loop's first row when it is to stop.
    pub fn stop_at(&self, channel: usize, time_us: u32) -> i32 {
        self.between(time_us, |row| self.stop[row.min(self.stop.len() - 1)][channel])
    }

    fn between(&self, time_us: u32, count: impl Fn(usize) -> i32) -> i32 {
        let period_us = i64::from(self.period_us());
        let rows = i64::from(time_us) * self.cycle.len() as i64;
        let (row, part) = ((rows / period_us) as usize, rows % period_us);
        let [from, to] = [row, row + 1].map(|row| i64::from(count(row)));
        let sum = from * (period_us - part) + to * part;
        let nearest = (2 * sum.abs() + period_us) / (2 * period_us) * sum.signum();
        nearest as i32
    }

    /// The loop as a gait's table, for a chain with these axes; absent where one has no channel.
    ///
    /// # Errors
    ///
    /// [`GaitError`] as for [`GaitTable::new`].
    pub fn gait_table(
        &self,
        axes: &[AxisOf],
        interpolation: Interpolation,
    ) -> Result<GaitTable, GaitError> {
        let Preamble { channels, scale, step_s, .. } = &self.preamble;
        let column = |of: &AxisOf| {
            let found = channels.iter().position(|channel| channel.of == *of);
            let at =
                found.ok_or(GaitError::ColumnCount { found: channels.len(), axes: axes.len() })?;
            let angle_rad =
                |row: &Vec<i32>| channels[at].angle_rad(scale.unit, scale.value(row[at]));
            Ok(self.cycle.iter().map(angle_rad).collect())
        };
        let axes_rad = axes.iter().map(column).collect::<Result<Vec<Vec<f64>>, GaitError>>()?;
        let radians = |degrees: &Vec<f64>| degrees.iter().map(|deg| deg.to_radians()).collect();
        let [heading, elevation] = match &self.head_deg {
            Some(head) => head.each_ref().map(|degrees| Some(radians(degrees))),
            None => [None, None],
        };
        GaitTable::new(*step_s, axes_rad, heading, elevation, interpolation)
    }
}

fn micros(seconds: f64) -> u32 {
    (seconds * 1e6).round().clamp(0.0, f64::from(u32::MAX)) as u32
}
