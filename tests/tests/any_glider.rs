//! Whatever can be built flies to an end or is refused with a message.

use nalgebra::Vector3;
use proptest::prelude::*;
use undulift_aero::{Air, Scales, Section, SkinFriction};
use undulift_chain::{Carried, Chain, Joint, PointMass, Segment};
use undulift_design::quantities::{Quantity, of_flight};
use undulift_flight::{
    Drives, Failure, Fault, FlightError, Glider, Launch, Mode, Settings, bands, doubts,
    doubts_ahead, fly, fly_driven, histories, outlook, summary, tracking,
};
use undulift_gait::{Gait, GaitTable, Interpolation, Pattern, Start, Taper, Wave};
use undulift_servo::{Endurance, PositionLoop, Pulse, Servo};

/// From a thousandth to a thousand times the middle, evenly in the logarithm.
fn around(middle: f64, decades: f64) -> impl Strategy<Value = f64> {
    (-decades..decades).prop_map(move |power| middle * 10_f64.powf(power))
}

fn segment() -> impl Strategy<Value = Segment> {
    (around(0.1, 1.0), around(0.1, 1.0), around(0.02, 1.0), around(0.05, 1.5)).prop_map(
        |(length_m, width_m, thickness_m, structure_kg)| Segment {
            length_m,
            width_m,
            thickness_m,
            structure_kg,
        },
    )
}

fn joint() -> impl Strategy<Value = Joint> {
    (any::<bool>(), any::<bool>(), prop::option::of(0.1..2.0_f64)).prop_map(
        |(yaw, pitch, yaw_travel_rad)| Joint { yaw, pitch, yaw_travel_rad, pitch_travel_rad: None },
    )
}

fn chain() -> impl Strategy<Value = Chain> {
    let parts = (2..20_usize).prop_flat_map(|n| {
        let masses = prop::collection::vec(
            (0..n, prop::array::uniform3(-0.1..0.1_f64), around(0.05, 1.5)),
            0..4,
        );
        let uniform = prop::bool::weighted(0.5);
        (
            prop::collection::vec(segment(), n),
            prop::collection::vec(joint(), n - 1),
            masses,
            uniform,
        )
    });
    parts.prop_map(|(mut segments, joints, masses, uniform)| {
        if uniform {
            segments = vec![segments[0]; segments.len()];
        }
        let attached = masses.into_iter().map(|(segment_idx, at_m, mass_kg)| PointMass {
            carried: Carried::Payload,
            segment_idx,
            at_m: Vector3::from(at_m),
            mass_kg,
        });
        Chain::new(segments, joints, attached.collect()).expect("sound by construction")
    })
}

fn wave() -> impl Strategy<Value = Wave> {
    (
        prop_oneof![Just(0.0), 0.1..6.0_f64],
        -2.0..2.0_f64,
        0.0..4.0_f64,
        prop_oneof![Just(0.0), 0.0..5.0_f64, Just(300.0)],
        -0.5..0.5_f64,
        1..5_u32,
        (-0.5..0.5_f64, -0.5..0.5_f64, -3.0..3.0_f64),
        (0.0..2.0_f64, 0.0..1.0_f64),
    )
        .prop_map(
            |(frequency_hz, lateral, waves, sharpness, vertical, ratio, bends, taper)| Wave {
                frequency_hz,
                lateral_amplitude_rad: lateral,
                lateral_waves: waves,
                sharpness,
                vertical_amplitude_rad: vertical,
                vertical_ratio: ratio,
                turn_rad: bends.0,
                arch_rad: bends.1,
                vertical_lag_rad: bends.2,
                taper: Taper { head: taper.0, head_length: taper.1, ..Taper::default() },
            },
        )
}

fn start() -> impl Strategy<Value = Start> {
    prop_oneof![
        Just(Start::Running),
        (0.0..0.5_f64, prop_oneof![Just(0.0), 0.0..0.6_f64])
            .prop_map(|(delay_s, spin_up_s)| Start::Held { delay_s, spin_up_s }),
    ]
}

/// A wave, or a table of random numbers with a column for each of the chain's axes.
fn pattern(n_axes: usize) -> impl Strategy<Value = Pattern> {
    let table =
        (2..9_usize, any::<bool>(), 0.02..0.2_f64).prop_flat_map(move |(rows, cubic, step_s)| {
            let interpolation = if cubic { Interpolation::Cubic } else { Interpolation::Linear };
            prop::collection::vec(prop::collection::vec(-1.0..1.0_f64, rows), n_axes.max(1))
                .prop_map(move |columns| {
                    let heading = (n_axes == 0).then(|| columns[0].clone());
                    let columns = columns[..n_axes].to_vec();
                    let table = GaitTable::new(step_s, columns, heading, None, interpolation);
                    Pattern::Table(table.expect("sound by construction"))
                })
        });
    prop_oneof![3 => wave().prop_map(Pattern::Wave), 1 => table]
}

