//! Forces in the joints against a general-purpose rigid-body library and by hand.

use approx::assert_relative_eq;
use nalgebra::{Quaternion, UnitQuaternion, Vector3};
use serde::Deserialize;
use undulift_chain::{Chain, Joint, PointMass, Segment, Shape};
use undulift_dynamics::{Articulated, Drive, Held, JointMotion, Mechanics, Outside, joint_loads};
use undulift_flight::{Pose, Settings, bench_loads, fly, histories};
use undulift_gait::{Gait, GaitTable, Interpolation, Pattern, Start};
use undulift_tests::chains::{Case, cases};
use undulift_tests::gliders::{in_vacuum, undulating};
use undulift_tests::{read_json, relative_difference};

#[derive(Deserialize)]
struct File {
    gravity_world_m_s2: [f64; 3],
    chains: Vec<Loads>,
}

#[derive(Deserialize)]
struct Loads {
    root_to_world_wxyz: [f64; 4],
    root_angular_velocity_world_rad_s: [f64; 3],
    yaw_acceleration_rad_s2: Vec<f64>,
    pitch_acceleration_rad_s2: Vec<f64>,
    force_at_centre_world_n: Vec<[f64; 3]>,
    moment_world_nm: Vec<[f64; 3]>,
    root_acceleration_world_m_s2: [f64; 3],
    root_angular_acceleration_world_rad_s2: [f64; 3],
    yaw_torque_nm: Vec<Option<f64>>,
    pitch_torque_nm: Vec<Option<f64>>,
}

/// A chain in its pose under its loads, in root axes, lists by axis.
struct Posed {
    chain: Chain,
    to_world: UnitQuaternion<f64>,
    head_rad_s: Vector3<f64>,
    angles_rad: Vec<f64>,
    rates_rad_s: Vec<f64>,
    accelerations_rad_s2: Vec<f64>,
    torques_nm: Vec<f64>,
    outside: Vec<Outside>,
}

impl Posed {
    fn of(case: &Case, loads: &Loads) -> Self {
        let chain = case.chain();
        let [w, x, y, z] = loads.root_to_world_wxyz;
        let to_world = UnitQuaternion::from_quaternion(Quaternion::new(w, x, y, z));
        let to_root = |v: [f64; 3]| to_world.inverse() * Vector3::from(v);
        let by_axis = |yaw: &[f64], pitch: &[f64]| case.by_axis(&chain, yaw, pitch);
        let outside = (0..chain.n_segments())
            .map(|k| {
                let force_n = to_root(loads.force_at_centre_world_n[k]);
                let rotation = nalgebra::Matrix3::from_row_slice(&case.rotations[k]);
                let arm_m = rotation * chain.inertials()[k].centre_m;
                let moment_nm = to_root(loads.moment_world_nm[k]) + arm_m.cross(&force_n);
                Outside { force_n, moment_nm }
            })
            .collect();
        let zeroed = |torques: &[Option<f64>]| -> Vec<f64> {
            torques.iter().map(|torque| torque.unwrap_or(0.0)).collect()
        };
        Self {
            to_world,
            head_rad_s: to_root(loads.root_angular_velocity_world_rad_s),
            angles_rad: by_axis(&case.yaw_rad, &case.pitch_rad),
            rates_rad_s: by_axis(&case.yaw_rate_rad_s, &case.pitch_rate_rad_s),
            accelerations_rad_s2: by_axis(
                &loads.yaw_acceleration_rad_s2,
                &loads.pitch_acceleration_rad_s2,
            ),
            torques_nm: by_axis(&zeroed(&loads.yaw_torque_nm), &zeroed(&loads.pitch_torque_nm)),
            outside,
            chain,
        }
    }
}

