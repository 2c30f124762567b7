//! Texts for other folders.

mod common;

use std::path::Path;

use common::{Folder, SERVO, SOUND, spoilt};
use undulift_design::{Knob, copy_for, read};

const RIB: &str = include_str!("my-rib.csv");

/// A design in a folder of its own that names files in three ways.
fn folder() -> Folder {
    let folder = Folder::new();
    let [own, parts] = ["own", "parts"].map(|name| folder.path().join(name));
    std::fs::create_dir(&own).unwrap();
    std::fs::create_dir_all(parts.join("ribs")).unwrap();
    let ends = "# mine\n[section.rib]\ntable = 'near.csv' # beside it\n\
                [section.far]\ntable = \"../parts/ribs/./far.csv\"\n";
    let text = spoilt(&["axes = \"yaw\"\nyaw_servo = \"mini\"", "section = \"rib\""], ends);
    let absolute = parts.join("shelf.toml");
    let text = format!("servos = {:?}\n{text}", absolute.to_str().unwrap());
    folder.write("own/d.toml", text.as_bytes());
    folder.write("own/near.csv", RIB.as_bytes());
    folder.write("parts/ribs/far.csv", RIB.as_bytes());
    folder.write("parts/shelf.toml", SERVO.as_bytes());
    folder
}

fn named(text: &str) -> Vec<&str> {
    let names = text.lines().filter(|line| line.starts_with("table"));
    names.collect()
}

#[test]
fn twin_a_copy_names_the_same_files() {
    let folder = folder();
    let from = folder.path().join("own/d.toml");
    let before = read(&from, &[]).unwrap();
    for (to, names) in [
        ("own", ["table = 'near.csv' # beside it", "table = \"../parts/ribs/./far.csv\""]),
        ("", ["table = \"own/near.csv\" # beside it", "table = \"parts/ribs/far.csv\""]),
        ("parts/ribs", ["table = \"../../own/near.csv\" # beside it", "table = \"far.csv\""]),
        (
            "new/er",
            ["table = \"../../own/near.csv\" # beside it", "table = \"../../parts/ribs/far.csv\""],
        ),
    ] {
        let to = folder.path().join(to);
        let text = copy_for(&from, &to).unwrap();
        let quoted = |line: &&str| line.replace('\'', "\"");
        let found: Vec<_> = named(&text).iter().map(quoted).collect();
        assert_eq!(found, names.iter().map(quoted).collect::<Vec<_>>());
        assert!(text.contains("# mine\n"), "{text}");
        std::fs::create_dir_all(&to).unwrap();
        let copy = to.join("copy.toml");
        std::fs::write(&copy, &text).unwrap();
        assert_eq!(read(&copy, &[]).unwrap().glider, before.glider);
    }
}

#[test]
fn twin_a_copy_in_the_same_folder_is_the_same_text() {
    let folder = common::design(SOUND);
    let from = folder.path().join("d.toml");
    assert_eq!(copy_for(&from, folder.path()).unwrap(), SOUND);
    assert_eq!(copy_for(&from, Path::new("")).unwrap(), SOUND);
}

#[test]
fn twin_the_current_text_has_what_knobs_set() {
    let folder = folder();
    let mut design = read(&folder.path().join("own/d.toml"), &[]).unwrap();
    for (key, value) in
        [("gait.frequency_hz", 1.7), ("launch.spin_deg_s[1]", 0.1), ("body.width_m", 0.11)]
    {
        Knob::find(&design, key).unwrap().set(&mut design, value).unwrap();
    }
    let copy = folder.path().join("copy.toml");
    std::fs::write(&copy, design.text_for(folder.path()).unwrap()).unwrap();
    assert_eq!(read(&copy, &[]).unwrap().glider, design.glider);
    std::fs::write(folder.path().join("own/d.toml"), design.current_text()).unwrap();
    assert_eq!(read(&folder.path().join("own/d.toml"), &[]).unwrap().glider, design.glider);
}

#[test]
fn mistakes_of_copies_are_the_readers_own() {
    let folder = common::design("[body\nx = 1\n");
    let errors = copy_for(&folder.path().join("d.toml"), folder.path()).unwrap_err();
    assert_eq!(errors.mistakes()[0].line_column(), Some((1, 6)));
    let errors = copy_for(&folder.path().join("none.toml"), folder.path()).unwrap_err();
    assert!(errors.lines().next().unwrap().ends_with("there is no such file"));
}
