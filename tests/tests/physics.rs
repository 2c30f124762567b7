//! Whole flights against closed forms.

use std::f64::consts::{FRAC_PI_2, PI, TAU};

use approx::assert_relative_eq;
use nalgebra::Vector3;
use undulift_aero::{Air, STANDARD_GRAVITY_M_S2, SkinFriction};
use undulift_chain::{Carried, Chain, Joint, PointMass, Segment, Shape};
use undulift_flight::{
    End, Equations, Flight, FlightError, Glider, Launch, Settings, fly, release, summary,
};
use undulift_gait::{Commands, Gait, GaitTable, Instant, Interpolation, Pattern, Start, Wave};
use undulift_tests::gliders::{STILL, dropped_from, in_vacuum, undulating, uniform};

const SEGMENT: Segment =
    Segment { length_m: 0.125, width_m: 0.02, thickness_m: 0.005, structure_kg: 0.125 };

fn for_s(max_time_s: f64) -> Settings {
    Settings { tolerance: 1e-10, max_time_s, through_inversion: true, floor_m: 0.0 }
}

/// Fall from rest with drag, 0.5 kg, C_d·A 0.02 m², ρ 1.225: v∞ = 20.0068 m/s; after 1 s 9.0900 m/s
/// and 4.7187 m, by v = v∞ tanh(gt/v∞) and s = v∞²/g·ln cosh(gt/v∞) (law from memory, digits computed
/// with a general library). A straight level plate: 2.0·0.5 m·0.02 m.
#[test]
fn analytic_fall_with_drag_follows_tanh() {
    let mut glider = uniform(4, SEGMENT, STILL, dropped_from(50.0));
    glider.air = Air::standard(0.0).unwrap();
    glider.skin_friction = SkinFriction::None;
    let flight = fly(&glider, &for_s(1.0)).unwrap();
    let end = flight.trajectory.state(1.0);
    assert_eq!(flight.end, End::TimeUp);
    assert_relative_eq!(-end.velocity_m_s.z, 9.0900, epsilon = 6e-5);
    assert_relative_eq!(50.0 - end.place_m.z, 4.7187, epsilon = 6e-5);
    let terminal_m_s = (2.0 * 0.5 * STANDARD_GRAVITY_M_S2 / (1.225 * 0.02)).sqrt();
    assert_relative_eq!(terminal_m_s, 20.0068, epsilon = 6e-5);
    for time_s in [0.2, 0.55, 1.0] {
        let state = flight.trajectory.state(time_s);
        let scaled = STANDARD_GRAVITY_M_S2 * time_s / terminal_m_s;
        assert_relative_eq!(-state.velocity_m_s.z, terminal_m_s * scaled.tanh(), epsilon = 1e-5);
        assert!(state.head_to_world.angle() < 1e-9, "it stays level");
    }
}

/// Without air the centre of mass follows the parabola and angular momentum stays, whatever the
/// joints do (Newton).
#[test]
fn analytic_vacuum_parabola_and_angular_momentum() {
    let mut glider = in_vacuum(undulating());
    glider.launch.spin_world_rad_s = Vector3::new(0.4, -0.3, 1.1);
    glider.launch.climb_rad = 0.2;
    let flight = fly(&glider, &for_s(1.0)).unwrap();
    let start = flight.trajectory.state(0.0);
    for time_s in [0.1, 0.5, 0.9] {
        let state = flight.trajectory.state(time_s);
        let fallen_m = 0.5 * STANDARD_GRAVITY_M_S2 * time_s * time_s;
        let expected = start.place_m + start.velocity_m_s * time_s - Vector3::z() * fallen_m;
        assert_relative_eq!(state.place_m, expected, epsilon = 1e-9);
        assert_relative_eq!(
            state.momentum_kg_m2_s,
            start.momentum_kg_m2_s,
            epsilon = 1e-9 * start.momentum_kg_m2_s.norm()
        );
    }
    assert!(start.momentum_kg_m2_s.norm() > 1e-3);
}

