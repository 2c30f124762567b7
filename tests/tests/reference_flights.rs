//! Two whole flights against a second implementation of the same equations.

use approx::assert_relative_eq;
use serde_json::Value;
use undulift_design::quantities::{Quantity, of_flight};
use undulift_design::{Design, read};
use undulift_flight::{Flight, Settings, bands, fly, histories, loads_at, summary};
use undulift_tests::{data_file, read_json};

/// Results agree to this, relative to themselves or to 1 where they are smaller.
const RESULTS: f64 = 1e-3;

fn flown(name: &str, tolerance: f64) -> (Design, Flight) {
    let design = read(&data_file(&format!("flights/{name}.toml")), &[]).unwrap();
    let settings = Settings { tolerance, ..Settings::default() };
    let flight = fly(&design.glider, &settings).unwrap();
    (design, flight)
}

fn numbers(value: &Value) -> Vec<f64> {
    value.as_array().unwrap().iter().map(|v| v.as_f64().unwrap()).collect()
}

/// All results, the state at release, and state, attitude and joint angles at three instants of
/// each flight, flown by a second implementation of the same equations in Python (DOP853 at 1e-10),
/// whose mechanics agree with a general-purpose rigid-body library to 1e-14 (`data/flights.json`).
#[test]
fn twin_flights_agree_with_a_second_implementation() {
    let file: Value = read_json("flights.json");
    for name in ["open-1-plate", "open-2-domed"] {
        let expected = &file[name];
        let (design, mut flight) = flown(name, 1e-9);
        mass_split_agrees(&design, &expected["mass_split_kg"]);
        release_agrees(&flight, &numbers(&expected["extra"]["release_state"]));
        for row in expected["trace"].as_array().unwrap() {
            trace_agrees(&design, &mut flight, row);
        }
        let summary = summary(&design.glider, &mut flight);
        let bands = bands(&design.glider, &mut flight);
        let found = of_flight(&summary, &bands);
        assert_eq!(found.len(), expected["fly"].as_object().unwrap().len());
        for (key, quantity) in found {
            result_agrees(name, key, quantity, &expected["fly"][key]);
        }
    }
}

fn result_agrees(name: &str, key: &str, found: Quantity, expected: &Value) {
    match found {
        Quantity::Word(word) => assert_eq!(word, expected.as_str().unwrap()),
        Quantity::None => assert!(expected.is_null(), "{name}: {key}"),
        Quantity::Number(value) => {
            let expected = expected.as_f64().unwrap();
            let apart = (value - expected).abs() / expected.abs().max(1.0);
            assert!(apart < RESULTS, "{name}: {key} is {value}, not {expected}");
        }
        Quantity::Band(ends) => {
            for (value, expected) in ends.into_iter().zip(numbers(expected)) {
                let allowed = if key == "alpha_deg" { 0.3 } else { 0.02 * expected };
                assert!((value - expected).abs() < allowed, "{name}: {key} {value} {expected}");
            }
        }
    }
}

fn mass_split_agrees(design: &Design, expected: &Value) {
    let split = design.glider.chain.mass_split();
    let pairs = [
        ("structure", split.structure_kg),
        ("servos", split.servos_kg),
        ("battery", split.battery_kg),
        ("payload", split.payload_kg),
    ];
    for (part, mass_kg) in pairs {
        assert_relative_eq!(mass_kg, expected[part].as_f64().unwrap(), epsilon = 1e-12);
    }
}

fn release_agrees(flight: &Flight, expected: &[f64]) {
    let state = flight.trajectory.state(0.0);
    let q = state.head_to_world.quaternion();
    // A quaternion and its negative are the same attitude.
    let sign = (q.w * expected[3]).signum();
    let found: Vec<f64> = state
        .place_m
        .iter()
        .copied()
        .chain([q.w, q.i, q.j, q.k].map(|part| sign * part))
        .chain(state.velocity_m_s.iter().copied())
        .chain(state.momentum_kg_m2_s.iter().copied())
        .collect();
    for (found, expected) in found.iter().zip(expected) {
        assert_relative_eq!(*found, *expected, epsilon = 1e-8);
    }
}

