//! Values set from outside: where they go, and how their mistakes are told.

mod common;

use approx::assert_relative_eq;
use common::{Folder, SERVO, SOUND, design, spoilt};
use insta::assert_snapshot;
use undulift_design::{DesignError, Endurance, Override};
use undulift_gait::{Pattern, Start};

#[test]
fn twin_a_setting_reads_like_the_same_value_in_the_file() {
    let set = |key: &str| design(SOUND).read(&[key]).unwrap().glider;
    let written = |lines: &[&str], end: &str| design(&spoilt(lines, end)).read(&[]).unwrap().glider;
    let pairs = [
        ("launch.speed_m_s=4.5", written(&["speed_m_s = 4.5"], "")),
        ("launch.speed_m_s = 4.5", written(&["speed_m_s = 4.5"], "")),
        ("body.section=round", written(&["section = \"round\""], "")),
        ("body.section=\"round\"", written(&["section = \"round\""], "")),
        ("body.length_m=[0.1,0.2,0.3,0.4]", written(&["length_m = [0.1, 0.2, 0.3, 0.4]"], "")),
        ("air.wind_m_s=[1,0,0]", written(&[], "[air]\nwind_m_s = [1, 0, 0]\n")),
        ("air.wind_m_s[0]=1", written(&[], "[air]\nwind_m_s = [1, 0, 0]\n")),
        ("launch.spin_deg_s[2]=9", written(&[], "spin_deg_s = [0, 0, 9]\n")),
        ("gait.taper.head=0.5", written(&["lateral_waves = 1.0\ntaper = { head = 0.5 }"], "")),
        ("gait.taper={head=0.5}", written(&["lateral_waves = 1.0\ntaper.head = 0.5"], "")),
    ];
    for (key, written) in pairs {
        assert_eq!(set(key), written, "{key}");
    }
}

#[test]
fn twin_settings_reach_into_lists_and_inline_tables() {
    let text = spoilt(
        &[
            "length_m = [0.1, 0.1, 0.1, 0.1] # four",
            "width_m = { middle = 0.1, ends = 0.05, shape = \"parabolic\" } # wide",
        ],
        "[air]\nwind_m_s = [0, 0, 0]\n[[payload]]\nname = \"a\"\nmass_kg = 0.1\nsegment = 1\n",
    );
    let sets = [
        "body.length_m[3]=0.25",
        "body.width_m.middle=0.2",
        "air.wind_m_s[1]=-2",
        "payload[0].mass_kg=0.3",
        "gait.start={ mode = \"held\", delay_s = 0.2 }",
    ];
    let read = design(&text).read(&sets).unwrap();
    let glider = &read.glider;
    assert_relative_eq!(glider.chain.segments()[3].length_m, 0.25);
    assert_relative_eq!(glider.wind_world_m_s.y, -2.0);
    assert_relative_eq!(glider.chain.mass_split().payload_kg, 0.3);
    assert_eq!(glider.gait.start, Start::Held { delay_s: 0.2, spin_up_s: 0.0 });
    // Comments stay, and the text reads back as the same design.
    assert!(read.text.contains("# four") && read.text.contains("# wide"), "{}", read.text);
    let again = design(&read.text).read(&[]).unwrap();
    assert_eq!(again.glider, read.glider);
    assert_eq!(again.input_sha256, read.input_sha256);
}

#[test]
fn twin_the_last_of_two_settings_holds() {
    let read = design(SOUND).read(&["gait.frequency_hz=2", "gait.frequency_hz=3"]).unwrap();
    let Pattern::Wave(wave) = read.glider.gait.pattern else { panic!("a wave") };
    assert_eq!(wave.frequency_hz, 3.0);
}

/// Keys at the top go before the tables, whatever they are.
#[test]
fn twin_settings_at_the_top_and_in_new_tables() {
    let sets = ["name=new", "limits.tilt_deg=45", "section.plate.pressure_centre=0.3"];
    let read = design(SOUND).read(&sets).unwrap();
    assert_eq!(read.name, "new");
    assert_relative_eq!(read.limits.tilt_rad, 45f64.to_radians());
    assert_eq!(read.glider.sections[0].pressure_centre, 0.3);
    let read = with_catalogue()
        .read(&[
            "servo.mini.thermal.resistance_k_w=10",
            "servo.mini.thermal.capacity_j_k=10",
            "servo.mini.thermal.winding_limit_c=100",
        ])
        .unwrap();
    assert!(matches!(read.servos["mini"].endurance, Endurance::Thermal { .. }), "{}", read.text);
}

