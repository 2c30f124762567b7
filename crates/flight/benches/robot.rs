//! The robot that benches fly: 1.4 m, about 0.95 kg, universal joints, domed section.

use nalgebra::Vector3;
use undulift_aero::{Air, Scales, Section, SkinFriction};
use undulift_chain::{
    Carried, Chain, Joint, PointMass, Profile, ProfileShape, Segment, line_density_masses,
};
use undulift_flight::{Drives, Glider, Launch, Mode};
use undulift_gait::{Gait, Pattern, Start, Taper, Wave};
use undulift_servo::{Battery, CellVoltage, Endurance, PositionLoop, Pulse, Servo};

/// Cut into `n` segments; servo masses are shared out so that the total stays.
pub fn robot(n: usize) -> Glider {
    let lengths_m = vec![1.4 / n as f64; n];
    let parabolic = |middle, ends| Profile { middle, ends, shape: ProfileShape::Parabolic };
    let widths_m = parabolic(0.145, 0.09).sampled(&lengths_m);
    let structure_kg = line_density_masses(&lengths_m, 0.22, 0.4, ProfileShape::Parabolic);
    let segments = (0..n)
        .map(|k| Segment {
            length_m: lengths_m[k],
            width_m: widths_m[k],
            thickness_m: 0.03,
            structure_kg: structure_kg[k],
        })
        .collect();
    let joint = Joint { yaw: true, pitch: true, ..Joint::default() };
    let servo_kg = 15.0 * (0.034 + 0.012) / (n - 1) as f64;
    let servo = |segment_idx: usize| PointMass {
        carried: Carried::Servo,
        segment_idx,
        at_m: Vector3::new(-lengths_m[segment_idx], 0.0, 0.0),
        mass_kg: servo_kg,
    };
    let battery = PointMass {
        carried: Carried::Battery,
        segment_idx: n / 2 - 1,
        at_m: Vector3::new(-0.5 * lengths_m[0], 0.0, 0.0),
        mass_kg: 0.04,
    };
    let attached = (0..n - 1).map(servo).chain([battery]).collect();
    Glider {
        chain: Chain::new(segments, vec![joint; n - 1], attached).expect("a sound chain"),
        sections: vec![Section::domed(0.25)],
        section_of: vec![0; n],
        strips_per_segment: 2,
        gait: gait(),
        air: Air::at(293.15, 101_325.0),
        wind_world_m_s: Vector3::zeros(),
        scales: Scales { lift: 1.0, drag: 1.0 },
        skin_friction: SkinFriction::Laminar,
        launch: Launch {
            height_m: 10.0,
            speed_m_s: 4.7,
            climb_rad: 0.0,
            roll_rad: 0.0,
            pitch_rad: -20_f64.to_radians(),
            yaw_rad: 0.0,
            spin_world_rad_s: Vector3::zeros(),
            grip_segment_idx: None,
        },
    }
}

fn gait() -> Gait {
    let wave = Wave {
        frequency_hz: 1.25,
        lateral_amplitude_rad: 84_f64.to_radians(),
        lateral_waves: 1.5,
        sharpness: 0.3,
        vertical_amplitude_rad: 5.5_f64.to_radians(),
        vertical_ratio: 2,
        vertical_lag_rad: 29_f64.to_radians(),
        turn_rad: 0.0,
        arch_rad: 10_f64.to_radians(),
        taper: Taper::default(),
    };
    Gait { pattern: Pattern::Wave(wave), phase_rad: 0.0, start: Start::Running }
}

/// The same robot's joints turned by servos of two kinds, on a battery, at 50 commands a second.
pub fn drives(n: usize) -> Drives {
    let servo =
        |mass_kg, stall_torque_nm, no_load_speed_rad_s, rotor_inertia_at_output_kg_m2| Servo {
            name: "invented".into(),
            mass_kg,
            at_voltage_v: 6.0,
            stall_torque_nm,
            no_load_speed_rad_s,
            stall_current_a: 3.5 * stall_torque_nm,
            no_load_current_a: 0.15,
            idle_current_a: 0.006,
            gear_efficiency: None,
            rotor_inertia_at_output_kg_m2,
            endurance: Endurance::Unknown,
            pulse: Pulse::default(),
            position_loop: PositionLoop::default(),
            price: None,
        };
    let driven = |servo_idx| std::iter::repeat_n(Mode::Driven { servo_idx }, n - 1);
    Drives {
        modes: driven(0).chain(driven(1)).collect(),
        faults: Vec::new(),
        servos: vec![servo(0.034, 1.2, 10.8, 4e-4), servo(0.012, 0.35, 10.5, 4e-5)],
        battery: Some(Battery {
            cells: 2,
            capacity_coulomb: 1620.0,
            cell_resistance_ohm: 0.015,
            cell_voltage: CellVoltage::default(),
            current_limit_a: None,
            charge: 1.0,
            regulator: None,
            electronics_w: 1.0,
        }),
        update_hz: Some(50.0),
    }
}
