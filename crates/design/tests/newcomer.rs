//! What somebody meets who writes a first design: each mistake with what to do about it.

mod common;

use std::fs::File;

use common::{Folder, SERVO, SOUND, design, spoilt};
use insta::assert_snapshot;
use miette::{Diagnostic, GraphicalReportHandler, GraphicalTheme};
use undulift_design::{DesignErrors, read};

/// All mistakes of `d.toml` in a folder, each with its remedy.
fn told(folder: &Folder) -> String {
    told_of(folder, &folder.read(&[]).unwrap_err())
}

fn told_of(folder: &Folder, errors: &DesignErrors) -> String {
    let name = format!("{}/", folder.path().display());
    let mistakes = errors.mistakes().iter().map(|mistake| {
        let help = mistake.help().map(|help| format!("\n  help: {help}")).unwrap_or_default();
        format!("{}{help}", mistake.line()).replace(&name, "")
    });
    mistakes.collect::<Vec<_>>().join("\n")
}

fn cases<const N: usize>(cases: [(&str, Folder); N]) -> String {
    cases.map(|(name, folder)| format!("# {name}\n{}\n", told(&folder))).join("\n")
}

fn line(line: &str) -> Folder {
    design(&spoilt(&[line], ""))
}

#[test]
fn frozen_first_mistakes_in_keys_and_numbers() {
    let battery = "[battery]\ncells = 2\ncapacity_mah = 450\ncell_resistance_mohm = 18\n\
                   mass_kg = -0.03\nsegment = 2\n";
    let lines = cases([
        ("unknown key", line("speed_m_s = 3.0\nthrown_by = \"me\"")),
        ("unknown table", design(&spoilt(&[], "[motor]\nkv = 1400\n"))),
        ("misspelt key", line("lateral_waves = 1.0\nsharpnes = 0.5")),
        ("misspelt table", design(&SOUND.replace("[launch]", "[launhc]"))),
        ("wrong type", line("frequency_hz = \"1.3 Hz\"")),
        ("wrong type of a table", line("section = { name = \"plate\" }")),
        ("comma for a point", line("speed_m_s = 3,5")),
        ("list of the wrong length", line("length_m = [0.1, 0.1, 0.1]")),
        ("list for a triple", design(&spoilt(&[], "[air]\nwind_m_s = 2.0\n"))),
        ("not a number", line("height_m = nan")),
        ("infinite", line("height_m = inf")),
        ("1e300", line("height_m = 1e300")),
        ("negative mass", design(&spoilt(&[], battery))),
        ("negative mass of the structure", line("structure_kg = -0.1")),
        ("zero length", line("length_m = 0")),
        ("zero length of a segment", line("length_m = [0.1, 0.1, 0.0, 0.1]")),
        ("1 segment", line("segments = 1")),
        ("129 segments", line("segments = 129")),
        ("undefined section", line("section = \"dome\"")),
        ("undefined section of one's own", line("section = \"wing\"")),
        ("undefined servo", design(&spoilt(&["axes = \"yaw\"\nyaw_servo = \"maxi\""], SERVO))),
        ("no servo at all", line("axes = \"yaw\"\nyaw_servo = \"mini\"")),
        ("efficiency above 1", design(&(SOUND.to_owned() + &SERVO.replace("0.45", "4.5")))),
        ("degrees for rad", line("frequency_hz = 1.0\nphase_rad = 0.5")),
        (
            "a table left out",
            design(&SOUND.replace("[launch]\nheight_m = 5.0\nspeed_m_s = 3.0", "")),
        ),
    ]);
    assert_snapshot!(lines);
}

#[test]
fn frozen_first_mistakes_in_section_tables() {
    const RIB: &str =
        "reynolds,alpha_deg,cl,cd\n1e4,-90,0,2\n1e4,0,0.1,0.05\n1e4,45,1,1\n1e4,90,0,2\n";
    let rib = |from: &str, to: &str| {
        assert!(RIB.contains(from));
        let text = spoilt(&["section = \"rib\""], "[section.rib]\ntable = \"rib.csv\"\n");
        Folder::with(&[("d.toml", &text), ("rib.csv", &RIB.replace(from, to))])
    };
    let lines = cases([
        ("unsorted", rib("1e4,45,1,1\n", "1e4,-45,-1,1\n")),
        ("repeated", rib("1e4,45", "1e4,0")),
        ("lift at 90°", rib("1e4,90,0,", "1e4,90,0.12,")),
        ("lift at −90°", rib("1e4,-90,0,", "1e4,-90,-0.5,")),
        ("stops short", rib("1e4,90,0,2\n", "")),
        ("begins late", rib("1e4,-90,0,2\n", "")),
        ("radians", rib("90", "1.5707963")),
        ("no such column", rib("alpha_deg", "aoa")),
        ("words in it", rib("0.05", "low")),
    ]);
    assert_snapshot!(lines);
}

