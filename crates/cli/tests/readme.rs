//! What the README shows is what happens.

use std::process::{Command, Output};

mod common;
use common::root;

/// How the README calls the program before it is installed, and after.
const CALLS: [&str; 2] = ["$ cargo run --release -- ", "$ undulift "];

fn readme() -> String {
    std::fs::read_to_string(root().join("README.md")).unwrap()
}

/// Fenced blocks of one kind.
fn blocks(text: &str, kind: &str) -> Vec<String> {
    let fence = format!("```{kind}\n");
    text.split(&fence).skip(1).map(|rest| rest.split("```").next().unwrap().to_owned()).collect()
}

/// Runs the program in a folder of its own that sees the designs, so that nothing is left behind.
fn run(arguments: &str) -> Output {
    let folder = tempfile::tempdir().unwrap();
    std::os::unix::fs::symlink(root().join("designs"), folder.path().join("designs")).unwrap();
    Command::new(env!("CARGO_BIN_EXE_undulift"))
        .args(arguments.split_whitespace())
        .current_dir(folder.path())
        .output()
        .unwrap()
}

/// Every command that the README shows runs; 1 is for the design that shows a limit missed.
#[test]
fn commands_of_the_readme_run() {
    let mut ran = 0;
    for block in blocks(&readme(), "console") {
        for line in block.lines() {
            let Some(arguments) = CALLS.iter().find_map(|call| line.strip_prefix(call)) else {
                continue;
            };
            let status = run(arguments).status.code();
            let expected = if arguments.contains("pair-still") { 1 } else { 0 };
            assert_eq!(status, Some(expected), "{line}");
            ran += 1;
        }
    }
    assert!(ran >= 4, "the README shows its commands");
}

/// The first command's output is the one shown.
#[test]
fn the_readme_shows_its_true_output() {
    let readme = readme();
    let shown = blocks(&readme, "text");
    let first = blocks(&readme, "console")[0].clone();
    let output = run(first.trim().strip_prefix(CALLS[0]).unwrap());
    assert_eq!(shown[0], String::from_utf8(output.stdout).unwrap());
    assert_eq!(shown[1], String::from_utf8(output.stderr).unwrap());
}
