//! Spoilt files are refused or read, but nothing panics, hangs or is lost.
//!
//! `UNDULIFT_FUZZ_CASES` sets how many are tried. Files that broke something are left in a folder
//! that is told, and belong into `corpus` once it is mended.

mod common;

use std::panic::{AssertUnwindSafe, catch_unwind, resume_unwind};
use std::path::{Path, PathBuf};
use std::time::Instant;

use common::garble::spoil;
use common::random::{Dice, random_folder};
use common::{Folder, SERVO, bits, cases, check_errors, demos};
use proptest::prelude::*;
use undulift_design::{Design, Knob, Override, copy_for, read, read_text, starter};

/// A folder with a sound design, and the names of all its files, the design's first.
struct Bed {
    folder: Folder,
    names: Vec<&'static str>,
}

/// Settings that go with a part of the cases.
const SETS: [&str; 14] = [
    "gait.frequency_hz=2",
    "gait.frequency_hz=fast",
    "servo.mini.mass_kg=1",
    "servo.mini-20.loop={ full_at_deg = 1 }",
    "body.length_m[3]=1",
    "body.width_m.middle=0.1",
    "payload[0].mass_kg=0.1",
    "air.wind_m_s[1]=3",
    "gait.start={ mode = \"held\", spin_up_s = 1 }",
    "spread=none",
    "spread.\"launch.roll_deg\".sd=2",
    "name=\"\"",
    "servos=shelf.toml",
    "section.domed.pressure_centre=0.3",
];

thread_local! {
    static BEDS: Vec<Bed> = beds();
}

/// Sound designs to begin with.
fn beds() -> Vec<Bed> {
    let full = Folder::with(&[
        ("d.toml", include_str!("full.toml")),
        ("my-rib.csv", include_str!("my-rib.csv")),
    ]);
    let alone = |text: &str| Bed { folder: common::design(text), names: vec!["d.toml"] };
    let mut beds =
        vec![Bed { folder: full, names: vec!["d.toml", "my-rib.csv"] }, alone(starter())];
    beds.extend(demos().iter().map(|(_, design)| alone(&design.text)));
    for seed in 0..60 {
        let folder = random_folder(seed);
        let has = |name: &&str| folder.path().join(name).exists();
        let names = ["d.toml", "rib.csv", "g.csv", "shelf.toml"].into_iter().filter(has).collect();
        beds.push(Bed { folder, names });
    }
    beds
}

impl Bed {
    fn path(&self) -> PathBuf {
        self.folder.path().join("d.toml")
    }

    fn bytes(&self, name: &str) -> Vec<u8> {
        std::fs::read(self.folder.path().join(name)).unwrap()
    }
}

fn sets(dice: &mut Dice) -> Vec<Override> {
    if !dice.one_in(4) {
        return vec![];
    }
    let one = |dice: &mut Dice| {
        let set = dice.pick(&SETS);
        if dice.one_in(3) {
            let spoilt = spoil(dice, set.as_bytes(), &[]);
            return Override::parse(&String::from_utf8_lossy(&spoilt)).ok();
        }
        Override::parse(set).ok()
    };
    (0..1 + dice.below(3)).filter_map(|_| one(dice)).collect()
}

/// Everything that a design can be asked for, whether it is sound or not.
///
/// - `text`: stands for what the file holds
fn check(path: &Path, text: Option<&str>, dice: &mut Dice) {
    let sets = sets(dice);
    let begun = Instant::now();
    let design = match text {
        Some(text) => read_text(path, text, &sets),
        None => read(path, &sets),
    };
    // In a quick run on a busy machine a second may pass by itself.
    let most_s = if std::env::var_os("UNDULIFT_FUZZ_CASES").is_some() { 1.0 } else { 20.0 };
    assert!(begun.elapsed().as_secs_f64() < most_s, "{:?}", begun.elapsed());
    match design {
        Ok(design) => check_design(path, &design, dice),
        Err(errors) => check_errors(&errors, dice),
    }
    if dice.one_in(8) {
        let _ = copy_for(path, Path::new("/"));
    }
}

