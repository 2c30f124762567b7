use std::fmt::Write;

use crate::GaitError;
use crate::firmware::preamble::in_comment;
use crate::firmware::{Block, FirmwareTable, Unit};

/// Three `trajectory_msgs/JointTrajectory` messages as YAML documents: start, loop, return to rest.
///
/// Each takes over where the one before it ended: a message's first point comes after the time to
/// get there. The loop's ends with its first row, so that it can be sent again and again.
///
/// # Errors
///
/// [`GaitError::MessageUnit`] in another unit than radians.
///
/// # Source
///
/// The message definitions of ROS 2, `common_interfaces`: trajectory_msgs/msg/JointTrajectory,
/// JointTrajectoryPoint; `rcl_interfaces`: builtin_interfaces/msg/Duration.
pub fn trajectory_text(table: &FirmwareTable) -> Result<String, GaitError> {
    let preamble = &table.preamble;
    if preamble.scale.unit != Unit::Rad {
        return Err(GaitError::MessageUnit { unit: preamble.scale.unit.word() });
    }
    let mut text = String::new();
    for line in preamble.lines(table.cycle.len()) {
        let _ = writeln!(text, "# {line}");
    }
    let names: Vec<String> = preamble.channels.iter().map(|channel| channel.name()).collect();
    for block in Block::ALL {
        let _ = write!(
            text,
            "---\n# {}: {}\nheader:\n  stamp: {{sec: 0, nanosec: 0}}\n  frame_id: ''\n\
             joint_names: [{}]\npoints:\n",
            in_comment(&preamble.design),
            block.word(),
            names.join(", ")
        );
        for (time_s, row) in points(table, block) {
            text.push_str(&point(table, time_s, row));
        }
    }
    Ok(text)
}

/// Times from a message's start, s, and rows.
fn points(table: &FirmwareTable, block: Block) -> Vec<(f64, &Vec<i32>)> {
    let step_s = table.preamble.step_s;
    let (from_s, first, rows): (f64, usize, Vec<&Vec<i32>>) = match block {
        Block::Start => {
            (table.preamble.delay_s, 0, table.start.iter().chain(table.cycle.first()).collect())
        }
        Block::Loop => (0.0, 1, table.cycle.iter().skip(1).chain(table.cycle.first()).collect()),
        Block::Stop => (0.0, 1, table.stop.iter().skip(1).collect()),
    };
    let timed = rows.into_iter().enumerate();
    timed.map(|(k, row)| (from_s + step_s * (first + k) as f64, row)).collect()
}

fn point(table: &FirmwareTable, time_s: f64, row: &[i32]) -> String {
    let scale = table.preamble.scale;
    // A point is a number in YAML, also to readers that take 0 for a whole one.
    let number = |&count: &i32| format!("{:?}", scale.value(count));
    let positions: Vec<String> = row.iter().map(number).collect();
    let nanos = (time_s * 1e9).round() as u64;
    format!(
        "- positions: [{}]\n  velocities: []\n  accelerations: []\n  effort: []\n  \
         time_from_start: {{sec: {}, nanosec: {}}}\n",
        positions.join(", "),
        nanos / 1_000_000_000,
        nanos % 1_000_000_000
    )
}
