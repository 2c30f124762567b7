use undulift_chain::AxisOf;

use crate::firmware::FirmwareTable;
use crate::{Commands, Instant, Interpolation};

/// Looks between two rows.
const LOOKS: usize = 16;

/// Where a table is furthest from its gait.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Deviation {
    /// Of its channels.
    pub channel: usize,
    /// How far, rad.
    pub angle_rad: f64,
}

impl FirmwareTable {
    /// Where the loop, run through as firmware does, is furthest from the gait it was made of.
    pub fn deviation(
        &self,
        commands: &Commands,
        axes: &[AxisOf],
        between: Interpolation,
    ) -> Deviation {
        let from_s = super::blocks::steady_from_s(commands.clock());
        let mut motion = commands.room();
        let mut worst = Deviation { channel: 0, angle_rad: 0.0 };
        let n = self.cycle.len();
        for look in 0..n * LOOKS {
            let (row, part) = (look / LOOKS, (look % LOOKS) as f64 / LOOKS as f64);
            let at_s = from_s + self.preamble.step_s * (row as f64 + part);
            commands.rates(Instant::at(at_s), &mut motion);
            for (channel, of) in self.preamble.channels.iter().enumerate() {
                let Some(axis_idx) = axes.iter().position(|axis| *axis == of.of) else { continue };
                let [a, b] = [row, (row + 1) % n].map(|row| self.angle_rad(channel, row));
                let told_rad = if between == Interpolation::Hold { a } else { a + part * (b - a) };
                let angle_rad = (told_rad - motion.angles_rad[axis_idx]).abs();
                if angle_rad > worst.angle_rad {
                    worst = Deviation { channel, angle_rad };
                }
            }
        }
        worst
    }

    /// Of the joint that a channel turns, in a row of the loop, rad.
    fn angle_rad(&self, channel: usize, row: usize) -> f64 {
        let preamble = &self.preamble;
        let value = preamble.scale.value(self.cycle[row][channel]);
        preamble.channels[channel].angle_rad(preamble.scale.unit, value)
    }
}
