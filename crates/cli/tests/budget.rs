//! `undulift budget` as its users meet it.

use approx::assert_relative_eq;
use serde_json::Value;

mod common;
use common::{answer, complaint, json, undulift};

const REED: &str = "designs/reed-16.toml";
const HASTY: &str = "designs/hasty-16.toml";

fn passes(args: &[&str]) -> bool {
    let output = undulift(&[&["budget"], args].concat());
    match output.status.code() {
        Some(0) => true,
        Some(1) => false,
        _ => panic!("{args:?}: {}", complaint(&output)),
    }
}

#[test]
fn json_has_the_promised_keys() {
    let object = json(&["budget", REED, "--json"]);
    for key in ["design", "joints", "battery", "least_margin", "passes", "worst"] {
        assert!(object.get(key).is_some(), "{key}");
    }
    let joints = object["joints"].as_array().unwrap();
    assert_eq!(joints.len(), 30);
    for key in [
        "joint",
        "axis",
        "servo",
        "peak_torque_nm",
        "rms_torque_nm",
        "peak_speed_deg_s",
        "least_margin",
        "least_margin_at_s",
    ] {
        assert!(joints.iter().all(|joint| joint.get(key).is_some()), "{key}");
    }
    for key in ["peak_current_a", "least_voltage_v", "energy_j_per_drop", "drops_per_charge"] {
        assert!(object["battery"][key].is_number(), "{key}");
    }
    let least = joints.iter().map(|joint| joint["least_margin"].as_f64().unwrap());
    assert_eq!(object["least_margin"].as_f64().unwrap(), least.fold(f64::INFINITY, f64::min));
}

/// A demo passes and one fails; what fails is named with joint, axis and reason.
#[test]
fn one_demo_passes_and_one_fails() {
    assert!(passes(&[REED]));
    assert!(json(&["budget", REED, "--json"])["worst"].is_null());
    let failing = json(&["budget", HASTY, "--json"]);
    assert_eq!(failing["passes"], false);
    assert_eq!(failing["worst"]["axis"], "yaw");
    assert!(failing["worst"]["reason"].as_str().unwrap().contains("torque margin"));
    assert_eq!(undulift(&["budget", HASTY]).status.code(), Some(1));
}

/// Remedies are true: with what is printed the limits are met, with 80 % of it they aren't.
#[test]
fn twin_remedies_are_true() {
    let slower = json(&["budget", HASTY, "--json"])["slower_gait_hz"].as_f64().unwrap();
    let own = 1.666_667;
    assert!(passes(&[HASTY, "--set", &format!("gait.frequency_hz={slower:.4}")]));
    let too_little = own - 0.8 * (own - slower);
    assert!(!passes(&[HASTY, "--set", &format!("gait.frequency_hz={too_little}")]));
    // The factors on stall torque or no-load speed stand in the words.
    let words = complaint(&undulift(&["budget", HASTY]));
    let hint = words.lines().find(|line| line.contains("times the stall torque")).unwrap();
    let factors: Vec<f64> = hint.split_whitespace().filter_map(|word| word.parse().ok()).collect();
    let [stronger, faster] = factors[..] else { panic!("{hint}") };
    for (key, own, factor) in
        [("no_load_speed_deg_s", 620.0, faster), ("stall_torque_nm", 1.2, stronger)]
    {
        // At the same currents such a servo may be better than any that is made, so it gets more
        // of both currents; margins don't ask for them.
        let with = |factor: f64| {
            let sets = [
                format!("servo.mid-34.{key}={}", own * factor),
                format!("servo.mid-34.stall_current_a={}", 4.2 * 2.0),
                format!("servo.mid-34.no_load_current_a={}", 0.18 * 2.0),
            ];
            let args: Vec<&str> = sets.iter().flat_map(|set| ["--set", set]).collect();
            let args = [&[HASTY, "--set", "battery.current_limit_a=1000"], &args[..]].concat();
            let limit = "battery.regulator.current_limit_a=1000";
            passes(&[&args[..], &["--set", limit]].concat())
        };
        // The words round up to a hundredth.
        assert!(with(factor), "{key} times {factor}");
        assert!(!with(1.0 + 0.8 * (factor - 1.0)), "{key} times 80 % of {factor}");
    }
}