/// Random free-flying chains with random joint motion and random forces on every segment: torques
/// and accelerations of the head by the general-purpose library `pin` 4.1.0
/// (`data/make_chains.py`).
#[test]
fn twin_random_chains_under_load_agree_with_a_rigid_body_library() {
    let file: File = read_json("chain_loads.json");
    let gravity = Vector3::from(file.gravity_world_m_s2);
    for (which, (case, loads)) in cases().iter().zip(&file.chains).enumerate() {
        let posed = Posed::of(case, loads);
        let motion = JointMotion {
            angles_rad: &posed.angles_rad,
            rates_rad_s: &posed.rates_rad_s,
            accelerations_rad_s2: &posed.accelerations_rad_s2,
        };
        let held = Held::Free { head_rad_s: posed.head_rad_s };
        let gravity = posed.to_world.inverse() * gravity;
        let found = joint_loads(&posed.chain, motion, held, gravity, &posed.outside);
        let world = |v: Vector3<f64>| (posed.to_world * v).as_slice().to_vec();
        let pairs = [
            ("torques", found.torques_nm.clone(), posed.torques_nm.clone()),
            (
                "acceleration",
                world(found.head_acceleration_m_s2),
                loads.root_acceleration_world_m_s2.to_vec(),
            ),
            (
                "angular acceleration",
                world(found.head_angular_acceleration_rad_s2),
                loads.root_angular_acceleration_world_rad_s2.to_vec(),
            ),
        ];
        for (what, found, expected) in pairs {
            let apart = relative_difference(&found, &expected);
            assert!(apart < 1e-9, "chain {which}, {what}: {apart:e} apart");
        }
        let largest =
            |wrench: &undulift_dynamics::Wrench| wrench.force_n.norm().max(wrench.moment_nm.norm());
        let in_joints = found.joints.iter().map(largest).fold(0.0, f64::max);
        assert!(largest(&found.left) < 1e-9 * in_joints, "the nose bears nothing");
    }
}

/// The same chains forwards: with torques known on every other axis and motion on the rest, rotor
/// inertia taken along, the articulated passes give back the accelerations that the library was
/// given, and its head accelerations.
#[test]
fn twin_forward_dynamics_inverts_the_rigid_body_library() {
    let file: File = read_json("chain_loads.json");
    let gravity = Vector3::from(file.gravity_world_m_s2);
    for (which, (case, loads)) in cases().iter().zip(&file.chains).enumerate() {
        let posed = Posed::of(case, loads);
        let rotor_kg_m2 = 2e-4;
        for known in 0..3 {
            let drives: Vec<Drive> = (0..posed.torques_nm.len())
                .map(|axis| {
                    let acceleration = posed.accelerations_rad_s2[axis];
                    // All torques, every other one, or none.
                    match (known, axis % 2) {
                        (0, _) | (1, 0) => Drive::Torque {
                            torque_nm: posed.torques_nm[axis] + rotor_kg_m2 * acceleration,
                            rotor_kg_m2,
                        },
                        _ => Drive::Motion(acceleration),
                    }
                })
                .collect();
            let mut articulated = Articulated::new(&posed.chain);
            let mechanics = Mechanics::new(&posed.chain);
            let mut frames = mechanics.room();
            mechanics.frames(&posed.angles_rad, &posed.rates_rad_s, &mut frames);
            let head = articulated.solve(
                &frames,
                &posed.rates_rad_s,
                &drives,
                posed.head_rad_s,
                posed.to_world.inverse() * gravity,
                &posed.outside,
            );
            let world = |v: Vector3<f64>| (posed.to_world * v).as_slice().to_vec();
            let pairs = [
                (articulated.accelerations_rad_s2().to_vec(), posed.accelerations_rad_s2.clone()),
                (world(head.linear_m_s2), loads.root_acceleration_world_m_s2.to_vec()),
                (world(head.angular_rad_s2), loads.root_angular_acceleration_world_rad_s2.to_vec()),
            ];
            for (found, expected) in pairs {
                let apart = relative_difference(&found, &expected);
                assert!(apart < 1e-8, "chain {which}, case {known}: {apart:e} apart");
            }
        }
    }
}

