//! `undulift tune` as its users meet it.

use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Child, Command, Stdio};
use std::time::{Duration, Instant};

use insta::assert_snapshot;
use serde_json::Value;

mod common;
use common::{answer, complaint, json, root, undulift};

const SEDGE: &str = "designs/sedge-10.toml";

/// Few numbers, few evaluations: enough to better the design.
const SEARCH: &str = r#"
want = { maximise = "glide_ratio" }
evaluations = 120
[vary]
"gait.frequency_hz" = [0.5, 1.2]
"gait.arch_deg" = [0.0, 8.0]
"gait.lateral_amplitude_deg" = [36.0, 60.0]
[require]
"last_cycle_glide_ratio" = { at_least = 0.5 }
"forward_airspeed_m_s" = { at_least = 1.0 }
"#;

/// A folder to search in.
struct Place(tempfile::TempDir);

impl Place {
    fn new() -> Self {
        Self(tempfile::tempdir().unwrap())
    }

    fn path(&self, name: &str) -> PathBuf {
        self.0.path().join(name)
    }

    fn text(&self, name: &str) -> String {
        self.path(name).to_str().unwrap().to_owned()
    }

    fn write(&self, name: &str, text: &str) -> String {
        fs::write(self.path(name), text).unwrap();
        self.text(name)
    }

    /// Arguments of a search of the demo into a folder here.
    fn args(&self, search: &str, out: &str) -> Vec<String> {
        let search = self.write(&format!("{out}-search.toml"), search);
        ["tune", SEDGE, &search, "--out", &self.text(out)].map(str::to_owned).into()
    }
}

fn with(args: &[String], more: &[&str]) -> std::process::Output {
    let args: Vec<&str> = args.iter().map(String::as_str).chain(more.iter().copied()).collect();
    undulift(&args)
}

/// Without what tells the names of files that differ from test to test.
fn best_of(folder: &Path) -> String {
    let text = fs::read_to_string(folder.join("best.toml")).unwrap();
    text.lines().skip_while(|line| !line.contains("SHA-256")).collect::<Vec<_>>().join("\n")
}

fn history_of(folder: &Path) -> String {
    fs::read_to_string(folder.join("history.csv")).unwrap()
}

/// What is found is better, keeps what is required, flies from where it stands as the search says,
/// and differs from the design in nothing but what varies.
#[test]
fn twin_the_best_flies_as_the_search_says() {
    let place = Place::new();
    let output = with(&place.args(SEARCH, "out"), &["--json"]);
    assert_eq!(output.status.code(), Some(0), "{}", complaint(&output));
    let object: Value = serde_json::from_str(&answer(&output)).unwrap();
    let (before, best) = (&object["before"], &object["best"]);
    let number = |value: &Value| value.as_f64().unwrap();
    assert!(number(&best["wish"]) > 1.05 * number(&before["wish"]), "{object}");
    assert_eq!(object["feasible"], true);
    let path = place.text("out/best.toml");
    let (flown, budget) = (json(&["fly", &path, "--json"]), json(&["budget", &path, "--json"]));
    assert_eq!(best["wish"], flown["glide_ratio"]);
    for key in ["last_cycle_glide_ratio", "forward_airspeed_m_s", "peak_roll_deg"] {
        assert_eq!(best["required"][key], flown[key], "{key}");
    }
    assert_eq!(best["required"]["budget.least_margin"], budget["least_margin"]);
    assert_eq!(budget["passes"], true);
    let own = json(&["fly", SEDGE, "--json"]);
    assert_eq!(before["wish"], own["glide_ratio"]);
    let text = fs::read_to_string(root().join(SEDGE)).unwrap();
    let found = fs::read_to_string(&path).unwrap();
    let missing: Vec<&str> = text.lines().filter(|line| !found.contains(*line)).collect();
    let keys = ["frequency_hz", "arch_deg", "lateral_amplitude_deg"];
    assert!(missing.iter().all(|line| keys.iter().any(|key| line.starts_with(key))), "{missing:?}");
    let rows = history_of(&place.path("out"));
    let evaluations = object["evaluations"].as_u64().unwrap() as usize;
    assert_eq!(rows.lines().count(), 1 + evaluations);
    let columns = rows.lines().next().unwrap().split(',').count();
    assert!(rows.lines().all(|row| row.split(',').count() == columns));
}