/// Held out level by its first segment, every pitch joint bears what is behind it: the last one half
/// a segment's weight times half its length, by hand 0.0108 kg of tail segment.
#[test]
fn analytic_held_out_on_the_bench() {
    let args = ["budget", "tests/data/flights/open-1-plate.toml", "--case", "held-out", "--json"];
    let once = json(&[&args[..], &["--clamp", "1"]].concat());
    let last = |object: &Value| {
        let joints = object["joints"].as_array().unwrap();
        let last = joints.iter().find(|j| j["joint"] == 11 && j["axis"] == "pitch").unwrap();
        last["peak_torque_nm"].as_f64().unwrap()
    };
    // Line density 0.6 at the ends, 1 in the middle, parabolic: 0.663 89 at the tail's midpoint, 23/24,
    // and 10.411 11 summed over all twelve.
    let tail_kg = 0.36 * 0.663_89 / 10.411_11;
    let expected_nm = tail_kg * 9.806_65 * (1.1 / 12.0) / 2.0;
    assert_relative_eq!(last(&once), expected_nm, max_relative = 1e-3);
    let caught = json(&[&args[..], &["--clamp", "1", "--load-factor", "3"]].concat());
    assert_relative_eq!(last(&caught), 3.0 * expected_nm, max_relative = 1e-3);
    // Without servos there are torques and no margins.
    assert!(once["least_margin"].is_null());
    assert_eq!(once["passes"], true);
}

/// A structure as much lighter as is printed meets the limit, four fifths of that change don't;
/// whether the design gives a profile, a number or a list. Where nothing helps, nothing is said.
#[test]
fn twin_a_lighter_structure_is_a_true_remedy() {
    let list: Vec<f64> = (0..16).map(|k| 0.010 + 0.001 * f64::from(k.min(15 - k))).collect();
    let cases = [
        ("1.47", "body.structure_kg.total", vec![0.22]),
        ("1.5", "body.structure_kg", vec![0.22]),
        ("1.47", "body.structure_kg", list),
    ];
    for (frequency_hz, key, own_kg) in cases {
        let with = |factor: f64| {
            let values: Vec<f64> = own_kg.iter().map(|own_kg| own_kg * factor).collect();
            let text = format!("{values:?}");
            let text = if values.len() == 1 { text.replace(['[', ']'], "") } else { text };
            format!("{key}={text}")
        };
        let gait = format!("gait.frequency_hz={frequency_hz}");
        let args = [HASTY, "--set", &gait, "--set", &with(1.0)];
        let object = json(&[&["budget", "--json"], &args[..]].concat());
        let factor = object["lighter_structure_factor"].as_f64().unwrap();
        assert!((0.2..1.0).contains(&factor));
        let set = object["lighter_structure_set"].as_str().unwrap();
        let set = set.strip_prefix("--set ").unwrap().trim_matches('\'');
        assert!(set.starts_with(&format!("{key}=")), "{set}");
        assert!(complaint(&undulift(&[&["budget"], &args[..]].concat())).contains(set));
        let passes_with = |set: &str| passes(&[HASTY, "--set", &gait, "--set", set]);
        assert!(passes_with(set), "{set}");
        assert!(!passes_with(&with(1.0 - 0.8 * (1.0 - factor))), "{key} at {frequency_hz} Hz");
    }
    let hasty = json(&["budget", HASTY, "--json"]);
    assert!(hasty["lighter_structure_factor"].is_null());
    assert!(!complaint(&undulift(&["budget", HASTY])).contains("lighter"));
}

