//! Runs the command from the project's root.

#![allow(dead_code, reason = "each test file uses its own part")]

use std::path::{Path, PathBuf};
use std::process::{Command, Output};

use serde_json::Value;

pub fn root() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("../..")
}

pub fn undulift(args: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_undulift"))
        .args(args)
        .current_dir(root())
        .output()
        .expect("the command runs")
}

pub fn answer(output: &Output) -> String {
    String::from_utf8(output.stdout.clone()).expect("UTF-8")
}

pub fn complaint(output: &Output) -> String {
    String::from_utf8(output.stderr.clone()).expect("UTF-8")
}

pub fn json(args: &[&str]) -> Value {
    serde_json::from_str(&answer(&undulift(args))).expect("JSON")
}
