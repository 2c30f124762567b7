//! `undulift new`, completions, and the examples that help shows.

use std::path::Path;
use std::process::{Command, Output};

mod common;
use common::{answer, complaint, root, undulift};

/// Runs in a folder of its own that sees the designs.
fn run_in(folder: &Path, args: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_undulift"))
        .args(args)
        .current_dir(folder)
        .output()
        .expect("the command runs")
}

fn folder_with_designs() -> tempfile::TempDir {
    let folder = tempfile::tempdir().unwrap();
    std::os::unix::fs::symlink(root().join("designs"), folder.path().join("designs")).unwrap();
    folder
}

/// The starter, unchanged, glides within its limits and passes its check.
#[test]
fn the_starter_flies_as_it_is() {
    let folder = tempfile::tempdir().unwrap();
    let written = run_in(folder.path(), &["new", "mine.toml"]);
    assert_eq!(written.status.code(), Some(0));
    assert!(answer(&written).contains("undulift fly mine.toml"));
    let flown = run_in(folder.path(), &["fly", "mine.toml"]);
    assert_eq!(flown.status.code(), Some(0), "{}", complaint(&flown));
    assert!(answer(&flown).contains("upright in a glide"), "{}", answer(&flown));
    let checked = run_in(folder.path(), &["check", "mine.toml"]);
    assert_eq!(checked.status.code(), Some(0), "{}", complaint(&checked));
}

#[test]
fn a_file_that_exists_is_left_alone() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("mine.toml");
    std::fs::write(&path, "precious").unwrap();
    let refused = run_in(folder.path(), &["new", "mine.toml"]);
    assert_eq!(refused.status.code(), Some(2));
    assert!(complaint(&refused).contains("--force"), "{}", complaint(&refused));
    assert_eq!(std::fs::read_to_string(&path).unwrap(), "precious");
    assert_eq!(run_in(folder.path(), &["new", "mine.toml", "--force"]).status.code(), Some(0));
    assert_ne!(std::fs::read_to_string(&path).unwrap(), "precious");
    let nowhere = run_in(folder.path(), &["new", "no/such/folder/mine.toml"]);
    assert_eq!(nowhere.status.code(), Some(2));
    let words = complaint(&nowhere);
    assert!(words.contains("no/such/folder/mine.toml") && !words.contains(".undulift-"), "{words}");
    assert_eq!(std::fs::read_dir(folder.path()).unwrap().count(), 1);
}

/// A copy flies the same flight from another folder, with the files that it names.
#[test]
fn a_copy_flies_the_same() {
    let folder = tempfile::tempdir().unwrap();
    let inner = folder.path().join("inner");
    std::fs::create_dir(&inner).unwrap();
    let rows = "reynolds,alpha_deg,cl,cd\n1e4,-90,0,2\n1e4,0,0,0.1\n1e4,45,1.2,1.2\n1e4,90,0,2\n";
    std::fs::write(inner.join("rib.csv"), rows).unwrap();
    let plate =
        std::fs::read_to_string(root().join("tests/data/flights/open-1-plate.toml")).unwrap();
    let own = plate.replace("section = \"plate\"", "section = \"rib\"")
        + "\n[section.rib]\ntable = \"rib.csv\"\n";
    std::fs::write(inner.join("own.toml"), own).unwrap();
    let copied = run_in(folder.path(), &["new", "copy.toml", "--from", "inner/own.toml"]);
    assert_eq!(copied.status.code(), Some(0), "{}", complaint(&copied));
    let [first, second] =
        ["inner/own.toml", "copy.toml"].map(|path| answer(&run_in(folder.path(), &["fly", path])));
    assert!(!first.is_empty());
    assert_eq!(first, second);
    let missing = run_in(folder.path(), &["new", "other.toml", "--from", "no-such.toml"]);
    assert_eq!(missing.status.code(), Some(2));
    assert!(!folder.path().join("other.toml").exists());
}

#[test]
fn completions_for_every_shell() {
    for shell in ["bash", "elvish", "fish", "powershell", "zsh"] {
        let output = undulift(&["completions", shell]);
        assert_eq!(output.status.code(), Some(0));
        let script = answer(&output);
        assert!(script.contains("undulift") && script.contains("launches"), "{shell}");
    }
    assert_eq!(undulift(&["completions", "no-such-shell"]).status.code(), Some(2));
}

/// Each command's help has examples, and they run when pasted; those that write into somebody's
/// home are left out.
#[test]
fn examples_in_help_work() {
    let folder = folder_with_designs();
    for command in ["fly", "check", "budget", "size", "table", "new", "completions"] {
        let help = answer(&undulift(&[command, "--help"]));
        let (_, examples) = help.split_once("Examples:").expect("examples");
        for line in examples.lines().map(str::trim).filter(|line| !line.is_empty()) {
            for example in line
                .split("&&")
                .map(str::trim)
                .filter(|part| !(part.is_empty() || part.contains("~/")))
            {
                let words: Vec<&str> = example.split_whitespace().collect();
                assert_eq!(words[0], "undulift");
                let again = if words[1] == "new" { vec!["--force"] } else { vec![] };
                let output = run_in(folder.path(), &[&words[1..], &again].concat());
                let status = output.status.code();
                // Some show what it looks like when a limit is missed; reed-16 can't hold itself up.
                let missed = ["frequency_hz=2.5", "--clamp", "size designs/hasty-16"]
                    .iter()
                    .any(|m| example.contains(m));
                assert_eq!(status, Some(i32::from(missed)), "{example}: {}", complaint(&output));
            }
        }
    }
}