#[test]
fn frozen_first_mistakes_with_files() {
    let is_folder = Folder::new();
    std::fs::create_dir(is_folder.path().join("d.toml")).unwrap();
    let binary = Folder::new();
    binary.write("d.toml", b"\x7fELF\x02\x01\x01\0\0\0\0\0\0\xff\xfe\n\n\0\0");
    let zeros = Folder::new();
    zeros.write("d.toml", &[0; 500]);
    let large = Folder::new();
    File::create(large.path().join("d.toml")).unwrap().set_len(200 << 20).unwrap();
    let large_table = Folder::with(&[(
        "d.toml",
        &spoilt(&["section = \"rib\""], "[section.rib]\ntable = \"rib.csv\"\n"),
    )]);
    File::create(large_table.path().join("rib.csv")).unwrap().set_len(200 << 20).unwrap();
    let shelf = |name: &str| format!("servos = \"{name}\"\n{SOUND}");
    let is_shelf = Folder::with(&[("d.toml", &shelf("shelf"))]);
    std::fs::create_dir(is_shelf.path().join("shelf")).unwrap();
    let lines = cases([
        ("missing", Folder::new()),
        ("empty", design("")),
        ("folder", is_folder),
        ("binary", binary),
        ("zeros", zeros),
        ("200 MB", large),
        ("a table of 200 MB", large_table),
        ("catalogue missing", design(&shelf("shelf.toml"))),
        ("catalogue is a folder", is_shelf),
        (
            "catalogue names itself",
            Folder::with(&[("d.toml", &shelf("s.toml")), ("s.toml", "servos = \"s.toml\"\n")]),
        ),
        ("design is its own catalogue", design(&shelf("d.toml"))),
        (
            "catalogue names the design",
            Folder::with(&[("d.toml", &shelf("s.toml")), ("s.toml", "servos = \"d.toml\"\n")]),
        ),
        (
            "no catalogue but a design",
            Folder::with(&[("d.toml", &shelf("other.toml")), ("other.toml", SOUND)]),
        ),
        ("a gait table in its place", design("time_s,yaw_1_deg\n0,1\n0.1,2\n")),
    ]);
    assert_snapshot!(lines);
}

/// A name that isn't text is opened as it is, and shown as far as it can be.
#[cfg(unix)]
#[test]
fn frozen_file_names_need_not_be_text() {
    use std::ffi::OsStr;
    use std::os::unix::ffi::OsStrExt;
    let folder = Folder::new();
    let path = folder.path().join(OsStr::from_bytes(b"rob\xffot.toml"));
    let missing = read(&path, &[]).unwrap_err();
    std::fs::write(&path, SOUND).unwrap();
    let name = read(&path, &[]).unwrap().name;
    std::fs::write(&path, SOUND.replace("4", "x")).unwrap();
    let spoilt = read(&path, &[]).unwrap_err();
    let lines = format!("{}\n{name}\n{}", told_of(&folder, &missing), told_of(&folder, &spoilt));
    assert_snapshot!(lines);
}

/// As a terminal of 80 columns shows them, without colour.
#[test]
fn frozen_five_mistakes_are_drawn() {
    let rib = "reynolds,alpha_deg,cl,cd\n1e4,-90,0,2\n1e4,0,0.1,0.05\n1e4,64,0,2\n";
    let own = spoilt(&["section = \"rib\""], "[section.rib]\ntable = \"rib.csv\"\n");
    let five = [
        ("misspelt key", line("lateral_waves = 1.0\nsharpnes = 0.5")),
        ("list of the wrong length", line("length_m = [0.1, 0.1, 0.1]")),
        ("undefined servo", design(&spoilt(&["axes = \"yaw\"\nyaw_servo = \"maxi\""], SERVO))),
        ("efficiency above 1", design(&(SOUND.to_owned() + &SERVO.replace("0.45", "4.5")))),
        ("stops short", Folder::with(&[("d.toml", &own), ("rib.csv", rib)])),
    ];
    let drawn = five.map(|(name, folder)| {
        let errors = folder.read(&[]).unwrap_err();
        let handler = GraphicalReportHandler::new_themed(GraphicalTheme::unicode_nocolor());
        let mut drawn = String::new();
        handler.with_width(80).render_report(&mut drawn, &errors).unwrap();
        format!("# {name}\n{}", drawn.replace(&format!("{}/", folder.path().display()), ""))
    });
    let drawn = drawn.join("\n");
    assert_snapshot!(drawn);
}