#[test]
fn twin_threads_do_not_matter() {
    let place = Place::new();
    let robust = format!("robust = {{ launches = 3, take = \"mean\" }}\n{SEARCH}");
    for (search, evaluations) in [(SEARCH, "60"), (&robust, "24")] {
        let on = |threads: &str| {
            let out = format!("on-{threads}-{evaluations}");
            let args = place.args(search, &out);
            let more = ["--threads", threads, "--evaluations", evaluations, "--seed", "9"];
            let output = with(&args, &more);
            assert_eq!(output.status.code(), Some(0), "{}", complaint(&output));
            (best_of(&place.path(&out)), history_of(&place.path(&out)))
        };
        assert_eq!(on("1"), on("2"));
    }
}

fn begun(args: &[String]) -> Child {
    Command::new(env!("CARGO_BIN_EXE_undulift"))
        .args(args)
        .current_dir(root())
        .stdout(Stdio::null())
        .stderr(Stdio::piped())
        .spawn()
        .unwrap()
}

/// Killed again and again at moments that differ, and gone on with each time, a search comes to the
/// same bytes as one that was left alone.
#[test]
fn twin_a_killed_search_goes_on_to_the_same_bytes() {
    let place = Place::new();
    let args = place.args(SEARCH, "whole");
    assert_eq!(with(&args, &[]).status.code(), Some(0));
    let args = place.args(SEARCH, "killed");
    let (folder, resume) = (place.path("killed"), place.text("killed"));
    let mut kills = 0;
    for kill in 0..40_u64 {
        let is_begun = folder.join("run.json").exists();
        let resume = ["tune", "--resume", &resume].map(str::to_owned);
        let mut child = begun(if is_begun { &resume } else { &args });
        // Moments all over a generation and the writing after it.
        std::thread::sleep(Duration::from_millis(35 + (kill * 37) % 120));
        if child.try_wait().unwrap().is_some() {
            break;
        }
        child.kill().unwrap();
        child.wait().unwrap();
        kills += 1;
    }
    assert!(kills >= 3, "{kills}");
    let output = undulift(&["tune", "--resume", &resume]);
    assert_eq!(output.status.code(), Some(0), "{}", complaint(&output));
    let whole = place.path("whole");
    // The searches were read from files of different names.
    assert_eq!(best_of(&folder), best_of(&whole));
    assert_eq!(history_of(&folder), history_of(&whole));
    let left = fs::read_dir(&folder).unwrap().map(|entry| entry.unwrap().file_name());
    let mut left: Vec<String> = left.map(|name| name.into_string().unwrap()).collect();
    left.sort_unstable();
    assert_eq!(left, ["best.toml", "history.csv", "run.json", "state.postcard"]);
}

/// Ctrl-C ends a search with all kept, and it goes on to the same.
#[cfg(unix)]
#[test]
fn twin_ctrl_c_keeps_all_and_says_how_to_go_on() {
    let place = Place::new();
    let search = SEARCH.replace("evaluations = 120", "evaluations = 3000");
    let args = place.args(&search, "out");
    let child = begun(&args);
    let since = Instant::now();
    let rows = || fs::read_to_string(place.path("out/history.csv")).unwrap_or_default();
    while rows().lines().count() < 12 && since.elapsed() < Duration::from_secs(60) {
        std::thread::sleep(Duration::from_millis(5));
    }
    let told = Command::new("kill").args(["-INT", &child.id().to_string()]).status().unwrap();
    assert!(told.success());
    let output = child.wait_with_output().unwrap();
    assert_eq!(output.status.code(), Some(130), "{}", complaint(&output));
    assert!(complaint(&output).contains("tune --resume"), "{}", complaint(&output));
    let tried = rows().lines().count();
    assert!((12..3000).contains(&tried), "{tried}");
    assert!(place.path("out/best.toml").exists());
}

