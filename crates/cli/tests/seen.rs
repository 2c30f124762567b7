//! `undulift drop --seen` as its users meet it.

use approx::assert_relative_eq;
use serde_json::Value;

mod common;
use common::{answer, complaint, undulift};

/// A level bar without air, let go at a speed that alone differs: it lands at speed times time,
/// whatever lift, drag and servos are.
const BAR: &str = "[air]\npressure_pa = 0.0\n[body]\nsegments = 4\nlength_m = 0.5\nwidth_m = 0.02\n\
    thickness_m = 0.005\nstructure_kg = 0.5\nsection = \"plate\"\n[joints]\naxes = \"universal\"\n\
    [gait]\nfrequency_hz = 0.0\nlateral_amplitude_deg = 0.0\nlateral_waves = 1.0\n[launch]\n\
    height_m = 4.0\nspeed_m_s = 4.0\n[spread]\n\"launch.speed_m_s\" = { sd = 0.2 }\n";

const HALL: &str = "[hall]\nlength_m = 20\nwidth_m = 12\nheight_m = 6\n[release]\nfrom_wall_m = 3\n\
    across_m = 6\nheights_m = [2.0, 3.0, 4.0]\n[catch]\nkind = \"mat\"\nheight_m = 0.1\n\
    length_m = 8\nwidth_m = 8\nfrom_release_m = -1\nstopping_m = 0.2\n[faults]\nshare = 0.0\n";

const HEADER: &str = "height_m,distance_m,side_m,time_s,peak_tilt_deg,ended\n";

struct Files(tempfile::TempDir);

impl Files {
    fn with(seen: &str) -> Self {
        let folder = tempfile::tempdir().unwrap();
        let files = [("bar.toml", BAR), ("hall.toml", HALL), ("seen.csv", seen)];
        for (name, text) in files {
            std::fs::write(folder.path().join(name), text).unwrap();
        }
        Self(folder)
    }

    fn path(&self, name: &str) -> String {
        self.0.path().join(name).to_str().unwrap().to_owned()
    }

    fn drop(&self, more: &[&str]) -> std::process::Output {
        let [bar, hall, seen] = ["bar.toml", "hall.toml", "seen.csv"].map(|name| self.path(name));
        undulift(&[&["drop", &bar, &hall, "--seen", &seen, "--flights", "600"][..], more].concat())
    }
}

/// Rows of five drops from one height, at these distances from 4 m/s times the time of the fall.
fn rows(height_m: f64, off_m: [f64; 5], ended: &str) -> String {
    let time_s = (2.0 * (height_m - 0.1 - 0.0025) / 9.806_65_f64).sqrt();
    let row = |off_m: f64| format!("{height_m},{},0,{time_s},0,{ended}\n", 4.0 * time_s + off_m);
    off_m.map(row).concat()
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("{value}"))
}

/// Too few drops say go on at the same height; what wasn't measured doesn't count.
#[test]
fn twin_too_little_was_seen_to_go_higher() {
    for (rows, height_m, drops) in [
        ("2.0,2.51,,,,landed\n", 2.0, 2),
        ("2.0,,,,,landed\n2.0,,,,,landed\n2.0,,,,,landed\n", 2.0, 3),
        // A height was left out.
        ("3.0,3.1,,,,landed\n3.0,3.2,,,,landed\n3.0,3.0,,,,landed\n", 2.0, 3),
    ] {
        let output = Files::with(&format!("{HEADER}{rows}")).drop(&["--json"]);
        let object: Value = serde_json::from_str(&answer(&output)).unwrap();
        assert_eq!(object["seen"]["verdict"], "go_on", "{rows}");
        assert_eq!(object["seen"]["next_height_m"], height_m, "{rows}");
        assert_eq!(object["seen"]["next_drops"], drops, "{rows}");
    }
}

/// One drop that tilts further than any that was flown, here not at all, measuring included, says
/// stop: 0.2 × 20° = 4.4° by ln(tilt + 20°) ± 0.2.
#[test]
fn analytic_a_tilt_beyond_all_says_stop() {
    for (tilt_deg, status) in [(4.0, 0), (5.0, 1)] {
        let rows = rows(2.0, [-0.1, 0.2, 0.0, -0.2, 0.1], "landed");
        let rows = rows.replacen(",0,landed", &format!(",{tilt_deg},landed"), 1);
        let output = Files::with(&format!("{HEADER}{rows}")).drop(&[]);
        assert_eq!(output.status.code(), Some(status), "{tilt_deg}: {}", complaint(&output));
        assert_eq!(complaint(&output).contains("further than any that was computed"), status == 1);
    }
}

