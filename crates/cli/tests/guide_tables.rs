//! What the guide's chapter on tables shows is what happens.

use std::path::Path;
use std::process::{Command, Output};

mod common;
use common::{answer, complaint, root};

fn chapter() -> String {
    let guide = std::fs::read_to_string(root().join("docs/guide.md")).unwrap();
    let (_, chapter) = guide.split_once("\n## 11. Gait tables").expect("the guide has it");
    chapter.split("\n## ").next().unwrap().to_owned()
}

/// Fenced blocks with their kinds.
fn blocks(text: &str) -> Vec<(&str, &str)> {
    let fenced = text.split("\n```").skip(1).step_by(2);
    fenced.filter_map(|block| block.split_once('\n')).collect()
}

fn run_in(folder: &Path, command: &str) -> Output {
    Command::new(env!("CARGO_BIN_EXE_undulift"))
        .args(command.split_whitespace().skip(1))
        .current_dir(folder)
        .output()
        .unwrap()
}

/// Every command runs and says what is shown; the header has the lines shown, and the firmware
/// that uses it compiles.
#[test]
fn twin_the_chapter_shows_what_happens() {
    let folder = tempfile::tempdir().unwrap();
    std::os::unix::fs::symlink(root().join("designs"), folder.path().join("designs")).unwrap();
    let text = chapter();
    let blocks = blocks(&text);
    let mut shown = 0;
    for pair in blocks.windows(2) {
        let ((kind, command), (next, expected)) = (pair[0], pair[1]);
        let Some(command) = command.strip_prefix("$ ").filter(|_| kind == "console") else {
            continue;
        };
        if next == "text" {
            let output = run_in(folder.path(), command);
            let told = format!("{}{}", answer(&output), complaint(&output));
            assert_eq!(told.trim_end(), expected.trim_end(), "{command}");
            shown += 1;
        }
    }
    assert_eq!(shown, 6);
    let of_kind = |kind: &str| blocks.iter().find(|block| block.0 == kind).unwrap().1;
    let header = std::fs::read_to_string(folder.path().join("reed.h")).unwrap();
    assert!(header.contains(of_kind("c-header")));
    std::fs::write(folder.path().join("firmware.c"), of_kind("c")).unwrap();
    let flags = ["-std=c99", "-Wall", "-Wextra", "-Werror", "-pedantic", "-c", "firmware.c"];
    let cc = Command::new("cc").args(flags).current_dir(folder.path()).output();
    let cc = cc.expect("this test needs a C compiler called `cc`: install gcc or clang");
    assert!(cc.status.success(), "{}", complaint(&cc));
}

/// The header flies where the chapter says it does.
#[test]
fn twin_the_chapter_s_header_flies() {
    let folder = tempfile::tempdir().unwrap();
    std::fs::create_dir(folder.path().join("designs")).unwrap();
    let design = folder.path().join("designs/reed-16.toml");
    std::fs::copy(root().join("designs/reed-16.toml"), &design).unwrap();
    let write = "undulift table designs/reed-16.toml --format c --out reed.h";
    assert_eq!(run_in(folder.path(), write).status.code(), Some(0));
    let text = chapter();
    let line = text.lines().find(|line| line.starts_with("$ undulift fly")).unwrap();
    let fly = line.trim_start_matches("$ ").replace('\'', "");
    let output = run_in(folder.path(), &fly);
    assert_eq!(output.status.code(), Some(0), "{}", complaint(&output));
}
