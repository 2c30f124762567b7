//! Poses of a body, and catalogues read on their own.

mod common;

use approx::assert_relative_eq;
use common::{Folder, SERVO, SOUND};
use insta::assert_snapshot;
use undulift_design::{Design, DesignErrors, read_catalogue, read_poses};

const AXES: &str = "yaw_1_deg,yaw_2_deg,yaw_3_deg,pitch_1_deg,pitch_2_deg,pitch_3_deg";

fn sound() -> (Folder, Design) {
    let folder = common::design(SOUND);
    let design = folder.read(&[]).unwrap();
    (folder, design)
}

fn lines(folder: &Folder, errors: &DesignErrors) -> String {
    let folder = format!("{}/", folder.path().display());
    errors.lines().map(|line| line.replace(&folder, "")).collect::<Vec<_>>().join("\n")
}

/// Columns in any order, others left unread whatever they hold; angles in radians by hand.
#[test]
fn analytic_rows_are_poses() {
    let (folder, design) = sound();
    let text = "# held on the bench\nnote,roll_deg,yaw_deg,pitch_3_deg,yaw_1_deg,yaw_2_deg,\
                yaw_3_deg,pitch_1_deg,pitch_2_deg\nfirst,90,x,6,1,2,3,4,5\n,-180,,0,0,0,0,0,-360\n";
    let poses = read_poses(&folder.write("p.csv", text.as_bytes()), &design).unwrap();
    assert_eq!(poses.len(), 2);
    for (found, expected_deg) in poses[0].angles_rad.iter().zip(1..=6) {
        let expected_rad = f64::from(expected_deg) * std::f64::consts::PI / 180.0;
        assert_relative_eq!(*found, expected_rad, max_relative = 1e-15);
    }
    assert_eq!((poses[0].roll_rad, poses[0].pitch_rad), (std::f64::consts::FRAC_PI_2, 0.0));
    assert_eq!(poses[1].roll_rad, -std::f64::consts::PI);
    assert_eq!(poses[1].angles_rad[4], -2.0 * std::f64::consts::PI);
}

#[test]
fn frozen_mistakes_in_poses() {
    let (folder, design) = sound();
    let of = |text: &str| {
        let found = read_poses(&folder.write("p.csv", text.as_bytes()), &design);
        lines(&folder, &found.unwrap_err())
    };
    let cases = [
        ("an axis is missing", of("yaw_1_deg,yaw_2_deg\n1,2\n")),
        ("an axis that isn't there", of(&format!("{AXES},pitch_4_deg\n1,2,3,4,5,6,7\n"))),
        ("not finite", of(&format!("{AXES}\n1,2,3,4,inf,6\n"))),
        ("not a number", of(&format!("{AXES}\n1,2,nan,4,x,6\n"))),
        ("too far", of(&format!("{AXES},pitch_deg\n1,2,3,4,5,361,91\n"))),
        ("no rows", of(&format!("{AXES}\n# none\n"))),
        ("a short row", of(&format!("{AXES}\n1,2,3,4,5,6\n1,2,3\n"))),
        ("too many rows", of(&format!("{AXES}\n{}", "1,2,3,4,5,6\n".repeat(100_001)))),
        ("empty", of("")),
        ("other marks between columns", of(&AXES.replace(',', ";"))),
    ];
    assert_snapshot!(cases.map(|(name, lines)| format!("# {name}\n{lines}\n")).join("\n"));
    let none = read_poses(&folder.path().join("none.csv"), &design).unwrap_err();
    assert_eq!(lines(&folder, &none), "`none.csv` can't be read: there is no such file");
    let most = format!("{AXES}\n{}", "1,2,3,4,5,6\n".repeat(100_000));
    assert_eq!(
        read_poses(&folder.write("p.csv", most.as_bytes()), &design).unwrap().len(),
        100_000
    );
}

/// A catalogue read on its own has the servos that a design which names it has.
#[test]
fn twin_a_catalogue_is_what_a_design_reads() {
    let folder = common::design(&format!("servos = \"shelf.toml\"\n{SOUND}"));
    let other = SERVO.replace("[servo.mini]", "[servo.big]").replace("0.45", "0.46");
    let text = format!("{SERVO}{other}");
    let path = folder.write("shelf.toml", text.as_bytes());
    let catalogue = read_catalogue(&path).unwrap();
    let design = folder.read(&[]).unwrap();
    assert_eq!(catalogue.text, text);
    assert_eq!(catalogue.servos, design.servos.values().cloned().collect::<Vec<_>>());
    assert_eq!(catalogue.servos[0].name, "big");
}

#[test]
fn frozen_mistakes_in_a_catalogue() {
    let folder = Folder::new();
    let of = |text: &str| match read_catalogue(&folder.write("shelf.toml", text.as_bytes())) {
        Ok(catalogue) => format!("{} servos", catalogue.servos.len()),
        Err(errors) => lines(&folder, &errors),
    };
    let spoilt = |line: &str, by: &str| of(&SERVO.replace(line, by));
    let cases = [
        ("sound", of(SERVO)),
        ("no servo", of("# nothing yet\n")),
        ("empty", of(" \n")),
        ("a design", of(SOUND)),
        ("one that names another", of("servos = \"a.toml\"\n")),
        ("no TOML", of("[servo.a\n")),
        ("no stall torque", spoilt("stall_torque_nm = 0.45", "stall_torque_nm = 0")),
        ("not a number", spoilt("stall_torque_nm = 0.45", "stall_torque_nm = nan")),
        ("a slip", spoilt("mass_kg", "mas_kg")),
        ("unloaded above stalled", spoilt("no_load_current_a = 0.15", "no_load_current_a = 2.0")),
        ("another table", of(&format!("{SERVO}[motor.a]\nmass_kg = 1\n"))),
    ];
    assert_snapshot!(cases.map(|(name, lines)| format!("# {name}\n{lines}\n")).join("\n"));
}

/// The hash is of the design's own and of the file; Python's hashlib made the expected one.
#[test]
fn twin_the_hash_covers_another_file() {
    let (_folder, design) = sound();
    let own = design.input_sha256_with("abc");
    assert_ne!(own, design.input_sha256);
    assert_ne!(own, design.input_sha256_with("xyz"));
    // Of the 64 characters of the design's hash, eight bytes 3 0 0 0 0 0 0 0, and "abc".
    assert_eq!(own, "d0253750c44794d240949d73b14e8074fddb9fd0149e1406f47f6d5493acb8f6");
}
