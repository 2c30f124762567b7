//! Spoilt text is refused or read, but never panics.

mod common;

use common::{Folder, design};
use proptest::prelude::*;
use undulift_design::Override;

const FULL: &str = include_str!("full.toml");
const RIB: &str = include_str!("my-rib.csv");

/// Pieces that change the meaning of a file.
const PIECES: [&str; 24] = [
    "nan",
    "-inf",
    "1e999",
    "-1",
    "0",
    "\"\"",
    "[",
    "]",
    "{",
    "}",
    "=",
    ".",
    "\n",
    "\"",
    "#",
    "é°",
    "[[payload]]\n",
    "[servo.x]\n",
    "[gait]\n",
    "none",
    "true",
    "[1, 2]",
    "1979-05-27",
    ",,",
];

fn spoil(text: &str, changes: &[(usize, usize, usize)]) -> String {
    let mut chars: Vec<char> = text.chars().collect();
    for &(at, take, piece) in changes {
        let at = at % (chars.len() + 1);
        let to = (at + take).min(chars.len());
        chars.splice(at..to, PIECES[piece % PIECES.len()].chars());
    }
    chars.into_iter().collect()
}

fn changes() -> impl Strategy<Value = Vec<(usize, usize, usize)>> {
    prop::collection::vec((0usize..10_000, 0usize..12, 0usize..PIECES.len()), 1..5)
}

fn read_all(folder: &Folder, sets: &[&str]) {
    let sets: Vec<Override> = sets.iter().filter_map(|set| Override::parse(set).ok()).collect();
    if let Err(errors) = undulift_design::read(&folder.path().join("d.toml"), &sets) {
        assert!(!errors.mistakes().is_empty());
        let mut drawn = String::new();
        miette::GraphicalReportHandler::new().render_report(&mut drawn, &errors).unwrap();
        for line in errors.lines() {
            assert!(!line.contains('\n'), "{line:?}");
        }
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 300, ..ProptestConfig::default() })]

    #[test]
    fn twin_spoilt_designs_never_panic(changes in changes()) {
        let text = spoil(FULL, &changes);
        let folder = Folder::with(&[("d.toml", &text), ("my-rib.csv", RIB)]);
        read_all(&folder, &[]);
        read_all(&folder, &["gait.frequency_hz=2", "servo.mini-20.mass_kg=1", "body.length_m[3]=1"]);
    }

    #[test]
    fn twin_spoilt_tables_never_panic(changes in changes()) {
        let text = spoil(RIB, &changes);
        read_all(&Folder::with(&[("d.toml", FULL), ("my-rib.csv", &text)]), &[]);
    }

    #[test]
    fn twin_any_text_never_panics(text in "\\PC*", key in "[a-z.\\[\\]0-9\"_-]{0,20}", value in "\\PC{0,20}") {
        read_all(&design(&text), &[&format!("{key}={value}")]);
        let folder = Folder::with(&[("d.toml", FULL), ("my-rib.csv", &text)]);
        read_all(&folder, &[&format!("{key}={value}")]);
    }
}