fn check_design(path: &Path, design: &Design, dice: &mut Dice) {
    let written = design.written();
    let again = read_text(path, &written, &[]).unwrap_or_else(|errors| {
        panic!("{}\n{written}", errors.lines().collect::<Vec<_>>().join("\n"))
    });
    assert_eq!(again.written(), written);
    assert_eq!(bits(&again.glider), bits(&design.glider), "{written}");
    let knobs = Knob::all(design);
    for knob in &knobs {
        assert!(knob.allows(knob.value(design)), "{}", knob.key());
        assert_eq!(Knob::find(design, knob.key()).as_ref().unwrap(), knob);
    }
    let knob = &knobs[dice.below(knobs.len())];
    let factor = dice.pick(&[0.0, -1.0, 0.99, 1.01, 1e9]);
    let mut changed = design.clone();
    match knob.set(&mut changed, knob.value(design) * factor + 1e-3) {
        Ok(()) => {
            let text = read_text(path, &changed.current_text(), &[]).unwrap();
            assert_eq!(bits(&text.glider), bits(&changed.glider), "{}", knob.key());
        }
        Err(errors) => {
            check_errors(&errors, dice);
            assert_eq!(bits(&changed.glider), bits(&design.glider));
        }
    }
}

/// Tries one case: a design with one of its files spoilt.
fn try_case(seed: u64, beds: &[Bed]) {
    let mut dice = Dice::new(seed);
    let bed = &beds[dice.below(beds.len())];
    // The design itself in half of the cases, any of its files in the others.
    let name = bed.names[if dice.one_in(2) { 0 } else { dice.below(bed.names.len()) }];
    let other = &beds[dice.below(beds.len())];
    let mut others: Vec<Vec<u8>> = other.names.iter().map(|name| other.bytes(name)).collect();
    others.push(SERVO.as_bytes().to_vec());
    let sound = bed.bytes(name);
    let spoilt = spoil(&mut dice, &sound, &others);
    // Writing files takes longer than reading them, so most designs come from memory.
    let in_memory = name == "d.toml" && !dice.one_in(10);
    let text = std::str::from_utf8(&spoilt).ok().filter(|_| in_memory);
    let file = bed.folder.path().join(name);
    if text.is_none() {
        std::fs::write(&file, &spoilt).unwrap();
    }
    let tried = catch_unwind(AssertUnwindSafe(|| check(&bed.path(), text, &mut dice)));
    if let Err(panic) = tried {
        std::fs::write(&file, &spoilt).unwrap();
        keep(bed, seed);
        std::fs::write(&file, &sound).unwrap();
        resume_unwind(panic);
    }
    if text.is_none() {
        std::fs::write(&file, &sound).unwrap();
    }
}

/// Keeps the files that broke something.
fn keep(bed: &Bed, seed: u64) {
    let kept = PathBuf::from(env!("CARGO_TARGET_TMPDIR")).join(format!("garbled-{seed}"));
    std::fs::create_dir_all(&kept).unwrap();
    for name in &bed.names {
        let to = if *name == "d.toml" { "design" } else { name };
        std::fs::copy(bed.folder.path().join(name), kept.join(to)).unwrap();
    }
    eprintln!("the files are in {}", kept.display());
}

proptest! {
    #![proptest_config(cases(2000))]

    #[test]
    fn twin_spoilt_files_are_refused_or_read_and_nothing_else(seed: u64) {
        BEDS.with(|beds| try_case(seed, beds));
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 200, ..cases(200) })]

    #[test]
    fn twin_any_text_is_refused_or_read(text in "\\PC*", key in "[a-z.\\[\\]0-9\"_-]{0,20}", value in "\\PC{0,20}") {
        let folder = Folder::new();
        let path = folder.path().join("d.toml");
        let set = Override::parse(&format!("{key}={value}")).ok();
        std::fs::write(folder.path().join("my-rib.csv"), &text).unwrap();
        for design in [text.as_str(), include_str!("full.toml")] {
            if let Err(errors) = read_text(&path, design, set.as_slice()) {
                check_errors(&errors, &mut Dice::new(0));
            }
        }
    }
}

/// Files that broke something once.
#[test]
fn frozen_what_broke_once_stays_mended() {
    let corpus = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/corpus");
    let mut seen = 0;
    for entry in std::fs::read_dir(corpus).unwrap() {
        let path = entry.unwrap().path().join("design");
        assert!(path.exists(), "{}", path.display());
        for seed in 0..100 {
            check(&path, None, &mut Dice::new(seed));
        }
        seen += 1;
    }
    assert!(seen > 0);
}
