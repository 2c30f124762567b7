//! `undulift table` as its users meet it.

use std::path::Path;

use approx::assert_relative_eq;
use insta::assert_snapshot;
use serde_json::Value;

mod common;
use common::{answer, complaint, json, undulift};

const REED: &str = "designs/reed-16.toml";
const SEDGE: &str = "designs/sedge-10.toml";

fn table(design: &str, out: &Path, args: &[&str]) -> std::process::Output {
    undulift(&[&["table", design, "--out", out.to_str().unwrap()], args].concat())
}

/// A printed text without the folder that a test writes to.
fn without(folder: &Path, text: &str) -> String {
    text.replace(&format!("{}/", folder.display()), "")
}

#[test]
fn frozen_answers() {
    let folder = tempfile::tempdir().unwrap();
    let out = folder.path().join("reed.h");
    let told = |args: &[&str]| {
        let output = table(REED, &out, args);
        assert_eq!(output.status.code(), Some(0), "{}", complaint(&output));
        without(folder.path(), &answer(&output))
    };
    assert_snapshot!("header", told(&["--format", "c"]));
    assert_snapshot!("csv", told(&["--format", "csv", "--rate", "25", "--unit", "cdeg"]));
    let faults = ["--late", "4", "--drop-every", "7", "--clock", "1.02"];
    assert_snapshot!(
        "faults",
        told(&[&["--format", "json", "--steps", "20"], &faults[..]].concat())
    );
    assert_snapshot!("tolerance", told(&["--format", "c", "--tolerance", "1%"]));
    let held =
        ["--between", "hold", "--set", "gait.start={mode=\"held\",delay_s=0.2,spin_up_s=0.3}"];
    assert_snapshot!("held", told(&[&["--format", "c", "--delay-s", "0.5"], &held[..]].concat()));
}

/// What is refused, in words; nothing is ever written then. 1: a limit is missed; 2: it can't run.
#[test]
fn frozen_refusals() {
    let folder = tempfile::tempdir().unwrap();
    let out = folder.path().join("t.h");
    let cases: [(&[&str], i32); 19] = [
        (&["--set", "gait.frequency_hz=3"], 1),
        (&["--set", "joints.yaw_travel_deg=40"], 1),
        (
            &[
                "--set",
                "servo.mid-34.pulse_us={minus_90=500,centre=1500,plus_90=2500}",
                "--set",
                "joints.yaw_travel_deg=180",
                "--set",
                "gait.lateral_amplitude_deg=160",
                "--set",
                "servo.mid-34.no_load_speed_deg_s=4000",
                "--set",
                "servo.mid-34.stall_torque_nm=0.2",
            ],
            1,
        ),
        (&["--set", "battery.cells=1", "--set", "battery.charge=0.1"], 1),
        (&["--flash-kb", "3.5"], 1),
        (&["--steps", "41"], 1),
        (&["--steps", "60", "--frame-ms", "10"], 0),
        (&["--rate", "49"], 1),
        (&["--rate", "10000", "--frame-ms", "0.1", "--set", "gait.frequency_hz=0.01"], 1),
        (&["--rate", "0"], 2),
        (&["--rate", "-50"], 2),
        (&["--steps", "1"], 2),
        (&["--steps", "1000000"], 2),
        (&["--tolerance", "0.0001%"], 1),
        (&["--resolution", "0.001", "--unit", "deg"], 1),
        (&["--set", "gait.frequency_hz=0"], 1),
        (&["--set", "joints.pitch_servo=none", "--unit", "us"], 2),
        (&["--late", "30"], 2),
        (&["--set", "wiring={yaw={channel=[0]}}"], 2),
    ];
    let mut told = String::new();
    for (args, status) in cases {
        let output = table(REED, &out, &[&["--format", "c"], args].concat());
        assert_eq!(output.status.code(), Some(status), "{args:?}: {}", complaint(&output));
        assert_eq!(out.exists(), status == 0, "{args:?}");
        let _ = std::fs::remove_file(&out);
        assert_eq!(std::fs::read_dir(folder.path()).unwrap().count(), 0, "{args:?}");
        told.push_str(&format!("$ {}\n{}\n", args.join(" "), complaint(&output)));
    }
    assert_snapshot!(without(folder.path(), &told));
}

