//! Names of what a flight comes to, as every output prints them.

use undulift_flight::{Bands, End, Summary};

/// A printed value.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Quantity {
    /// In the unit that its name ends with.
    Number(f64),
    /// There is none, such as a glide ratio of what never came down.
    None,
    /// 5th and 95th percentile.
    Band([f64; 2]),
    /// How a flight ended.
    Word(&'static str),
}

impl Quantity {
    /// A number, or none where it isn't finite.
    pub fn number(value: f64) -> Self {
        if value.is_finite() { Self::Number(value) } else { Self::None }
    }

    fn band(band: Option<[f64; 2]>) -> Self {
        band.filter(|ends| ends.iter().all(|end| end.is_finite())).map_or(Self::None, Self::Band)
    }

    fn or_none(value: Option<f64>) -> Self {
        value.map_or(Self::None, Self::number)
    }
}

/// The word for how a flight ended.
pub fn end_word(end: End) -> &'static str {
    match end {
        End::Landed => "landed",
        End::Inverted => "inverted",
        End::TimeUp => "time_up",
    }
}

/// What a flight comes to, by name, in the order in which it is printed.
pub fn of_flight(summary: &Summary, bands: &Bands) -> Vec<(&'static str, Quantity)> {
    let number = Quantity::number;
    let degrees = |angle_rad: f64| number(angle_rad.to_degrees());
    vec![
        ("end", Quantity::Word(end_word(summary.end))),
        ("time_s", number(summary.time_s)),
        ("drop_m", number(summary.drop_m)),
        ("distance_m", number(summary.distance_m)),
        ("glide_ratio", Quantity::or_none(summary.glide_ratio)),
        ("last_cycle_glide_ratio", Quantity::or_none(summary.last_cycle_glide_ratio)),
        ("glide_angle_deg", degrees(summary.glide_angle_rad)),
        ("speed_m_s", number(summary.speed_m_s)),
        ("sink_m_s", number(summary.sink_m_s)),
        ("side_drift_m", number(summary.side_drift_m)),
        ("forward_airspeed_m_s", number(summary.forward_airspeed_m_s)),
        ("peak_roll_deg", degrees(summary.peak_roll_rad)),
        ("peak_pitch_deg", degrees(summary.peak_pitch_rad)),
        ("landing_energy_j", number(summary.landing_energy_j)),
        ("mass_kg", number(summary.mass_kg)),
        ("planform_m2", number(summary.planform_m2)),
        ("wing_loading_pa", number(summary.wing_loading_pa)),
        ("alpha_deg", Quantity::band(bands.alpha_rad.map(|band| band.map(f64::to_degrees)))),
        ("reynolds", Quantity::band(bands.reynolds)),
        ("reduced_frequency", Quantity::or_none(summary.reduced_frequency)),
    ]
}
