//! `undulift drop` as its users meet it.

use approx::assert_relative_eq;
use serde_json::Value;

mod common;
use common::{answer, complaint, json, undulift};

/// A level bar without air, let go at a speed that alone differs: it lands at speed times time.
const BAR: &str = "[air]\npressure_pa = 0.0\n[body]\nsegments = 4\nlength_m = 0.5\nwidth_m = 0.02\n\
    thickness_m = 0.005\nstructure_kg = 0.5\nsection = \"plate\"\n[joints]\naxes = \"universal\"\n\
    [gait]\nfrequency_hz = 0.0\nlateral_amplitude_deg = 0.0\nlateral_waves = 1.0\n[launch]\n\
    height_m = 3.0\nspeed_m_s = 4.0\n[spread]\n\"launch.speed_m_s\" = { sd = 0.2 }\n";

const HALL: &str = "[hall]\nlength_m = 20\nwidth_m = 12\nheight_m = 6\n[release]\nfrom_wall_m = 3\n\
    across_m = 6\nheights_m = [2.0, 3.0]\n[[people]]\nname = \"Ada\"\nx_m = 1\ny_m = 11\n\
    radius_m = 0.5\n[catch]\nkind = \"floor\"\nstopping_m = 0.05\n[faults]\nshare = 0.2\n\
    one_limp = 1\none_locked = 1\npower_lost = 1\nwave_frozen = 1\nwrong_phase = 1\n";

struct Files(tempfile::TempDir);

impl Files {
    /// The bar, and the hall with one line of it replaced.
    fn with(from: &str, to: &str) -> Self {
        assert!(HALL.contains(from), "{from}");
        let folder = tempfile::tempdir().unwrap();
        std::fs::write(folder.path().join("bar.toml"), BAR).unwrap();
        std::fs::write(folder.path().join("hall.toml"), HALL.replace(from, to)).unwrap();
        Self(folder)
    }

    fn path(&self, name: &str) -> String {
        self.0.path().join(name).to_str().unwrap().to_owned()
    }

    fn drop(&self, more: &[&str]) -> std::process::Output {
        let (bar, hall) = (self.path("bar.toml"), self.path("hall.toml"));
        undulift(&[&["drop", &bar, &hall][..], more].concat())
    }

    fn json(&self, more: &[&str]) -> Value {
        serde_json::from_str(&answer(&self.drop(&[more, &["--json"]].concat()))).unwrap()
    }
}

/// t = √(2·2.9975/g) = 0.781 869 s; distance is normal, mean 4t = 3.127 48 m, sd 0.2t = 0.156 374 m.
/// Nothing that fails changes that: without air and spin the centre keeps to its parabola. Of some
/// 3200 sound drops the standard error of the mean is 0.018 sd. The region's half-length is √c·sd, c
/// from χ²(2) = 5.99 on, and no more than a tenth above it.
#[test]
fn analytic_a_bar_in_vacuum_lands_where_it_must() {
    let object = Files::with("", "").json(&["--flights", "4000", "--seed", "3"]);
    let (mean, sd) = (3.127_48, 0.156_374);
    let normal = &object["normal"];
    let number = |value: &Value| value.as_f64().unwrap();
    assert_relative_eq!(number(&normal["distance_m"]["p50"]), mean, epsilon = 0.1 * sd);
    let p95 = number(&normal["distance_m"]["p95"]);
    assert_relative_eq!(p95, mean + 1.644_85 * sd, epsilon = 0.15 * sd);
    assert_relative_eq!(number(&normal["time_s"]["p05"]), 0.781_869, epsilon = 1e-6);
    let region = &normal["region95"];
    assert_relative_eq!(number(&region["centre_m"][0]), mean, epsilon = 0.08 * sd);
    let half_m = number(&region["semi_axes_m"][0]);
    assert!((0.97 * 2.4477 * sd..1.1 * 2.4477 * sd).contains(&half_m), "{half_m}");
    assert!(number(&region["semi_axes_m"][1]) < 1e-6);
    // Nothing but the launch's speed scatters, whatever lift and drag are.
    let how_many = &object["how_many"];
    assert_relative_eq!(number(&how_many["distance_sd_m"]), sd, max_relative = 0.05);
    assert_eq!(how_many["to_tell_apart"]["drops_each"], 17);
    // The outermost of some 800 such faults lies about 3.2 sd out.
    let furthest = number(&object["faults"]["furthest_m"]);
    assert!((mean + 2.3 * sd..mean + 4.8 * sd).contains(&furthest), "{furthest}");
    let faults = number(&object["faults"]["flights"]);
    assert_relative_eq!(faults / 4000.0, 0.2, epsilon = 0.025);
    let held = number(&object["faults"]["share_within_furthest"]);
    assert_relative_eq!(held.powf(faults), 0.05, epsilon = 1e-9);
    assert_eq!(object["fits"], true, "{}", object["reasons"]);
    assert_eq!(object["complete"], true);
    // From 2 m: √(2·1.9975/g) = 0.638 261 s, 4t = 2.553 04 m.
    let lowest = &object["ladder"][0]["distance_m"]["p50"];
    assert_relative_eq!(number(lowest), 2.553_04, epsilon = 0.4 * sd);
}

