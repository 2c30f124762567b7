//! Numbers of a design that need no text to be set: each is one number of the glider.

use undulift_flight::Glider;
use undulift_gait::{Pattern, Start, Taper, Wave};

use crate::key_path::{KeyPath, Step};

/// Puts a number, in the file's unit, where it belongs, if the glider has a place for it.
type Put = fn(&mut Glider, f64);

/// By key. Each does to its number what the reader does to it.
const PUTS: [(&str, Put); 30] = [
    ("air.lift_scale", |glider, value| put(&mut glider.scales.lift, value)),
    ("air.drag_scale", |glider, value| put(&mut glider.scales.drag, value)),
    ("air.wind_m_s[0]", |glider, value| put(&mut glider.wind_world_m_s.x, value)),
    ("air.wind_m_s[1]", |glider, value| put(&mut glider.wind_world_m_s.y, value)),
    ("air.wind_m_s[2]", |glider, value| put(&mut glider.wind_world_m_s.z, value)),
    ("launch.height_m", |glider, value| put(&mut glider.launch.height_m, value)),
    ("launch.speed_m_s", |glider, value| put(&mut glider.launch.speed_m_s, value)),
    ("launch.climb_deg", |glider, value| put_angle(&mut glider.launch.climb_rad, value)),
    ("launch.roll_deg", |glider, value| put_angle(&mut glider.launch.roll_rad, value)),
    ("launch.pitch_deg", |glider, value| put_angle(&mut glider.launch.pitch_rad, value)),
    ("launch.yaw_deg", |glider, value| put_angle(&mut glider.launch.yaw_rad, value)),
    ("launch.spin_deg_s[0]", |glider, value| {
        put_angle(&mut glider.launch.spin_world_rad_s.x, value)
    }),
    ("launch.spin_deg_s[1]", |glider, value| {
        put_angle(&mut glider.launch.spin_world_rad_s.y, value)
    }),
    ("launch.spin_deg_s[2]", |glider, value| {
        put_angle(&mut glider.launch.spin_world_rad_s.z, value)
    }),
    ("gait.phase_deg", |glider, value| put_angle(&mut glider.gait.phase_rad, value)),
    ("gait.frequency_hz", |glider, value| wave(glider, |wave| &mut wave.frequency_hz, value)),
    ("gait.lateral_amplitude_deg", |glider, value| {
        wave(glider, |wave| &mut wave.lateral_amplitude_rad, value.to_radians())
    }),
    ("gait.lateral_waves", |glider, value| wave(glider, |wave| &mut wave.lateral_waves, value)),
    ("gait.sharpness", |glider, value| wave(glider, |wave| &mut wave.sharpness, value)),
    ("gait.vertical_amplitude_deg", |glider, value| {
        wave(glider, |wave| &mut wave.vertical_amplitude_rad, value.to_radians())
    }),
    ("gait.vertical_ratio", |glider, value| {
        wave(glider, |wave| &mut wave.vertical_ratio, value as u32)
    }),
    ("gait.vertical_lag_deg", |glider, value| {
        wave(glider, |wave| &mut wave.vertical_lag_rad, value.to_radians())
    }),
    ("gait.turn_deg", |glider, value| wave(glider, |wave| &mut wave.turn_rad, value.to_radians())),
    ("gait.arch_deg", |glider, value| wave(glider, |wave| &mut wave.arch_rad, value.to_radians())),
    ("gait.taper.head", |glider, value| taper(glider, |taper| &mut taper.head, value)),
    ("gait.taper.head_length", |glider, value| {
        taper(glider, |taper| &mut taper.head_length, value)
    }),
    ("gait.taper.tail", |glider, value| taper(glider, |taper| &mut taper.tail, value)),
    ("gait.taper.tail_length", |glider, value| {
        taper(glider, |taper| &mut taper.tail_length, value)
    }),
    ("gait.start.delay_s", |glider, value| {
        if let Start::Held { delay_s, .. } = &mut glider.gait.start {
            *delay_s = value;
        }
    }),
    ("gait.start.spin_up_s", |glider, value| {
        if let Start::Held { spin_up_s, .. } = &mut glider.gait.start {
            *spin_up_s = value;
        }
    }),
];

/// How a number is set.
#[derive(Debug, Clone, PartialEq)]
pub(crate) enum Way {
    /// By an entry of the list above.
    Listed(usize),
    /// The pressure centre of a section, by its name.
    PressureCentre(String),
    /// By way of the text.
    Text,
}

impl Way {
    pub(crate) fn of(path: &KeyPath) -> Self {
        if let [Step::Key(table), Step::Key(name), Step::Key(key)] = path.0.as_slice()
            && (table.as_str(), key.as_str()) == ("section", "pressure_centre")
        {
            return Self::PressureCentre(name.clone());
        }
        let key = path.to_string();
        PUTS.iter().position(|(own, _)| *own == key).map_or(Self::Text, Self::Listed)
    }

    /// Sets a number that may stand under the key.
    pub(crate) fn put(&self, glider: &mut Glider, value: f64) {
        match self {
            Self::Listed(place) => PUTS[*place].1(glider, value),
            Self::PressureCentre(name) => {
                // One that is nowhere on the body changes nothing.
                let of_name = glider.sections.iter_mut().filter(|section| section.name == *name);
                of_name.for_each(|section| section.pressure_centre = value);
            }
            Self::Text => {}
        }
    }
}

fn put(place: &mut f64, value: f64) {
    *place = value;
}

fn put_angle(place_rad: &mut f64, value_deg: f64) {
    put(place_rad, value_deg.to_radians());
}

fn wave<T>(glider: &mut Glider, place: impl Fn(&mut Wave) -> &mut T, value: T) {
    if let Pattern::Wave(of_gait) = &mut glider.gait.pattern {
        *place(of_gait) = value;
    }
}

fn taper(glider: &mut Glider, place: impl Fn(&mut Taper) -> &mut f64, value: f64) {
    wave(glider, |wave| place(&mut wave.taper), value);
}
