//! `undulift check` as its users meet it.

use approx::assert_relative_eq;
use serde_json::Value;

mod common;
use common::{answer, complaint, json, undulift};

fn number(value: &Value) -> f64 {
    value.as_f64().expect("a number")
}

fn joint<'a>(object: &'a Value, joint: u64, axis: &str) -> &'a Value {
    let joints = object["joints"].as_array().expect("a list");
    joints.iter().find(|j| j["joint"] == joint && j["axis"] == axis).expect("this joint")
}

/// One pitch joint of each demo design by hand. Neighbouring spans lie Δξ apart on the body, so the
/// joint swings by 2A_v·sin(πνkΔξ) about α_a·Δξ, and its greatest rate is ν·2πf times the swing:
///
/// - reed-16: 2·3°·sin(π·2·1.6/16) = 3.5267°, + 12°/16 = 4.2767°; ·2·2π·1.25 = 55.40 °/s
/// - sedge-10, spans of two segments: 2·3°·sin(π·2·1.4·0.2) = 5.8937°, + 1.2°·0.2 = 6.1337°; 57.86
/// - withy-24: 2·3°·sin(π·2·1.45/12) = 4.1302°, + 10°/12 = 4.9635°; 40.55
/// - pair-wave: 2·4°·sin(π·2·1.3/12) = 5.0345°, + 14°/12 = 6.2012°; 63.27
/// - pair-still: the shape at release, which doesn't move
#[test]
fn analytic_one_joint_of_each_demo() {
    let by_hand = [
        ("reed-16", 7, 4.2767, 55.40),
        ("sedge-10", 4, 6.1337, 57.86),
        ("withy-24", 12, 4.9635, 40.55),
        ("pair-wave", 5, 6.2012, 63.27),
    ];
    for (name, which, angle_deg, speed_deg_s) in by_hand {
        let object = json(&["check", &format!("designs/{name}.toml"), "--json"]);
        let found = joint(&object, which, "pitch");
        assert_relative_eq!(number(&found["angle_deg"]), angle_deg, epsilon = 1e-4);
        assert_relative_eq!(number(&found["speed_deg_s"]), speed_deg_s, epsilon = 1e-2);
        assert!(number(&found["travel_deg"]) > angle_deg);
        assert!(number(&found["no_load_speed_deg_s"]) > speed_deg_s);
    }
    let still = json(&["check", "designs/pair-still.toml", "--json"]);
    assert_eq!(number(&joint(&still, 5, "yaw")["speed_deg_s"]), 0.0);
    assert!(still["cycle_s"].is_null());
}

/// Estimates by hand for reed-16: wing loading 65.54 Pa; at the section's best ratio, 35° and Re
/// 15 000, C_R = √(1.91² + 0.72²) = 2.0412, so U = √(2·65.54/(1.204 11·2.0412)) = 7.303 m/s; the
/// reduced frequency there is π·1.25·0.1030/7.303 = 0.0554.
#[test]
fn analytic_estimates_for_one_demo() {
    let object = json(&["check", "designs/reed-16.toml", "--json"]);
    assert_relative_eq!(number(&object["wing_loading_pa"]), 65.54, epsilon = 0.01);
    assert_relative_eq!(number(&object["glide_speed_m_s"]), 7.303, epsilon = 0.02);
    assert_relative_eq!(number(&object["reduced_frequency"]), 0.0554, epsilon = 3e-4);
}

/// A serpenoid body advances by J₀(A) of its length (Hirose, *Biologically Inspired Robots*, 1993);
/// J₀(π/3) = 0.744 07 (Abramowitz & Stegun, *Handbook of Mathematical Functions*, table 9.1,
/// interpolated). Half of a single wave on 1 m is then 0.372 m, 3.72 chords of 0.1 m. Added mass by
/// hand: (π/4)·1.204 11·0.1²·1/0.5 = 0.018 91.
#[test]
fn published_gap_and_added_mass_of_a_uniform_serpenoid() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("uniform.toml");
    let text = "[body]\nsegments = 64\nlength_m = 1.0\nwidth_m = 0.1\nthickness_m = 0.02\n\
                structure_kg = 0.5\nsection = \"plate\"\n[joints]\naxes = \"yaw\"\n[gait]\n\
                frequency_hz = 1.0\nlateral_amplitude_deg = 60.0\nlateral_waves = 1.0\n[launch]\n\
                height_m = 5.0\nspeed_m_s = 3.0\n";
    std::fs::write(&path, text).unwrap();
    let object = json(&["check", path.to_str().unwrap(), "--json"]);
    assert_relative_eq!(number(&object["gap_chords"]), 3.7203, max_relative = 5e-3);
    assert_relative_eq!(number(&object["added_mass_ratio"]), 0.018_91, epsilon = 1e-5);
    let centre = object["centre_of_mass_m"].as_array().unwrap();
    assert_relative_eq!(number(&centre[0]), -0.5, epsilon = 1e-12);
    // Without servos or travel there is nothing to miss.
    assert!(joint(&object, 1, "yaw")["no_load_speed_deg_s"].is_null());
    assert_eq!(undulift(&["check", path.to_str().unwrap()]).status.code(), Some(0));
}

#[test]
fn missed_limits_name_joint_value_and_limit() {
    assert_eq!(undulift(&["check", "designs/reed-16.toml"]).status.code(), Some(0));
    let fast = undulift(&["check", "designs/reed-16.toml", "--set", "gait.frequency_hz=2.5"]);
    assert_eq!(fast.status.code(), Some(1));
    let words = complaint(&fast);
    assert!(words.contains("743 °/s of yaw") && words.contains("620 °/s"), "{words}");
    assert!(words.contains("so are 14 more joints"), "{words}");
    let stiff = undulift(&["check", "designs/reed-16.toml", "--set", "joints.yaw_travel_deg=50"]);
    assert_eq!(stiff.status.code(), Some(1));
    assert!(complaint(&stiff).contains("52.5° of yaw"), "{}", complaint(&stiff));
    assert_eq!(undulift(&["check", "no-such.toml"]).status.code(), Some(2));
}

/// A wide body in tight bends overlaps, and is told so with the time.
#[test]
fn overlaps_are_told() {
    let wide = ["--set", "body.width_m=0.16", "--set", "gait.lateral_amplitude_deg=86"];
    let args = [&["check", "designs/reed-16.toml"], &wide[..]].concat();
    let output = undulift(&args);
    assert!(complaint(&output).contains("take the same space"), "{}", complaint(&output));
    let object = json(&[&args[..], &["--json"]].concat());
    let overlaps = object["overlaps"].as_array().unwrap();
    assert!(!overlaps.is_empty());
    assert!(overlaps.iter().all(|o| (0.0..=1.0).contains(&number(&o["share"]))));
    let as_is = json(&["check", "designs/reed-16.toml", "--json"]);
    assert!(as_is["overlaps"].as_array().unwrap().is_empty());
}

#[test]
fn frozen_words_for_people() {
    let output = undulift(&["check", "designs/reed-16.toml"]);
    insta::assert_snapshot!("check", format!("{}\n{}", answer(&output), complaint(&output)));
    insta::assert_snapshot!("check_help", answer(&undulift(&["check", "--help"])));
}
