//! The example flights and a full design load with the values that they state.

mod common;

use std::path::PathBuf;

use approx::assert_relative_eq;
use common::{Folder, SOUND, design, spoilt};
use undulift_chain::{Axis, Carried, PointMass};
use undulift_design::{Endurance, read};
use undulift_gait::{Pattern, Start};

fn example(name: &str) -> undulift_design::Design {
    let data = PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("../../tests/data/flights");
    read(&data.join(name), &[]).unwrap()
}

#[test]
fn twin_example_flights_have_the_masses_that_their_files_state() {
    let plate = example("open-1-plate.toml");
    let split = plate.glider.chain.mass_split();
    assert_relative_eq!(split.structure_kg, 0.36, max_relative = 1e-12);
    assert_relative_eq!(split.payload_kg, 0.03, max_relative = 1e-12);
    assert_eq!(plate.name, "open-1-plate");
    assert_relative_eq!(plate.glider.chain.length_m(), 1.1, max_relative = 1e-12);
    assert_relative_eq!(plate.glider.launch.pitch_rad, -15f64.to_radians());

    let domed = example("open-2-domed.toml");
    let split = domed.glider.chain.mass_split();
    assert_relative_eq!(split.structure_kg, 0.55, max_relative = 1e-12);
    assert_relative_eq!(split.battery_kg, 0.03, max_relative = 1e-12);
    let battery_at_m = domed.glider.chain.attached()[0].at_m;
    assert_relative_eq!(battery_at_m.x, -1.3 / 14.0 / 2.0, max_relative = 1e-12);
    assert_eq!(domed.glider.gait.start, Start::Held { delay_s: 0.1, spin_up_s: 0.4 });
    assert!(domed.glider.chain.joints()[0].yaw && !domed.glider.chain.joints()[0].pitch);
    assert!(domed.glider.chain.joints()[1].pitch && !domed.glider.chain.joints()[1].yaw);
}

/// Defaults as the documentation of the file lists them.
#[test]
fn twin_what_is_left_out_has_its_default() {
    let read = design(SOUND).read(&[]).unwrap();
    assert_eq!(read.name, "d");
    let Pattern::Wave(wave) = read.glider.gait.pattern else { panic!("a wave") };
    assert_eq!((wave.sharpness, wave.vertical_ratio), (0.0, 2));
    assert_relative_eq!(wave.vertical_lag_rad, std::f64::consts::FRAC_PI_2);
    assert_eq!(read.glider.strips_per_segment, 2);
    assert_eq!(read.glider.air, undulift_aero::Air::at(293.15, 101_325.0));
    assert_relative_eq!(read.limits.tilt_rad, 60f64.to_radians());
    assert_eq!((read.limits.torque_factor, read.update_hz), (1.5, None));
    assert_eq!(read.glider.sections[0].pressure_centre, 0.25);
}

/// Every key of the documented design at once.
#[test]
fn twin_a_full_design_loads() {
    let folder = Folder::with(&[
        ("d.toml", include_str!("full.toml")),
        ("my-rib.csv", include_str!("my-rib.csv")),
    ]);
    let read = folder.read(&[]).unwrap();
    let split = read.glider.chain.mass_split();
    assert_relative_eq!(split.structure_kg, 0.22, max_relative = 1e-12);
    assert_relative_eq!(split.servos_kg, 15.0 * (0.034 + 0.020), max_relative = 1e-12);
    assert_relative_eq!(split.battery_kg, 0.028);
    assert_relative_eq!(split.payload_kg, 0.015);
    assert_eq!(read.servo_names.of(3, Axis::Pitch), Some("mini-20"));
    let servo = &read.servos["mini-20"];
    assert_relative_eq!(servo.no_load_speed_rad_s, 600f64.to_radians());
    assert_eq!(servo.endurance, Endurance::ContinuousTorque(0.15));
    assert!(matches!(read.servos["mid-34"].endurance, Endurance::Thermal { .. }));
    assert_relative_eq!(read.battery.as_ref().unwrap().supply.capacity_coulomb, 1620.0);
    assert_eq!(read.update_hz, Some(50.0));
    // A servo sits at the rear end of the segment ahead of its joint.
    let attached = read.glider.chain.attached();
    let is_servo = |mass: &&PointMass| mass.carried == Carried::Servo;
    let servo_mass = attached.iter().rev().find(is_servo).unwrap();
    assert_eq!(servo_mass.segment_idx, 14);
    assert_relative_eq!(servo_mass.at_m.x, -1.4 / 16.0, max_relative = 1e-12);
}

/// As sold: 4.6 kgf·cm is 4.6 × 0.098 066 5 N·m, 0.10 s per 60° is 600°/s.
#[test]
fn analytic_a_servo_as_sold_is_converted() {
    let servo = "[servo.s]\nmass_kg = 0.02\nat_voltage_v = 6\nstall_torque_kgf_cm = 4.6\n\
                 no_load_s_per_60deg = 0.10\nstall_current_a = 1.9\nno_load_current_a = 0.15\n";
    let read = design(&spoilt(&["axes = \"yaw\"\nyaw_servo = \"s\""], servo)).read(&[]).unwrap();
    let servo = &read.servos["s"];
    assert_relative_eq!(servo.stall_torque_nm, 0.451_105_9, max_relative = 1e-9);
    assert_relative_eq!(servo.no_load_speed_rad_s, 600f64.to_radians(), max_relative = 1e-12);
    // η = ω₀τ_s/[(V_n − I₀R)(I_s − I₀)] by hand: 4.723 970/(5.526 316·1.75).
    assert_relative_eq!(servo.implied_efficiency(), 0.488_465, max_relative = 2e-6);
    assert_relative_eq!(read.glider.chain.mass_split().servos_kg, 0.06, max_relative = 1e-12);
}

/// `printf … | sha256sum`: without named files the hash is that of the file itself.
#[test]
fn twin_hash_of_a_single_file_is_the_files_own() {
    use sha2::{Digest, Sha256};
    let read = design(SOUND).read(&[]).unwrap();
    let own: String = Sha256::digest(SOUND).iter().map(|byte| format!("{byte:02x}")).collect();
    assert_eq!(read.input_sha256, own);
    let set = design(SOUND).read(&["launch.speed_m_s=4"]).unwrap();
    assert_ne!(set.input_sha256, own);
}
