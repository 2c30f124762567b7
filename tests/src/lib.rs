//! What the tests of the whole program share: reference data, and chains made from it.
//!
//! The tests themselves stand in `tests/`, the data in `data/` with a README that says who made it.

pub mod chains;
pub mod gliders;
pub mod landscapes;

use std::path::PathBuf;

use serde::de::DeserializeOwned;

/// A file of `tests/data`.
pub fn data_file(name: &str) -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("data").join(name)
}

/// Reads a JSON file of `tests/data`.
pub fn read_json<T: DeserializeOwned>(name: &str) -> T {
    let path = data_file(name);
    let text = std::fs::read_to_string(&path).unwrap_or_else(|e| panic!("{}: {e}", path.display()));
    serde_json::from_str(&text).unwrap_or_else(|e| panic!("{}: {e}", path.display()))
}

/// Largest absolute difference over the largest absolute value of the second.
pub fn relative_difference(found: &[f64], expected: &[f64]) -> f64 {
    assert_eq!(found.len(), expected.len());
    let largest = expected.iter().fold(0.0_f64, |largest, v| largest.max(v.abs()));
    let apart = found.iter().zip(expected).fold(0.0_f64, |apart, (a, b)| apart.max((a - b).abs()));
    if largest > 0.0 { apart / largest } else { apart }
}
