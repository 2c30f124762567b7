//! Each kind of mistake, as it is told in a line.

mod common;

use common::{Folder, SERVO, SOUND, design, mistakes, mistakes_of, spoilt};
use insta::assert_snapshot;
use miette::{GraphicalReportHandler, GraphicalTheme, NarratableReportHandler};

/// Cases under their names, each with its mistakes.
fn told<const N: usize>(cases: [(&str, String); N]) -> String {
    cases.map(|(name, lines)| format!("# {name}\n{lines}\n")).join("\n")
}

#[test]
fn frozen_mistakes_in_keys() {
    let lines = told([
        ("sound", mistakes(&[], "")),
        ("nothing in it", mistakes_of("name = \"x\"\n")),
        ("not TOML", mistakes(&["speed_m_s = 3,0"], "")),
        ("given twice", mistakes(&["speed_m_s = 3.0\nspeed_m_s = 4.0"], "")),
        ("a slip", mistakes(&["frequency_hz = 1.0\nfreqency_hz = 1.2"], "")),
        ("its unit left off", mistakes(&["speed_m_s = 3.0\nclimb = 3.0"], "")),
        ("far from any", mistakes(&[], "colour = \"red\"\n")),
        ("an unknown table", mistakes(&[], "[lunch]\nat = 12\n")),
        ("left for others", mistakes(&[], "[search]\ny = 2\n[wiring]\nz = 3\n")),
        (
            "left out",
            mistakes(&["height_m = 5.0", "speed_m_s = 3.0"], "").replace("sound", "")
                + &mistakes_of(&SOUND.replace("height_m = 5.0", "").replace("segments = 4", "")),
        ),
        (
            "many at once",
            mistakes(
                &[
                    "segments = 1",
                    "length_m = -1",
                    "section = 3",
                    "frequency_hz = inf",
                    "height_m = \"5\"",
                ],
                "[limits]\ntilt = 3\n",
            ),
        ),
    ]);
    assert_snapshot!(lines);
}

#[test]
fn frozen_mistakes_in_values() {
    let gait = |line| mistakes(&[line], "");
    let launch = |end| mistakes(&[], end);
    let air = |lines: &str| mistakes(&[], &format!("[air]\n{lines}\n"));
    let lines = told([
        ("too many segments", mistakes(&["segments = 129"], "")),
        ("half a segment", mistakes(&["segments = 4.5"], "")),
        ("not a number", gait("frequency_hz = nan")),
        ("infinite", gait("frequency_hz = -inf")),
        ("beyond any number", gait("frequency_hz = 1e999")),
        ("a huge whole number", gait("frequency_hz = 99999999999999999999999")),
        ("too fast", gait("frequency_hz = 51")),
        ("negative", gait("frequency_hz = -1")),
        ("text", gait("frequency_hz = \"fast\"")),
        ("a date", gait("frequency_hz = 2024-01-01")),
        ("a table", gait("frequency_hz = { a = 1 }")),
        ("no height", mistakes(&["height_m = 0"], "")),
        ("a whole number will do", mistakes(&["height_m = 7"], "")),
        ("too few numbers", launch("spin_deg_s = [1, 2]\n")),
        ("one bad number", launch("spin_deg_s = [1, \"2\", 1e9]\n")),
        ("beyond the body", launch("grip_segment = 5\n")),
        ("from 0", launch("grip_segment = 0\n")),
        ("vacuum", air("pressure_pa = 0")),
        ("frost", air("temperature_c = -100")),
        ("altitude beside weather", air("altitude_m = 10\ntemperature_c = 3\npressure_pa = 9e4")),
        ("friction", air("skin_friction = \"laminr\"")),
        ("friction no word", air("skin_friction = 1")),
        ("an empty name", mistakes_of(&format!("name = \"\"\n{SOUND}"))),
        ("no table", mistakes_of(&format!("air = 3\n{SOUND}"))),
        ("a long text", gait(&format!("frequency_hz = \"{}\"", "long ".repeat(100)))),
    ]);
    assert_snapshot!(lines);
}

