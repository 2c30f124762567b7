//! Designs as text: written, read and written again.

mod common;

use std::path::Path;

use common::random::random_folder;
use common::{Folder, SERVO, SOUND, bits, cases, demos, design, spoilt};
use insta::assert_snapshot;
use proptest::prelude::*;
use undulift_design::{Design, Knob, Spread, read_text};
use undulift_flight::{Glider, Settings, fly};

/// A short flight: how far, how it ended, and the steps it took, to the last bit.
fn flown(glider: &Glider) -> String {
    let settings = Settings { max_time_s: 0.3, through_inversion: true, ..Settings::default() };
    match fly(glider, &settings) {
        Ok(flight) => {
            let state = flight.trajectory.state(flight.time_s);
            format!("{:?} {:?} {} {state:?}", flight.end, flight.time_s, flight.steps)
        }
        Err(error) => error.to_string(),
    }
}

/// Reads what a design writes and checks that nothing is lost.
fn check_written(path: &Path, design: &Design) -> String {
    let text = design.written();
    let again = read_text(path, &text, &[]).unwrap_or_else(|errors| {
        panic!("{}\n{text}", errors.lines().collect::<Vec<_>>().join("\n"))
    });
    assert_eq!(again.written(), text);
    assert_eq!(bits(&again.glider), bits(&design.glider), "{text}");
    assert_eq!(again.glider.sections, design.glider.sections);
    assert_eq!(flown(&again.glider), flown(&design.glider));
    let rest = |design: &Design| {
        let Design { name, servos, servo_names, battery, payload, .. } = design.clone();
        (name, servos, servo_names, battery, payload, design.update_hz, design.limits)
    };
    assert_eq!(rest(&again), rest(design), "{text}");
    assert_eq!(again.spread, design.spread);
    text
}

#[test]
fn twin_written_demos_fly_to_the_bit_as_before() {
    for (path, design) in demos() {
        check_written(&path, &design);
    }
}

proptest! {
    #![proptest_config(cases(60))]

    #[test]
    fn twin_random_designs_are_written_without_loss(seed: u64) {
        let folder = random_folder(seed);
        let design = folder.read(&[]);
        let design = design.unwrap_or_else(|_| panic!("{}", folder.mistakes(&[])));
        check_written(&folder.path().join("d.toml"), &design);
    }

    /// What a knob set is written as well, and what it left alone is as before.
    #[test]
    fn twin_random_designs_are_written_with_what_was_set(seed: u64, pick: usize) {
        let folder = random_folder(seed);
        let mut design = folder.read(&[]).unwrap();
        let knobs = Knob::all(&design);
        for step in 0..4 {
            let knob = &knobs[pick.wrapping_mul(step * 2 + 1) % knobs.len()];
            let value = knob.value(&design);
            if !knob.is_whole() {
                let _ = knob.set_clamped(&mut design, value * 1.01 + 1e-4);
            }
        }
        let path = folder.path().join("d.toml");
        check_written(&path, &design);
        let current = read_text(&path, &design.current_text(), &[]).unwrap();
        prop_assert_eq!(current.written(), design.written());
    }
}

#[test]
fn frozen_a_design_is_written_whole() {
    let lines = spoilt(
        &[
            "axes = \"yaw\"\nyaw_servo = \"mini\"",
            "width_m = { shape = \"uniform\", middle = 0.1 }",
            "structure_kg = [0.1, 0.2, 3e-2, 4]",
        ],
        "# for the search\n[search]\nevaluations = 6_000 # many\n",
    );
    let text = format!("spread = \"none\"\nservos = \"shelf.toml\"\n{lines}");
    let folder = Folder::with(&[("d.toml", &text), ("shelf.toml", SERVO)]);
    let mut design = folder.read(&["air.altitude_m=500"]).unwrap();
    Knob::find(&design, "gait.frequency_hz").unwrap().set(&mut design, 1.5).unwrap();
    let written = check_written(&folder.path().join("d.toml"), &design);
    assert_eq!(design.spread, Spread::None);
    assert_snapshot!(written);
}

#[test]
fn twin_a_written_design_needs_no_catalogue() {
    let lines = spoilt(&["axes = \"yaw\"\nyaw_servo = \"mini\""], "");
    let text = format!("servos = \"shelf.toml\"\n{lines}");
    let folder = Folder::with(&[("d.toml", &text), ("shelf.toml", SERVO)]);
    let before = folder.read(&[]).unwrap();
    let alone = design(&before.written()).read(&[]).unwrap();
    assert_eq!((alone.glider, alone.servos), (before.glider, before.servos));
    assert!(!SOUND.contains("servos"));
}
