use serde_json::{Value, json};

use crate::firmware::{Channel, FirmwareTable, Unit};

/// A table as one JSON object, its numbers in its unit.
pub fn json_text(table: &FirmwareTable) -> String {
    let preamble = &table.preamble;
    let scale = preamble.scale;
    let rows = |rows: &[Vec<i32>]| -> Value {
        let row = |row: &Vec<i32>| row.iter().map(|&count| json!(scale.value(count))).collect();
        rows.iter().map(row).collect::<Vec<Value>>().into()
    };
    let head = table.head_deg.as_ref();
    let object = json!({
        "design": preamble.design,
        "version": preamble.version,
        "input_sha256": preamble.input_sha256,
        "unit": scale.unit.word(),
        "resolution": scale.resolution,
        "step_s": preamble.step_s,
        "period_s": preamble.step_s * table.cycle.len() as f64,
        "channels": preamble.channels.iter().map(|one| channel(one, scale.unit)).collect::<Vec<_>>(),
        "start": { "delay_s": preamble.delay_s, "rows": rows(&table.start) },
        "loop": {
            "rows": rows(&table.cycle),
            "head_heading_deg": head.map(|[heading, _]| heading),
            "head_elevation_deg": head.map(|[_, elevation]| elevation),
        },
        "stop": { "rows": rows(&table.stop) },
    });
    format!("{object}\n")
}

fn channel(channel: &Channel, unit: Unit) -> Value {
    let mut object = json!({
        "channel": channel.number,
        "joint": channel.of.joint_idx + 1,
        "axis": channel.of.axis.word(),
        "reversed": channel.reversed,
    });
    if unit == Unit::Us {
        object["offset_us"] = json!(channel.offset_us);
        object["pulse_us"] = json!({
            "minus_90": channel.pulse.minus_90_us,
            "centre": channel.pulse.centre_us,
            "plus_90": channel.pulse.plus_90_us,
        });
    }
    object
}
