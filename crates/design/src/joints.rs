//! The joints: their axes, their travel and the servos that drive them.

use undulift_chain::{Axis, Joint};

use crate::DesignError;
use crate::body::per_joint;
use crate::nearest::nearest;
use crate::node::{Node, shortened};
use crate::range::Range;
use crate::servo::NO_SERVO;
use crate::table::Table;

const TRAVEL_DEG: Range = Range::above_0_to(180.0);

/// Words for one joint, with whether it yaws and whether it pitches.
const JOINT_KINDS: [(&str, [bool; 2]); 4] = [
    ("universal", [true, true]),
    ("yaw", [true, false]),
    ("pitch", [false, true]),
    ("fixed", [false, false]),
];

/// Words for all joints: what joints 1, 3, 5… and what joints 2, 4, 6… are.
const CHAIN_KINDS: [(&str, [[bool; 2]; 2]); 4] = [
    ("universal", [[true, true]; 2]),
    ("alternate", [[true, false], [false, true]]),
    ("yaw", [[true, false]; 2]),
    ("pitch", [[false, true]; 2]),
];

/// Which servo drives which joint: names of entries in the design's servos.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct ServoNames {
    /// Joints from the head; absent where the joint has no yaw axis, or no servo.
    pub yaw: Vec<Option<String>>,
    /// Likewise for pitch.
    pub pitch: Vec<Option<String>>,
}

impl ServoNames {
    /// The servo that drives an axis of a joint.
    ///
    /// - `joint_idx`: from 0 at the head
    pub fn of(&self, joint_idx: usize, axis: Axis) -> Option<&str> {
        let names = match axis {
            Axis::Yaw => &self.yaw,
            Axis::Pitch => &self.pitch,
        };
        names.get(joint_idx)?.as_deref()
    }
}

/// What `[joints]` says, where nothing is wrong with it.
#[derive(Debug)]
pub(crate) struct Joints {
    pub(crate) joints: Option<Vec<Joint>>,
    pub(crate) servo_names: ServoNames,
}

/// - `segments`: in the body, where that is known
/// - `defined`: names of all servos of design and catalogue, where they are known
pub(crate) fn read_joints(
    table: Table<'_>,
    segments: Option<u32>,
    defined: Option<&[String]>,
) -> Joints {
    let count = per_joint(segments);
    let wanted = "\"universal\", \"alternate\", \"yaw\", \"pitch\" or a list with one a joint";
    let kinds = table.need("axes", wanted).and_then(|node| read_kinds(&node, segments));
    let travel_rad = |key: &str| -> Option<Vec<f64>> {
        let travels = table.get(key)?.number_or_numbers(TRAVEL_DEG, &count)?;
        Some(travels.into_iter().map(f64::to_radians).collect())
    };
    let travels_rad = [travel_rad("yaw_travel_deg"), travel_rad("pitch_travel_deg")];
    let names = |axis_idx: usize, key: &str| {
        let node = table.get(key)?;
        read_names(&node, segments, defined, kinds.as_deref(), axis_idx)
    };
    let servo_names = ServoNames {
        yaw: names(0, "yaw_servo").unwrap_or_default(),
        pitch: names(1, "pitch_servo").unwrap_or_default(),
    };
    table.finish();
    let [yaw_travels_rad, pitch_travels_rad] = travels_rad;
    let joint = |(joint_idx, [yaw, pitch]): (usize, [bool; 2])| Joint {
        yaw,
        pitch,
        yaw_travel_rad: yaw_travels_rad.as_ref().map(|travels| travels[joint_idx]),
        pitch_travel_rad: pitch_travels_rad.as_ref().map(|travels| travels[joint_idx]),
    };
    let joints = kinds.map(|kinds| kinds.into_iter().enumerate().map(joint).collect());
    Joints { joints, servo_names }
}

fn read_kinds(node: &Node<'_>, segments: Option<u32>) -> Option<Vec<[bool; 2]>> {
    let count = per_joint(segments);
    if node.is_text() {
        let turns = node.word(&CHAIN_KINDS)?;
        return Some((0..count.items?).map(|joint_idx| turns[joint_idx % 2]).collect());
    }
    let items = node.items("a word, or a list of words", &count)?;
    let kinds: Vec<_> = items.iter().map(|item| item.word(&JOINT_KINDS)).collect();
    if count.items == Some(kinds.len()) { kinds.into_iter().collect() } else { None }
}

/// Names over the joints, where all of them make sense.
fn read_names(
    node: &Node<'_>,
    segments: Option<u32>,
    defined: Option<&[String]>,
    kinds: Option<&[[bool; 2]]>,
    axis_idx: usize,
) -> Option<Vec<Option<String>>> {
    if !node.is_list() {
        let name = read_name(node, defined)?;
        let over_joints = kinds?.iter().map(|kind| name.clone().filter(|_| kind[axis_idx]));
        return Some(over_joints.collect());
    }
    let count = per_joint(segments);
    let wanted = "the name of a servo, or a list with one a joint";
    let items = node.items(wanted, &count)?;
    let names: Vec<_> = items.iter().map(|item| read_name(item, defined)).collect();
    for (joint_idx, (item, name)) in items.iter().zip(&names).enumerate() {
        let lacks =
            kinds.and_then(|kinds| kinds.get(joint_idx)).is_some_and(|kind| !kind[axis_idx]);
        if let Some(Some(name)) = name
            && lacks
        {
            let axis = Axis::BOTH[axis_idx].word();
            let why = format!("joint {} has no {axis} axis for \"{name}\" to drive", joint_idx + 1);
            item.note(DesignError::Disagree { why, remedy: "write \"none\" there" });
        }
    }
    if count.items == Some(names.len()) { names.into_iter().collect() } else { None }
}

fn read_name(node: &Node<'_>, defined: Option<&[String]>) -> Option<Option<String>> {
    let name = node.text_as("the name of a servo")?;
    if name == NO_SERVO {
        return Some(None);
    }
    let Some(defined) = defined.filter(|defined| !defined.iter().any(|own| own == name)) else {
        return Some(Some(name.to_owned()));
    };
    node.note(DesignError::Undefined {
        what: "servo",
        name: shortened(name),
        nearest: nearest(name, defined.iter().map(String::as_str)),
        remedy: format!(
            "add a [servo.{}] table here or in the file that `servos` names",
            shortened(name)
        ),
    });
    None
}
