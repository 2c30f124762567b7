//! A design on its way to a table.

use std::path::{Path, PathBuf};

use undulift_chain::{AxisOf, joint_axes};
use undulift_design::{Design, Servo};
use undulift_gait::firmware::{
    Block, Blocks, Board, Channel, Ends, FirmwareTable, Miss, Preamble, Reach, Scale, Unit,
    c_header, csv_text, json_text, misses, trajectory_text, whole_frames,
};
use undulift_gait::{Commands, GaitError, Interpolation};
use undulift_servo::Load;

use crate::args::{Between, Table as Args, TableFormat, TableUnit};

/// Between the pulses of model servos, s (common practice; no source).
const USUAL_FRAME_S: f64 = 0.02;

/// A design, and what its table has to keep to.
pub struct Job<'a> {
    pub args: &'a Args,
    pub design: Design,
    pub commands: Commands,
    pub axes: Vec<AxisOf>,
    /// As the board has them.
    pub wiring: Vec<Channel>,
    /// Of the table's columns.
    pub channels: Vec<Channel>,
    /// By channel.
    reaches: Vec<Reach>,
}

impl<'a> Job<'a> {
    pub fn new(
        args: &'a Args,
        design: Design,
        commands: Commands,
        wiring: Vec<Channel>,
    ) -> anyhow::Result<Self> {
        let axes = joint_axes(design.glider.chain.joints());
        let mut job =
            Self { args, design, commands, axes, wiring, channels: vec![], reaches: vec![] };
        anyhow::ensure!(
            !job.axes.is_empty(),
            "{}: no joint turns, so there is nothing to write",
            job.design.name
        );
        let unit = job.unit();
        job.check_unit(unit)?;
        job.channels = if unit == Unit::Us || args.format == TableFormat::C {
            job.wiring.clone()
        } else {
            (0..=u8::MAX).zip(&job.axes).map(|(number, &of)| Channel::plain(number, of)).collect()
        };
        job.reaches = job.channels.iter().map(|channel| job.reach(channel.of)).collect();
        Ok(job)
    }

    fn servo(&self, of: AxisOf) -> Option<&Servo> {
        let name = self.design.servo_names.of(of.joint_idx, of.axis)?;
        self.design.servos.get(name)
    }

    fn unit(&self) -> Unit {
        let all_servos = self.axes.iter().all(|&of| self.servo(of).is_some());
        match (self.args.unit, self.args.format) {
            (Some(TableUnit::Deg), _) => Unit::Deg,
            (Some(TableUnit::Cdeg), _) => Unit::Cdeg,
            (Some(TableUnit::Rad), _) => Unit::Rad,
            (Some(TableUnit::Us), _) => Unit::Us,
            (None, TableFormat::C) if all_servos => Unit::Us,
            (None, TableFormat::C) => Unit::Cdeg,
            (None, TableFormat::JointTrajectory) => Unit::Rad,
            (None, TableFormat::Csv | TableFormat::Json) => Unit::Deg,
        }
    }

    fn check_unit(&self, unit: Unit) -> anyhow::Result<()> {
        let lacking = self.axes.iter().find(|&&of| self.servo(of).is_none());
        if let (Unit::Us, Some(of)) = (unit, lacking) {
            anyhow::bail!(
                "joint {} has no {} servo, so nothing says its pulses; name one in [joints], or choose \
                 --unit deg, cdeg or rad",
                of.joint_idx + 1,
                of.axis.word()
            );
        }
        if self.args.format == TableFormat::JointTrajectory && unit != Unit::Rad {
            return Err(GaitError::MessageUnit { unit: unit.word() }.into());
        }
        Ok(())
    }

    /// What an axis can do: its travel, and its servo's speed at the battery's voltage.
    fn reach(&self, of: AxisOf) -> Reach {
        let supply = self.design.battery.as_ref().map(|battery| &battery.supply);
        let fed = supply.and_then(|supply| supply.feed(supply.charge, Load::default()).ok());
        let speed_rad_s = self.servo(of).map(|servo| {
            let voltage_v = fed.map_or(servo.at_voltage_v, |fed| fed.servo_voltage_v);
            servo.unloaded_speed_rad_s(servo.cold_supply(voltage_v)).max(0.0)
        });
        let travel_rad = self.design.glider.chain.joints()[of.joint_idx].travel_rad(of.axis);
        Reach { speed_rad_s, travel_rad }
    }