/// Columns of a table that the command wrote.
fn columns(path: &std::path::Path) -> (Vec<String>, Vec<Vec<f64>>) {
    let mut table = csv::Reader::from_path(path).unwrap();
    let names = table.headers().unwrap().iter().map(str::to_owned).collect();
    let row = |row: csv::StringRecord| row.iter().map(|cell| cell.parse().unwrap()).collect();
    (names, table.records().map(|record| row(record.unwrap())).collect())
}

/// What a budget says of hinges and joints is the largest of what the histories say, row by row.
#[test]
fn twin_histories_have_the_peaks_of_the_budget() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("torques.csv");
    let args = ["budget", "designs/sedge-10.toml", "--json", "--every-ms", "1", "--histories"];
    let object = json(&[&args[..], &[path.to_str().unwrap()]].concat());
    let (names, rows) = columns(&path);
    assert_eq!(names[..3], ["time_s", "yaw_1_nm", "yaw_3_nm"]);
    assert_eq!(names[10], "yaw_1_deg_s");
    assert_eq!(names.last().unwrap(), "hinge_9_nm");
    let peak = |name: &str| {
        let at = names.iter().position(|own| own == name).unwrap();
        rows.iter().map(|row| row[at].abs()).fold(0.0, f64::max)
    };
    for joint in object["joints"].as_array().unwrap() {
        let (number, axis) = (&joint["joint"], joint["axis"].as_str().unwrap());
        for (name, key) in [
            (format!("hinge_{number}_n"), "hinge_force_n"),
            (format!("hinge_{number}_nm"), "hinge_moment_nm"),
            (format!("{axis}_{number}_deg_s"), "peak_speed_deg_s"),
        ] {
            let told = joint[key].as_f64().unwrap();
            assert_relative_eq!(peak(&name), told, max_relative = 1e-12);
        }
    }
    let text = answer(&undulift(&["budget", "designs/sedge-10.toml", "--hinges"]));
    let table = text.rsplit("hinge N·m").next().unwrap();
    let told: f64 =
        table.lines().nth(3).unwrap().split_whitespace().nth(1).unwrap().parse().unwrap();
    assert!((told - peak("hinge_3_n")).abs() <= 0.005 + 1e-9, "{table}");
}

/// Poses of a file for the twelve segments of a design without servos: all straight and level but
/// for what is given.
fn poses(folder: &std::path::Path, more: &str, rows: &[&str]) -> String {
    let axes =
        ["yaw", "pitch"].map(|axis| (1..=11).map(move |joint| format!("{axis}_{joint}_deg")));
    let names: Vec<String> = axes.into_iter().flatten().collect();
    let straight = vec!["0"; names.len()].join(",");
    let rows: Vec<String> = rows.iter().map(|row| format!("{straight}{row}")).collect();
    let path = folder.join("poses.csv");
    std::fs::write(&path, format!("{}{more}\n{}\n", names.join(","), rows.join("\n"))).unwrap();
    path.to_str().unwrap().to_owned()
}

