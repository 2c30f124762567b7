//! `undulift fly --launches` as its users meet it.

use approx::assert_relative_eq;
use serde_json::Value;

mod common;
use common::{answer, complaint, json, undulift};

/// A level bar without air, let go at a speed that alone differs, lands at speed times time:
/// distance is as normal as the speed is.
const BAR: &str = "[air]\npressure_pa = 0.0\n[body]\nsegments = 4\nlength_m = 0.5\nwidth_m = 0.02\n\
    thickness_m = 0.005\nstructure_kg = 0.5\nsection = \"plate\"\n[joints]\naxes = \"universal\"\n\
    [gait]\nfrequency_hz = 0.0\nlateral_amplitude_deg = 0.0\nlateral_waves = 1.0\n[launch]\n\
    height_m = 3.0\nspeed_m_s = 4.0\n[spread]\n\"launch.speed_m_s\" = { sd = 0.2 }\n";

fn bar(folder: &tempfile::TempDir) -> String {
    let path = folder.path().join("bar.toml");
    std::fs::write(&path, BAR).unwrap();
    path.to_str().unwrap().to_owned()
}

fn percentiles(object: &Value, key: &str) -> [f64; 3] {
    ["p05", "p50", "p95"].map(|p| object["spread"][key][p].as_f64().unwrap())
}

/// Normal distance: t = √(2·2.9975/g) = 0.781 869 s, mean 4t = 3.127 48 m, sd 0.2t = 0.156 374 m,
/// so 5 % and 95 % stand 1.644 85 sd from the mean (normal table). With 4000 launches the standard
/// error of such a percentile is 0.034 sd; four of those are allowed.
#[test]
fn analytic_bands_of_a_normal_distance() {
    let folder = tempfile::tempdir().unwrap();
    let object = json(&["fly", &bar(&folder), "--launches", "4000", "--seed", "5", "--json"]);
    let (mean, sd) = (3.127_48, 0.156_374);
    let [low, median, high] = percentiles(&object, "distance_m");
    assert_relative_eq!(low, mean - 1.644_85 * sd, epsilon = 0.14 * sd);
    assert_relative_eq!(median, mean, epsilon = 0.08 * sd);
    assert_relative_eq!(high, mean + 1.644_85 * sd, epsilon = 0.14 * sd);
    assert_eq!(object["landed_share"], 1.0);
    // What doesn't depend on the speed doesn't differ.
    let [low, _, high] = percentiles(&object, "time_s");
    assert_relative_eq!(low, high, epsilon = 1e-9);
}

/// The bands are the percentiles of the rows that --csv writes, computed here directly.
#[test]
fn twin_bands_are_those_of_the_rows() {
    let folder = tempfile::tempdir().unwrap();
    let csv = folder.path().join("rows.csv");
    let args = ["fly", "designs/sedge-10.toml", "--launches", "41", "--json", "--csv"];
    let object = json(&[&args[..], &[csv.to_str().unwrap()]].concat());
    let mut rows = csv::Reader::from_path(&csv).unwrap();
    let columns = rows.headers().unwrap().clone();
    assert_eq!(&columns[0], "launch");
    for column in [
        "launch.spin_deg_s[2]",
        "section.domed.pressure_centre",
        "mass_factor",
        "end",
        "peak_pitch_deg",
    ] {
        assert!(columns.iter().any(|name| name == column), "{columns:?}");
    }
    let at = columns.iter().position(|name| name == "distance_m").unwrap();
    let mut distances: Vec<f64> =
        rows.records().map(|row| row.unwrap()[at].parse().unwrap()).collect();
    assert_eq!(distances.len(), 41);
    distances.sort_by(f64::total_cmp);
    // Of 41 values the 5th, 50th and 95th percentiles are the 3rd, 21st and 39th.
    assert_eq!(percentiles(&object, "distance_m"), [distances[2], distances[20], distances[38]]);
}

/// The same seed gives the same bytes on any number of threads, another seed others.
#[test]
fn twin_threads_do_not_matter() {
    let with = |threads: &str, seed: &str| {
        let args = ["fly", "designs/reed-16.toml", "--launches", "40", "--json", "--threads"];
        answer(&undulift(&[&args[..], &[threads, "--seed", seed]].concat()))
    };
    assert_eq!(with("1", "9"), with("2", "9"));
    assert_eq!(with("2", "9"), with("3", "9"));
    assert_ne!(with("2", "9"), with("2", "10"));
}

#[test]
fn spread_none_makes_all_launches_alike() {
    let set = ["--set", "spread=none"];
    let args = ["fly", "designs/reed-16.toml", "--launches", "5", "--json"];
    let object = json(&[&args[..], &set].concat());
    let [low, _, high] = percentiles(&object, "distance_m");
    assert_eq!(low, high);
    assert_eq!(low, object["distance_m"].as_f64().unwrap());
}

#[test]
fn wrong_flags_could_not_run() {
    let wrong: [&[&str]; 5] = [
        &["fly", "designs/reed-16.toml", "--launches", "0"],
        &["fly", "designs/reed-16.toml", "--launches", "2", "--threads", "0"],
        &["fly", "designs/reed-16.toml", "--seed", "2"],
        &["fly", "designs/reed-16.toml", "--csv", "x.csv"],
        &["fly", "designs/reed-16.toml", "--launches", "2", "--csv", "no/such/folder/x.csv"],
    ];
    for args in wrong {
        let output = undulift(args);
        assert_eq!(output.status.code(), Some(2), "{args:?}: {}", complaint(&output));
    }
}

#[test]
fn frozen_words_for_people() {
    let output = undulift(&["fly", "designs/pair-still.toml", "--launches", "60", "--seed", "2"]);
    insta::assert_snapshot!("launches", format!("{}\n{}", answer(&output), complaint(&output)));
}

/// The demo that the README flies is no gait for one launch only: of its default spread nearly all
/// land upright.
#[test]
fn frozen_reed_16_stays_upright() {
    let args = ["fly", "designs/reed-16.toml", "--launches", "400", "--seed", "9", "--json"];
    let upright_share = json(&args)["upright_share"].as_f64().unwrap();
    assert!(upright_share > 0.95, "{upright_share}");
}
