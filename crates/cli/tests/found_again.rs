//! The demo designs' gaits are found again by the searches beside them.

use serde_json::Value;

mod common;
use common::json;

/// The wish of a design's own gait, of a spoilt one, and of the best that a search from the spoilt
/// one came to.
fn wishes(demo: &str, evaluations: u32, spoilt: &[&str]) -> [f64; 3] {
    let folder = tempfile::tempdir().unwrap();
    let tune = |out: &str, evaluations: u32, sets: &[&str]| -> Value {
        let (design, search) =
            (format!("designs/{demo}.toml"), format!("designs/search-{demo}.toml"));
        let out = folder.path().join(out);
        let (evaluations, out) = (evaluations.to_string(), out.to_str().unwrap());
        let args = [
            "tune",
            &design,
            &search,
            "--out",
            out,
            "--evaluations",
            &evaluations,
            "--brief",
            "--json",
        ];
        let sets: Vec<&str> = sets.iter().flat_map(|set| ["--set", set]).collect();
        json(&[&args[..], &sets].concat())
    };
    let wish = |found: &Value, which: &str| found[which]["wish"].as_f64().unwrap();
    let own = tune("own", 1, &[]);
    let found = tune("again", evaluations, spoilt);
    assert_eq!(found["feasible"], true, "{demo}");
    [wish(&own, "before"), wish(&found, "before"), wish(&found, "best")]
}

/// From gaits that glide worse, or hardly, fewer evaluations than the search files give lead to one
/// that is at least as good as the design's.
#[test]
fn twin_spoilt_gaits_are_found_again() {
    for (demo, evaluations, spoilt) in [
        (
            "reed-16",
            400,
            &[
                "gait.vertical_lag_deg=-60",
                "gait.arch_deg=2",
                "gait.lateral_waves=1.75",
                "gait.lateral_amplitude_deg=65",
            ][..],
        ),
        ("sedge-10", 200, &["gait.vertical_lag_deg=-60", "gait.lateral_amplitude_deg=65"]),
        ("pair-wave", 100, &["gait.phase_deg=0", "gait.lateral_waves=1.9"]),
    ] {
        let [own, before, best] = wishes(demo, evaluations, spoilt);
        assert!(before < own, "{demo}: {before} of the spoilt gait, {own} of its own");
        assert!(best >= own, "{demo}: {best} found, {own} of its own");
    }
    // Here less is better.
    let spoilt = ["gait.vertical_lag_deg=60", "gait.sharpness=0"];
    let [own, before, best] = wishes("withy-24", 60, &spoilt);
    assert!(best <= own, "withy-24: {before} spoilt, {best} found, {own} of its own");
}
