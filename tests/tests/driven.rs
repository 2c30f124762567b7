//! Joints that servos turn, that hang limp or are locked.

use std::f64::consts::TAU;

use approx::assert_relative_eq;
use nalgebra::Vector3;
use undulift_chain::Segment;
use undulift_flight::{
    Drives, End, Equations, Failure, Fault, Flight, Glider, Launch, Mode, Settings, State, fly,
    fly_driven, histories,
};
use undulift_gait::Wave;
use undulift_servo::{Battery, CellVoltage, Endurance, PositionLoop, Pulse, Servo};
use undulift_tests::gliders::{STILL, dropped_from, in_vacuum, undulating, uniform};

/// A servo without deadband, rotor or loss.
fn plain_servo(stall_torque_nm: f64, no_load_speed_rad_s: f64, full_at_rad: f64) -> Servo {
    Servo {
        name: "plain".into(),
        mass_kg: 0.0,
        at_voltage_v: 6.0,
        stall_torque_nm,
        no_load_speed_rad_s,
        stall_current_a: 2.0,
        no_load_current_a: 0.0,
        idle_current_a: 0.0,
        gear_efficiency: None,
        rotor_inertia_at_output_kg_m2: 0.0,
        endurance: Endurance::Unknown,
        pulse: Pulse::default(),
        position_loop: PositionLoop { full_at_rad, deadband_rad: 0.0 },
        price: None,
    }
}

fn n_axes(glider: &Glider) -> usize {
    Equations::new(glider).unwrap().commands().axes().len()
}

fn all_driven(glider: &Glider, servo: Servo) -> Drives {
    let modes = vec![Mode::Driven { servo_idx: 0 }; n_axes(glider)];
    Drives { modes, servos: vec![servo], ..Drives::default() }
}

fn all(glider: &Glider, mode: Mode) -> Drives {
    Drives { modes: vec![mode; n_axes(glider)], ..Drives::default() }
}

fn within(tolerance: f64, max_time_s: f64) -> Settings {
    Settings { tolerance, max_time_s, through_inversion: true, ..Settings::default() }
}

fn kinetic_j(glider: &Glider, flight: &Flight, state: &State, time_s: f64) -> f64 {
    let mut equations = Equations::new(glider).unwrap();
    equations.kinetic_energy_j(flight.trajectory.instant(time_s), state)
}

/// Two equal rods, hinged, afloat in vacuum without turning, with a small wave on the hinge.
///
/// Each turns half the joint's angle the other way, so ½(I/2 + J)θ̇² is all their energy: the servo's
/// line makes it a damped oscillator, (I/2 + J)θ̈ + (τ_s/ω₀)θ̇ + (τ_s/full_at)(θ − θ_c) = 0.
fn two_rods(frequency_hz: f64) -> (Glider, f64) {
    let rod = Segment { length_m: 0.3, width_m: 0.04, thickness_m: 0.02, structure_kg: 0.2 };
    let wave = Wave {
        frequency_hz,
        lateral_amplitude_rad: 1e-3,
        lateral_waves: 0.5,
        vertical_amplitude_rad: 0.0,
        ..STILL
    };
    let glider = in_vacuum(uniform(2, rod, wave, dropped_from(20.0)));
    (glider, 0.2 * (0.3_f64.powi(2) + 0.04_f64.powi(2)) / 12.0)
}

/// θ̈ + 2ζω θ̇ + ω²(θ − c) = 0 from θ₀ and θ̇₀, c held, ζ < 1.
fn released_oscillator(
    zeta: f64,
    omega: f64,
    [start, rate]: [f64; 2],
    held: f64,
    t: f64,
) -> [f64; 2] {
    let damped = omega * (1.0 - zeta * zeta).sqrt();
    let (a, b) = (start - held, (rate + zeta * omega * (start - held)) / damped);
    let (sine, cosine) = (damped * t).sin_cos();
    let decay = (-zeta * omega * t).exp();
    let angle = decay * (a * cosine + b * sine);
    let rate = -zeta * omega * angle + decay * damped * (b * cosine - a * sine);
    [held + angle, rate]
}