/// A margin that no gait leaves these servos: status 1, the least infeasible, and what is missed.
#[test]
fn what_cannot_be_met_is_told() {
    let place = Place::new();
    let search = format!("{SEARCH}\"budget.least_margin\" = {{ at_least = 500.0 }}\n");
    let args = place.args(&search, "out");
    let output = with(&args, &["--evaluations", "40"]);
    assert_eq!(output.status.code(), Some(1), "{}", complaint(&output));
    let told = complaint(&output);
    assert!(told.contains("budget.least_margin is "), "{told}");
    assert!(told.contains("none of the 40 that were tried met budget.least_margin"), "{told}");
    assert!(fs::read_to_string(place.path("out/best.toml")).unwrap().contains("misses"));
    let flown = undulift(&["fly", &place.text("out/best.toml")]);
    assert_ne!(flown.status.code(), Some(2));
}

/// Numbers that are set by way of the text, one of them of a servo that only a catalogue has.
#[test]
fn twin_a_number_of_the_catalogue_is_written_into_the_best() {
    let place = Place::new();
    let servos = root().join("designs/servos.toml");
    let sets = [
        format!("servos={}", servos.display()),
        "joints.yaw_servo=thin-12".to_owned(),
        "joints.pitch_servo=thin-12".to_owned(),
    ];
    let search = place.write(
        "search.toml",
        "want = { minimise = \"mass_kg\" }\nlimits = \"ignored\"\n[vary]\n\
         \"servo.thin-12.mass_kg\" = [0.008, 0.016]\n\"body.width_m.middle\" = [0.09, 0.13]\n",
    );
    let out = place.text("out");
    let mut args = vec!["tune", SEDGE, &search, "--out", &out, "--evaluations", "90", "--json"];
    args.extend(sets.iter().flat_map(|set| ["--set", set]));
    let output = undulift(&args);
    assert_eq!(output.status.code(), Some(0), "{}", complaint(&output));
    let object: Value = serde_json::from_str(&answer(&output)).unwrap();
    let best = fs::read_to_string(place.path("out/best.toml")).unwrap();
    assert!(best.contains("[servo.thin-12]"), "{best}");
    let flown = json(&["fly", &place.text("out/best.toml"), "--json"]);
    assert_eq!(flown["mass_kg"], object["best"]["wish"]);
    let least = object["best"]["varied"]["servo.thin-12.mass_kg"].as_f64().unwrap();
    assert!(least < 0.009, "{least}");
    let active = object["active"].as_array().unwrap();
    assert!(active.iter().any(|held| held["side"] == "low" && held["gain"].as_f64() > Some(0.0)));
}