/// Straight, level, one pose is what --case held-out holds; nose up by 60° half the weight bends the
/// joints (cos 60°), and on its side none of it bends them in pitch, all of it in yaw.
#[test]
fn analytic_poses_of_a_file() {
    const OPEN: &str = "tests/data/flights/open-1-plate.toml";
    let folder = tempfile::tempdir().unwrap();
    let peaks = |object: &Value| -> Vec<f64> {
        let joints = object["joints"].as_array().unwrap();
        joints.iter().map(|joint| joint["peak_torque_nm"].as_f64().unwrap()).collect()
    };
    let clamped = ["--clamp", "5", "--load-factor", "2", "--json"];
    let with = |case: &str| json(&[&["budget", OPEN, "--case", case], &clamped[..]].concat());
    let level = peaks(&with("held-out"));
    let of = |more: &str, rows: &[&str]| with(&poses(folder.path(), more, rows));
    assert_eq!(peaks(&of("", &[""])), level);
    assert_eq!(peaks(&of(",name", &[",flat"])), level);
    for (rows, yaw, pitch) in [([",0,60"], 0.0, 0.5), ([",90,0"], 1.0, 0.0)] {
        let found = peaks(&of(",roll_deg,pitch_deg", &rows));
        for joint in 0..11 {
            let bent_nm = level[11 + joint];
            assert_relative_eq!(found[joint], yaw * bent_nm, epsilon = 1e-12);
            assert_relative_eq!(found[11 + joint], pitch * bent_nm, epsilon = 1e-12);
        }
    }
    let three = of(",roll_deg,pitch_deg", &[",0,60", ",0,-20", ",0,60"]);
    assert_eq!((&three["rows"], &three["worst_row"]), (&3.into(), &2.into()));
    assert_relative_eq!(
        peaks(&three)[15],
        level[15] * 20_f64.to_radians().cos(),
        max_relative = 1e-12
    );
    assert!(three["least_margin"].is_null());
}

/// The trace of a flight is a file of poses. Its budget's margins are the least of those of its rows
/// taken one by one, and the worst row is the one that says so.
#[test]
fn twin_a_trace_serves_as_poses() {
    let folder = tempfile::tempdir().unwrap();
    let path = |name: &str| folder.path().join(name).to_str().unwrap().to_owned();
    let (trace, one) = (path("trace.csv"), path("one.csv"));
    undulift(&["fly", REED, "--trace", &trace, "--every-ms", "400"]);
    let args = ["budget", REED, "--clamp", "8", "--json", "--case"];
    let all = json(&[&args[..], &[&trace]].concat());
    let text = std::fs::read_to_string(&trace).unwrap();
    let (names, rows) = text.split_once('\n').unwrap();
    let margins: Vec<f64> = rows
        .lines()
        .map(|row| {
            std::fs::write(&one, format!("{names}\n{row}\n")).unwrap();
            json(&[&args[..], &[&one]].concat())["least_margin"].as_f64().unwrap()
        })
        .collect();
    assert_eq!(all["rows"].as_u64().unwrap() as usize, margins.len());
    let least = margins.iter().copied().fold(f64::INFINITY, f64::min);
    assert_eq!(all["least_margin"], least);
    let joints = all["joints"].as_array().unwrap();
    let worst = joints.iter().find(|joint| joint["least_margin"] == least).unwrap();
    let row = worst["least_margin_row"].as_u64().unwrap() as usize;
    assert_eq!(margins[row - 1], least);
    let worst_row = all["worst_row"].as_u64().unwrap();
    let reason = all["worst"]["reason"].as_str().unwrap();
    assert!(reason.ends_with(&format!(", row {worst_row}")), "{reason}");
    let told = answer(&undulift(&["budget", REED, "--clamp", "8", "--case", &trace]));
    assert!(told.contains(&format!("row {worst_row} of {}", margins.len())), "{told}");
}

/// A gait's shape a whole cycle after release is that of the release; half a cycle after it isn't.
#[test]
fn analytic_a_gait_comes_round() {
    let args = ["budget", REED, "--case", "release", "--clamp", "8", "--json"];
    let at = |at_s: &str| json(&[&args[..], &["--at-s", at_s]].concat());
    let torque = |object: &Value| object["joints"][5]["peak_torque_nm"].as_f64().unwrap();
    let release = torque(&json(&args));
    // 40 frames of 50 Hz a cycle.
    assert_relative_eq!(torque(&at("0.8")), release, max_relative = 1e-9);
    assert_eq!(torque(&at("0")), release);
    assert!((torque(&at("0.2")) - release).abs() > 0.01 * release);
}

