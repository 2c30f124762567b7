//! What tuning is to do.

mod common;

use common::{Folder, SERVO, SOUND};
use insta::assert_snapshot;
use undulift_design::{Robust, Take, Tuning, Wish, read};

const SEARCH: &str = r#"
want = { maximise = "glide_ratio" }
robust = { launches = 8, take = "q10" }
evaluations = 6000

[vary]
"gait.vertical_ratio" = [1, 4]
"gait.frequency_hz" = [0.6, 1.6]
"servo.mini.mass_kg" = [0.01, 0.03]

[require]
"peak_roll_deg" = { at_most = 45 }
"budget.least_margin" = { at_least = 1.5 }
last_cycle_glide_ratio = { at_least = 0.5, at_most = 9.0 }
"#;

/// A design beside a search of its own file.
fn of(search: &str) -> Result<Tuning, Vec<String>> {
    let folder = Folder::with(&[("robot.toml", &format!("{SOUND}{SERVO}")), ("s.toml", search)]);
    let design = read(&folder.path().join("robot.toml"), &[]).unwrap();
    Tuning::read(&folder.path().join("s.toml"), &design).map_err(|errors| {
        let told = |mistake: &undulift_design::Mistake| {
            let place = mistake.line_column().map(|(line, column)| format!("{line}:{column}: "));
            let remedy = mistake.remedy().unwrap_or_default();
            format!("{}{mistake}\n  {remedy}", place.unwrap_or_default())
        };
        errors.mistakes().iter().map(told).collect()
    })
}

/// Rows stand in the order of their keys, numbers as they are in the file.
#[test]
fn twin_a_search_holds_what_the_file_says() {
    let tuning = of(SEARCH).unwrap();
    assert_eq!(tuning.wishes, [Wish { key: "glide_ratio".into(), maximise: true }]);
    assert_eq!(tuning.robust, Some(Robust { launches: 8, take: Take::Tenth }));
    assert_eq!(tuning.evaluations, Some(6000));
    assert!(tuning.limits_kept);
    let vary: Vec<_> = tuning.vary.iter().map(|v| (v.knob.key(), v.low, v.high)).collect();
    let expected = [
        ("gait.frequency_hz", 0.6, 1.6),
        ("gait.vertical_ratio", 1.0, 4.0),
        ("servo.mini.mass_kg", 0.01, 0.03),
    ];
    assert_eq!(vary, expected);
    let require: Vec<_> =
        tuning.require.iter().map(|r| (r.key.as_str(), r.at_least, r.at_most)).collect();
    let expected = [
        ("budget.least_margin", Some(1.5), None),
        ("last_cycle_glide_ratio", Some(0.5), Some(9.0)),
        ("peak_roll_deg", None, Some(45.0)),
    ];
    assert_eq!(require, expected);
}

/// The same tables under the design's own heading say the same.
#[test]
fn twin_a_search_in_the_design_is_one_in_a_file() {
    let inside = SEARCH.replace("[vary]", "[search.vary]").replace("[require]", "[search.require]");
    let text = format!("{SOUND}{SERVO}\n[search]\n{inside}");
    let folder = Folder::with(&[("robot.toml", &text)]);
    let design = read(&folder.path().join("robot.toml"), &[]).unwrap();
    assert_eq!(Tuning::of_design(&design).unwrap(), of(SEARCH).unwrap());
}