fn launch(n_segments: usize) -> impl Strategy<Value = Launch> {
    (
        around(3.0, 1.0),
        0.0..20.0_f64,
        prop::array::uniform4(-1.5..1.5_f64),
        prop::array::uniform3(-5.0..5.0_f64),
        prop::option::of(0..n_segments),
    )
        .prop_map(|(height_m, speed_m_s, angles, spin, grip_segment_idx)| Launch {
            height_m,
            speed_m_s,
            climb_rad: angles[0],
            roll_rad: 0.5 * angles[1],
            pitch_rad: 0.5 * angles[2],
            yaw_rad: angles[3],
            spin_world_rad_s: Vector3::from(spin),
            grip_segment_idx,
        })
}

fn glider() -> impl Strategy<Value = Glider> {
    chain().prop_flat_map(|chain| {
        let n = chain.n_segments();
        let n_axes = chain.joints().iter().map(|j| usize::from(j.yaw) + usize::from(j.pitch)).sum();
        let gait = (pattern(n_axes), -3.0..3.0_f64, start())
            .prop_map(|(pattern, phase_rad, start)| Gait { pattern, phase_rad, start });
        let sections = prop::collection::vec(0..3_usize, n);
        let surroundings = (
            prop_oneof![Just(0.0), 1e3..1.2e5_f64],
            prop::array::uniform3(-5.0..5.0_f64),
            (0.0..3.0_f64, 0.0..3.0_f64, 0.0..1.0_f64),
            0..3_usize,
            1..9_usize,
        );
        (gait, launch(n), sections, surroundings).prop_map(
            move |(gait, launch, section_of, (pressure_pa, wind, scales, friction, strips))| {
                Glider {
                    chain: chain.clone(),
                    sections: vec![
                        Section::plate(scales.2),
                        Section::round(),
                        Section::domed(scales.2),
                    ],
                    section_of,
                    strips_per_segment: strips,
                    gait,
                    air: Air::at(293.15, pressure_pa),
                    wind_world_m_s: Vector3::from(wind),
                    scales: Scales { lift: scales.0, drag: scales.1 },
                    skin_friction: [
                        SkinFriction::Laminar,
                        SkinFriction::Turbulent,
                        SkinFriction::None,
                    ][friction],
                    launch,
                }
            },
        )
    })
}

fn servo() -> impl Strategy<Value = Servo> {
    (around(0.5, 1.5), around(10.0, 0.7), around(0.09, 0.7), prop_oneof![Just(0.0), Just(1e-4)])
        .prop_map(|(stall_torque_nm, no_load_speed_rad_s, full_at_rad, rotor_kg_m2)| Servo {
            name: "any".into(),
            mass_kg: 0.0,
            at_voltage_v: 6.0,
            stall_torque_nm,
            no_load_speed_rad_s,
            stall_current_a: stall_torque_nm * no_load_speed_rad_s,
            no_load_current_a: 0.01 * stall_torque_nm,
            idle_current_a: 0.0,
            gear_efficiency: None,
            rotor_inertia_at_output_kg_m2: rotor_kg_m2,
            endurance: Endurance::Unknown,
            pulse: Pulse::default(),
            position_loop: PositionLoop { full_at_rad, ..PositionLoop::default() },
            price: None,
        })
}

/// Axes of every kind, some of which fail on the way.
fn drives(n_axes: usize) -> impl Strategy<Value = Drives> {
    let mode = prop_oneof![
        1 => Just(Mode::Commanded),
        3 => (0..2_usize).prop_map(|servo_idx| Mode::Driven { servo_idx }),
        1 => Just(Mode::Limp),
        1 => Just(Mode::Locked),
    ];
    let fault =
        (0..n_axes.max(1), 0.0..0.4_f64, any::<bool>()).prop_map(|(axis_idx, at_s, limp)| Fault {
            axis_idx,
            at_s,
            failure: if limp { Failure::Limp } else { Failure::Locked },
        });
    (
        prop::collection::vec(mode, n_axes),
        prop::collection::vec(fault, 0..if n_axes > 0 { 3 } else { 1 }),
        prop::array::uniform2(servo()),
        prop::option::of(around(50.0, 0.5)),
    )
        .prop_map(|(modes, faults, servos, update_hz)| Drives {
            modes,
            faults,
            servos: servos.to_vec(),
            battery: None,
            update_hz,
        })
}

