//! What the guide shows of `undulift drop` is what is printed.

mod common;
use common::{answer, root, undulift};

const DROP: &str = "drop designs/reed-16.toml designs/hall-gantry.toml";
const SEEN: &str = "--seen designs/seen-reed-16.csv";

/// The block that begins with a command, without it and what is cut short.
fn shown(command: &str) -> String {
    let guide = std::fs::read_to_string(root().join("docs/guide.md")).unwrap();
    let start = format!("```console\n$ undulift {command}\n");
    let from = guide.find(&start).unwrap_or_else(|| panic!("{command}")) + start.len();
    let block = guide[from..].split("```").next().unwrap();
    block.lines().filter(|line| !line.contains('…')).map(|line| format!("{line}\n")).collect()
}

fn told(command: &str) -> String {
    answer(&undulift(&command.split_whitespace().collect::<Vec<_>>()))
}

#[test]
fn frozen_the_plan() {
    assert_eq!(shown(DROP), told(DROP));
}

#[test]
fn frozen_what_was_seen() {
    let command = format!("{DROP} {SEEN}");
    let told = told(&command);
    let from = told.find("  Seen so far").unwrap();
    assert_eq!(shown(&command), told[from..]);
}