/// A level plate let go at rest: no lift, and drag 2.0 × ½ρv²S broadside (Hoerner's long plate), so it
/// falls s = 2.9975 m straight down in v∞/g·acosh(exp(g·s/v∞²)), v∞² = m·g/(½ρ·2.0·S). Drag is
/// doubted by 0.71^u, u even from −1 to 1, so the percentiles of time are those at u = ±0.9 and 0.
#[test]
fn analytic_a_plate_with_drag_lands_below_its_release() {
    let files = Files::with("share = 0.2\n", "share = 0.0\n");
    let plate = BAR
        .replace("pressure_pa = 0.0", "temperature_c = 15.0")
        .replace("width_m = 0.02", "width_m = 0.1")
        .replace("structure_kg = 0.5", "structure_kg = 0.05")
        .replace("speed_m_s = 4.0", "speed_m_s = 0.0");
    let plate = plate.split("[spread]").next().unwrap().to_owned();
    std::fs::write(files.path("bar.toml"), format!("spread = \"none\"\n{plate}")).unwrap();
    let object = files.json(&["--flights", "2000"]);
    let (g, density_kg_m3) = (9.806_65, 1.225);
    let normal = &object["normal"];
    for (key, doubt) in [("p05", 0.9), ("p50", 0.0), ("p95", -0.9)] {
        let drag_kg_per_m = 0.5 * density_kg_m3 * 2.0 * 0.5 * 0.1 * 0.71_f64.powf(doubt);
        let terminal_m_s = (0.05 * g / drag_kg_per_m).sqrt();
        let time_s = terminal_m_s / g * (g * 2.9975 / terminal_m_s.powi(2)).exp().acosh();
        // Of 2000 drops an end of u is known to ± 0.01, which is 0.2 % of the time.
        assert_relative_eq!(normal["time_s"][key].as_f64().unwrap(), time_s, max_relative = 6e-3);
    }
    assert!(normal["distance_m"]["p95"].as_f64().unwrap() < 1e-6, "{}", normal["distance_m"]);
}