#[test]
fn twin_wishes_may_be_traded_and_limits_ignored() {
    let list = r#"[{ maximise = "glide_ratio" }, { minimise = "mass_kg" }]"#;
    let text = SEARCH.replace(r#"{ maximise = "glide_ratio" }"#, list);
    let tuning = of(&format!("limits = \"ignored\"\n{text}")).unwrap();
    let wishes: Vec<_> = tuning.wishes.iter().map(|w| (w.key.as_str(), w.maximise)).collect();
    assert_eq!(wishes, [("glide_ratio", true), ("mass_kg", false)]);
    assert!(!tuning.limits_kept);
}

#[test]
fn frozen_mistakes_in_a_search() {
    let want = r#"want = { maximise = "glide_ratio" }"#;
    let vary = r#""gait.frequency_hz" = [0.6, 1.6]"#;
    let search = |want: &str, vary: &str, require: &str| {
        of(&format!("{want}\n[vary]\n{vary}\n[require]\n{require}\n")).unwrap_err().join("\n")
    };
    let wished = |want: &str| search(want, vary, "");
    let varied = |vary: &str| search(want, vary, "");
    let required = |require: &str| search(want, vary, require);
    let cases = [
        ("nothing wanted", wished("")),
        ("wanted: no table", wished("want = \"glide_ratio\"")),
        ("wanted: empty", wished("want = {}")),
        ("wanted: a slip", wished("want = { maximise = \"glide_ration\" }")),
        ("wanted: without its table", wished("want = { minimise = \"least_margin\" }")),
        ("wanted: a word", wished("want = { minimise = \"end\" }")),
        ("wanted: a band", wished("want = { minimise = \"reynolds\" }")),
        ("wanted: both ways", wished("want = { minimise = \"mass_kg\", maximise = \"mass_kg\" }")),
        ("wanted: another way", wished("want = { largest = \"mass_kg\" }")),
        ("one in a list", wished("want = [{ minimise = \"mass_kg\" }]")),
        (
            "twice in a list",
            wished("want = [{ minimise = \"mass_kg\" }, { maximise = \"mass_kg\" }]"),
        ),
        ("nothing varies", varied("")),
        ("ends reversed", varied("\"gait.frequency_hz\" = [1.6, 0.6]")),
        ("ends equal", varied("\"gait.frequency_hz\" = [1, 1.0]")),
        ("no number", varied("\"gait.frequency_hz\" = [0.6, nan]")),
        ("one end", varied("\"gait.frequency_hz\" = [0.6]")),
        ("outside of what the file allows", varied("\"gait.frequency_hz\" = [-1, 51]")),
        ("not whole", varied("\"gait.vertical_ratio\" = [1, 2.5]")),
        ("varied: a slip", varied("\"gait.freqency_hz\" = [0.6, 1.6]")),
        ("varied: no number", varied("\"body.section\" = [0.6, 1.6]")),
        ("varied: a table", varied("\"gait\" = [0.6, 1.6]")),
        ("varied: without quotes", varied("gait.frequency_hz = [0.6, 1.6]")),
        ("varied: twice", varied(&format!("{vary}\n\"gait.'frequency_hz'\" = [1, 2]"))),
        ("required: a slip", required("peak_rol_deg = { at_most = 45 }")),
        ("required: a number alone", required("peak_roll_deg = 45")),
        ("required: nothing", required("peak_roll_deg = {}")),
        ("required: ends crossed", required("peak_roll_deg = { at_least = 9, at_most = 8 }")),
        ("required: without quotes", required("budget.least_margin = { at_least = 1.5 }")),
        ("required: another side", required("peak_roll_deg = { below = 45 }")),
        ("no evaluations", wished(&format!("{want}\nevaluations = 0"))),
        ("too many evaluations", wished(&format!("{want}\nevaluations = 10000001"))),
        ("no launches", wished(&format!("{want}\nrobust = {{ launches = 0, take = \"mean\" }}"))),
        (
            "too many launches",
            wished(&format!("{want}\nrobust = {{ launches = 1001, take = \"mean\" }}")),
        ),
        ("nothing taken", wished(&format!("{want}\nrobust = {{ launches = 9 }}"))),
        ("another taken", wished(&format!("{want}\nrobust = {{ launches = 9, take = \"best\" }}"))),
        ("limits", wished(&format!("{want}\nlimits = \"keep\""))),
        ("a key that nobody reads", wished(&format!("{want}\nevaluation = 5"))),
        ("with a heading", of(&format!("[search]\n{want}")).unwrap_err().join("\n")),
        ("a design", of(SOUND).unwrap_err().join("\n")),
        ("not TOML", of("want = ").unwrap_err().join("\n")),
    ];
    let told: Vec<String> = cases.map(|(case, told)| format!("# {case}\n{told}")).into();
    assert_snapshot!(told.join("\n"));
}

#[test]
fn a_design_without_a_search_says_so() {
    let folder = Folder::with(&[("robot.toml", SOUND)]);
    let design = read(&folder.path().join("robot.toml"), &[]).unwrap();
    let errors = Tuning::of_design(&design).unwrap_err();
    assert_eq!(errors.mistakes()[0].key(), "search");
}
