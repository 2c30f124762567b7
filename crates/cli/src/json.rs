//! What scripts read.

use serde_json::{Map, Value, json};
use undulift_design::Design;
use undulift_design::quantities::Quantity;
use undulift_flight::Spread;

use crate::terminal;

/// What every object begins with.
pub fn heading(design: &Design) -> Map<String, Value> {
    let mut object = Map::new();
    object.insert("design".into(), json!(design.name));
    object.insert("version".into(), json!(env!("CARGO_PKG_VERSION")));
    object.insert("input_sha256".into(), json!(design.input_sha256));
    object
}

/// A printed quantity.
pub fn value(quantity: Quantity) -> Value {
    match quantity {
        Quantity::Number(value) => json!(value),
        Quantity::None => Value::Null,
        Quantity::Band(ends) => json!(ends),
        Quantity::Word(word) => json!(word),
    }
}

/// Prints an object where one design was asked for, a list for several.
pub fn print(mut objects: Vec<Value>, asked: usize) -> anyhow::Result<()> {
    let value = match objects.len() {
        0 => return Ok(()),
        1 if asked == 1 => objects.remove(0),
        _ => Value::Array(objects),
    };
    terminal::answer(&format!("{value:#}\n"))
}

/// What many launches come to.
pub fn percentiles(spread: &Spread) -> Value {
    let Spread { p05, p50, p95 } = spread;
    json!({ "p05": p05, "p50": p50, "p95": p95 })
}
