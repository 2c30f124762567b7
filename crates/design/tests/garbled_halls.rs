//! Spoilt halls and rows of what was seen are refused or read, but nothing panics, hangs or goes through
//! that couldn't be dropped in.
//!
//! `UNDULIFT_FUZZ_CASES` sets how many are tried.

mod common;

use std::path::Path;

use common::garble::spoil;
use common::random::Dice;
use common::{Folder, cases, check_errors};
use proptest::prelude::*;
use undulift_design::{CatchKind, Hall, read_seen};

const DESIGNS: &str = concat!(env!("CARGO_MANIFEST_DIR"), "/../../designs");

const NET: &str = "[hall]\nlength_m = 30\nwidth_m = 20\nheight_m = 10\n[release]\nfrom_wall_m = 3\n\
    across_m = 10\nheights_m = [2.0, 4.0]\ndirection_deg = -90\n[[people]]\nname = \"Ada\"\nx_m = 1\n\
    y_m = 1\nradius_m = 0.5\n[catch]\nkind = \"net\"\nheight_m = 1.2\nlength_m = 12\nwidth_m = 8\n\
    stopping_m = 0.6\n[faults]\nshare = 0.2\npower_lost = 3\n";

/// What a hall that is read must be.
fn check_hall(hall: &Hall) {
    let size_m = [hall.length_m, hall.width_m, hall.height_m];
    assert!(size_m.iter().all(|size_m| *size_m > 0.0 && size_m.is_finite()), "{size_m:?}");
    let release = &hall.release;
    assert!((0.0..=hall.length_m).contains(&release.from_wall_m), "{}", release.from_wall_m);
    assert!((0.0..=hall.width_m).contains(&release.across_m), "{}", release.across_m);
    assert!(release.direction_rad.is_finite());
    assert!(!release.heights_m.is_empty() && release.heights_m[0] > 0.0);
    assert!(release.heights_m.windows(2).all(|pair| pair[0] < pair[1]), "{:?}", release.heights_m);
    for person in &hall.people {
        assert!((0.0..=hall.length_m).contains(&person.x_m), "{}", person.x_m);
        assert!((0.0..=hall.width_m).contains(&person.y_m) && person.radius_m >= 0.0);
    }
    let catch = &hall.catch;
    assert!(catch.stopping_m > 0.0 && catch.height_m >= 0.0 && catch.from_release_m.is_finite());
    assert!(catch.kind == CatchKind::Floor || catch.length_m.is_some() && catch.width_m.is_some());
    assert!(hall.draught_m_s >= 0.0 && hall.temperature_c.is_none_or(f64::is_finite));
    let faults = &hall.faults;
    assert!((0.0..=1.0).contains(&faults.share));
    assert!(faults.share == 0.0 || faults.weights.iter().sum::<f64>() > 0.0, "{faults:?}");
    assert_eq!(hall.sha256().len(), 64);
}

fn demo(name: &str) -> Vec<u8> {
    std::fs::read(Path::new(DESIGNS).join(name)).unwrap()
}

proptest! {
    #![proptest_config(cases(600))]

    #[test]
    fn twin_spoilt_halls_are_refused_or_sound(seed: u64) {
        let mut dice = Dice::new(seed);
        let halls = [demo("hall-gantry.toml"), NET.as_bytes().to_vec()];
        let sound = &halls[dice.below(2)];
        let spoilt = spoil(&mut dice, sound, &halls);
        let folder = Folder::new();
        let path = folder.path().join("hall.toml");
        std::fs::write(&path, &spoilt).unwrap();
        match Hall::read(&path) {
            Ok(hall) => check_hall(&hall),
            Err(errors) => check_errors(&errors, &mut dice),
        }
    }

    #[test]
    fn twin_spoilt_drops_are_refused_or_sound(seed: u64) {
        let mut dice = Dice::new(seed);
        let sound = demo("seen-reed-16.csv");
        let spoilt = spoil(&mut dice, &sound, &[NET.as_bytes().to_vec()]);
        let folder = Folder::new();
        let path = folder.path().join("seen.csv");
        std::fs::write(&path, &spoilt).unwrap();
        match read_seen(&path, &[3.0, 5.0]) {
            Ok(drops) => {
                assert!(!drops.is_empty());
                for drop in drops {
                    assert!(drop.rung_idx < 2);
                    assert!(drop.distance_m.is_none_or(|m| (0.0..=1e4).contains(&m)));
                    assert!(drop.side_m.is_none_or(f64::is_finite));
                    assert!(drop.time_s.is_none_or(|s| s > 0.0 && s.is_finite()));
                    assert!(drop.peak_tilt_rad.is_none_or(|rad| (0.0..3.2).contains(&rad)));
                }
            }
            Err(errors) => check_errors(&errors, &mut dice),
        }
    }
}

/// The files that are spoilt are sound.
#[test]
fn twin_the_sound_ones_are_read() {
    let folder = Folder::with(&[("hall.toml", NET)]);
    check_hall(&Hall::read(&folder.path().join("hall.toml")).unwrap());
    check_hall(&Hall::read(&Path::new(DESIGNS).join("hall-gantry.toml")).unwrap());
    assert_eq!(read_seen(&Path::new(DESIGNS).join("seen-reed-16.csv"), &[3.0]).unwrap().len(), 5);
}