/// A torque-free axisymmetric body, I₁ .02, I₃ .001 kg·m², ω (5 along, 1 across) rad/s: seen from
/// the body, ω turns at −4.75 rad/s; the axis goes around H at L/I₁ = 1.03078 rad/s (Euler's top;
/// from memory, digits computed).
#[test]
fn analytic_torque_free_top() {
    let half = Segment {
        length_m: 0.39_f64.sqrt() / 2.0,
        width_m: 0.1,
        thickness_m: 0.1,
        structure_kg: 0.3,
    };
    let launch = Launch { spin_world_rad_s: Vector3::new(5.0, 1.0, 0.0), ..dropped_from(100.0) };
    let glider = in_vacuum(uniform(2, half, STILL, launch));
    let flight = fly(&glider, &for_s(3.0)).unwrap();
    let momentum = flight.trajectory.state(0.0).momentum_kg_m2_s;
    assert_relative_eq!(momentum, Vector3::new(0.005, 0.02, 0.0), epsilon = 1e-12);
    for time_s in [0.3, 1.0, 2.9] {
        let state = flight.trajectory.state(time_s);
        let around_h = nalgebra::Rotation3::new(momentum.normalize() * (1.030_776_4 * time_s));
        assert_relative_eq!(
            state.head_to_world * Vector3::x(),
            around_h * Vector3::x(),
            epsilon = 1e-6
        );
        let across = state.head_to_world.inverse() * momentum / 0.02;
        // From the body's y toward z is a positive turn about x; 5·(.001 − .02)/.02 is the rate.
        let turned_rad = -4.75 * time_s;
        assert_relative_eq!(across.y, turned_rad.cos(), epsilon = 1e-6);
        assert_relative_eq!(across.z, turned_rad.sin(), epsilon = 1e-6);
    }
}

/// Two equal cylinders, hinged where both have their centre of mass, bent by half-angle b each, the
/// plane of the bend going once around; between them a bend of many short links, which doesn't twist.
///
/// λ, axial over transverse inertia, is ¼: c = h = L makes the axial moment m L²/6 and the
/// transverse m L²/6 + m L²/2, the counterweight's included.
fn bending_cylinders(n_segments: usize, half_bend_rad: f64) -> Glider {
    let side_m = 0.2;
    let cylinder =
        Segment { length_m: side_m, width_m: side_m, thickness_m: side_m, structure_kg: 0.3 };
    let link = Segment { length_m: 1e-7, width_m: 1e-4, thickness_m: 1e-4, structure_kg: 1e-13 };
    let mut segments = vec![link; n_segments];
    (segments[0], segments[n_segments - 1]) = (cylinder, cylinder);
    let counterweight = |segment_idx, x_m| PointMass {
        carried: Carried::Payload,
        segment_idx,
        at_m: Vector3::new(x_m, 0.0, 0.0),
        mass_kg: 0.3,
    };
    let weights =
        vec![counterweight(0, -1.5 * side_m), counterweight(n_segments - 1, 0.5 * side_m)];
    let joint = Joint { yaw: true, pitch: true, ..Joint::default() };
    let joints = vec![joint; n_segments - 1];
    let rows = 256;
    let each_rad = 2.0 * half_bend_rad / (n_segments - 1) as f64;
    let column = |part: fn(f64) -> f64| -> Vec<f64> {
        (0..rows).map(|row| each_rad * part(TAU * f64::from(row) / f64::from(rows))).collect()
    };
    let yaw = vec![column(f64::cos); n_segments - 1];
    let pitch = vec![column(f64::sin); n_segments - 1];
    let table = GaitTable::new(
        1.0 / f64::from(rows),
        yaw.into_iter().chain(pitch).collect(),
        None,
        None,
        Interpolation::Cubic,
    )
    .unwrap();
    let mut glider = in_vacuum(uniform(2, cylinder, STILL, dropped_from(1000.0)));
    glider.chain = Chain::new(segments, joints, weights).unwrap();
    glider.section_of = vec![0; n_segments];
    glider.gait = Gait { pattern: Pattern::Table(table), phase_rad: 0.0, start: Start::Running };
    glider
}

