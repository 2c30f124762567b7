//! `undulift fly --joints driven` and `--fault` as their users meet them.

use approx::assert_relative_eq;
use serde_json::Value;

mod common;
use common::{answer, complaint, json, undulift};

fn number(object: &Value, key: &str) -> f64 {
    object[key].as_f64().unwrap_or_else(|| panic!("{key} in {object}"))
}

/// Servos with next to no error left fly the commanded flight; the design's own lag behind it, and
/// saturate where a table of errors says so.
#[test]
fn twin_stiff_servos_fly_the_commanded_flight() {
    let design = "designs/sedge-10.toml";
    let commanded = json(&["fly", design, "--json"]);
    let mut sets = vec!["--set".to_owned(), "firmware.update_hz=1000".into()];
    let servos = std::fs::read_to_string(common::root().join(design)).unwrap();
    for line in servos.lines().filter_map(|line| line.strip_prefix("[servo.")) {
        let servo = line.trim_end_matches(']');
        for (key, value) in [
            ("stall_torque_nm", 6.0),
            ("no_load_speed_deg_s", 4_000.0),
            ("stall_current_a", 200.0),
            ("rotor_inertia_at_output_kg_m2", 0.0),
            ("loop", 0.0),
        ] {
            let value = match key {
                "loop" => "{ full_at_deg = 1.0, deadband_deg = 0.0 }".to_owned(),
                _ => value.to_string(),
            };
            sets.extend(["--set".into(), format!("servo.{servo}.{key}={value}")]);
        }
    }
    let sets: Vec<&str> = sets.iter().map(String::as_str).collect();
    let args = ["fly", design, "--joints", "driven", "--json"];
    let stiff = json(&[&args[..], &sets[..]].concat());
    let own = json(&args);
    let ratio = number(&commanded, "glide_ratio");
    assert_relative_eq!(number(&stiff, "glide_ratio"), ratio, max_relative = 3e-3);
    assert!(number(&stiff["driven"], "tracking_error_deg") < 1.2);
    assert_relative_eq!(number(&own["driven"], "commanded_glide_ratio"), ratio);
    assert!((number(&own, "glide_ratio") - ratio).abs() > 0.01);
    assert!(number(&own["driven"], "tracking_error_deg") > 2.0);
    for spell in own["driven"]["saturations"].as_array().unwrap() {
        let (from_s, to_s) = (number(spell, "from_s"), number(spell, "to_s"));
        assert!(0.0 <= from_s && from_s <= to_s && to_s <= number(&own, "time_s"), "{spell}");
        assert!(spell["joint"].as_u64().is_some_and(|joint| (1..=9).contains(&joint)), "{spell}");
        assert!(["yaw", "pitch"].map(Value::from).contains(&spell["axis"]), "{spell}");
    }
}

/// A locked joint holds the angle that it had, a limp one doesn't keep to its command; both up to
/// then fly as all others do. The trace tells.
#[test]
fn twin_faults_in_the_trace() {
    let folder = tempfile::tempdir().unwrap();
    let rows = |fault: &[&str]| -> Vec<(f64, f64, f64)> {
        let path = folder.path().join("trace.csv");
        let args = ["fly", "designs/reed-16.toml", "--every-ms", "10", "--through-inversion"];
        let trace = ["--trace", path.to_str().unwrap()];
        undulift(&[&args[..], &trace, fault].concat());
        let mut table = csv::Reader::from_path(&path).unwrap();
        let names = table.headers().unwrap().clone();
        let column = |name: &str| names.iter().position(|known| known == name).unwrap();
        let [time, yaw, x] = ["time_s", "yaw_8_deg", "x_m"].map(column);
        let rows = table.records().map(|row| {
            let row = row.unwrap();
            let of = |k: usize| row[k].parse::<f64>().unwrap();
            (of(time), of(yaw), of(x))
        });
        rows.filter(|row| row.0 < 1.0).collect()
    };
    let sound = rows(&[]);
    let locked = rows(&["--fault", "8:yaw=locked@0.5"]);
    let limp = rows(&["--fault", "8:yaw=limp@0.5"]);
    let held_deg = locked.iter().find(|row| row.0 >= 0.5).unwrap().1;
    for ((sound, locked), limp) in sound.iter().zip(&locked).zip(&limp) {
        if sound.0 <= 0.5 {
            assert_relative_eq!(sound.1, limp.1, epsilon = 1e-6);
            assert_relative_eq!(sound.1, locked.1, epsilon = 1e-6);
            assert_relative_eq!(sound.2, limp.2, epsilon = 1e-5);
        } else {
            assert_relative_eq!(locked.1, held_deg, epsilon = 1e-6);
        }
    }
    let last = limp.len() - 1;
    assert!((limp[last].1 - sound[last].1).abs() > 1.0);
}

#[test]
fn faults_that_cant_be_are_refused() {
    for (fault, told) in [
        ("20:yaw=limp", "there is no joint 20; the design has 1 to 15"),
        ("0:yaw=limp", "JOINT is a whole number from 1"),
        ("3:roll=limp", "AXIS is yaw or pitch"),
        ("3:yaw=stuck", "WHAT is limp or locked"),
        ("3:yaw=limp@-1", "0 or more"),
        ("3:yaw=limp@nan", "0 or more"),
        ("3:yaw", "5:yaw=limp@0.8"),
        ("limp", "5:yaw=limp@0.8"),
    ] {
        let output = undulift(&["fly", "designs/reed-16.toml", "--fault", fault]);
        assert_eq!(output.status.code(), Some(2), "{fault}");
        let complaint = complaint(&output);
        assert!(complaint.contains(told), "{fault}: {complaint}");
        assert!(answer(&output).is_empty());
    }
    let output = undulift(&[
        "fly",
        "designs/reed-16.toml",
        "--set",
        "joints.axes=yaw",
        "--fault",
        "3:pitch=limp",
    ]);
    assert_eq!(output.status.code(), Some(2));
}

#[test]
fn frozen_driven_answer() {
    let args =
        ["fly", "designs/sedge-10.toml", "--joints", "driven", "--fault", "5:yaw=locked@0.9"];
    let output = undulift(&args);
    insta::assert_snapshot!("driven", format!("{}\n{}", answer(&output), complaint(&output)));
}

/// The same launches, driven, on one thread and on two.
#[test]
fn twin_driven_launches_dont_depend_on_threads() {
    let fly = |threads: &str| {
        let args =
            ["fly", "designs/sedge-10.toml", "--joints", "driven", "--launches", "6", "--json"];
        answer(&undulift(&[&args[..], &["--threads", threads]].concat()))
    };
    assert_eq!(fly("1"), fly("2"));
}
