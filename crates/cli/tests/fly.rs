//! `undulift fly` as its users meet it.

use std::process::{Command, Stdio};

use serde_json::Value;

mod common;
use common::{answer, complaint, json, root, undulift};

/// Keys that scripts hold on to, in the order in which they are printed.
const KEYS: [&str; 24] = [
    "design",
    "version",
    "input_sha256",
    "end",
    "time_s",
    "drop_m",
    "distance_m",
    "glide_ratio",
    "last_cycle_glide_ratio",
    "glide_angle_deg",
    "speed_m_s",
    "sink_m_s",
    "side_drift_m",
    "forward_airspeed_m_s",
    "peak_roll_deg",
    "peak_pitch_deg",
    "landing_energy_j",
    "mass_kg",
    "planform_m2",
    "wing_loading_pa",
    "alpha_deg",
    "reynolds",
    "reduced_frequency",
    "warnings",
];

const PLATE: &str = "tests/data/flights/open-1-plate.toml";
const STEEP: &str = "tests/data/flights/open-2-domed.toml";

#[test]
fn json_has_the_promised_keys() {
    let object = json(&["fly", PLATE, "--json"]);
    let keys: Vec<&String> = object.as_object().unwrap().keys().collect();
    assert_eq!(keys, KEYS);
    assert_eq!(object["end"], "landed");
    assert_eq!(object["alpha_deg"].as_array().unwrap().len(), 2);
    assert!(object["warnings"].as_array().unwrap().iter().all(Value::is_string));
    assert_eq!(object["input_sha256"].as_str().unwrap().len(), 64);
}

#[test]
fn several_designs_make_a_list_in_their_order() {
    let list = json(&["fly", STEEP, PLATE, "--json"]);
    let names: Vec<&Value> = list.as_array().unwrap().iter().map(|one| &one["design"]).collect();
    assert_eq!(names, ["open-2-domed", "open-1-plate"]);
}

/// The same inputs give the same bytes.
#[test]
fn two_runs_print_the_same() {
    let [first, second] = [0, 1].map(|_| answer(&undulift(&["fly", PLATE, "--json"])));
    assert_eq!(first, second);
}

#[test]
fn exit_status_tells_limits_from_failures() {
    assert_eq!(undulift(&["fly", PLATE]).status.code(), Some(0));
    // It pitches beyond its 60°.
    let steep = undulift(&["fly", STEEP]);
    assert_eq!(steep.status.code(), Some(1));
    assert!(complaint(&steep).contains("tilt_deg"), "{}", complaint(&steep));
    assert_eq!(undulift(&["fly", STEEP, "--set", "limits.tilt_deg=70"]).status.code(), Some(0));
    let missing = undulift(&["fly", "no-such.toml", PLATE]);
    assert_eq!(missing.status.code(), Some(2));
    assert!(complaint(&missing).contains("no-such.toml"));
    assert!(answer(&missing).contains("open-1-plate"), "the other design still flies");
    // Turned over, time up, and travel.
    let over = undulift(&["fly", PLATE, "--set", "launch.spin_deg_s=[400, 0, 0]"]);
    assert_eq!(over.status.code(), Some(1));
    assert!(complaint(&over).contains("turned over"), "{}", complaint(&over));
    let short = undulift(&["fly", PLATE, "--max-time-s", "0.5"]);
    assert_eq!(short.status.code(), Some(1));
    assert!(complaint(&short).contains("still in the air"));
    let stiff = undulift(&["fly", PLATE, "--set", "joints.yaw_travel_deg=30"]);
    assert_eq!(stiff.status.code(), Some(1));
    assert!(complaint(&stiff).contains("beyond its travel of 30.0°"), "{}", complaint(&stiff));
}

#[test]
fn wrong_flags_could_not_run() {
    let wrong: [&[&str]; 7] = [
        &["fly"],
        &["fly", PLATE, "--no-such-flag"],
        &["fly", PLATE, "--tolerance", "2"],
        &["fly", PLATE, "--max-time-s", "-1"],
        &["fly", PLATE, "--trace", "x.csv", "--every-ms", "0"],
        &["fly", PLATE, PLATE, "--trace", "x.csv"],
        &["fly", PLATE, "--set", "gait.frequency_hz"],
    ];
    for args in wrong {
        let output = undulift(args);
        assert_eq!(output.status.code(), Some(2), "{args:?}");
        assert!(answer(&output).is_empty(), "{args:?}");
        assert!(complaint(&output).contains("error"), "{args:?}: {}", complaint(&output));
    }
}