/// Turning at zero angular momentum: a cycle of the bend turns both bodies by
/// 2π[1 − λ cos b/(λ cos²b + sin²b)] about the line between them; λ = ¼ gives half a turn at
/// b = 29.713° (closed form derived by us; the problem is Kane & Scher, *A dynamical explanation of
/// the falling cat phenomenon*, Int. J. Solids Struct. 5:663, 1969). Links of finite bend twist a
/// little, which vanishes with their number.
#[test]
fn analytic_turning_at_zero_angular_momentum() {
    let lambda = 0.25;
    let error = |n_segments: usize, half_bend_deg: f64| {
        let b = half_bend_deg.to_radians();
        let glider = bending_cylinders(n_segments, b);
        let flight = fly(&glider, &for_s(1.0)).unwrap();
        let [start, end] = [0.0, 1.0].map(|time_s| flight.trajectory.state(time_s).head_to_world);
        let expected =
            TAU * (1.0 - lambda * b.cos() / (lambda * b.cos().powi(2) + b.sin().powi(2)));
        (start.angle_to(&end).cos() - expected.cos()).abs().max(
            // Near half a turn the cosine hardly moves, so the sine is looked at, too.
            (start.angle_to(&end).sin() - expected.sin().abs()).abs(),
        )
    };
    for half_bend_deg in [15.0, 29.713, 45.0] {
        let (few, many) = (error(32, half_bend_deg), error(128, half_bend_deg));
        assert!(many < 2e-4, "b = {half_bend_deg}°: {few:e} with 31 links, {many:e} with 127");
        assert!(few > 3.0 * many || few < 1e-6, "{few:e} should shrink to less than {many:e}");
    }
    let b = 29.713_f64.to_radians();
    let turn = TAU * (1.0 - lambda * b.cos() / (lambda * b.cos().powi(2) + b.sin().powi(2)));
    assert_relative_eq!(turn, PI, epsilon = 1e-4);
}

/// A wind is a moving frame: launched faster by the wind, in that wind, the same flight is carried
/// along. The wave's frame and loads must not notice.
#[test]
fn analytic_wind_is_a_moving_frame() {
    let mut still = undulating();
    still.launch.height_m = 40.0;
    let mut windy = still.clone();
    windy.wind_world_m_s = Vector3::new(1.5, 0.0, 0.0);
    windy.launch.speed_m_s += 1.5;
    let flights = [&still, &windy].map(|glider| fly(glider, &for_s(1.2)).unwrap());
    for time_s in [0.4, 0.8, 1.2] {
        let [still, windy] = [0, 1].map(|k| flights[k].trajectory.state(time_s));
        let carried_m = Vector3::x() * (1.5 * time_s);
        assert_relative_eq!(windy.place_m, still.place_m + carried_m, epsilon = 1e-7);
        assert!(windy.head_to_world.angle_to(&still.head_to_world) < 1e-6);
    }
    // From any side, at one instant.
    let wind = Vector3::new(0.7, -2.0, 0.9);
    windy.wind_world_m_s = wind;
    let mut equations = [&still, &windy].map(|glider| Equations::new(glider).unwrap());
    let state = release(&mut equations[0], &still.launch, 0.0).unwrap();
    let mut faster = state.clone();
    faster.velocity_m_s += wind;
    let at = Instant::at(0.37);
    let [still, windy] = [equations[0].air_loads(at, &state), equations[1].air_loads(at, &faster)];
    assert_relative_eq!(
        Vector3::from(still.force_n),
        Vector3::from(windy.force_n),
        epsilon = 1e-12
    );
    assert_relative_eq!(
        Vector3::from(still.moment_nm),
        Vector3::from(windy.moment_nm),
        epsilon = 1e-12
    );
}

/// A level bar falling without air lands when its lower face has fallen its height: t = √(2s/g).
/// Landing is located on the interpolant to 1e-9 s.
#[test]
fn analytic_landing_time() {
    let glider = in_vacuum(uniform(4, SEGMENT, STILL, dropped_from(3.0)));
    let flight = fly(&glider, &for_s(30.0)).unwrap();
    assert_eq!(flight.end, End::Landed);
    let expected_s = (2.0 * (3.0 - 0.0025) / STANDARD_GRAVITY_M_S2).sqrt();
    assert_relative_eq!(flight.time_s, expected_s, epsilon = 1e-9);
    // On something that catches at 1.2 m, sooner.
    let flight = fly(&glider, &Settings { floor_m: 1.2, ..for_s(30.0) }).unwrap();
    let expected_s = (2.0 * (1.8 - 0.0025) / STANDARD_GRAVITY_M_S2).sqrt();
    assert_relative_eq!(flight.time_s, expected_s, epsilon = 1e-9);
}