/// Two-link arm, links of 1 and 0.8 kg with centres at .25 and .2 m and inertias of .02 and .01 kg·m²
/// about them, the first .5 m long: at rest and level 7.9461 and 1.5696 N·m; at q = (π/6, π/4),
/// q̇ = (1, −2), q̈ = (3, 1.5), 7.389 217 and 0.821 517 (closed form, and `pin` 4.1.0; g 9.81).
///
/// Our first segment is a clamped stub; the links are thin boxes whose point masses make the centres
/// and inertias. A link points to −x here, and positive pitch lifts its nose end, so gravity is taken
/// along +z: seen from behind, the arm reaches out and lifts against it.
#[test]
fn published_two_link_arm() {
    let stub = Segment { length_m: 0.1, width_m: 0.01, thickness_m: 0.01, structure_kg: 0.1 };
    let thin =
        |length_m: f64| Segment { length_m, width_m: 1e-4, thickness_m: 1e-4, structure_kg: 1e-9 };
    // Two equal points at ± r about the centre have inertia m r².
    let points = |segment_idx: usize, mass_kg: f64, centre_m: f64, inertia: f64| {
        let radius_m = f64::sqrt(inertia / mass_kg);
        [-radius_m, radius_m].map(|off_m| PointMass {
            carried: undulift_chain::Carried::Payload,
            segment_idx,
            at_m: Vector3::new(-centre_m + off_m, 0.0, 0.0),
            mass_kg: 0.5 * mass_kg,
        })
    };
    let masses = points(1, 1.0, 0.25, 0.02).into_iter().chain(points(2, 0.8, 0.2, 0.01)).collect();
    let joint = Joint { pitch: true, ..Joint::default() };
    let chain = Chain::new(vec![stub, thin(0.5), thin(0.4)], vec![joint; 2], masses).unwrap();
    let torques = |angles_rad: [f64; 2], rates_rad_s: [f64; 2], accelerations_rad_s2: [f64; 2]| {
        let motion = JointMotion {
            angles_rad: &angles_rad,
            rates_rad_s: &rates_rad_s,
            accelerations_rad_s2: &accelerations_rad_s2,
        };
        let held = Held::Clamped { segment_idx: 0 };
        let gravity = Vector3::new(0.0, 0.0, 9.81);
        joint_loads(&chain, motion, held, gravity, &[Outside::default(); 3]).torques_nm
    };
    let at_rest = torques([0.0; 2], [0.0; 2], [0.0; 2]);
    assert_relative_eq!(at_rest[0], 7.9461, epsilon = 1e-6);
    assert_relative_eq!(at_rest[1], 1.5696, epsilon = 1e-6);
    let pi = std::f64::consts::PI;
    let moving = torques([pi / 6.0, pi / 4.0], [1.0, -2.0], [3.0, 1.5]);
    assert_relative_eq!(moving[0], 7.389_217, epsilon = 2e-6);
    assert_relative_eq!(moving[1], 0.821_517, epsilon = 2e-6);
}