fn with_catalogue() -> Folder {
    let lines = spoilt(&["axes = \"yaw\"\nyaw_servo = \"mini\""], "");
    let text = format!("servos = \"shelf.toml\"\n{lines}");
    let shelf = format!("{SERVO}{}", SERVO.replace("mini", "other"));
    Folder::with(&[("d.toml", &text), ("shelf.toml", &shelf)])
}

#[test]
fn twin_setting_a_catalogue_servo_makes_it_the_designs_own() {
    let folder = with_catalogue();
    let read = folder.read(&["servo.mini.mass_kg=0.05"]).unwrap();
    assert_relative_eq!(read.glider.chain.mass_split().servos_kg, 0.15, max_relative = 1e-12);
    assert_relative_eq!(read.servos["other"].mass_kg, 0.020);
    assert_relative_eq!(read.servos["mini"].stall_torque_nm, 0.45);
    assert!(read.text.contains("[servo.mini]"), "{}", read.text);
}

#[test]
fn frozen_mistakes_that_come_from_settings() {
    let plain = |sets: &[&str]| design(SOUND).mistakes(sets);
    let shelf = |sets: &[&str]| with_catalogue().mistakes(sets);
    let wrong = spoilt(&["speed_m_s = -3"], "");
    let told = |name: &str, lines: String| format!("# {name}\n{lines}\n");
    let cases = [
        told("out of range", plain(&["gait.frequency_hz=60"])),
        told("a word for a number", plain(&["gait.frequency_hz=fast"])),
        told("a slip", plain(&["gait.freqency_hz=1"])),
        told("a slip in a table", plain(&["gaitt.frequency_hz=1"])),
        told("within a value", plain(&["gait.taper={ head = 20 }"])),
        told("a table not there", plain(&["battery.mass_kg=0.1"])),
        told("a list not there", plain(&["payload[0].mass_kg=0.1"])),
        told("beyond the list", plain(&["launch.spin_deg_s=[1,2,3]", "launch.spin_deg_s[3]=1"])),
        told("no list", plain(&["body.length_m[3]=0.1"])),
        told("no table", plain(&["body.length_m.middle=0.1"])),
        told("a table in a list", plain(&["air.wind_m_s=[0,0,0]", "air.wind_m_s[0].x=1"])),
        told("against the file", plain(&["body.segments=6", "body.width_m=[1,1,1,1]"])),
        told(
            "beside the file",
            design(&spoilt(&[], "[air]\ntemperature_c = 3\n")).mistakes(&["air.altitude_m=3"]),
        ),
        told(
            "the file's own mistake",
            design(&wrong).mistakes(&["gait.frequency_hz=2", "air.lift_scale=1"]),
        ),
        told("a mistake mended", design(&wrong).mistakes(&["launch.speed_m_s=2"])),
        told("a catalogue's servo", shelf(&["servo.mini.mass_kg=-1"])),
        told("a catalogue's servo against itself", shelf(&["servo.mini.no_load_current_a=5"])),
        told("a slip in a catalogue's servo", shelf(&["servo.mini.mass=1"])),
        told("a servo that none has", shelf(&["servo.mimi.mass_kg=1"])),
        told("a name that is none", plain(&["name=\"\"", "title=x"])),
        told("another catalogue", shelf(&["servos=none.toml"])),
    ];
    let lines = cases.join("\n");
    assert_snapshot!(lines);
}

#[test]
fn settings_that_are_none_are_refused() {
    for text in ["", "a", "=1", "a=", "a.=1", "a b=1", "a[x]=1", "a=[1", "a=\"x", "a={", "a=1\nb=2"]
    {
        assert!(matches!(Override::parse(text), Err(DesignError::Setting { .. })), "{text:?}");
    }
    for text in ["a=1", "a=b=c", "a=b c", "a.b[0]=x.csv", "a='='", "\"a.b\".c=1"] {
        assert_eq!(Override::parse(text).unwrap().text(), text);
    }
}
