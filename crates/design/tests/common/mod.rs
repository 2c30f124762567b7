//! A sound design to spoil, in a folder of its own.

#![allow(dead_code, reason = "each test file uses a part")]

pub mod garble;
pub mod random;

use std::path::{Path, PathBuf};

use miette::{GraphicalReportHandler, NarratableReportHandler};
use undulift_design::{Design, DesignErrors, Override, read};
use undulift_flight::Glider;

pub const SOUND: &str = r#"
[body]
segments = 4
length_m = 0.4
width_m = 0.1
thickness_m = 0.02
structure_kg = 0.1
section = "plate"

[joints]
axes = "universal"

[gait]
frequency_hz = 1.0
lateral_amplitude_deg = 60.0
lateral_waves = 1.0

[launch]
height_m = 5.0
speed_m_s = 3.0
"#;

pub const SERVO: &str = r#"
[servo.mini]
mass_kg = 0.020
at_voltage_v = 6.0
stall_torque_nm = 0.45
no_load_speed_deg_s = 600.0
stall_current_a = 1.9
no_load_current_a = 0.15
"#;

/// The sound design with lines replaced, each by the key that they begin with, and text at its end.
pub fn spoilt(lines: &[&str], end: &str) -> String {
    let mut text = SOUND.to_owned();
    for line in lines {
        let key = line.split('=').next().unwrap().trim();
        let at = text.find(&format!("\n{key} =")).unwrap_or_else(|| panic!("no {key}")) + 1;
        let to = at + text[at..].find('\n').unwrap();
        text.replace_range(at..to, line);
    }
    text + end
}

pub struct Folder(tempfile::TempDir);

impl Folder {
    pub fn new() -> Self {
        Self(tempfile::tempdir().unwrap())
    }

    pub fn with(files: &[(&str, &str)]) -> Self {
        let folder = Self::new();
        for (name, text) in files {
            folder.write(name, text.as_bytes());
        }
        folder
    }

    pub fn write(&self, name: &str, bytes: &[u8]) -> PathBuf {
        let path = self.path().join(name);
        std::fs::write(&path, bytes).unwrap();
        path
    }

    pub fn path(&self) -> &Path {
        self.0.path()
    }

    pub fn read(&self, sets: &[&str]) -> Result<Design, DesignErrors> {
        let overrides: Vec<_> = sets.iter().map(|set| Override::parse(set).unwrap()).collect();
        read(&self.path().join("d.toml"), &overrides)
    }

    /// Mistakes, a line each, without the folder's name.
    pub fn mistakes(&self, sets: &[&str]) -> String {
        let errors = match self.read(sets) {
            Ok(_) => return "sound".to_owned(),
            Err(errors) => errors,
        };
        let folder = format!("{}/", self.path().display());
        errors.lines().map(|line| line.replace(&folder, "")).collect::<Vec<_>>().join("\n")
    }
}

pub fn design(text: &str) -> Folder {
    Folder::with(&[("d.toml", text)])
}

/// Mistakes of a design, a line each.
pub fn mistakes_of(text: &str) -> String {
    design(text).mistakes(&[])
}

/// Mistakes of the sound design with lines replaced and text at its end.
pub fn mistakes(lines: &[&str], end: &str) -> String {
    mistakes_of(&spoilt(lines, end))
}

/// How many cases a property is tried with: `UNDULIFT_FUZZ_CASES`, or a default that is soon done.
pub fn cases(default: u32) -> proptest::test_runner::Config {
    let asked = std::env::var("UNDULIFT_FUZZ_CASES").ok().and_then(|cases| cases.parse().ok());
    let cases = asked.unwrap_or(default);
    proptest::test_runner::Config {
        cases,
        // Seeds that failed are kept in the corpus as files, not as seeds.
        failure_persistence: None,
        ..proptest::test_runner::Config::default()
    }
}

/// A glider to the last bit, but for the rows of its sections.
///
/// Floats print the shortest digits that read back as the same bits, so equal print is equal bits.
pub fn bits(glider: &Glider) -> String {
    let Glider { chain, section_of, strips_per_segment, gait, air, launch, .. } = glider;
    let of_air = (air, glider.wind_world_m_s, glider.scales, glider.skin_friction);
    // Tables made on first use print once they are made, so sections can't be printed whole.
    let section =
        |section: &undulift_aero::Section| (section.name.clone(), section.pressure_centre);
    let sections: Vec<_> = glider.sections.iter().map(section).collect();
    format!(
        "{chain:?} {sections:?} {section_of:?} {strips_per_segment} {gait:?} {of_air:?} {launch:?}"
    )
}

/// All designs that come with the tool, by their files.
pub fn demos() -> Vec<(PathBuf, Design)> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("../../designs");
    let files = std::fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path());
    // A catalogue of servos may lie beside them.
    let is_design = |path: &PathBuf| {
        path.extension().is_some_and(|end| end == "toml")
            && std::fs::read_to_string(path).is_ok_and(|text| text.contains("\n[body]"))
    };
    let read: Vec<_> =
        files.filter(is_design).map(|path| (path.clone(), read(&path, &[]).unwrap())).collect();
    assert!(read.len() >= 5);
    read
}

/// Mistakes are lines of their own, with what to do, and can be drawn.
pub fn check_errors(errors: &DesignErrors, dice: &mut random::Dice) {
    assert!(!errors.mistakes().is_empty());
    for mistake in errors.mistakes() {
        let line = mistake.line();
        assert!(!line.contains('\n') && !line.ends_with(": "), "{line:?}");
        assert!(mistake.remedy().is_none_or(|remedy| !remedy.is_empty()));
    }
    if dice.one_in(20) {
        let mut drawn = String::new();
        GraphicalReportHandler::new().render_report(&mut drawn, errors).unwrap();
        NarratableReportHandler::new().render_report(&mut drawn, errors).unwrap();
    }
}