/// The joint follows a wave as a damped oscillator does: forced answer by complex numbers, its own
/// motion on top. Angles of 10⁻³ leave errors of their square.
#[test]
fn analytic_a_driven_hinge_is_a_damped_oscillator() {
    let (glider, inertia_kg_m2) = two_rods(2.0);
    let servo = Servo { rotor_inertia_at_output_kg_m2: 2e-4, ..plain_servo(0.8, 60.0, 0.4) };
    let inertia = 0.5 * inertia_kg_m2 + 2e-4;
    let omega = (0.8 / 0.4 / inertia).sqrt();
    let zeta = 0.8 / 60.0 / (2.0 * inertia * omega);
    assert!(zeta > 0.05 && zeta < 0.7, "{zeta}");
    let flight = fly_driven(&glider, &all_driven(&glider, servo), &within(1e-11, 0.7)).unwrap();
    // What is told: c(t) = Re(C e^{iΩt}), read off the commands at two times.
    let drive = TAU * 2.0;
    let commands = |time_s: f64| {
        let mut equations = Equations::new(&glider).unwrap();
        let motion = equations.motion(undulift_gait::Instant::at(time_s));
        [motion.angles_rad[0], motion.rates_rad_s[0]]
    };
    let [angle_rad, rate_rad_s] = commands(0.0);
    let told = nalgebra::Complex::new(angle_rad, -rate_rad_s / drive);
    let answer = told * omega.powi(2)
        / nalgebra::Complex::new(omega.powi(2) - drive.powi(2), 2.0 * zeta * omega * drive);
    let own = [angle_rad - answer.re, rate_rad_s + drive * answer.im];
    let mut apart_rad = 0.0_f64;
    for time_s in [0.05, 0.2, 0.45, 0.7] {
        let turn = nalgebra::Complex::new(0.0, drive * time_s).exp();
        let expected = (answer * turn).re + released_oscillator(zeta, omega, own, 0.0, time_s)[0];
        let found = flight.trajectory.state(time_s).loose[0].angle_rad;
        assert_relative_eq!(found, expected, epsilon = 1e-8);
        apart_rad = apart_rad.max((found - commands(time_s)[0]).abs());
    }
    assert!(apart_rad > 1e-4, "it should lag: {apart_rad}");
}

/// With frames each command holds until the next: the same oscillator, let go anew at each.
#[test]
fn analytic_commands_hold_over_a_frame() {
    let (glider, inertia_kg_m2) = two_rods(2.0);
    let inertia = 0.5 * inertia_kg_m2;
    let omega = (0.8 / 0.4 / inertia).sqrt();
    let zeta = 0.8 / 60.0 / (2.0 * inertia * omega);
    let drives =
        Drives { update_hz: Some(16.0), ..all_driven(&glider, plain_servo(0.8, 60.0, 0.4)) };
    let flight = fly_driven(&glider, &drives, &within(1e-11, 0.6)).unwrap();
    let mut equations = Equations::new(&glider).unwrap();
    let mut told = |time_s| {
        let motion = equations.motion(undulift_gait::Instant::at(time_s));
        [motion.angles_rad[0], motion.rates_rad_s[0]]
    };
    let mut state = told(0.0);
    for frame in 0..9 {
        let from_s = f64::from(frame) / 16.0;
        let held = told(from_s)[0];
        let middle = released_oscillator(zeta, omega, state, held, 0.03);
        let found = &flight.trajectory.state(from_s + 0.03).loose[0];
        assert_relative_eq!(found.angle_rad, middle[0], epsilon = 1e-8);
        assert_relative_eq!(found.rate_rad_s, middle[1], epsilon = 1e-6);
        state = released_oscillator(zeta, omega, state, held, 1.0 / 16.0);
    }
}