fn flown(design: &str, gait: &str) -> Value {
    json(&["fly", design, "--json", "--set", gait])
}

/// What a table says of its flight is what `fly` says of a design with the table in its gait's
/// place, whichever way it went: CSV in any unit, a header with servos turned about and trimmed. The
/// attitudes are the gait's, too.
#[test]
fn twin_tables_read_back_as_gaits() {
    let folder = tempfile::tempdir().unwrap();
    let own = json(&["fly", SEDGE, "--json"]);
    let wiring = "wiring={yaw={channel=[8,1,6,3,4],reversed=[true,false,true,false,false],\
                  offset_us=[12,0,-7.5,0,3]},pitch={channel=[5,2,7,0]}}";
    for (file, args) in [
        ("t.csv", &["--format", "csv"][..]),
        ("t.csv", &["--format", "csv", "--unit", "rad"]),
        ("t.csv", &["--format", "csv", "--unit", "cdeg"]),
        ("t.csv", &["--format", "csv", "--unit", "us", "--set", wiring]),
        ("t.h", &["--format", "c", "--set", wiring]),
        ("t.h", &["--format", "c", "--unit", "cdeg", "--set", wiring]),
    ] {
        let out = folder.path().join(file);
        let output = table(SEDGE, &out, &[args, &["--json"]].concat());
        let told: Value = serde_json::from_str(&answer(&output)).expect("JSON");
        let gait = format!("gait={{table={:?},interpolation=\"linear\"}}", out.to_str().unwrap());
        let back = flown(SEDGE, &gait);
        for key in ["glide_ratio", "distance_m", "peak_roll_deg", "peak_pitch_deg"] {
            let number = |value: &Value| value[key].as_f64().unwrap();
            assert_relative_eq!(number(&told["flown"]), number(&back), max_relative = 1e-6);
            assert_relative_eq!(number(&told["computed"]), number(&own), max_relative = 1e-12);
            assert_relative_eq!(number(&back), number(&own), max_relative = 0.1);
        }
    }
}

/// Without a flag, rows come as often as the firmware of the design sends them, as far as a period
/// is a whole number of frames; else the next slower way: 1.25 Hz at 50, 100 and 33 Hz.
#[test]
fn analytic_rows_follow_the_firmware() {
    let folder = tempfile::tempdir().unwrap();
    let out = folder.path().join("t.json");
    for (update_hz, rows) in [("50", 40), ("100", 80), ("33", 26)] {
        let set = format!("firmware.update_hz={update_hz}");
        let output = table(REED, &out, &["--format", "json", "--json", "--set", &set]);
        let told: Value = serde_json::from_str(&answer(&output)).unwrap();
        assert_eq!(told["table"]["rows"], rows, "{update_hz} Hz");
    }
}

/// A header whose numbers were changed is refused with its line; held rows are refused where joints
/// follow exactly, with what to do.
#[test]
fn twin_spoilt_and_held_tables_are_refused() {
    let folder = tempfile::tempdir().unwrap();
    let out = folder.path().join("t.h");
    assert_eq!(table(SEDGE, &out, &["--format", "c"]).status.code(), Some(0));
    let gait = |interpolation: &str| {
        format!("gait={{table={:?},interpolation=\"{interpolation}\"}}", out.to_str().unwrap())
    };
    let held = undulift(&["fly", SEDGE, "--set", &gait("hold")]);
    assert_eq!(held.status.code(), Some(2));
    assert!(complaint(&held).contains("fly with driven joints"), "{}", complaint(&held));
    let text = std::fs::read_to_string(&out).unwrap();
    let spoilt = text.replacen("{1500, 1500", "{1500, 1501", 1);
    assert_ne!(text, spoilt);
    std::fs::write(&out, spoilt).unwrap();
    let output = undulift(&["fly", SEDGE, "--set", &gait("linear")]);
    assert_eq!(output.status.code(), Some(2));
    assert!(complaint(&output).contains("checksum"), "{}", complaint(&output));
}