#[test]
fn frozen_mistakes_in_the_body() {
    let width = |value: &str| mistakes(&[&format!("width_m = {value}")], "");
    let mass = |value: &str| mistakes(&[&format!("structure_kg = {value}")], "");
    let lines = told([
        ("lengths", mistakes(&["length_m = [0.1, 0.1, 0.1, 0.1]"], "")),
        ("too few lengths", mistakes(&["length_m = [0.1, 0.1, 0.1]"], "")),
        ("a length of nothing", mistakes(&["length_m = [0.1, 0.1, 0.0, 0.1]"], "")),
        ("a profile", width("{ middle = 0.1, ends = 0.0, shape = \"parabolic\" }")),
        ("uniform", width("{ ends = 0.1, shape = \"uniform\" }")),
        ("uniform, unequal", width("{ middle = 0.1, ends = 0.2, shape = \"uniform\" }")),
        ("uniform, nothing", width("{ shape = \"uniform\" }")),
        ("half a profile", width("{ middle = 0.1, shape = \"parabolic\" }")),
        ("no such shape", width("{ middle = 0.1, ends = 0.1, shape = \"parabola\" }")),
        ("no such key", width("{ middle = 0.1, end = 0.1, shape = \"uniform\" }")),
        ("no width", width("true")),
        ("masses", mass("[0.1, 0.1, 0.1, 0.1, 0.1]")),
        ("mass by profile", mass("{ total = 0.1, ends_to_middle = 0.4, shape = \"parabolic\" }")),
        ("mass, uniform", mass("{ total = 0.1, ends_to_middle = 0.4, shape = \"uniform\" }")),
        ("no total", mass("{ ends_to_middle = 0.4, shape = \"parabolic\" }")),
        ("no such section", mistakes(&["section = \"plat\""], "")),
        ("sections", mistakes(&["section = [\"plate\", \"ruond\", \"domed\"]"], "")),
        (
            "a list of sections",
            mistakes(&["section = [\"plate\", \"round\", \"round\", \"plate\"]"], ""),
        ),
        ("round is round", mistakes(&[], "[section.round]\npressure_centre = 0.3\n")),
        ("built in", mistakes(&[], "[section.plate]\ntable = \"x.csv\"\npressure_centre = 2\n")),
        ("no table", mistakes(&[], "[section.rib]\npressure_centre = 0.3\n")),
    ]);
    assert_snapshot!(lines);
}

#[test]
fn frozen_mistakes_in_joints_and_servos() {
    let axes = |value: &str, end: &str| mistakes(&[&format!("axes = {value}")], end);
    let servo = |from: &str, to: &str| mistakes(&[], &SERVO.replace(from, to));
    let lines = told([
        ("no such axes", axes("\"alternating\"", "")),
        ("a list", axes("[\"yaw\", \"fixed\", \"universal\"]", "")),
        ("a short list", axes("[\"yaw\", \"pitched\"]", "")),
        ("no travel", axes("\"yaw\"\nyaw_travel_deg = 0", "")),
        ("too many travels", axes("\"yaw\"\nyaw_travel_deg = [10, 20, 30, 40]", "")),
        ("one name for the axes there are", axes("\"alternate\"\nyaw_servo = \"mini\"", SERVO)),
        ("no such servo", axes("\"yaw\"\nyaw_servo = \"mini-2\"", SERVO)),
        (
            "a list of servos",
            axes("\"alternate\"\nyaw_servo = [\"mini\", \"none\", \"mini\"]", SERVO),
        ),
        (
            "a servo without an axis",
            axes("\"alternate\"\nyaw_servo = [\"mini\", \"mini\", \"none\"]", SERVO),
        ),
        ("too few servos", axes("\"yaw\"\nyaw_servo = [\"mini\", \"none\"]", SERVO)),
        ("a servo called none", servo("servo.mini", "servo.none")),
        ("no torque", servo("stall_torque_nm = 0.45\n", "")),
        ("torque twice", servo("stall_torque_nm", "stall_torque_kgf_cm = 4.5\nstall_torque_nm")),
        ("torque in the wrong unit", servo("0.45", "4.5")),
        ("currents", servo("no_load_current_a = 0.15", "no_load_current_a = 1.9")),
        ("gear", servo("mass_kg", "gear_efficiency = 1.2\nmass_kg")),
        (
            "endurance twice",
            servo(
                "mass_kg",
                "continuous_torque_nm = 0.1\nthermal = { resistance_k_w = 1, capacity_j_k = 1, winding_limit_c = 90 }\nmass_kg",
            ),
        ),
        (
            "half an endurance",
            servo("mass_kg", "thermal = { resistance_k_w = 1, capacity = 1 }\nmass_kg"),
        ),
        ("pulses", servo("mass_kg", "pulse_us = { centre = 400 }\nmass_kg")),
        (
            "pulses the other way",
            servo("mass_kg", "pulse_us = { minus_90 = 2500, plus_90 = 500 }\nmass_kg"),
        ),
        ("a servo that is none", mistakes(&[], "[servo]\nmini = 3\n")),
        ("servos that are none", mistakes(&[], "[servo]\nmass_kg = 3\n")),
    ]);
    assert_snapshot!(lines);
}

