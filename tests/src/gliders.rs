//! Small robots for the tests, each with one thing that matters.

use nalgebra::Vector3;
use undulift_aero::{Air, Scales, Section, SkinFriction};
use undulift_chain::{Chain, Joint, Segment};
use undulift_flight::{Glider, Launch};
use undulift_gait::{Gait, Pattern, Start, Taper, Wave};

/// A wave with nothing but a frequency.
pub const STILL: Wave = Wave {
    frequency_hz: 0.0,
    lateral_amplitude_rad: 0.0,
    lateral_waves: 1.0,
    sharpness: 0.0,
    vertical_amplitude_rad: 0.0,
    vertical_ratio: 2,
    vertical_lag_rad: 0.0,
    turn_rad: 0.0,
    arch_rad: 0.0,
    taper: Taper { head: 1.0, head_length: 0.0, tail: 1.0, tail_length: 0.0 },
};

/// A launch from this height with nothing else to it.
pub fn dropped_from(height_m: f64) -> Launch {
    Launch {
        height_m,
        speed_m_s: 0.0,
        climb_rad: 0.0,
        roll_rad: 0.0,
        pitch_rad: 0.0,
        yaw_rad: 0.0,
        spin_world_rad_s: Vector3::zeros(),
        grip_segment_idx: None,
    }
}

/// A gait that runs from release on.
pub fn running(wave: Wave) -> Gait {
    Gait { pattern: Pattern::Wave(wave), phase_rad: 0.0, start: Start::Running }
}

/// A robot of equal segments with universal joints and the plate section, in room air.
pub fn uniform(n_segments: usize, segment: Segment, wave: Wave, launch: Launch) -> Glider {
    let joint = Joint { yaw: true, pitch: true, ..Joint::default() };
    Glider {
        chain: Chain::new(vec![segment; n_segments], vec![joint; n_segments - 1], Vec::new())
            .expect("a sound chain"),
        sections: vec![Section::plate(0.25)],
        section_of: vec![0; n_segments],
        strips_per_segment: 2,
        gait: running(wave),
        air: Air::at(293.15, 101_325.0),
        wind_world_m_s: Vector3::zeros(),
        scales: Scales { lift: 1.0, drag: 1.0 },
        skin_friction: SkinFriction::Laminar,
        launch,
    }
}

/// Twelve segments that undulate as a robot does, and glide.
pub fn undulating() -> Glider {
    let segment = Segment { length_m: 0.1, width_m: 0.11, thickness_m: 0.02, structure_kg: 0.035 };
    let wave = Wave {
        frequency_hz: 1.2,
        lateral_amplitude_rad: 82_f64.to_radians(),
        lateral_waves: 1.4,
        sharpness: 0.6,
        vertical_amplitude_rad: 4_f64.to_radians(),
        vertical_lag_rad: 60_f64.to_radians(),
        arch_rad: 8_f64.to_radians(),
        ..STILL
    };
    let launch = Launch { speed_m_s: 4.0, pitch_rad: -15_f64.to_radians(), ..dropped_from(6.0) };
    uniform(12, segment, wave, launch)
}

/// The same in no air at all.
pub fn in_vacuum(glider: Glider) -> Glider {
    Glider { air: Air::at(293.15, 0.0), ..glider }
}
