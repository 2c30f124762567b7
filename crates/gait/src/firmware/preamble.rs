use undulift_chain::AxisOf;
use undulift_servo::Pulse;

use crate::GaitError;
use crate::firmware::channel::axis_named;
use crate::firmware::{Channel, Scale, Unit};

/// What the first line of every table says.
pub(crate) const MARK: &str = "undulift gait table";

/// What a table says of itself.
#[derive(Debug, Clone, PartialEq)]
pub struct Preamble {
    /// Name of the design.
    pub design: String,
    /// Of the program.
    pub version: String,
    /// Of the design and its files.
    pub input_sha256: String,
    /// What numbers are in.
    pub scale: Scale,
    /// Between rows, s.
    pub step_s: f64,
    /// Wait at the trigger, s.
    pub delay_s: f64,
    /// Of the columns.
    pub channels: Vec<Channel>,
}

impl Preamble {
    /// One row in counts.
    pub(crate) fn counts(&self, axes: &[AxisOf], row_rad: &[f64]) -> Result<Vec<i32>, GaitError> {
        let Self { scale, channels, .. } = self;
        let count = |(at, channel): (usize, &Channel)| {
            let axis_idx = axes
                .iter()
                .position(|of| *of == channel.of)
                .ok_or(GaitError::ColumnCount { found: channels.len(), axes: axes.len() })?;
            let value = channel.value(scale.unit, row_rad[axis_idx]);
            let too_fine = || self.too_fine(at, value / scale.resolution, 32, i64::from(i32::MAX));
            scale.count(value).ok_or_else(too_fine)
        };
        channels.iter().enumerate().map(count).collect()
    }

    pub(crate) fn too_fine(&self, channel: usize, value: f64, bits: u32, most: i64) -> GaitError {
        GaitError::TooFine {
            axis: self.channels[channel].name(),
            value,
            resolution: self.scale.resolution,
            unit: self.scale.unit.word(),
            bits,
            most,
        }
    }

    /// Its lines, as they stand in comments.
    ///
    /// - `rows`: of the block that follows, or of the loop
    pub(crate) fn lines(&self, rows: usize) -> Vec<String> {
        let Scale { unit, resolution } = self.scale;
        let mut lines = vec![
            format!("{MARK}, {}", self.version),
            format!("design: {}", in_comment(&self.design)),
            format!("input_sha256: {}", self.input_sha256),
            format!("unit: {}", unit.word()),
            format!("resolution: {resolution}"),
            format!("step_s: {}", self.step_s),
            format!("rows: {rows}"),
            format!("delay_s: {}", self.delay_s),
        ];
        lines.extend(self.channels.iter().map(|channel| {
            let Pulse { minus_90_us, centre_us, plus_90_us } = channel.pulse;
            let turned = if channel.reversed { "reversed" } else { "as-is" };
            let own = format!("channel: {} {} {turned}", channel.number, channel.name());
            match unit {
                Unit::Us => {
                    let offset_us = channel.offset_us;
                    format!("{own} {offset_us} {minus_90_us} {centre_us} {plus_90_us}")
                }
                _ => own,
            }
        }));
        lines
    }

    /// Reads lines back, each with its number.
    pub(crate) fn read(lines: &[(usize, &str)]) -> Result<Self, GaitError> {
        let first = |key: &str| {
            let line = lines.iter().find_map(|&(line, text)| Some((line, entry(text, key)?)));
            line.ok_or_else(|| GaitError::Text {
                line: 0,
                why: format!("the line `{key}: …` is missing from the table's comments"),
            })
        };
        let number = |key: &str| {
            let (line, text) = first(key)?;
            let value = text.parse::<f64>().ok().filter(|value| value.is_finite());
            value.ok_or_else(|| wrong(line, text, &format!("`{key}` must be a number")))
        };
        let (unit_line, unit) = first("unit")?;
        let known = Unit::ALL.into_iter().find(|known| known.word() == unit);
        let unit = known.ok_or_else(|| wrong(unit_line, unit, "units are deg, cdeg, rad, us"))?;
        let resolution = number("resolution")?;
        if resolution <= 0.0 {
            return Err(wrong(first("resolution")?.0, "", "the resolution must be above 0"));
        }
        let of_channels =
            lines.iter().filter_map(|&(line, text)| Some((line, entry(text, "channel")?)));
        let channel = |(line, text)| {
            let wanted = "a channel is `NUMBER AXIS_JOINT as-is`, or reversed, with offset and three pulses in us";
            channel_of(text).ok_or_else(|| wrong(line, text, wanted))
        };
        Ok(Self {
            design: first("design")?.1.to_owned(),
            version: lines
                .first()
                .and_then(|(_, text)| text.split(", ").nth(1))
                .unwrap_or("")
                .into(),
            input_sha256: first("input_sha256")?.1.to_owned(),
            scale: Scale { unit, resolution },
            step_s: number("step_s")?,
            delay_s: number("delay_s")?,
            channels: of_channels.map(channel).collect::<Result<_, _>>()?,
        })
    }
}

fn wrong(line: usize, found: &str, wanted: &str) -> GaitError {
    GaitError::Text { line, why: format!("`{found}` can't be read: {wanted}") }
}

fn entry<'t>(text: &'t str, key: &str) -> Option<&'t str> {
    text.strip_prefix(key)?.strip_prefix(':').map(str::trim)
}

fn channel_of(text: &str) -> Option<Channel> {
    let words: Vec<&str> = text.split_whitespace().collect();
    let [number, name, turned, numbers @ ..] = &words[..] else { return None };
    let numbers: Vec<f64> = numbers.iter().map(|word| word.parse().ok()).collect::<Option<_>>()?;
    let usual = Pulse::default();
    let (offset_us, minus_90_us, centre_us, plus_90_us) = match numbers[..] {
        [offset_us, minus_90_us, centre_us, plus_90_us] => {
            (offset_us, minus_90_us, centre_us, plus_90_us)
        }
        [] => (0.0, usual.minus_90_us, usual.centre_us, usual.plus_90_us),
        _ => return None,
    };
    let rises = (plus_90_us - centre_us) * (centre_us - minus_90_us) > 0.0;
    let reversed = match *turned {
        "as-is" => false,
        "reversed" => true,
        _ => return None,
    };
    rises.then_some(Channel {
        number: number.parse().ok()?,
        of: axis_named(name)?,
        reversed,
        offset_us,
        pulse: Pulse { minus_90_us, centre_us, plus_90_us },
    })
}

/// A name on one line that ends no comment.
pub(crate) fn in_comment(text: &str) -> String {
    let line: String = text.chars().map(|c| if c.is_control() { ' ' } else { c }).collect();
    line.replace("*/", "* /")
        .replace("/*", "/ *")
        .replace('\\', "/")
        .replace("??", "? ?")
        .trim()
        .to_owned()
}