/// Held out level from either end or from the middle, each joint bears the weight beyond it times
/// its lever, by hand: n segments of mass m and length L leave k of them beyond a joint, k²mgL/2.
#[test]
fn analytic_held_out_level() {
    let segment = Segment { length_m: 0.1, width_m: 0.05, thickness_m: 0.02, structure_kg: 0.06 };
    let joint = Joint { yaw: true, pitch: true, ..Joint::default() };
    let chain = Chain::new(vec![segment; 6], vec![joint; 5], Vec::new()).unwrap();
    let zero = [0.0; 10];
    let motion = JointMotion { angles_rad: &zero, rates_rad_s: &zero, accelerations_rad_s2: &zero };
    let g = undulift_aero::STANDARD_GRAVITY_M_S2;
    for clamp in 0..6 {
        let held = Held::Clamped { segment_idx: clamp };
        let gravity = Vector3::new(0.0, 0.0, -g);
        let loads = joint_loads(&chain, motion, held, gravity, &[Outside::default(); 6]);
        for joint in 0..5 {
            let beyond = if joint >= clamp { 5 - joint } else { joint + 1 } as f64;
            let expected = beyond * beyond * 0.06 * g * 0.1 / 2.0;
            assert_relative_eq!(loads.torques_nm[5 + joint].abs(), expected, epsilon = 1e-12);
            assert_relative_eq!(loads.torques_nm[joint], 0.0, epsilon = 1e-12);
            // The hinge carries the weight and, in pitch, nothing else.
            let hinge = loads.hinges[joint];
            assert_relative_eq!(hinge.force_n.z.abs(), beyond * 0.06 * g, epsilon = 1e-12);
            assert_relative_eq!(hinge.moment_nm.norm(), 0.0, epsilon = 1e-12);
            // What falls on either side bends the chain down at its ends, which lets the nose of
            // the segment behind come up: the servo is asked to turn it down.
            assert!(loads.torques_nm[5 + joint] < 0.0, "clamp {clamp}, joint {joint}");
        }
        assert_relative_eq!(loads.left.force_n.z, 6.0 * 0.06 * g, epsilon = 1e-12);
    }
}

/// In the release shape, held by one segment at rest, the clamp bears the weight and its moment
/// about the clamp; twice the weight makes twice the torque. By hand: force M g G, and the torques'
/// work for a small turn of one joint equals the weight's, checked as a difference of potential
/// energy between two shapes.
#[test]
fn twin_held_in_the_release_shape() {
    let glider = undulating();
    let [once, twice] =
        [1.0, 2.0].map(|factor| bench_loads(&glider, Pose::Gait { at_s: 0.0 }, 4, factor).unwrap());
    let weight_n = glider.chain.mass_kg() * undulift_aero::STANDARD_GRAVITY_M_S2;
    assert_relative_eq!(once.left.force_n.norm(), weight_n, epsilon = 1e-12);
    for (one, two) in once.torques_nm.iter().zip(&twice.torques_nm) {
        assert_relative_eq!(2.0 * one, *two, epsilon = 1e-12);
    }
    let refused = bench_loads(&glider, Pose::HeldOut, 12, 1.0).unwrap_err().to_string();
    assert!(refused.contains("no segment 13"), "{refused}");
    // Held by the head, level: turning joint j by a little lifts or lowers the centre of mass by
    // what the torque there pays for.
    let n_joints = 11;
    let height_m = |turned: usize, angle_rad: f64| {
        let yaw_rad = vec![0.0; n_joints];
        let mut pitch_rad = vec![0.0; n_joints];
        pitch_rad[turned] = angle_rad;
        Shape::of(&glider.chain, &yaw_rad, &pitch_rad).centre_of_mass_m(&glider.chain).z
    };
    let held = bench_loads(&glider, Pose::HeldOut, 0, 1.0).unwrap();
    for joint in 0..n_joints {
        let rise_m = height_m(joint, 1e-5) - height_m(joint, -1e-5);
        assert_relative_eq!(
            held.torques_nm[n_joints + joint],
            weight_n * rise_m / 2e-5,
            epsilon = 1e-8
        );
    }
}