#[test]
fn what_cannot_be_searched_is_refused() {
    let place = Place::new();
    let search = place.write("search.toml", SEARCH);
    let constant = place.write(
        "constant.toml",
        "want = { minimise = \"mass_kg\" }\n[vary]\n\"gait.frequency_hz\" = [1.0, 2.0]\n",
    );
    let wishes = "[{ maximise = \"glide_ratio\" }, { minimise = \"mass_kg\" }]";
    let two = SEARCH.replace("{ maximise = \"glide_ratio\" }", wishes);
    let two = place.write("two.toml", &two);
    let slip = place.write("slip.toml", &SEARCH.replace("arch_deg", "ach_deg"));
    let file = place.write("file", "nothing");
    let (out, inside) = (place.text("out"), format!("{file}/out"));
    let nowhere = place.text("no/such/folder");
    let full = place.text("full");
    fs::create_dir(&full).unwrap();
    place.write("full/notes.txt", "mine");
    let wrong: [(&[&str], &str); 12] = [
        (&[SEDGE, &constant, "--out", &out], "`mass_kg` stays at"),
        (&[SEDGE, &two, "--out", &out], "one wish at a time"),
        (&[SEDGE, &slip, "--out", &out], "gait.arch_deg"),
        (&[SEDGE, "--out", &out], "[search]"),
        (&[SEDGE, &search], "--out"),
        (&[SEDGE, &search, "--out", &inside], "file"),
        (&[SEDGE, &search, "--out", &nowhere], "no such folder"),
        (&[SEDGE, &search, "--out", &full], "isn't empty"),
        (&[SEDGE, &search, "--out", &out, "--evaluations", "0"], "--evaluations"),
        (&[SEDGE, &search, "--out", &out, "--evaluations", "10000001"], "--evaluations"),
        (&["--resume", &full], "no folder of a search"),
        (&["--resume", &out, "--seed", "2"], "--resume"),
    ];
    for (args, told) in wrong {
        let output = undulift(&[&["tune"], args].concat());
        assert_eq!(output.status.code(), Some(2), "{args:?}: {}", complaint(&output));
        assert!(complaint(&output).contains(told), "{args:?}: {}", complaint(&output));
        assert!(answer(&output).is_empty(), "{args:?}");
        assert!(!Path::new(&out).exists(), "{args:?}");
    }
    assert_eq!(fs::read_to_string(place.path("full/notes.txt")).unwrap(), "mine");
}

/// A folder that holds a search is left as it is; a search whose files have changed doesn't go on.
#[test]
fn another_search_does_not_take_a_folder() {
    let place = Place::new();
    let args = place.args(SEARCH, "out");
    assert_eq!(with(&args, &["--evaluations", "20"]).status.code(), Some(0));
    let before = history_of(&place.path("out"));
    let output = with(&args, &["--seed", "5"]);
    assert_eq!(output.status.code(), Some(2));
    assert!(complaint(&output).contains("--resume"), "{}", complaint(&output));
    let resume = ["tune", "--resume", &place.text("out")].map(str::to_owned);
    assert_eq!(with(&resume, &[]).status.code(), Some(0));
    assert_eq!(history_of(&place.path("out")), before);
    let changed = SEARCH.replace("60.0", "61.0");
    place.write("out-search.toml", &changed);
    let output = with(&resume, &[]);
    assert_eq!(output.status.code(), Some(2));
    assert!(complaint(&output).contains("something else"), "{}", complaint(&output));
    place.write("out-search.toml", SEARCH);
    fs::write(place.path("out/state.postcard"), b"no").unwrap();
    let output = with(&resume, &[]);
    assert_eq!(output.status.code(), Some(2));
    assert!(complaint(&output).contains("state.postcard"), "{}", complaint(&output));
}

/// A start outside of its ends is moved to the nearest, and that is told.
#[test]
fn a_start_outside_of_its_ends_is_moved() {
    let place = Place::new();
    let search = SEARCH.replace("[0.0, 8.0]", "[4.0, 9.0]");
    let output = with(&place.args(&search, "out"), &["--evaluations", "1"]);
    let told = complaint(&output);
    assert!(told.contains("gait.arch_deg is ") && told.contains("begins at 4"), "{told}");
    let first = history_of(&place.path("out")).lines().nth(1).unwrap().to_owned();
    assert!(first.split(',').any(|cell| cell == "4"), "{first}");
}

/// The words as they were; that they are true is for the tests above.
#[test]
fn frozen_words_for_people() {
    let place = Place::new();
    let shown = |text: String| text.replace(place.0.path().to_str().unwrap(), "FOLDER");
    let output = with(&place.args(SEARCH, "out"), &["--evaluations", "30"]);
    assert_snapshot!("answer", shown(answer(&output)));
    let hopeless = format!("{SEARCH}\"budget.least_margin\" = {{ at_least = 500.0 }}\n");
    let output = with(&place.args(&hopeless, "hopeless"), &["--evaluations", "30"]);
    assert_snapshot!("hopeless", shown(answer(&output) + &complaint(&output)));
    assert_snapshot!("help", answer(&undulift(&["tune", "--help"])));
}