/// A heavy mass far above the body takes the centre of mass with it; the body still lands when its
/// lower face has fallen its own height: nothing looks at the centre's alone.
#[test]
fn analytic_landing_far_below_the_centre_of_mass() {
    let mut glider = in_vacuum(uniform(2, SEGMENT, STILL, dropped_from(4.0)));
    let mast = PointMass {
        carried: Carried::Payload,
        segment_idx: 0,
        at_m: Vector3::new(-0.1, 0.0, 1.5),
        mass_kg: 10.0,
    };
    glider.chain =
        Chain::new(glider.chain.segments().to_vec(), glider.chain.joints().to_vec(), vec![mast])
            .unwrap();
    let flight = fly(&glider, &for_s(30.0)).unwrap();
    let above_m = 1.5 * 10.0 / 10.25;
    let expected_s = (2.0 * (4.0 - above_m - 0.0025) / STANDARD_GRAVITY_M_S2).sqrt();
    assert_relative_eq!(flight.time_s, expected_s, epsilon = 1e-9);
}

/// Rolling about its length at a steady rate, a bar is on its back after a quarter turn: from there
/// on the belly no longer points down. The earlier of landing and inversion ends the flight.
#[test]
fn analytic_inversion_time() {
    let rolling = |height_m: f64| {
        let launch =
            Launch { spin_world_rad_s: Vector3::new(2.0, 0.0, 0.0), ..dropped_from(height_m) };
        in_vacuum(uniform(4, SEGMENT, STILL, launch))
    };
    let until_inverted = Settings { through_inversion: false, ..for_s(30.0) };
    let flight = fly(&rolling(50.0), &until_inverted).unwrap();
    assert_eq!(flight.end, End::Inverted);
    assert_relative_eq!(flight.time_s, FRAC_PI_2 / 2.0, epsilon = 1e-8);
    let flight = fly(&rolling(50.0), &for_s(30.0)).unwrap();
    assert_eq!(flight.end, End::Landed);
    assert_relative_eq!(flight.inverted_at_s.unwrap(), FRAC_PI_2 / 2.0, epsilon = 1e-8);
    let flight = fly(&rolling(1.0), &until_inverted).unwrap();
    assert_eq!(flight.end, End::Landed);
    assert!(flight.inverted_at_s.is_none());
}

/// Where a segment's front end is in the world, and how it points.
fn segment_in_world(
    glider: &Glider,
    flight: &Flight,
    segment_idx: usize,
    time_s: f64,
) -> (Vector3<f64>, nalgebra::Matrix3<f64>) {
    let commands = Commands::new(&glider.gait, &glider.chain).unwrap();
    let mut room = commands.room();
    commands.rates(Instant::at(time_s), &mut room);
    let (yaw_rad, pitch_rad) = room.angles_rad.split_at(commands.n_yaw());
    let shape = Shape::of(&glider.chain, yaw_rad, pitch_rad);
    let state = flight.trajectory.state(time_s);
    let head_to_world = state.head_to_world.to_rotation_matrix().into_inner();
    let from_centre_m = shape.fronts_m[segment_idx] - shape.centre_of_mass_m(&glider.chain);
    let place_m = state.place_m + head_to_world * from_centre_m;
    (place_m, head_to_world * shape.rotations[segment_idx])
}

/// Held by one segment while the wave runs, that segment neither turns nor leaves the launch
/// velocity at release: seen in the places of the first 10 µs.
#[test]
fn twin_gripped_segment_moves_at_the_launch_velocity() {
    for segment_idx in [0, 5, 11] {
        let mut glider = in_vacuum(undulating());
        glider.launch.grip_segment_idx = Some(segment_idx);
        glider.launch.climb_rad = 0.3;
        let flight = fly(&glider, &for_s(0.1)).unwrap();
        let step_s = 1e-5;
        let (before_m, before) = segment_in_world(&glider, &flight, segment_idx, 0.0);
        let (after_m, after) = segment_in_world(&glider, &flight, segment_idx, step_s);
        let velocity_m_s = (after_m - before_m) / step_s;
        let expected = Vector3::new(0.3_f64.cos(), 0.0, 0.3_f64.sin()) * 4.0;
        assert_relative_eq!(velocity_m_s, expected, epsilon = 2e-3);
        assert!((after - before).norm() / step_s < 5e-3);
        // With no grip the momentum is nothing; with one it isn't.
        let momentum = flight.trajectory.state(0.0).momentum_kg_m2_s;
        assert!(momentum.norm() > 1e-4);
    }
}

