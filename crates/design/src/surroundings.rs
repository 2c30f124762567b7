//! Air, launch, firmware and limits: the short tables of a design.

use nalgebra::Vector3;
use undulift_aero::{Air, Scales, SkinFriction};
use undulift_flight::Launch;

use crate::DesignError;
use crate::range::Range;
use crate::table::Table;

/// Absolute temperature of 0 °C, K (exact).
const ZERO_CELSIUS_K: f64 = 273.15;

/// What the robot flies in.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Surroundings {
    pub(crate) air: Air,
    pub(crate) wind_world_m_s: Vector3<f64>,
    pub(crate) scales: Scales,
    pub(crate) skin_friction: SkinFriction,
}

/// What a good flight keeps within.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Limits {
    /// Least torque a servo must have over the torque asked of it.
    pub torque_factor: f64,
    /// Largest roll or pitch, rad.
    pub tilt_rad: f64,
}

pub(crate) fn read_air(table: Table<'_>) -> Surroundings {
    const SCALE: Range = Range::from_to(0.0, 10.0);
    let by_altitude = table.holds("altitude_m");
    // Beside an altitude these two have no default: they can't be there.
    let weather = |key, range, default: f64| {
        if by_altitude {
            table.number(key, range).unwrap_or(default)
        } else {
            table.number_or(key, range, default)
        }
    };
    let temperature_c = weather("temperature_c", Range::within(80.0), 20.0);
    let pressure_pa = weather("pressure_pa", Range::from_to(0.0, 200_000.0), 101_325.0);
    let altitude_m = table.number("altitude_m", Range::from_to(-500.0, 11_000.0));
    for other in ["temperature_c", "pressure_pa"] {
        let why = "an altitude stands for the temperature and pressure of the standard atmosphere";
        let remedy = "keep the altitude alone, or temperature and pressure";
        table.refuse_beside("altitude_m", other, why, remedy);
    }
    let by_weather = Air::at(temperature_c + ZERO_CELSIUS_K, pressure_pa);
    let air = match altitude_m.map(Air::standard).transpose() {
        Ok(standard) => standard.unwrap_or(by_weather),
        Err(error) => {
            table.note("altitude_m", DesignError::Section(error));
            by_weather
        }
    };
    let wind_m_s = table.triple_or_zero("wind_m_s", Range::within(100.0));
    let lift = table.number_or("lift_scale", SCALE, 1.0);
    let drag = table.number_or("drag_scale", SCALE, 1.0);
    let frictions = [
        ("laminar", SkinFriction::Laminar),
        ("turbulent", SkinFriction::Turbulent),
        ("none", SkinFriction::None),
    ];
    let skin_friction = table.word("skin_friction", &frictions).unwrap_or_default();
    table.finish();
    let scales = Scales { lift, drag };
    Surroundings { air, wind_world_m_s: wind_m_s.into(), scales, skin_friction }
}

/// - `segments`: in the body, where that is known
pub(crate) fn read_launch(table: Table<'_>, segments: Option<u32>) -> Option<Launch> {
    const TURN_DEG: Range = Range::within(360.0);
    const SLOPE_DEG: Range = Range::within(90.0);
    let angle_rad = |key, range| table.number_or(key, range, 0.0).to_radians();
    let height_m = table.need_number("height_m", Range::above_0_to(10_000.0));
    let speed_m_s = table.need_number("speed_m_s", Range::from_to(0.0, 200.0));
    let climb_rad = angle_rad("climb_deg", SLOPE_DEG);
    let roll_rad = angle_rad("roll_deg", TURN_DEG);
    let pitch_rad = angle_rad("pitch_deg", SLOPE_DEG);
    let yaw_rad = angle_rad("yaw_deg", TURN_DEG);
    let spin_deg_s = table.triple_or_zero("spin_deg_s", Range::within(36_000.0));
    let grip_segment = crate::body::read_segment(table.get("grip_segment"), segments);
    table.finish();
    Some(Launch {
        height_m: height_m?,
        speed_m_s: speed_m_s?,
        climb_rad,
        roll_rad,
        pitch_rad,
        yaw_rad,
        spin_world_rad_s: Vector3::from(spin_deg_s.map(f64::to_radians)),
        grip_segment_idx: grip_segment,
    })
}

pub(crate) fn read_limits(table: Table<'_>) -> Limits {
    let torque_factor = table.number_or("torque_factor", Range::above_0_to(100.0), 1.5);
    let tilt_deg = table.number_or("tilt_deg", Range::from_to(0.0, 180.0), 60.0);
    table.finish();
    Limits { torque_factor, tilt_rad: tilt_deg.to_radians() }
}

/// How often the firmware sends new commands, Hz; absent: without pause.
pub(crate) fn read_update_hz(table: Table<'_>) -> Option<f64> {
    let update_hz = table.number("update_hz", Range::above_0_to(10_000.0));
    table.finish();
    update_hz
}