/// Drops as they must be say go on, to the next height. They tell nothing of lift and drag: those keep
/// the percentiles of the plan's own distribution, 1.54^±0.9 and 0.71^±0.9. The bands from 4 m stay
/// 4t ± 1.645 × 0.2t, t = √(2 × 3.8975/g) = 0.891 550 s.
#[test]
fn analytic_drops_as_planned_go_on_and_tell_nothing_of_the_air() {
    let files =
        Files::with(&format!("{HEADER}{}", rows(2.0, [-0.1, 0.2, 0.0, -0.2, 0.1], "landed")));
    let output = files.drop(&["--json"]);
    assert_eq!(output.status.code(), Some(0), "{}", complaint(&output));
    let object: Value = serde_json::from_str(&answer(&output)).unwrap();
    let seen = &object["seen"];
    assert_eq!(seen["verdict"], "go_on");
    assert_eq!(seen["next_height_m"], 3.0);
    assert_eq!(seen["drops"], 5);
    assert!(number(&seen["chance"]) > 0.05, "{}", seen["chance"]);
    for (key, base) in [("lift_scale", 1.54_f64), ("drag_scale", 0.71)] {
        let ends = [base.powf(-0.9), base.powf(0.9)];
        let [low, high] = [ends[0].min(ends[1]), ends[0].max(ends[1])];
        assert_relative_eq!(number(&seen[key]["p05"]), low, max_relative = 0.06);
        assert_relative_eq!(number(&seen[key]["p95"]), high, max_relative = 0.06);
    }
    let (time_s, top) = (0.891_550, &seen["ladder"][2]);
    let sd = 0.2 * time_s;
    assert_relative_eq!(number(&top["distance_m"]["p50"]), 4.0 * time_s, epsilon = 0.15 * sd);
    let p95 = 4.0 * time_s + 1.644_85 * sd;
    assert_relative_eq!(number(&top["distance_m"]["p95"]), p95, epsilon = 0.35 * sd);
    assert_relative_eq!(number(&top["time_s"]["p50"]), time_s, epsilon = 1e-4);
    assert_eq!([&seen["ladder"][0]["seen"], &top["seen"]], [5, 0]);
}

/// Five drops 0.4 m too far are off by 0.4/√(0.128² + 0.05²)·√5 = 6.5 standard errors.
#[test]
fn analytic_drops_too_far_say_stop() {
    let files =
        Files::with(&format!("{HEADER}{}", rows(2.0, [0.3, 0.5, 0.4, 0.35, 0.45], "landed")));
    let output = files.drop(&[]);
    assert_eq!(output.status.code(), Some(1));
    let told = complaint(&output);
    assert!(told.contains("most of all distance from 2.0 m, 2.89 m in the mean of 5"), "{told}");
    assert!(!answer(&output).contains("by what was seen, 5 %"), "{}", answer(&output));
    assert!(answer(&output).contains("STOP"));
}

/// What ended badly says stop, whatever was measured of it; the hall's misfits are told besides.
#[test]
fn twin_what_ended_badly_says_stop() {
    for (ended, told) in [
        ("touched", "5 of 5 drops from 3.0 m touched something"),
        ("failed", "5 of 5 drops from 3.0 m failed"),
        ("inverted", "5 of 5 drops from 3.0 m turned over, where 0.0 % were to"),
        ("missed_catch", "5 of 5 drops from 3.0 m missed the catch, where 0.0 % were to"),
    ] {
        let files = Files::with(&format!("{HEADER}{}", rows(3.0, [0.0; 5], ended)));
        let output = files.drop(&["--json"]);
        assert_eq!(output.status.code(), Some(1), "{ended}");
        let object: Value = serde_json::from_str(&answer(&output)).unwrap();
        assert_eq!(object["seen"]["verdict"], "stop");
        let reason = object["seen"]["reasons"][0].as_str().unwrap();
        assert!(reason.contains(told), "{reason}");
        assert!(complaint(&output).contains(told));
        assert!(complaint(&output).contains("nothing was seen from 2.0 m"));
    }
}

