//! A design's text with other servos.

use toml_edit::{Array, DocumentMut, Item, Table, TableLike, TomlError, Value};
use undulift_chain::Axis;
use undulift_design::Design;
use undulift_servo::Servo;

use crate::{Choice, driven};

/// Keys of `[joints]` that name servos, in the order of the axes.
const KEYS: [&str; 2] = ["yaw_servo", "pitch_servo"];

/// A design's text with servos of a catalogue written into it, and no others; what differed from
/// launch to launch in servos that are gone is left out, all other comments and tables stay.
///
/// - `design`: whose text it is
/// - `catalogue`: its text
/// - `shelf`: its servos, to whose places the choice refers
///
/// # Errors
///
/// Where one of the texts isn't TOML.
pub fn with_servos(
    design: &Design,
    text: &str,
    catalogue: &str,
    shelf: &[Servo],
    choice: &Choice,
) -> Result<String, TomlError> {
    let mut document: DocumentMut = text.parse()?;
    let catalogue: DocumentMut = catalogue.parse()?;
    let driven = driven(design).unwrap_or_default();
    let n_joints = design.glider.chain.joints().len();
    let mut chosen = Vec::new();
    for (axis, key) in Axis::BOTH.into_iter().zip(KEYS) {
        let names: Vec<Option<&str>> = (0..n_joints)
            .map(|joint_idx| choice.servo_of(&driven, joint_idx, axis))
            .map(|servo| servo.map(|servo| shelf[servo].name.as_str()))
            .collect();
        chosen.extend(names.iter().copied().flatten());
        let joints = document.get_mut("joints").and_then(Item::as_table_like_mut);
        if let Some(joints) = joints.filter(|_| names.iter().any(Option::is_some)) {
            put(joints, key, named(&names, design, axis));
        }
    }
    chosen.sort_unstable();
    chosen.dedup();
    document.remove("servos");
    let mut servos = Table::new();
    servos.set_implicit(true);
    for name in chosen {
        if let Some(mut servo) = catalogue.get("servo").and_then(|all| all.get(name)).cloned() {
            if let Some(table) = servo.as_table_mut() {
                // Its place among the catalogue's tables means nothing here.
                table.set_position(None);
                // The catalogue's first servo stands below words about all of them.
                let prefix = table.decor().prefix().and_then(|text| text.as_str()).unwrap_or("");
                let own = prefix.rsplit("\n\n").next().unwrap_or("").trim_start().to_owned();
                table.decor_mut().set_prefix(format!("\n{own}"));
            }
            servos.insert(name, servo);
        }
    }
    document.insert("servo", Item::Table(servos));
    forget_servos(&mut document);
    Ok(document.to_string())
}

/// One name where all joints that turn have it, else a list with one a joint.
fn named(names: &[Option<&str>], design: &Design, axis: Axis) -> Value {
    let turning = |joint_idx: usize| design.glider.chain.joints()[joint_idx].has(axis);
    let mut over_turning = (0..names.len()).filter(|&idx| turning(idx)).map(|idx| names[idx]);
    let first = over_turning.next().flatten();
    match first {
        Some(name) if over_turning.all(|other| other == first) => name.into(),
        _ => names.iter().map(|name| name.unwrap_or("none")).collect::<Array>().into(),
    }
}

fn put(table: &mut dyn TableLike, key: &str, mut value: Value) {
    if let Some(old) = table.get(key).and_then(Item::as_value) {
        *value.decor_mut() = old.decor().clone();
    }
    table.insert(key, Item::Value(value));
}

fn forget_servos(document: &mut DocumentMut) {
    let Some(spread) = document.get_mut("spread").and_then(Item::as_table_like_mut) else { return };
    let keys = spread.iter().map(|(key, _)| key.to_owned());
    let gone: Vec<String> = keys.filter(|key| key.starts_with("servo.")).collect();
    for key in gone {
        spread.remove(&key);
    }
}
