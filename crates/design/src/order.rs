//! The order in which a design's keys are written.

/// Keys of the tables at the top; those of a `section`, a `servo` and a `payload` are alike for all
/// of them.
const TABLES: [(&str, &[&str]); 11] = [
    (
        "air",
        &[
            "temperature_c",
            "pressure_pa",
            "altitude_m",
            "wind_m_s",
            "lift_scale",
            "drag_scale",
            "skin_friction",
        ],
    ),
    (
        "body",
        &[
            "segments",
            "strips_per_segment",
            "length_m",
            "width_m",
            "thickness_m",
            "structure_kg",
            "section",
        ],
    ),
    ("section", &["table", "pressure_centre"]),
    ("joints", &["axes", "yaw_travel_deg", "pitch_travel_deg", "yaw_servo", "pitch_servo"]),
    (
        "servo",
        &[
            "mass_kg",
            "at_voltage_v",
            "stall_torque_nm",
            "stall_torque_kgf_cm",
            "no_load_speed_deg_s",
            "no_load_s_per_60deg",
            "stall_current_a",
            "no_load_current_a",
            "idle_current_a",
            "gear_efficiency",
            "rotor_inertia_at_output_kg_m2",
            "continuous_torque_nm",
            "thermal",
            "pulse_us",
            "loop",
            "price",
        ],
    ),
    (
        "battery",
        &[
            "cells",
            "capacity_mah",
            "cell_resistance_mohm",
            "current_limit_a",
            "charge",
            "regulator",
            "electronics_w",
            "mass_kg",
            "segment",
            "at_m",
        ],
    ),
    ("payload", &["name", "mass_kg", "segment", "at_m"]),
    (
        "gait",
        &[
            "table",
            "interpolation",
            "frequency_hz",
            "lateral_amplitude_deg",
            "lateral_waves",
            "sharpness",
            "phase_deg",
            "vertical_amplitude_deg",
            "vertical_ratio",
            "vertical_lag_deg",
            "turn_deg",
            "arch_deg",
            "taper",
            "start",
        ],
    ),
    (
        "launch",
        &[
            "height_m",
            "speed_m_s",
            "climb_deg",
            "roll_deg",
            "pitch_deg",
            "yaw_deg",
            "spin_deg_s",
            "grip_segment",
        ],
    ),
    ("firmware", &["update_hz"]),
    ("limits", &["torque_factor", "tilt_deg"]),
];

/// Keys of the tables that stand in a line.
const INLINE: [(&str, &[&str]); 9] = [
    ("width_m", &["middle", "ends", "shape"]),
    ("thickness_m", &["middle", "ends", "shape"]),
    ("structure_kg", &["total", "ends_to_middle", "shape"]),
    ("thermal", &["resistance_k_w", "capacity_j_k", "winding_limit_c"]),
    ("pulse_us", &["minus_90", "centre", "plus_90"]),
    ("loop", &["full_at_deg", "deadband_deg"]),
    ("regulator", &["volts", "current_limit_a", "efficiency"]),
    ("taper", &["head", "head_length", "tail", "tail_length"]),
    ("start", &["mode", "delay_s", "spin_up_s"]),
];

/// Words that stand for keys left out where their table is there, by table and key.
const WORDS: [(&str, &str, &str); 6] = [
    ("air", "skin_friction", "laminar"),
    ("width_m", "shape", "parabolic"),
    ("thickness_m", "shape", "parabolic"),
    ("structure_kg", "shape", "parabolic"),
    ("start", "mode", "running"),
    ("gait", "interpolation", "cubic"),
];

/// Keys of a table at the top, in order.
pub(crate) fn keys_of(table: &str) -> &'static [&'static str] {
    TABLES.iter().find(|(own, _)| *own == table).map_or(&[], |(_, keys)| keys)
}

/// Keys of a table in a line, in order; absent where a key holds none.
pub(crate) fn inline_keys_of(key: &str) -> Option<&'static [&'static str]> {
    INLINE.iter().find(|(own, _)| *own == key).map(|(_, keys)| *keys)
}

/// The word that stands for a key that is left out.
pub(crate) fn default_word(table: &str, key: &str) -> Option<&'static str> {
    let word = WORDS.iter().find(|(own, own_key, _)| (*own, *own_key) == (table, key));
    word.map(|(_, _, word)| *word)
}