/// From 4 m one in two would land beyond a mat that ends at 3.57 m: the second rung was fine, the third
/// isn't tried.
#[test]
fn analytic_the_next_height_must_fit() {
    let off_m = [-0.1, 0.2, 0.0, -0.2, 0.1];
    let [low, high] = [2.0, 3.0].map(|height_m| rows(height_m, off_m, "landed"));
    let files = Files::with(&format!("{HEADER}{low}{high}"));
    std::fs::write(files.path("hall.toml"), HALL.replace("length_m = 8", "length_m = 4.57"))
        .unwrap();
    let output = files.drop(&["--json"]);
    assert_eq!(output.status.code(), Some(1));
    let object: Value = serde_json::from_str(&answer(&output)).unwrap();
    let share = number(&object["seen"]["ladder"][2]["missed_catch_share"]);
    assert!((0.4..0.6).contains(&share), "{share}");
    let reason = object["seen"]["reasons"][0].as_str().unwrap();
    assert!(
        reason.starts_with("from 4.0 m,") && reason.contains("would miss the catch"),
        "{reason}"
    );
}

/// All files' mistakes at once, nothing flown, status 2.
#[test]
fn twin_mistakes_in_what_was_seen() {
    let files = Files::with(&format!("{HEADER}2.5,2,0,0.6,3,landed\n2.0,2,0,0.6,3,crashed\n"));
    std::fs::write(files.path("bar.toml"), "[body]\n").unwrap();
    let output = files.drop(&[]);
    assert_eq!(output.status.code(), Some(2));
    let told = complaint(&output);
    assert!(told.contains("crashed") && told.contains("gait"), "{told}");
    assert!(answer(&output).is_empty());
    let files = Files::with(&format!("{HEADER}2.5,2,0,0.6,3,landed\n"));
    assert!(complaint(&files.drop(&[])).contains("2.5 m is no height of the hall's ladder"));
    let few = Files::with(&format!("{HEADER}{}", rows(2.0, [0.0; 5], "landed")));
    let output = few.drop(&["--flights", "30"]);
    assert_eq!(output.status.code(), Some(2), "{}", answer(&output));
}

/// The sheet tells the verdict, what was seen, and the bands of JSON.
#[test]
fn twin_a_sheet_for_the_second_rung() {
    let files = Files::with(&format!("{HEADER}2.0,2.51,0.03,0.62,4,landed\n2.0,2.62,,,,landed\n"));
    let sheet = files.path("sheet.md");
    let object: Value =
        serde_json::from_str(&answer(&files.drop(&["--json", "--sheet", &sheet]))).unwrap();
    let text = std::fs::read_to_string(sheet).unwrap();
    assert!(
        text.contains("Go on at 2.0 m: 1 drop or more from there before going higher"),
        "{text}"
    );
    let cells = |line: &str| line.split('|').map(|cell| cell.trim().to_owned()).collect::<Vec<_>>();
    let rows: Vec<Vec<String>> = text.lines().map(cells).collect();
    let has = |row: &[&str]| rows.iter().any(|own| own.iter().eq(row.iter()));
    assert!(has(&["", "1", "2", "2.51", "0.03", "0.62", "4", "landed", ""]), "{text}");
    assert!(has(&["", "2", "2", "2.62", "", "", "", "landed", ""]), "{text}");
    let band = &object["seen"]["ladder"][1]["distance_m"];
    let band = format!("{:.2} to {:.2}", number(&band["p05"]), number(&band["p95"]));
    assert!(
        rows.iter().any(|row| row.len() > 3 && row[2] == "3" && row[3] == band),
        "{band}\n{text}"
    );
}

#[test]
fn frozen_seen_answer() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("seen.csv");
    let rows =
        "3.0,4.2,0.1,0.79,14,landed\n3.0,4.4,-0.1,0.80,16,landed\n3.0,4.1,0.0,0.78,,landed\n";
    std::fs::write(&path, format!("{HEADER}{rows}")).unwrap();
    let args = ["drop", "designs/reed-16.toml", "designs/hall-gantry.toml", "--flights", "300"];
    let output = undulift(&[&args[..], &["--seen", path.to_str().unwrap()]].concat());
    let told = answer(&output);
    let from = told.find("  Seen so far").unwrap();
    insta::assert_snapshot!("seen", format!("{}\n{}", &told[from..], complaint(&output)));
}