/// At release the body has the attitude that was asked for, roll right side down, nose up, nose left.
#[test]
fn analytic_release_attitude() {
    let mut glider = undulating();
    let (roll_rad, pitch_rad, yaw_rad) = (0.3, -0.2, 0.5);
    glider.launch = Launch { roll_rad, pitch_rad, yaw_rad, ..glider.launch };
    let mut equations = Equations::new(&glider).unwrap();
    let state = release(&mut equations, &glider.launch, 0.0).unwrap();
    let attitude = equations.attitude(Instant::at(0.0), &state);
    assert_relative_eq!(attitude.roll_rad(), roll_rad, epsilon = 1e-12);
    assert_relative_eq!(attitude.pitch_rad(), pitch_rad, epsilon = 1e-12);
    assert_relative_eq!(attitude.yaw_rad(), yaw_rad, epsilon = 1e-12);
    // Nose up lifts the way the body points; right side down lowers its right.
    let up = undulift_flight::Attitude::from_angles(0.0, 0.2, 0.0);
    assert!(up.body_to_world[(2, 0)] > 0.0);
    let down = undulift_flight::Attitude::from_angles(0.2, 0.0, 0.0);
    assert!(down.body_to_world[(2, 1)] > 0.0, "the left side comes up");
    let left = undulift_flight::Attitude::from_angles(0.0, 0.0, 0.2);
    assert!(left.body_to_world[(1, 0)] > 0.0);
}

/// A wave of exactly 90° has a plain mean direction without length in its own plane; the body frame
/// still points along the wave's axis, and turns with the body.
#[test]
fn analytic_body_frame_of_a_square_wave() {
    let wave = Wave {
        frequency_hz: 1.0,
        lateral_amplitude_rad: FRAC_PI_2,
        lateral_waves: 2.0,
        sharpness: 8.0,
        ..STILL
    };
    let mut glider = undulating();
    glider.gait.pattern = Pattern::Wave(wave);
    glider.launch = Launch { height_m: 6.0, ..dropped_from(6.0) };
    let flight = fly(&in_vacuum(glider.clone()), &for_s(0.9)).unwrap();
    let mut equations = Equations::new(&glider).unwrap();
    for step in 0..=18 {
        let time_s = f64::from(step) * 0.05;
        let attitude =
            equations.attitude(flight.trajectory.instant(time_s), &flight.trajectory.state(time_s));
        assert!(attitude.forward().x > 0.8, "t = {time_s}: {:?}", attitude.forward());
    }
}

#[test]
fn what_cannot_be_released_is_refused() {
    let mut glider = undulating();
    glider.launch.height_m = 0.05;
    assert!(matches!(fly(&glider, &Settings::default()), Err(FlightError::ReleasedOnFloor { .. })));
    let mut glider = undulating();
    glider.launch.roll_rad = 1.7;
    assert!(matches!(
        fly(&glider, &Settings::default()),
        Err(FlightError::ReleasedInverted { .. })
    ));
    let loose = Settings { tolerance: 0.5, ..Settings::default() };
    assert!(matches!(fly(&undulating(), &loose), Err(FlightError::Setting { .. })));
}

/// The same inputs give the same bits, and a finer tolerance the same flight, the error falling
/// with the tolerance.
#[test]
fn twin_flights_repeat_and_converge() {
    let glider = undulating();
    let ratio = |tolerance: f64| {
        let settings = Settings { tolerance, ..Settings::default() };
        let mut flight = fly(&glider, &settings).unwrap();
        summary(&glider, &mut flight).glide_ratio.unwrap()
    };
    assert_eq!(ratio(1e-6).to_bits(), ratio(1e-6).to_bits());
    let exact = ratio(1e-12);
    assert!((ratio(1e-6) - exact).abs() < 1e-3);
    // At 1e-6 and above the longest step, a twentieth of a cycle, is what bounds the error.
    let errors = [1e-7, 1e-9, 1e-11].map(|tolerance| (ratio(tolerance) - exact).abs());
    assert!(errors[0] > 3.0 * errors[1] && errors[1] > 3.0 * errors[2], "{errors:?}");
}