/// A pose given by its angles bears what the same shape does where a gait table holds it, whose body
/// frame is found by other code.
#[test]
fn twin_a_pose_bears_what_a_table_that_holds_it_does() {
    let mut glider = undulating();
    let angles_rad: Vec<f64> = (0..22).map(|k| 0.4 * (1.7 * f64::from(k)).sin() + 0.05).collect();
    let columns = angles_rad.iter().map(|angle_rad| vec![*angle_rad; 2]).collect();
    let table = GaitTable::new(1.0, columns, None, None, Interpolation::Cubic).unwrap();
    let pattern = Pattern::Table(table);
    glider.gait = Gait { pattern, phase_rad: 0.0, start: Start::Running };
    (glider.launch.roll_rad, glider.launch.pitch_rad) = (0.3, -0.2);
    let pose = Pose::Angles { angles_rad, roll_rad: 0.3, pitch_rad: -0.2 };
    for clamp_idx in [0, 5, 11] {
        let by_table = bench_loads(&glider, Pose::Gait { at_s: 0.0 }, clamp_idx, 1.5).unwrap();
        let by_angles = bench_loads(&glider, pose.clone(), clamp_idx, 1.5).unwrap();
        assert!(by_table.torques_nm.iter().all(|torque_nm| torque_nm.abs() < 10.0));
        for (one, other) in by_table.torques_nm.iter().zip(&by_angles.torques_nm) {
            assert_relative_eq!(one, other, epsilon = 1e-11);
        }
    }
    let pose = Pose::Angles { angles_rad: vec![0.0; 3], roll_rad: 0.0, pitch_rad: 0.0 };
    let refused = bench_loads(&glider, pose, 0, 1.0).unwrap_err().to_string();
    assert_eq!(refused, "the pose has 3 joint angles, but the chain has 22 axes");
}

/// The shape at a time t is that of a release whose phase is 2πft further.
#[test]
fn twin_a_gait_at_a_time_is_a_release_further_on() {
    let glider = undulating();
    let mut further = glider.clone();
    further.gait.phase_rad -= std::f64::consts::TAU * 1.2 * 0.35;
    let later = bench_loads(&glider, Pose::Gait { at_s: 0.35 }, 3, 1.0).unwrap();
    let shifted = bench_loads(&further, Pose::Gait { at_s: 0.0 }, 3, 1.0).unwrap();
    let first = bench_loads(&glider, Pose::Gait { at_s: 0.0 }, 3, 1.0).unwrap();
    for (one, other) in later.torques_nm.iter().zip(&shifted.torques_nm) {
        assert_relative_eq!(one, other, epsilon = 1e-11);
    }
    assert!((later.torques_nm[3] - first.torques_nm[3]).abs() > 1e-3);
}

/// What the chain's energy changes by is the work of its joints and of the air, each far from
/// nothing: torques and rates against kinetic and potential energy, two routes that share only the
/// flight. Simpson's rule over 0.5 ms steps and the flight at 1e-10 leave a millionth.
#[test]
fn twin_energy_changes_by_the_work_of_joints_and_air() {
    // Fast, so that the joints work as hard as the air does.
    let mut fast = undulating();
    let Pattern::Wave(wave) = &mut fast.gait.pattern else { unreachable!("it undulates") };
    wave.frequency_hz = 4.0;
    for (glider, has_air) in [(fast.clone(), true), (in_vacuum(fast), false)] {
        let settings = Settings { tolerance: 1e-10, max_time_s: 0.8, ..Settings::default() };
        let mut flight = fly(&glider, &settings).unwrap();
        assert_eq!(flight.time_s, 0.8);
        let found = histories(&glider, &mut flight, 5e-4).unwrap();
        let joint_power_w = |row: usize| -> f64 {
            found.torques_nm[row].iter().zip(&found.rates_rad_s[row]).map(|(t, r)| t * r).sum()
        };
        let rows = found.times_s.len() - 1;
        assert_eq!(rows % 2, 0);
        let simpson = |power_w: &dyn Fn(usize) -> f64| -> f64 {
            let weight = |row: usize| match row {
                0 => 1.0,
                row if row == rows => 1.0,
                row => 2.0 + 2.0 * (row % 2) as f64,
            };
            (0..=rows).map(|row| weight(row) * power_w(row)).sum::<f64>() * 5e-4 / 3.0
        };
        let joints_j = simpson(&joint_power_w);
        let air_j = simpson(&|row| found.air_power_w[row]);
        let change_j = found.energy_j[rows] - found.energy_j[0];
        let throughput_j = simpson(&|row| joint_power_w(row).abs());
        assert!(throughput_j > 0.3, "{throughput_j}");
        assert!(has_air == (air_j.abs() > 0.5), "{air_j}");
        assert_relative_eq!(change_j, joints_j + air_j, epsilon = 1e-6 * throughput_j);
    }
}