fn driven_glider() -> impl Strategy<Value = (Glider, Drives)> {
    glider().prop_flat_map(|glider| {
        let joints = glider.chain.joints();
        let n_axes = joints.iter().map(|j| usize::from(j.yaw) + usize::from(j.pitch)).sum();
        (Just(glider), drives(n_axes))
    })
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 100, ..ProptestConfig::default() })]

    /// The same with joints that servos turn, limp ones, locked ones and faults: finite or refused.
    #[test]
    fn any_driven_glider_flies_to_an_end_or_is_refused((glider, drives) in driven_glider()) {
        let settings = Settings {
            tolerance: 1e-4,
            max_time_s: 0.5,
            through_inversion: true,
            floor_m: 0.0,
        };
        match fly_driven(&glider, &drives, &settings) {
            Ok(mut flight) => {
                let flown = summary(&glider, &mut flight);
                prop_assert!(flown.speed_m_s.is_finite() && flown.landing_energy_j.is_finite());
                let tracking = tracking(&mut flight);
                for peak in &tracking.peaks {
                    prop_assert!(peak.angle_rad.is_finite() && peak.rate_rad_s.is_finite());
                }
                for spell in &tracking.saturations {
                    prop_assert!(spell.from_s <= spell.to_s && spell.to_s <= flight.time_s);
                }
                match histories(&glider, &mut flight, 0.1) {
                    Ok(loads) => prop_assert!(loads.left_at_nose < 1e-6, "{}", loads.left_at_nose),
                    Err(error) => prop_assert_eq!(error, FlightError::Impulses),
                }
            }
            Err(
                error @ (FlightError::ReleasedOnFloor { .. }
                | FlightError::ReleasedInverted { .. }
                | FlightError::TooManySteps { .. }
                | FlightError::StepTooSmall { .. }
                | FlightError::Jumps),
            ) => prop_assert!(!error.to_string().is_empty()),
            Err(other) => prop_assert!(false, "{other}"),
        }
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 400, ..ProptestConfig::default() })]

    /// Random gliders far beyond what anyone would build: masses over three decades, tumbling,
    /// vacuum, storms, tables of noise. Every figure is finite or said to be none.
    #[test]
    fn any_glider_flies_to_an_end_or_is_refused(
        glider in glider(),
        through_inversion in any::<bool>(),
    ) {
        let settings =
            Settings { tolerance: 1e-5, max_time_s: 1.5, through_inversion, floor_m: 0.0 };
        match fly(&glider, &settings) {
            Ok(mut flight) => {
                let summary = summary(&glider, &mut flight);
                let bands = bands(&glider, &mut flight);
                for (key, quantity) in of_flight(&summary, &bands) {
                    if let Quantity::None = quantity {
                        let may_be_none = [
                            "glide_ratio",
                            "last_cycle_glide_ratio",
                            "alpha_deg",
                            "reynolds",
                            "reduced_frequency",
                        ];
                        prop_assert!(may_be_none.contains(&key), "{key} is none");
                    }
                }
                prop_assert!(flight.time_s > 0.0 && flight.time_s <= 1.5);
                doubts(&glider, &flight, &summary, &bands);
                for peak in flight.commands().peaks(0.0, flight.time_s) {
                    prop_assert!(peak.angle_rad.is_finite() && peak.rate_rad_s.is_finite());
                }
                let outlook = outlook(&glider).unwrap();
                doubts_ahead(&glider, &outlook);
                prop_assert!(outlook.glide_speed_m_s.is_none_or(f64::is_finite));
                prop_assert!(outlook.gap_chords.is_none_or(f64::is_finite));
                for row in undulift_flight::trace(&mut flight, 0.1) {
                    prop_assert!(row.state.place_m.iter().all(|x| x.is_finite()));
                }
            }
            Err(
                error @ (FlightError::ReleasedOnFloor { .. }
                | FlightError::ReleasedInverted { .. }
                | FlightError::TooManySteps { .. }
                | FlightError::StepTooSmall { .. }),
            ) => prop_assert!(!error.to_string().is_empty()),
            Err(other) => prop_assert!(false, "{other}"),
        }
    }
}