#[test]
fn a_set_value_flies_and_changes_the_hash() {
    let as_is = json(&["fly", PLATE, "--json"]);
    let slower = json(&["fly", PLATE, "--json", "--set", "gait.frequency_hz=1.0"]);
    assert_ne!(as_is["input_sha256"], slower["input_sha256"]);
    assert_ne!(as_is["glide_ratio"], slower["glide_ratio"]);
    let mistaken = undulift(&["fly", PLATE, "--set", "gait.frequncy_hz=1.0"]);
    assert_eq!(mistaken.status.code(), Some(2));
    assert!(complaint(&mistaken).contains("frequency_hz"), "{}", complaint(&mistaken));
}

/// Trace: promised columns, equal steps, the end as the last row, and numbers that read back.
#[test]
fn the_trace_is_the_flight() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("trace.csv");
    let object = json(&[
        "fly",
        STEEP,
        "--json",
        "--trace",
        path.to_str().unwrap(),
        "--every-ms",
        "20",
        "--set",
        "limits.tilt_deg=90",
    ]);
    let text = std::fs::read_to_string(&path).unwrap();
    let mut lines = text.lines();
    let columns: Vec<&str> = lines.next().unwrap().split(',').collect();
    let fixed = "time_s,x_m,y_m,z_m,vx_m_s,vy_m_s,vz_m_s,roll_deg,pitch_deg,yaw_deg,\
                 hx_kg_m2_s,hy_kg_m2_s,hz_kg_m2_s,yaw_1_deg,yaw_3_deg";
    assert_eq!(columns[..15].join(","), fixed);
    assert_eq!(columns[20..22], ["pitch_2_deg", "pitch_4_deg"], "alternate joints");
    let rows: Vec<Vec<f64>> =
        lines.map(|line| line.split(',').map(|cell| cell.parse().unwrap()).collect()).collect();
    assert!(rows.iter().all(|row| row.len() == columns.len()));
    for (k, row) in rows[..rows.len() - 1].iter().enumerate() {
        assert!((row[0] - 0.02 * k as f64).abs() < 1e-12);
    }
    let last = rows.last().unwrap();
    assert_eq!(last[0], object["time_s"].as_f64().unwrap());
    assert_eq!(last[1].hypot(last[2]), object["distance_m"].as_f64().unwrap());
    assert_eq!(-last[6], object["sink_m_s"].as_f64().unwrap());
    let left: Vec<_> = std::fs::read_dir(folder.path()).unwrap().collect();
    assert_eq!(left.len(), 1, "nothing but the trace is left behind");
}

#[test]
fn a_trace_that_cannot_be_written_is_told() {
    let output = undulift(&["fly", PLATE, "--trace", "no/such/folder/trace.csv"]);
    assert_eq!(output.status.code(), Some(2));
    assert!(complaint(&output).contains("no/such/folder/trace.csv"), "{}", complaint(&output));
}

/// A reader that stops reading is no failure.
#[test]
fn a_closed_pipe_is_quiet() {
    let mut child = Command::new(env!("CARGO_BIN_EXE_undulift"))
        .args(["fly", PLATE, "--json"])
        .current_dir(root())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .unwrap();
    drop(child.stdout.take());
    let output = child.wait_with_output().unwrap();
    assert_eq!(output.status.code(), Some(0), "{}", complaint(&output));
    assert!(!complaint(&output).contains("panicked"));
}

/// Words for people, as they stand. Numbers are ours, so this shows change and proves nothing.
#[test]
fn frozen_words_for_people() {
    let output = undulift(&["fly", PLATE]);
    insta::assert_snapshot!("answer", answer(&output));
    insta::assert_snapshot!("doubts", complaint(&output));
    let steep = undulift(&["fly", STEEP, "--set", "launch.spin_deg_s=[300, 0, 0]"]);
    insta::assert_snapshot!("turned_over", format!("{}\n{}", answer(&steep), complaint(&steep)));
    let still = undulift(&["fly", PLATE, "--set", "air.pressure_pa=0", "--through-inversion"]);
    insta::assert_snapshot!("vacuum", format!("{}\n{}", answer(&still), complaint(&still)));
    insta::assert_snapshot!("help", answer(&undulift(&["fly", "--help"])));
    insta::assert_snapshot!("short_help", answer(&undulift(&["fly", "-h"])));
}

/// Without colour where nobody asked for it; nothing is lost.
#[test]
fn no_escape_codes_in_a_pipe() {
    let output = undulift(&["fly", STEEP]);
    assert!(!output.stdout.contains(&0x1b) && !output.stderr.contains(&0x1b));
}