/// Each with its number and remedy, and exit status 1.
#[test]
fn twin_what_doesnt_fit_is_told() {
    let net = "kind = \"net\"\nheight_m = 0.4\nlength_m = 9\nwidth_m = 9\nfrom_release_m = -1";
    let far = net.replace("0.4", "1.0").replace("-1", "3.2");
    let mat = |from_m: f64, long_m: f64, wide_m: f64| {
        format!(
            "kind = \"mat\"\nheight_m = 0.1\nlength_m = {long_m}\nwidth_m = {wide_m}\nfrom_release_m = {from_m}"
        )
    };
    // Ada stands at (1, 11), the release is at (3, 6): she is 2 m behind it and 5 m left.
    let (near, long, under) = (mat(2.4, 4.0, 4.0), mat(-1.0, 19.8, 4.0), mat(-2.3, 10.0, 11.0));
    for (from, to, told) in [
        ("length_m = 20", "length_m = 6.2", "hall too small"),
        ("height_m = 6", "height_m = 3.1", "ladder above the ceiling: 3.0 m"),
        ("x_m = 1\ny_m = 11", "x_m = 6\ny_m = 6.5", "`Ada` stands"),
        (
            "kind = \"floor\"\nstopping_m = 0.05",
            &format!("{net}\nstopping_m = 0.5"),
            "0.76 m or more",
        ),
        ("kind = \"floor\"", &far, "catch too small"),
        ("[2.0, 3.0]", "[0.2, 3.0]", "ladder too low: 0.2 m"),
        // From 2 m it lands at 2.6 m, beside what holds all from 3 m.
        ("kind = \"floor\"", &near, "the 95 % region from 2.0 m reaches"),
        ("kind = \"floor\"", &long, "reaches 1.8 m through a wall"),
        ("kind = \"floor\"", &under, "`Ada` stands 0.8 m inside of the catch's edge"),
    ] {
        let output = Files::with(from, to).drop(&["--flights", "100"]);
        let complaint = complaint(&output);
        assert_eq!(output.status.code(), Some(1), "{to}: {complaint}");
        assert!(complaint.contains(told), "{to}: {complaint}");
        assert!(complaint.contains("safety/README.md"));
    }
}

/// The bands are the percentiles of the rows of sound drops, computed here directly, and the same
/// bits on one thread and on two.
#[test]
fn twin_rows_and_threads() {
    let folder = tempfile::tempdir().unwrap();
    let csv = folder.path().join("rows.csv");
    let drop = |threads: &str| {
        let args = ["drop", "designs/reed-16.toml", "designs/hall-gantry.toml", "--json"];
        let more = ["--flights", "41", "--csv", csv.to_str().unwrap(), "--threads", threads];
        answer(&undulift(&[&args[..], &more].concat()))
    };
    let one = drop("1");
    assert_eq!(one, drop("2"));
    let object: Value = serde_json::from_str(&one).unwrap();
    let mut table = csv::Reader::from_path(&csv).unwrap();
    let rows: Vec<csv::StringRecord> = table.records().map(Result::unwrap).collect();
    assert_eq!(rows.len(), 41);
    let sound = rows.iter().filter(|row| row[1].is_empty());
    let mut distances_m: Vec<f64> = sound.map(|row| row[5].parse().unwrap()).collect();
    distances_m.sort_by(f64::total_cmp);
    let place = 0.95 * (distances_m.len() - 1) as f64;
    let (below, part) = (place as usize, place.fract());
    let p95 = distances_m[below] + part * (distances_m[below + 1] - distances_m[below]);
    assert_relative_eq!(object["normal"]["distance_m"]["p95"].as_f64().unwrap(), p95);
    assert_eq!(object["normal"]["flights"], distances_m.len());
}

#[test]
fn frozen_drop_answer() {
    let args = ["drop", "designs/sedge-10.toml", "designs/hall-gantry.toml", "--flights", "200"];
    let output = undulift(&args);
    insta::assert_snapshot!("drop", format!("{}\n{}", answer(&output), complaint(&output)));
}

/// A wrong hall ends with status 2 and both files' mistakes.
#[test]
fn twin_mistakes_of_both_files_are_told() {
    let files = Files::with("length_m = 20", "length_m = -20");
    std::fs::write(files.path("bar.toml"), "[body]\n").unwrap();
    let output = files.drop(&[]);
    assert_eq!(output.status.code(), Some(2));
    let complaint = complaint(&output);
    assert!(complaint.contains("-20 is out of range"), "{complaint}");
    assert!(complaint.contains("gait"), "{complaint}");
    assert!(answer(&output).is_empty());
}