#[test]
fn frozen_mistakes_in_gait_and_load() {
    let gait = |line: &str| mistakes(&[&format!("lateral_waves = 1.0\n{line}")], "");
    let battery = "[battery]\ncells = 2\ncapacity_mah = 450\ncell_resistance_mohm = 18\nmass_kg = 0.03\nsegment = 2\n";
    let lines = told([
        ("a third of a wave", gait("vertical_ratio = 1.5")),
        ("taper", gait("taper = { head = 11, head_length = 2, tale = 1 }")),
        ("start", gait("start = { mode = \"hold\" }")),
        ("start without a mode", gait("start = { delay_s = 1 }")),
        ("start that waits and doesn't", gait("start = { mode = \"running\", delay_s = 1 }")),
        ("interpolation of a wave", gait("interpolation = \"cubic\"")),
        ("a table beside a wave", gait("table = \"none.csv\"")),
        ("battery", mistakes(&[], battery)),
        ("battery beyond the body", mistakes(&[], &battery.replace("segment = 2", "segment = 9"))),
        ("half a battery", mistakes(&[], "[battery]\ncells = 21\n")),
        ("half a regulator", mistakes(&[], &format!("{battery}regulator = {{ volts = 6 }}\n"))),
        (
            "payload",
            mistakes(
                &[],
                "[[payload]]\nname = \"a\"\nmass_kg = 1\nsegment = 1\n[[payload]]\nmass_kg = -1\nsegment = 1\nat = 3\n",
            ),
        ),
        ("payload no list", mistakes(&[], "[payload]\nname = \"a\"\n")),
        ("firmware", mistakes(&[], "[firmware]\nupdate_hz = 0\n")),
        ("limits", mistakes(&[], "[limits]\ntorque_factor = 0\ntilt_deg = 181\n")),
    ]);
    assert_snapshot!(lines);
}

#[test]
fn frozen_mistakes_with_files() {
    let with = |bytes: &[u8]| {
        let folder = Folder::new();
        folder.write("d.toml", bytes);
        folder.mistakes(&[])
    };
    let is_folder = Folder::new();
    std::fs::create_dir(is_folder.path().join("d.toml")).unwrap();
    let lines =
        |text: String, folder: &Folder| text.replace(&format!("{}/", folder.path().display()), "");
    let nowhere = Folder::new();
    let large = vec![b'#'; (16 << 20) + 1];
    let lines = told([
        ("nowhere", lines(nowhere.mistakes(&[]), &nowhere)),
        ("a folder", lines(is_folder.mistakes(&[]), &is_folder)),
        ("empty", with(b"")),
        ("blank", with(b" \n\n")),
        ("other bytes", with(b"name = \"x\"\nname = \"\xff\"\n")),
        ("too large", with(&large)),
        ("no catalogue", design(&format!("servos = \"none.toml\"\n{SOUND}")).mistakes(&[])),
    ]);
    assert_snapshot!(lines);
}

#[test]
fn frozen_mistakes_in_a_catalogue() {
    let top = "servos = \"shelf.toml\"\n";
    let uses = format!("{top}{}", spoilt(&["axes = \"yaw\"\nyaw_servo = \"mini\""], ""));
    let with =
        |shelf: &str| Folder::with(&[("d.toml", &uses), ("shelf.toml", shelf)]).mistakes(&[]);
    let lines = told([
        ("sound", with(SERVO)),
        ("nested", with(&format!("servos = \"shelf.toml\"\n{SERVO}"))),
        ("not TOML", with("[servo.mini\n")),
        ("no such servo", with(&SERVO.replace("mini", "mini-1"))),
        ("a mistake in it", with(&SERVO.replace("0.020", "-1"))),
        ("more in it", with(&format!("[body]\nx = 1\n{SERVO}"))),
        ("empty", with("")),
    ]);
    assert_snapshot!(lines);
}

#[test]
fn frozen_reports_are_drawn_and_read_aloud() {
    let text = spoilt(&["frequency_hz = 60"], "[air]\naltitude_m = 3\ntemperature_c = 3\n");
    let folder = design(&text);
    let errors = folder.read(&["launch.speed_m_s=-1"]).unwrap_err();
    let mut drawn = String::new();
    let handler = GraphicalReportHandler::new_themed(GraphicalTheme::unicode_nocolor());
    handler.with_width(100).render_report(&mut drawn, &errors).unwrap();
    let mut aloud = String::new();
    NarratableReportHandler::new().render_report(&mut aloud, &errors).unwrap();
    let folder = format!("{}/", folder.path().display());
    let reports = format!("{drawn}\n{aloud}").replace(&folder, "");
    assert_snapshot!(reports);
}

#[test]
fn a_thousand_mistakes_are_counted_but_not_all_told() {
    let lines: String = (0..1000).map(|k| format!("key_{k} = 1\n")).collect();
    let errors = design(&(SOUND.to_owned() + &lines)).read(&[]).unwrap_err();
    assert_eq!(errors.mistakes().len(), 50);
    assert!(errors.to_string().ends_with("200 or more mistakes, the first 50 told"), "{errors}");
}