/// Held rows at the firmware's rate, read back and flown with servos: frames send what rows hold.
#[test]
fn twin_held_tables_fly_with_servos() {
    let folder = tempfile::tempdir().unwrap();
    let out = folder.path().join("t.h");
    let output = table(REED, &out, &["--format", "c", "--between", "hold", "--json"]);
    let told: Value = serde_json::from_str(&answer(&output)).expect("JSON");
    let gait = format!("gait={{table={:?},interpolation=\"hold\"}}", out.to_str().unwrap());
    let back = json(&["fly", REED, "--json", "--joints", "driven", "--set", &gait]);
    for key in ["glide_ratio", "distance_m", "peak_roll_deg", "peak_pitch_deg"] {
        let number = |value: &Value| value[key].as_f64().unwrap();
        assert_relative_eq!(number(&told["flown"]), number(&back), max_relative = 1e-4);
    }
}

/// The trade's file has the table that was chosen, within the tolerance, and one for every table
/// tried; the answer's numbers are those.
#[test]
fn twin_trade_file_tells_what_was_tried() {
    let folder = tempfile::tempdir().unwrap();
    let (out, trade) = (folder.path().join("t.json"), folder.path().join("trade.csv"));
    let args = ["--format", "json", "--tolerance", "1%", "--json", "--trade"];
    let output = table(REED, &out, &[&args[..], &[trade.to_str().unwrap()]].concat());
    let told: Value = serde_json::from_str(&answer(&output)).unwrap();
    let tried = told["trade"].as_array().unwrap();
    let mut reader = csv::Reader::from_path(&trade).unwrap();
    let header = reader.headers().unwrap().clone();
    let place = |name: &str| header.iter().position(|own| own == name).unwrap();
    let rows: Vec<csv::StringRecord> = reader.records().map(Result::unwrap).collect();
    assert_eq!(rows.len(), tried.len());
    let number = |row: &csv::StringRecord, name: &str| row[place(name)].parse::<f64>().ok();
    let mut chosen = 0;
    for (row, object) in rows.iter().zip(tried) {
        assert_eq!(number(row, "rows"), object["rows"].as_f64());
        assert_eq!(number(row, "glide_ratio"), object["flown"]["glide_ratio"].as_f64());
        assert_eq!(&row[place("within")] == "true", object["within"].as_bool().unwrap());
        let same = ["rows", "resolution"].iter().all(|key| object[*key] == told["table"][*key]);
        chosen += usize::from(same && &row[place("within")] == "true");
    }
    assert_eq!(chosen, 1);
    let written: Value = serde_json::from_str(&std::fs::read_to_string(&out).unwrap()).unwrap();
    let n_rows = written["loop"]["rows"].as_array().unwrap().len();
    assert_eq!(n_rows as u64, told["table"]["rows"].as_u64().unwrap());
}

/// Files that can't be made leave none of the others behind.
#[test]
fn twin_files_are_written_all_or_none() {
    let folder = tempfile::tempdir().unwrap();
    std::fs::create_dir(folder.path().join("t-stop.csv")).unwrap();
    let output = table(REED, &folder.path().join("t.csv"), &["--format", "csv"]);
    assert_eq!(output.status.code(), Some(2));
    assert!(complaint(&output).contains("t-stop.csv: it is a folder"), "{}", complaint(&output));
    assert_eq!(std::fs::read_dir(folder.path()).unwrap().count(), 1);
}

/// The same on any number of threads.
#[test]
fn twin_threads_change_nothing() {
    let folder = tempfile::tempdir().unwrap();
    let out = folder.path().join("t.h");
    let on = |threads: &str| {
        let args = ["--format", "c", "--tolerance", "2%", "--json", "--threads", threads];
        answer(&table(SEDGE, &out, &args))
    };
    assert_eq!(on("1"), on("3"));
}
