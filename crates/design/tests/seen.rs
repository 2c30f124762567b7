//! What was seen of drops, as files.

mod common;

use approx::assert_relative_eq;
use common::Folder;
use insta::assert_snapshot;
use undulift_design::{Ended, SeenDrop, read_seen};

const HEADER: &str = "height_m,distance_m,side_m,time_s,peak_tilt_deg,ended";

fn read(text: &str) -> Result<Vec<SeenDrop>, String> {
    let folder = Folder::with(&[("seen.csv", text)]);
    read_seen(&folder.path().join("seen.csv"), &[3.0, 5.0, 5.15]).map_err(|errors| {
        let folder = format!("{}/", folder.path().display());
        errors.lines().map(|line| line.replace(&folder, "")).collect::<Vec<_>>().join("\n")
    })
}

/// Columns in any order, what wasn't measured left empty or out; the nearest rung counts.
#[test]
fn analytic_rows_are_drops() {
    let text = format!("{HEADER}\n3.04,4.1,-0.2,0.8,90,landed\n# note\n5.1,,,,,touched\n");
    let drops = read(&text).unwrap();
    assert_eq!((drops[0].rung_idx, drops[0].ended), (0, Ended::Landed));
    assert_eq!(drops[0].distance_m, Some(4.1));
    assert_eq!((drops[0].side_m, drops[0].time_s), (Some(-0.2), Some(0.8)));
    assert_relative_eq!(drops[0].peak_tilt_rad.unwrap(), std::f64::consts::FRAC_PI_2);
    assert_eq!((drops[1].rung_idx, drops[1].ended), (2, Ended::Touched));
    assert_eq!((drops[1].distance_m, drops[1].peak_tilt_rad), (None, None));
    let few = read("ended,distance_m,height_m\nmissed_catch,2.5,2.9\n").unwrap();
    assert_eq!((few[0].ended, few[0].time_s), (Ended::MissedCatch, None));
    for (ended, word) in Ended::ALL.into_iter().zip(Ended::WORDS) {
        assert_eq!(ended.word(), word);
    }
}

#[test]
fn frozen_mistakes_in_what_was_seen() {
    let of = |rows: &str| read(&format!("{HEADER}\n{rows}\n")).unwrap_err();
    let told = [
        read("").unwrap_err(),
        read(HEADER).unwrap_err(),
        read("height_m,distance_m,end\n3,4,landed\n").unwrap_err(),
        of("4,1,0,1,20,landed"),
        of("3,1,0,0.8,20,crashed\n3,1,0,0.8,20,"),
        of("3,-1,0,0,200,landed"),
        of("3,four,0,nan,20,landed"),
        of("3,1,0,0.8,20"),
    ];
    assert_snapshot!("mistakes_in_what_was_seen", told.join("\n\n"));
}