/// Limp joints in vacuum: the parabola, angular momentum and energy stay.
#[test]
fn analytic_limp_joints_in_vacuum_keep_energy_momentum_and_h() {
    let glider = in_vacuum(undulating());
    let glider = Glider {
        launch: Launch { spin_world_rad_s: Vector3::new(0.5, -1.0, 2.0), ..glider.launch },
        ..glider
    };
    let flight = fly_driven(&glider, &all(&glider, Mode::Limp), &within(1e-11, 0.8)).unwrap();
    let first = flight.trajectory.state(0.0);
    let before_j = kinetic_j(&glider, &flight, &first, 0.0);
    let mass_kg = glider.chain.mass_kg();
    let mut most_rad = 0.0_f64;
    for time_s in [0.2, 0.5, 0.8] {
        let state = flight.trajectory.state(time_s);
        let fallen = Vector3::new(0.0, 0.0, -9.806_65) * time_s;
        assert_relative_eq!(state.velocity_m_s, first.velocity_m_s + fallen, epsilon = 1e-9);
        assert_relative_eq!(state.momentum_kg_m2_s, first.momentum_kg_m2_s, epsilon = 1e-12);
        let fallen_j = mass_kg * 9.806_65 * (first.place_m.z - state.place_m.z);
        let after_j = kinetic_j(&glider, &flight, &state, time_s);
        assert_relative_eq!(after_j - fallen_j, before_j, max_relative = 1e-9);
        let told =
            Equations::new(&glider).unwrap().motion(flight.trajectory.instant(time_s)).clone();
        let apart =
            |axis: &undulift_flight::LooseAxis| axis.angle_rad - told.angles_rad[axis.axis_idx];
        most_rad = state.loose.iter().map(|axis| apart(axis).abs()).fold(most_rad, f64::max);
    }
    assert!(most_rad > 0.3, "limp joints should soon leave their commands: {most_rad}");
}

/// All joints locked while it turns: a square rod is a symmetric top, whose axis goes round H at
/// |H|/I_t (any textbook on rigid bodies, from memory).
#[test]
fn analytic_a_locked_chain_is_a_torque_free_top() {
    let segment = Segment { length_m: 0.1, width_m: 0.05, thickness_m: 0.05, structure_kg: 0.05 };
    let spin_world_rad_s = Vector3::new(7.0, 1.5, -2.0);
    let launch = Launch { spin_world_rad_s, ..dropped_from(20.0) };
    let glider = in_vacuum(uniform(5, segment, STILL, launch));
    let faults = (0..n_axes(&glider))
        .map(|axis_idx| Fault { axis_idx, at_s: 0.13, failure: Failure::Locked })
        .collect();
    let drives = Drives { faults, ..all(&glider, Mode::Commanded) };
    let flight = fly_driven(&glider, &drives, &within(1e-11, 1.1)).unwrap();
    // Straight, the length is 0.5 m, the mass 0.25 kg.
    let across_kg_m2 = 0.25 * (0.5_f64.powi(2) + 0.05_f64.powi(2)) / 12.0;
    let along_kg_m2 = 0.25 * 2.0 * 0.05_f64.powi(2) / 12.0;
    let momentum = Vector3::new(
        along_kg_m2 * spin_world_rad_s.x,
        across_kg_m2 * spin_world_rad_s.y,
        across_kg_m2 * spin_world_rad_s.z,
    );
    for time_s in [0.5, 1.1] {
        let state = flight.trajectory.state(time_s);
        let about = nalgebra::UnitVector3::new_normalize(momentum);
        let turn =
            nalgebra::Rotation3::from_axis_angle(&about, momentum.norm() / across_kg_m2 * time_s);
        let found = state.head_to_world * Vector3::x();
        assert_relative_eq!(found, turn * Vector3::x(), epsilon = 1e-8);
        assert!(state.loose.iter().all(|axis| axis.angle_rad.abs() < 1e-15));
    }
}