/// Launches that don't differ all have the design's own budget, so every percentile is its figure.
#[test]
fn twin_launches_alike_have_the_budget_of_the_design() {
    let args = ["budget", REED, "--launches", "3", "--set", "spread=none", "--json"];
    let object = json(&args);
    let own = json(&["budget", REED, "--json"]);
    for (key, value) in [
        ("least_margin", &own["least_margin"]),
        ("battery.peak_current_a", &own["battery"]["peak_current_a"]),
        ("battery.least_voltage_v", &own["battery"]["least_voltage_v"]),
        ("battery.energy_j_per_drop", &own["battery"]["energy_j_per_drop"]),
        ("battery.drops_per_charge", &own["battery"]["drops_per_charge"]),
        ("battery.regulator_peak_current_a", &own["battery"]["regulator_peak_current_a"]),
    ] {
        for percentile in ["p05", "p50", "p95"] {
            assert_eq!(object["spread"][key][percentile], *value, "{key}");
        }
    }
    assert_eq!((&object["passing_share"], &object["refused"]), (&1.0.into(), &0.into()));
    let joints = object["joints"].as_array().unwrap();
    for (joint, own) in joints.iter().zip(own["joints"].as_array().unwrap()) {
        assert_eq!(joint["p95_peak_torque_nm"], own["peak_torque_nm"]);
        assert_eq!(joint["p05_least_margin"], own["least_margin"]);
    }
}

/// The launches are those of `fly`, on any number of threads: as many land, and each budget is that
/// of its flight. Which pass is counted here from designs written with what `fly` drew.
#[test]
fn twin_launches_are_those_of_fly() {
    let folder = tempfile::tempdir().unwrap();
    let csv = folder.path().join("rows.csv");
    let speed = "spread={\"launch.speed_m_s\" = { sd = 0.4 }}";
    let gait = "gait.frequency_hz=1.459";
    let args = [HASTY, "--set", speed, "--set", gait, "--launches", "12", "--seed", "4", "--json"];
    let with = |threads: &str| {
        let output = undulift(&[&["budget"], &args[..], &["--threads", threads]].concat());
        assert_eq!(output.status.code(), Some(0), "{}", complaint(&output));
        answer(&output)
    };
    let once = with("1");
    assert_eq!(once, with("3"));
    let object: Value = serde_json::from_str(&once).unwrap();
    let fly = [&["fly"], &args[..], &["--csv", csv.to_str().unwrap()]].concat();
    let flown = json(&fly);
    assert_eq!(object["landed_share"], flown["upright_share"]);
    let mut rows = csv::Reader::from_path(&csv).unwrap();
    let speeds: Vec<String> = rows.records().map(|row| row.unwrap()[1].to_owned()).collect();
    let passing = speeds.iter().filter(|speed_m_s| {
        let speed = format!("launch.speed_m_s={speed_m_s}");
        passes(&[HASTY, "--set", gait, "--set", &speed])
    });
    let passing = passing.count() as f64;
    assert!((1.0..12.0).contains(&passing), "{passing}");
    assert_eq!(object["passing_share"], passing / 12.0);
}