    pub fn between(&self) -> Interpolation {
        match self.args.between {
            Between::Linear => Interpolation::Linear,
            Between::Hold => Interpolation::Hold,
        }
    }

    pub fn scale(&self) -> Scale {
        let fine = Scale::fine(self.unit());
        Scale { resolution: self.args.resolution.unwrap_or(fine.resolution), ..fine }
    }

    pub fn n_rows(&self) -> Result<usize, GaitError> {
        let frequency_hz = self.commands.clock().frequency_hz;
        if frequency_hz <= 0.0 {
            return Err(GaitError::Stands);
        }
        match (self.args.rate, self.args.steps) {
            (Some(rate_hz), _) => whole_frames(frequency_hz, rate_hz),
            (None, Some(steps)) => Ok(steps as usize),
            (None, None) => Ok(self.most_rows()),
        }
    }

    /// Between pulses, s.
    fn frame_s(&self) -> f64 {
        let own_s = self.design.update_hz.map(|update_hz| 1.0 / update_hz);
        self.args.frame_ms.map(|ms| ms * 1e-3).or(own_s).unwrap_or(USUAL_FRAME_S)
    }

    /// As many as pulses come in a period.
    pub fn most_rows(&self) -> usize {
        let frames = 1.0 / (self.commands.clock().frequency_hz * self.frame_s());
        ((frames + 1e-9) as usize).clamp(2, 65_535)
    }

    pub fn table(&self, n_rows: usize, scale: Scale) -> Result<(Blocks, FirmwareTable), GaitError> {
        let speed = |of: &AxisOf| self.reach(*of).speed_rad_s;
        let ends = Ends {
            start_s: self.args.start_s,
            delay_s: self.args.delay_s,
            speeds_rad_s: self.axes.iter().map(speed).collect(),
        };
        let blocks = Blocks::of(&self.commands, n_rows, &ends)?;
        let preamble = Preamble {
            design: self.design.name.clone(),
            version: env!("CARGO_PKG_VERSION").into(),
            input_sha256: self.design.input_sha256.clone(),
            scale,
            step_s: blocks.step_s,
            delay_s: blocks.delay_s,
            channels: self.channels.clone(),
        };
        let table = FirmwareTable::of(preamble, &self.axes, &blocks)?;
        Ok((blocks, table))
    }

    fn board(&self) -> Board {
        let driven = self.axes.iter().any(|&of| self.servo(of).is_some());
        Board {
            pulse_frame_s: driven.then_some(self.frame_s()),
            flash_bytes: self.args.flash_kb.map(|kb| (kb * 1024.0) as usize),
        }
    }

    pub fn misses(&self, blocks: &Blocks, table: &FirmwareTable) -> Vec<Miss> {
        misses(table, blocks, &self.reaches, &self.axes, self.board())
    }

    pub fn files(&self, table: &FirmwareTable) -> Result<Vec<(PathBuf, String)>, GaitError> {
        let out = &self.args.out;
        Ok(match self.args.format {
            TableFormat::Csv => {
                let file = |block| (beside(out, block), csv_text(table, block));
                Block::ALL.map(file).to_vec()
            }
            TableFormat::C => vec![(out.clone(), c_header(table, self.between())?)],
            TableFormat::JointTrajectory => vec![(out.clone(), trajectory_text(table)?)],
            TableFormat::Json => vec![(out.clone(), json_text(table))],
        })
    }
}

/// Where a block of a csv goes.
fn beside(out: &Path, block: Block) -> PathBuf {
    if block == Block::Loop {
        return out.to_owned();
    }
    let stem = out.file_stem().unwrap_or_default().to_string_lossy();
    let end = out.extension().map(|end| format!(".{}", end.to_string_lossy())).unwrap_or_default();
    out.with_file_name(format!("{stem}-{}{end}", block.word()))
}