fn trace_agrees(design: &Design, flight: &mut Flight, expected: &Value) {
    let time_s = expected["time_s"].as_f64().unwrap();
    let rows: Vec<_> = undulift_flight::trace(flight, time_s).take(2).collect();
    let row = &rows[1];
    assert_relative_eq!(row.time_s, time_s, epsilon = 1e-12);
    let close = |what: &str, found: &[f64], expected: &Value, allowed: f64| {
        for (found, expected) in found.iter().zip(numbers(expected)) {
            assert!((found - expected).abs() < allowed, "{what} at {time_s} s: {found} {expected}");
        }
    };
    let attitude = [row.attitude.roll_rad(), row.attitude.pitch_rad(), row.attitude.yaw_rad()];
    close("place", row.state.place_m.as_slice(), &expected["place_m"], 1e-5);
    close("velocity", row.state.velocity_m_s.as_slice(), &expected["velocity_m_s"], 3e-5);
    close("momentum", row.state.momentum_kg_m2_s.as_slice(), &expected["momentum_kg_m2_s"], 1e-6);
    close("attitude", &attitude.map(f64::to_degrees), &expected["rpy_deg"], 3e-3);
    let degrees: Vec<f64> = row.angles_rad.iter().map(|angle| angle.to_degrees()).collect();
    let joints = design.glider.chain.joints();
    let n_yaw = joints.iter().filter(|joint| joint.yaw).count();
    close("yaw joints", &degrees[..n_yaw], &expected["yaw_deg"], 1e-7);
    close("pitch joints", &degrees[n_yaw..], &expected["pitch_deg"], 1e-7);
}

/// Joint torques at three instants of each flight, within 3e-3 of the largest, by the same second
/// implementation; the wrench left at the nose vanishes all along.
#[test]
fn twin_joint_torques_agree_with_a_second_implementation() {
    let file: Value = read_json("flights.json");
    for name in ["open-1-plate", "open-2-domed"] {
        let (design, mut flight) = flown(name, 1e-9);
        let rows = file[name]["joint_torques"].as_array().unwrap();
        // Null stands where a joint lacks the axis.
        let of_axis = |values: &Value| -> Vec<f64> {
            values.as_array().unwrap().iter().filter_map(Value::as_f64).collect()
        };
        let of_row = |row: &Value| {
            [of_axis(&row["yaw_torque_nm"]), of_axis(&row["pitch_torque_nm"])].concat()
        };
        let largest = rows.iter().flat_map(of_row).fold(0.0, |most: f64, t| most.max(t.abs()));
        for row in rows {
            let time_s = row["time_s"].as_f64().unwrap();
            let found = loads_at(&design.glider, &mut flight, time_s).unwrap().loads.torques_nm;
            let expected = of_row(row);
            assert_eq!(found.len(), expected.len());
            for (found, expected) in found.iter().zip(&expected) {
                assert!((found - expected).abs() < 3e-3 * largest, "{name}, {time_s} s");
            }
        }
        let all = histories(&design.glider, &mut flight, 0.01).unwrap();
        assert!(all.left_at_nose < 1e-9, "{name}: {:e}", all.left_at_nose);
    }
}

/// The default tolerance keeps results within a thousandth of a far finer one.
#[test]
fn twin_default_tolerance_is_fine_enough() {
    for name in ["open-1-plate", "open-2-domed"] {
        let [coarse, fine] = [1e-6, 1e-10].map(|tolerance| {
            let (design, mut flight) = flown(name, tolerance);
            summary(&design.glider, &mut flight).glide_ratio.unwrap()
        });
        assert_relative_eq!(coarse, fine, max_relative = 1e-3);
    }
}