/// Kinetic energy at fixed momentum is T(H, q̇); its slope by a rate is that axis's generalised
/// momentum, less a part that shape and H alone make. So a lock must leave every other slope as it
/// was, and take energy. Slopes by central differences, exact for a quadratic.
#[test]
fn twin_a_lock_keeps_the_momentum_of_every_other_axis() {
    let glider = in_vacuum(undulating());
    let (at_s, locked) = (0.3, 7);
    let mut drives = all_driven(&glider, plain_servo(2.0, 20.0, 0.3));
    drives.servos[0].rotor_inertia_at_output_kg_m2 = 3e-5;
    for axis_idx in 14..18 {
        drives.modes[axis_idx] = Mode::Limp;
    }
    let settings = within(1e-11, 0.4);
    let before = fly_driven(&glider, &drives, &settings).unwrap().trajectory.state(at_s);
    drives.faults = vec![Fault { axis_idx: locked, at_s, failure: Failure::Locked }];
    let flight = fly_driven(&glider, &drives, &settings).unwrap();
    let after = flight.trajectory.state(at_s);
    let energy_j = |state: &State| {
        let rotors = state.loose.iter().filter(|axis| !(14..18).contains(&axis.axis_idx));
        let rotors_j: f64 = rotors.map(|axis| 0.5 * 3e-5 * axis.rate_rad_s.powi(2)).sum();
        kinetic_j(&glider, &flight, state, at_s) + rotors_j
    };
    let slope = |state: &State, k: usize| {
        let moved = |by: f64| {
            let mut state = state.clone();
            state.loose[k].rate_rad_s += by;
            energy_j(&state)
        };
        (moved(1.0) - moved(-1.0)) / 2.0
    };
    assert_relative_eq!(before.velocity_m_s, after.velocity_m_s, epsilon = 1e-9);
    assert_relative_eq!(before.momentum_kg_m2_s, after.momentum_kg_m2_s, epsilon = 1e-9);
    assert!(before.loose[locked].rate_rad_s.abs() > 0.5);
    assert_eq!(after.loose[locked].rate_rad_s, 0.0);
    for k in 0..before.loose.len() {
        let (was, is) = (slope(&before, k), slope(&after, k));
        if k == locked {
            assert!((was - is).abs() > 1e-4, "{was} {is}");
        } else {
            assert_relative_eq!(was, is, epsilon = 1e-8);
        }
    }
    assert!(energy_j(&after) < energy_j(&before) - 1e-5);
    let later = &flight.trajectory.state(0.4).loose[locked];
    assert_relative_eq!(later.angle_rad, before.loose[locked].angle_rad, epsilon = 1e-9);
}

/// As the loop stiffens the flight tends to the commanded one, to first order in `full_at`: the
/// servo's line asks for an error of full_at·(τ/τ_s + q̇/ω₀).
#[test]
fn analytic_stiff_loops_tend_to_commands() {
    let glider = undulating();
    let settings = within(1e-9, 0.8);
    let commanded = fly(&glider, &settings).unwrap().trajectory.state(0.8);
    let apart_m = |full_at_rad: f64| {
        let drives = all_driven(&glider, plain_servo(20.0, 100.0, full_at_rad));
        let driven = fly_driven(&glider, &drives, &settings).unwrap().trajectory.state(0.8);
        (driven.place_m - commanded.place_m).norm()
    };
    let errors_m = [0.08, 0.04, 0.02, 0.01].map(apart_m);
    for pair in errors_m.windows(2) {
        let ratio = pair[0] / pair[1];
        assert!((1.8..2.2).contains(&ratio), "{errors_m:?}");
    }
    assert!(errors_m[3] > 1e-6, "{errors_m:?}");
}

