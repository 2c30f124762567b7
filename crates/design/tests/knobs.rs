//! Numbers by their keys, read and set in memory.

mod common;

use common::{Folder, SERVO, SOUND, bits, demos, design, spoilt};
use insta::assert_snapshot;
use undulift_design::{Design, Knob, Override, read, set_all};

/// A value that differs from the one there and is allowed, with digits to the last bit.
fn another(knob: &Knob, design: &Design) -> f64 {
    let value = knob.value(design);
    if knob.is_whole() {
        return if knob.allows(value + 1.0) { value + 1.0 } else { value - 1.0 };
    }
    let tries = [value * 1.1 + std::f64::consts::PI / 10.0, value / 3.0, value / 7.0 + 1.0 / 30.0];
    tries.into_iter().find(|&other| other != value && knob.allows(other)).unwrap()
}

#[test]
fn twin_a_knob_sets_what_a_setting_sets_bit_for_bit() {
    let mut fast = 0;
    for (path, design) in demos() {
        for knob in Knob::all(&design).iter().filter(|knob| knob.is_fast()) {
            let value = another(knob, &design);
            let shown = if knob.is_whole() { format!("{value}") } else { format!("{value:?}") };
            let set = Override::parse(&format!("{}={shown}", knob.key())).unwrap();
            let by_text = read(&path, &[set]).unwrap();
            let mut by_knob = design.clone();
            knob.set(&mut by_knob, value).unwrap();
            assert_eq!(bits(&by_knob.glider), bits(&by_text.glider), "{} {value}", knob.key());
            assert_eq!(knob.value(&by_knob).to_bits(), value.to_bits(), "{}", knob.key());
            assert_eq!(by_knob.text, design.text);
            fast += 1;
        }
    }
    assert!(fast >= 5 * 29, "{fast}");
}

#[test]
fn twin_a_knob_by_way_of_the_text_sets_what_a_setting_sets() {
    for (path, design) in demos() {
        let keys = [
            ("body.length_m", 1.25),
            ("body.width_m.middle", 0.13),
            ("body.segments", 25.0),
            ("body.structure_kg.total", 0.2345678901234567),
            ("joints.yaw_travel_deg", 81.5),
            ("battery.segment", 2.0),
            ("battery.charge", 0.5),
            ("payload[0].mass_kg", 0.02),
            ("air.temperature_c", 11.0),
            ("limits.tilt_deg", 45.0),
            ("firmware.update_hz", 100.0),
        ];
        for (key, value) in keys {
            let Ok(knob) = Knob::find(&design, key) else { continue };
            let shown = if knob.is_whole() { format!("{value}") } else { format!("{value:?}") };
            let set = Override::parse(&format!("{key}={shown}")).unwrap();
            let by_text = read(&path, &[set]).unwrap();
            let mut by_knob = design.clone();
            knob.set(&mut by_knob, value).unwrap();
            assert_eq!(by_knob, by_text, "{key}");
            assert_eq!(knob.value(&by_knob), value);
        }
    }
}

#[test]
fn twin_knobs_of_both_kinds_add_up() {
    let folder = design(SOUND);
    let mut design = folder.read(&[]).unwrap();
    let set = |design: &mut Design, key: &str, value| {
        Knob::find(design, key).unwrap().set(design, value).unwrap();
    };
    set(&mut design, "gait.frequency_hz", 1.5);
    set(&mut design, "body.length_m", 0.5);
    set(&mut design, "launch.spin_deg_s[1]", 12.0);
    set(&mut design, "gait.frequency_hz", 2.5);
    let sets = ["gait.frequency_hz=2.5", "body.length_m=0.5", "launch.spin_deg_s[1]=12"];
    let read = folder.read(&sets).unwrap();
    assert_eq!(bits(&design.glider), bits(&read.glider));
    let [length, frequency] =
        ["body.length_m", "gait.frequency_hz"].map(|key| Knob::find(&design, key).unwrap());
    let mut both = folder.read(&["launch.spin_deg_s[1]=12"]).unwrap();
    set_all(&mut both, &[(&length, 0.5), (&frequency, 2.5)]).unwrap();
    assert_eq!(bits(&both.glider), bits(&read.glider));
}

