//! Hall files: what they say, and how their mistakes are told.

mod common;

use common::Folder;
use insta::assert_snapshot;
use undulift_design::{CatchKind, Hall};

const HALL: &str = r#"
[hall]
length_m = 30
width_m = 20
height_m = 10
[release]
from_wall_m = 3
across_m = 10
heights_m = [2.0, 4.0]
direction_deg = 90
[catch]
kind = "net"
height_m = 1.2
length_m = 12
width_m = 8
stopping_m = 0.6
"#;

fn told(text: &str) -> String {
    let folder = Folder::with(&[("hall.toml", text)]);
    let errors = Hall::read(&folder.path().join("hall.toml")).unwrap_err();
    let told = |mistake: &undulift_design::Mistake| {
        let place = mistake.line_column().map(|(line, column)| format!("{line}:{column}: "));
        let remedy = mistake.remedy().unwrap_or_default();
        format!("{}{mistake}\n  {remedy}", place.unwrap_or_default())
    };
    errors.mistakes().iter().map(told).collect::<Vec<_>>().join("\n")
}

/// Against the numbers as they are written, and the stated defaults.
#[test]
fn twin_a_hall_holds_what_the_file_says() {
    let folder = Folder::with(&[("hall.toml", HALL)]);
    let hall = Hall::read(&folder.path().join("hall.toml")).unwrap();
    assert_eq!([hall.length_m, hall.width_m, hall.height_m], [30.0, 20.0, 10.0]);
    assert_eq!(hall.release.heights_m, [2.0, 4.0]);
    assert_eq!(hall.release.direction_rad, std::f64::consts::FRAC_PI_2);
    assert_eq!(hall.catch.kind, CatchKind::Net);
    assert_eq!((hall.catch.length_m, hall.catch.from_release_m), (Some(12.0), 0.0));
    assert_eq!((hall.faults.share, hall.faults.weights), (0.05, [1.0; 6]));
    assert_eq!((hall.draught_m_s, hall.temperature_c, hall.camera), (0.0, None, None));
    let own = format!("{HALL}[faults]\nshare = 0.2\npower_lost = 3\n");
    let folder = Folder::with(&[("hall.toml", &own)]);
    let hall = Hall::read(&folder.path().join("hall.toml")).unwrap();
    assert_eq!((hall.faults.share, hall.faults.weights), (0.2, [0.0, 0.0, 3.0, 0.0, 0.0, 0.0]));
}

#[test]
fn frozen_mistakes_in_halls() {
    let spoilt = HALL
        .replace("width_m = 20", "width_m = -20")
        .replace("from_wall_m = 3", "from_wal_m = 3")
        .replace("[2.0, 4.0]", "[4.0, 2.0]")
        .replace("\"net\"", "\"nett\"")
        + "[[people]]\nname = \"Eve\"\nx_m = nan\ny_m = 1\n[camera]\nmarkers = 0\n[faults]\none_limp = 0\n[hal]\n";
    let lines = [
        told(&spoilt),
        told(&HALL.replace("from_wall_m = 3", "from_wall_m = 31")),
        told(&HALL.replace("\"net\"", "\"floor\"")),
        told(&HALL.replace("[2.0, 4.0]", "[]")),
        told("[body]\nsegments = 3\n"),
    ];
    assert_snapshot!(lines.join("\n\n"));
}