#[test]
fn what_cannot_be_asked_is_refused() {
    let folder = tempfile::tempdir().unwrap();
    let file = |name: &str, text: &str| {
        let path = folder.path().join(name);
        std::fs::write(&path, text).unwrap();
        path.to_str().unwrap().to_owned()
    };
    let few = file("few.csv", "yaw_1_deg\n0\n");
    let set = |set: &'static str| vec!["budget", REED, "--set", set];
    let case = |case: &'static str, more: &[&'static str]| {
        [&["budget", REED, "--case", case], more].concat()
    };
    let wrong: Vec<(Vec<&str>, &str)> = vec![
        (case("held-out", &[]), "--clamp"),
        (case("held-out", &["--clamp", "17"]), "no segment 17"),
        (case("held-out", &["--clamp", "0"]), "0"),
        (case("held-out", &["--clamp", "-1"]), "-1"),
        (case("release", &["--clamp", "17"]), "no segment 17"),
        (case("fligth", &["--clamp", "8"]), "fligth"),
        (case("designs", &["--clamp", "8"]), "folder"),
        (case("held-out", &["--clamp", "8", "--at-s", "1"]), "--case release"),
        (case("flight", &["--at-s", "1"]), "--case release"),
        (case("flight", &["--clamp", "17"]), "--clamp"),
        (case("release", &["--clamp", "8", "--at-s", "-1"]), "-1"),
        (case("release", &["--clamp", "8", "--at-s", "nan"]), "nan"),
        (case("release", &["--clamp", "8", "--launches", "3"]), "--case flight"),
        (case("flight", &["--launches", "0"]), "--launches"),
        (case("flight", &["--seed", "3"]), "--launches"),
        (case("flight", &["--launches", "3", "--threads", "0"]), "--threads"),
        (vec!["budget", REED, "--clamp", "8", "--case", &few], "yaw_2_deg"),
        (vec!["budget", REED, "--case", &few], "yaw_2_deg"),
        (vec!["budget", REED, "--drops", "0"], "drops"),
        (set("servo.mid-34.stall_torque_nm=nan"), "nan"),
        (set("servo.mid-34.stall_torque_nm=0"), "stall_torque_nm"),
        (set("servo.mid-34.no_load_current_a=9"), "no_load_current_a"),
        (set("battery.cells=0"), "cells"),
        (set("joints.yaw_servo=[\"mid-34\", \"none\"]"), "15 joints"),
        (set("joints.yaw_servo=nobody"), "nobody"),
    ];
    for (args, told) in wrong {
        let output = undulift(&args);
        assert_eq!(output.status.code(), Some(2), "{args:?}");
        assert!(complaint(&output).contains(told), "{args:?}: {}", complaint(&output));
        assert!(answer(&output).is_empty(), "{args:?}");
    }
}

/// A pose that a joint can't take is a limit missed, told with its row.
#[test]
fn twin_poses_beyond_travel_are_missed() {
    let folder = tempfile::tempdir().unwrap();
    let names = ["yaw", "pitch"].map(|axis| (1..=15).map(move |k| format!("{axis}_{k}_deg")));
    let names: Vec<String> = names.into_iter().flatten().collect();
    let row = |third_deg: &str| {
        let cell = |name: &String| if name == "yaw_3_deg" { third_deg } else { "0" };
        names.iter().map(cell).collect::<Vec<_>>().join(",")
    };
    let path = folder.path().join("bent.csv");
    let args = ["budget", REED, "--clamp", "8", "--load-factor", "0.01", "--json"];
    let case = ["--case", path.to_str().unwrap()];
    for (third_deg, missed) in [("60", false), ("61", true)] {
        let text = format!("{}\n{}\n{}\n", names.join(","), row("10"), row(third_deg));
        std::fs::write(&path, text).unwrap();
        let object = json(&[&args[..], &case].concat());
        assert_eq!(object["passes"], !missed, "{}", object["warnings"]);
        if missed {
            let reason = "joint 3 is held at 61.0° of yaw in row 2, beyond its travel of 60.0°";
            assert_eq!(object["worst"]["reason"], reason);
            assert_eq!((&object["worst"]["joint"], &object["worst_row"]), (&3.into(), &2.into()));
        }
    }
}

#[test]
fn frozen_words_for_people() {
    let output = undulift(&["budget", HASTY]);
    insta::assert_snapshot!("budget", format!("{}\n{}", answer(&output), complaint(&output)));
    insta::assert_snapshot!("budget_help", answer(&undulift(&["budget", "--help"])));
    let launches = ["budget", "designs/pair-wave.toml", "--launches", "20", "--hinges"];
    let output = undulift(&launches);
    insta::assert_snapshot!("launches", format!("{}\n{}", answer(&output), complaint(&output)));
    let args = ["budget", REED, "--case", "release", "--at-s", "0.3", "--clamp", "8"];
    let output = undulift(&args);
    insta::assert_snapshot!("bench", format!("{}\n{}", answer(&output), complaint(&output)));
}