/// Change of energy = work of the air + work of the joints, and every servo's torque is its joint's
/// and what turns its rotor.
#[test]
fn twin_energy_of_a_driven_flight() {
    let glider = undulating();
    let rotor_kg_m2 = 5e-5;
    let servo = Servo { rotor_inertia_at_output_kg_m2: rotor_kg_m2, ..plain_servo(4.0, 40.0, 0.3) };
    let drives = all_driven(&glider, servo.clone());
    let mut flight = fly_driven(&glider, &drives, &within(1e-10, 1.0)).unwrap();
    assert_eq!(flight.end, End::TimeUp);
    let loads = histories(&glider, &mut flight, 2e-4).unwrap();
    assert!(loads.left_at_nose < 1e-9, "{}", loads.left_at_nose);
    let joints_w = |row: usize| -> f64 {
        let pairs = loads.torques_nm[row].iter().zip(&loads.rates_rad_s[row]);
        pairs.map(|(torque_nm, rate_rad_s)| torque_nm * rate_rad_s).sum()
    };
    // Simpson's rule over an even number of steps; the end stands on the grid.
    let n = loads.times_s.len() - 1;
    let simpson = |of: &dyn Fn(usize) -> f64| -> f64 {
        let weight = |row: usize| match row {
            0 => 1.0,
            row if row == n => 1.0,
            row if row % 2 == 1 => 4.0,
            _ => 2.0,
        };
        (0..=n).map(|row| weight(row) * of(row)).sum::<f64>() * (1.0 / n as f64) / 3.0
    };
    assert_eq!(n, 5000);
    let (joints_j, air_j) = (simpson(&joints_w), simpson(&|row| loads.air_power_w[row]));
    let change_j = loads.energy_j[n] - loads.energy_j[0];
    assert!(joints_j > 0.05 && air_j < -0.05, "{joints_j} {air_j}");
    assert_relative_eq!(change_j, joints_j + air_j, epsilon = 1e-6);
    let supply = servo.cold_supply(6.0);
    let mut equations = Equations::new(&glider).unwrap();
    for row in [17, 1234, 4000] {
        let time_s = loads.times_s[row];
        let told = equations.motion(flight.trajectory.instant(time_s)).angles_rad.clone();
        for axis in flight.trajectory.state(time_s).loose {
            let k = axis.axis_idx;
            let loop_nm = servo.loop_torque_nm(told[k] - axis.angle_rad, axis.rate_rad_s, supply);
            let found_nm =
                loads.torques_nm[row][k] + rotor_kg_m2 * loads.accelerations_rad_s2[row][k];
            assert_relative_eq!(found_nm, loop_nm, epsilon = 1e-9);
        }
    }
}

/// A mixed chain: pitch axes follow their commands to the last bit while yaw axes are driven.
#[test]
fn twin_commanded_axes_follow_beside_driven_ones() {
    let glider = undulating();
    let mut drives = all_driven(&glider, plain_servo(1.5, 20.0, 0.1));
    for mode in &mut drives.modes[11..] {
        *mode = Mode::Commanded;
    }
    let mut flight = fly_driven(&glider, &drives, &within(1e-8, 0.5)).unwrap();
    let loads = histories(&glider, &mut flight, 0.01).unwrap();
    let commanded =
        histories(&glider, &mut fly(&glider, &within(1e-8, 0.5)).unwrap(), 0.01).unwrap();
    assert!(loads.left_at_nose < 1e-9);
    // Released, all move as commanded; from then on only those that follow.
    for row in 1..loads.times_s.len() {
        assert_eq!(loads.rates_rad_s[row][11..], commanded.rates_rad_s[row][11..]);
        assert_eq!(
            loads.accelerations_rad_s2[row][11..],
            commanded.accelerations_rad_s2[row][11..]
        );
        assert_ne!(loads.rates_rad_s[row][..11], commanded.rates_rad_s[row][..11]);
    }
}

/// A weak battery makes weak servos: the same flight on a fresh cell, a tired one and none.
#[test]
fn twin_a_tired_battery_leaves_larger_errors() {
    let glider = undulating();
    let battery = |cell_resistance_ohm: f64| Battery {
        cells: 2,
        capacity_coulomb: 1600.0,
        cell_resistance_ohm,
        cell_voltage: CellVoltage::Linear { empty_v: 3.0, full_v: 3.0 },
        current_limit_a: None,
        charge: 1.0,
        regulator: None,
        electronics_w: 0.5,
    };
    let error_rad = |battery: Option<Battery>| {
        let servo = Servo { no_load_current_a: 0.05, ..plain_servo(0.5, 12.0, 0.2) };
        let drives = Drives { battery, update_hz: Some(50.0), ..all_driven(&glider, servo) };
        let flight = fly_driven(&glider, &drives, &within(1e-7, 0.6)).unwrap();
        let state = flight.trajectory.state(0.6);
        let mut equations = Equations::new(&glider).unwrap();
        let told = equations.motion(flight.trajectory.instant(0.6));
        let errors = state
            .loose
            .iter()
            .map(|axis| (told.angles_rad[axis.axis_idx] - axis.angle_rad).powi(2));
        errors.sum::<f64>().sqrt()
    };
    let (ideal, fresh, tired) =
        (error_rad(None), error_rad(Some(battery(1e-6))), error_rad(Some(battery(0.25))));
    assert_relative_eq!(ideal, fresh, max_relative = 1e-3);
    assert!(tired > 1.02 * fresh, "{fresh} {tired}");
}