/// Ended by Ctrl-C it tells of what was flown, and says so.
#[cfg(unix)]
#[test]
fn twin_an_end_by_ctrl_c_is_told() {
    let files = Files::with("", "");
    let (bar, hall) = (files.path("bar.toml"), files.path("hall.toml"));
    let child = std::process::Command::new(env!("CARGO_BIN_EXE_undulift"))
        .args(["drop", &bar, &hall, "--flights", "1000000", "--json"])
        .stdout(std::process::Stdio::piped())
        .stderr(std::process::Stdio::piped())
        .spawn()
        .unwrap();
    std::thread::sleep(std::time::Duration::from_secs(3));
    std::process::Command::new("kill").args(["-INT", &child.id().to_string()]).status().unwrap();
    let output = child.wait_with_output().unwrap();
    assert_eq!(output.status.code(), Some(130), "{}", complaint(&output));
    let object: Value = serde_json::from_str(&answer(&output)).unwrap();
    assert_eq!(object["complete"], false);
    assert!(object["flights"].as_u64().unwrap() < 1_000_000);
    assert!(complaint(&output).contains("ended by Ctrl-C"));
}

/// Nothing that was read is written over, and no file is written twice.
#[test]
fn twin_inputs_are_never_written_over() {
    let files = Files::with("", "");
    std::fs::write(files.path("hall.html"), HALL).unwrap();
    let [bar, hall, page, csv] =
        ["bar.toml", "hall.toml", "hall.html", "x.csv"].map(|name| files.path(name));
    let detour = files.path("./hall.html");
    for (args, told) in [
        (vec![&bar, &hall, "--csv", &hall], "it is read, too"),
        (vec![&bar, &page, "--sheet", &detour], "it is read, too"),
        (vec![&bar, &hall, "--csv", &csv, "--seen", &csv], "it is read, too"),
        (vec![&bar, &hall, "--csv", &page, "--sheet", &detour], "is to be written twice"),
    ] {
        let output = undulift(&[&["drop"], &args[..]].concat());
        assert_eq!(output.status.code(), Some(2), "{args:?}");
        assert!(complaint(&output).contains(told), "{args:?}: {}", complaint(&output));
    }
    assert_eq!(std::fs::read_to_string(hall).unwrap(), HALL);
    assert_eq!(std::fs::read_to_string(page).unwrap(), HALL);
}

#[test]
fn twin_json_names_what_it_was_made_of() {
    let args = ["drop", "designs/reed-16.toml", "designs/hall-gantry.toml", "--json"];
    let object = json(&[&args[..], &["--flights", "20"]].concat());
    let alone = json(&["fly", "designs/reed-16.toml", "--json"]);
    assert_eq!(object["design"], "reed-16");
    assert_ne!(object["input_sha256"], alone["input_sha256"]);
    assert_eq!(object["flights"], 20);
    assert_eq!(object["ladder"].as_array().unwrap().len(), 4);
}

/// Berthouex & Brown, *Statistics for Environmental Engineers*: 27 a group for one standard deviation
/// at power 0.95; for the mean to 0.5 of one, 18 by Student's t: 2.110/√18 = 0.497, 2.120/√17 = 0.514.
#[test]
fn published_how_many_drops() {
    let object = Files::with("", "").json(&["--power", "0.95"]);
    let how_many = &object["how_many"];
    assert_eq!(how_many["to_tell_apart"]["drops_each"], 27);
    assert_eq!(how_many["for_mean"]["drops"], 18);
    let sd_m = how_many["distance_sd_m"].as_f64().unwrap();
    let (two, half) = (format!("{}", 2.0 * sd_m), format!("{}", 0.5 * sd_m));
    let more = ["--power", "0.95", "--difference-m", &two, "--within-m", &half];
    let object = Files::with("", "").json(&more);
    // As for 2 standard deviations: 8 each by the noncentral t of a general-purpose library (scipy).
    assert_eq!(object["how_many"]["to_tell_apart"]["drops_each"], 8);
    assert_eq!(object["how_many"]["for_mean"]["drops"], 18);
    let output = Files::with("", "").drop(&["--difference-m", "1e-9", "--flights", "100"]);
    assert!(answer(&output).contains("more than 100 000 each tell"), "{}", answer(&output));
    for wrong in [["--power", "1"], ["--within-m", "0"], ["--difference-m", "far"]] {
        assert_eq!(Files::with("", "").drop(&wrong).status.code(), Some(2), "{wrong:?}");
    }
}
