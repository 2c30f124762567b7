//! `[wiring]`: which output of the board each servo is on.

use undulift_chain::{Axis, AxisOf, joint_axes};
use undulift_gait::firmware::Channel;
use undulift_servo::Pulse;

use crate::document::{Document, source_of};
use crate::key_path::KeyPath;
use crate::node::{Count, Node};
use crate::range::Range;
use crate::table::Table;
use crate::{Design, DesignError, DesignErrors};

/// Furthest that a servo turns each way, where its joint's travel says nothing, degrees.
const SERVO_TRAVEL_DEG: f64 = 90.0;

impl Design {
    /// The board's outputs in their order, each with the axis that it turns.
    ///
    /// Without a `[wiring]` they are numbered in the order of [`joint_axes`]. An axis without a servo
    /// has the usual pulses.
    ///
    /// # Errors
    ///
    /// All mistakes in `[wiring]`.
    pub fn wiring(&self) -> Result<Vec<Channel>, DesignErrors> {
        let axes = joint_axes(self.glider.chain.joints());
        let path = self.origin.path();
        let fail = |mistakes| DesignErrors::new(path.display().to_string(), mistakes);
        let source = source_of(path, self.text.clone());
        let document = Document::parse(&source).map_err(fail)?;
        let table = Table::top(&document).table("wiring");
        let mut channels: Vec<Channel> = if table.is_given() {
            Axis::BOTH.into_iter().flat_map(|axis| self.wires(&table, axis, &axes)).collect()
        } else {
            let numbered = (0..=u8::MAX).zip(&axes);
            numbered.map(|(number, &of)| self.channel(number, of)).collect()
        };
        table.finish();
        note_shared(&document, &channels);
        let mistakes = document.into_mistakes();
        channels.sort_by_key(|channel| channel.number);
        if mistakes.is_empty() { Ok(channels) } else { Err(fail(mistakes)) }
    }

    fn channel(&self, number: u8, of: AxisOf) -> Channel {
        let servo = self.servo_names.of(of.joint_idx, of.axis);
        let servo = servo.and_then(|name| self.servos.get(name));
        let pulse = servo.map_or(Pulse::default(), |servo| servo.pulse);
        Channel { pulse, ..Channel::plain(number, of) }
    }

    /// Channels of one axis, as far as they make sense.
    fn wires(&self, wiring: &Table<'_>, axis: Axis, axes: &[AxisOf]) -> Vec<Channel> {
        let axes: Vec<AxisOf> = axes.iter().copied().filter(|of| of.axis == axis).collect();
        if axes.is_empty() && !wiring.holds(axis.word()) {
            wiring.leave(axis.word());
            return vec![];
        }
        let table = wiring.need_table(axis.word());
        let (items, turn) =
            (axes.len(), if axes.len() == 1 { "joint turns" } else { "joints turn" });
        let why = format!("{items} {turn} in {}", axis.word());
        let count =
            Count { items: Some(items), why, decided_by: Some(KeyPath::of(["joints", "axes"])) };
        let wanted = "a list of whole numbers from 0 to 255";
        let numbers = table.need("channel", wanted).and_then(|node| node.items(wanted, &count));
        let wanted = "a list of true and false";
        let reversed = table.get("reversed").and_then(|node| node.items(wanted, &count));
        let wanted = "a list of numbers in µs";
        let offsets_us = table.get("offset_us").and_then(|node| node.items(wanted, &count));
        table.finish();
        let numbers = numbers.unwrap_or_default();
        let numbers: Vec<Option<u32>> = numbers.iter().map(|node| node.whole(0..=255)).collect();
        let reversed: Vec<Option<bool>> =
            reversed.iter().flatten().map(|node| node.boolean()).collect();
        let offsets_us = offsets_us.iter().flatten().zip(&axes);
        let offsets_us: Vec<Option<f64>> =
            offsets_us.map(|(node, &of)| self.offset_us(node, of)).collect();
        let wires = axes.iter().zip(numbers).enumerate();
        let channel = |(at, (&of, number)): (usize, (&AxisOf, Option<u32>))| {
            Some(Channel {
                reversed: reversed.get(at).copied().flatten().unwrap_or(false),
                offset_us: offsets_us.get(at).copied().flatten().unwrap_or(0.0),
                ..self.channel(u8::try_from(number?).ok()?, of)
            })
        };
        wires.filter_map(channel).collect()
    }

    /// An offset that leaves the servo within its joint's travel.
    fn offset_us(&self, node: &Node<'_>, of: AxisOf) -> Option<f64> {
        let offset_us = node.number(Range::within(20_000.0))?;
        let channel = Channel { offset_us, ..self.channel(0, of) };
        let turned_deg = channel.trim_rad().abs().to_degrees();
        let travel_rad = self.glider.chain.joints()[of.joint_idx].travel_rad(of.axis);
        let travel_deg = travel_rad.map_or(SERVO_TRAVEL_DEG, f64::to_degrees);
        if turned_deg > travel_deg {
            let why = format!(
                "{offset_us} µs turn the servo of joint {} by {turned_deg:.1}°, beyond its {} travel of \
                 {travel_deg:.1}°",
                of.joint_idx + 1,
                of.axis.word()
            );
            let remedy = "an offset makes up for the few degrees by which a horn sits off its mark; \
                          seat the horn anew, or check the unit (µs)";
            node.note(DesignError::Disagree { why, remedy });
        }
        Some(offset_us)
    }
}

/// Notes channels that are given twice.
fn note_shared(document: &Document<'_>, channels: &[Channel]) {
    let mut seen_of_axis = [0, 0];
    for (at, channel) in channels.iter().enumerate() {
        let axis_idx = usize::from(channel.of.axis == Axis::Pitch);
        let item = seen_of_axis[axis_idx];
        seen_of_axis[axis_idx] += 1;
        let first = channels[..at].iter().find(|first| first.number == channel.number);
        if let Some(first) = first {
            let why = format!("channel {} turns {} already", channel.number, first.name());
            let remedy = "give every joint a channel of its own";
            let path = KeyPath::of(["wiring", channel.of.axis.word(), "channel"]).item(item);
            document.note(
                &path,
                crate::document::Mark::Value,
                &[],
                DesignError::Disagree { why, remedy },
            );
        }
    }
}