/// What is left out has the value that the documentation of the file gives it.
#[test]
fn twin_knobs_know_defaults() {
    let design = design(&format!("{SOUND}{SERVO}")).read(&[]).unwrap();
    let value = |key: &str| Knob::find(&design, key).map(|knob| knob.value(&design)).unwrap();
    let zeros = [
        "gait.phase_deg",
        "gait.sharpness",
        "gait.turn_deg",
        "launch.climb_deg",
        "launch.spin_deg_s[2]",
        "air.wind_m_s[0]",
        "servo.mini.idle_current_a",
    ];
    for key in zeros {
        assert_eq!(value(key), 0.0, "{key}");
    }
    assert_eq!(value("air.lift_scale"), 1.0);
    assert_eq!(value("air.pressure_pa"), 101_325.0);
    assert_eq!(value("section.domed.pressure_centre"), 0.25);
    assert_eq!(value("section.plate.pressure_centre"), 0.25);
    assert_eq!(value("gait.vertical_lag_deg"), 90.0);
    assert_eq!(value("gait.vertical_ratio"), 2.0);
    assert_eq!(value("gait.taper.head"), 1.0);
    assert_eq!(value("limits.tilt_deg"), 60.0);
    assert_eq!(value("servo.mini.loop.full_at_deg"), 5.0);
    assert_eq!(value("servo.mini.pulse_us.centre"), 1500.0);
    assert_eq!(value(" gait . frequency_hz ".replace(' ', "").as_str()), 1.0);
}

fn with_catalogue() -> Folder {
    let lines = spoilt(&["axes = \"yaw\"\nyaw_servo = \"mini\""], "");
    let text = format!("servos = \"shelf.toml\"\n{lines}");
    Folder::with(&[("d.toml", &text), ("shelf.toml", SERVO)])
}

/// The file may be gone by then: what it named is kept.
#[test]
fn twin_a_catalogues_servo_has_knobs() {
    let folder = with_catalogue();
    let by_text = folder.read(&["servo.mini.mass_kg=0.05"]).unwrap();
    let mut design = folder.read(&[]).unwrap();
    drop(folder);
    let knob = Knob::find(&design, "servo.mini.mass_kg").unwrap();
    assert_eq!(knob.value(&design), 0.020);
    knob.set(&mut design, 0.05).unwrap();
    assert_eq!(design, by_text);
    assert_eq!(knob.value(&design), 0.05);
}

#[test]
fn twin_clamped_numbers_stay_within_the_readers_range() {
    let mut design = design(SOUND).read(&[]).unwrap();
    let cases = [
        ("launch.speed_m_s", -1.0, 0.0),
        ("launch.speed_m_s", 1e9, 200.0),
        ("section.plate.pressure_centre", 1.01, 1.0),
        ("launch.height_m", -3.0, 1e-5),
        ("gait.vertical_ratio", 2.6, 3.0),
        ("gait.vertical_ratio", -4.0, 1.0),
        ("launch.roll_deg", 12.5, 12.5),
    ];
    for (key, asked, got) in cases {
        let knob = Knob::find(&design, key).unwrap();
        assert_eq!(knob.set(&mut design, asked).is_ok(), asked == got, "{key}");
        knob.set_clamped(&mut design, asked).unwrap();
        assert_eq!(knob.value(&design), got, "{key}");
    }
    let knob = Knob::find(&design, "launch.speed_m_s").unwrap();
    assert!(knob.set_clamped(&mut design, f64::NAN).is_err());
}

#[test]
fn frozen_mistakes_with_knobs() {
    let sound = design(SOUND).read(&[]).unwrap();
    let find = |design: &Design, key: &str| match Knob::find(design, key) {
        Ok(knob) => format!("{} is {}", knob.key(), knob.value(design)),
        Err(error) => error.to_string(),
    };
    let set = |key: &str, value| {
        let mut design = sound.clone();
        let errors = Knob::find(&design, key).unwrap().set(&mut design, value).unwrap_err();
        assert_eq!(design, sound);
        errors.lines().collect::<Vec<_>>().join("\n")
    };
    let keys = [
        "gait.freqency_hz",
        "frequency_hz",
        "pressure_centre",
        "launch.speed",
        "colour",
        "body",
        "gait",
        "body.section",
        "name",
        "air.wind_m_s",
        "air.wind_m_s[3]",
        "body.length_m[3]",
        "body.width_m.middle",
        "air.altitude_m",
        "joints.yaw_travel_deg",
        "battery.mass_kg",
        "payload[0].mass_kg",
        "servo.mini.mass_kg",
        "section.round.pressure_centre",
        "gait.start.delay_s",
        "gait.interpolation",
        "a b",
        "",
    ];
    let mut lines: Vec<String> =
        keys.iter().map(|key| format!("{key}: {}", find(&sound, key))).collect();
    let listed = design(&spoilt(
        &["length_m = [0.1, 0.1, 0.1, 0.1]", "width_m = { middle = 0.1, ends = 0.1 }"],
        "",
    ));
    let listed = listed.read(&[]).unwrap();
    for key in ["body.length_m", "body.length_m[3]", "body.length_m[4]", "body.width_m"] {
        lines.push(format!("{key}: {}", find(&listed, key)));
    }
    lines.push(set("launch.speed_m_s", -1.0));
    lines.push(set("launch.speed_m_s", f64::NAN));
    lines.push(set("launch.speed_m_s", f64::INFINITY));
    lines.push(set("gait.vertical_ratio", 2.5));
    lines.push(set("body.segments", 129.0));
    lines.push(set("body.length_m", 0.0));
    let lines = lines.join("\n");
    assert_snapshot!(lines);
}
