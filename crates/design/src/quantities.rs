//! Names of what a flight comes to, as every output prints them.

use undulift_flight::{Bands, End, Summary};
use undulift_servo::Budget;

/// Names of what [`of_flight`] gives as numbers.
pub const FLIGHT_NUMBERS: [&str; 17] = [
    "time_s",
    "drop_m",
    "distance_m",
    "glide_ratio",
    "last_cycle_glide_ratio",
    "glide_angle_deg",
    "speed_m_s",
    "sink_m_s",
    "side_drift_m",
    "forward_airspeed_m_s",
    "peak_roll_deg",
    "peak_pitch_deg",
    "landing_energy_j",
    "mass_kg",
    "planform_m2",
    "wing_loading_pa",
    "reduced_frequency",
];

/// Names of what [`of_budget`] gives; all are numbers.
pub const BUDGET_NUMBERS: [&str; 7] = [
    "budget.least_margin",
    "budget.passes",
    "budget.battery.peak_current_a",
    "budget.battery.least_voltage_v",
    "budget.battery.energy_j_per_drop",
    "budget.battery.drops_per_charge",
    "budget.battery.regulator_peak_current_a",
];

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

/// What a budget comes to, in the order of [`BUDGET_NUMBERS`]; what passes is 1, what doesn't 0.
///
/// - `passes`: whether the budget and the joints' travel hold
pub fn of_budget(budget: &Budget, passes: bool) -> Vec<(&'static str, Quantity)> {
    let battery = budget.battery.as_ref();
    let of_battery = [
        battery.and_then(|battery| battery.peak_current_a),
        battery.and_then(|battery| battery.least_voltage_v),
        battery.and_then(|battery| battery.energy_j_per_drop),
        battery.and_then(|battery| battery.drops_per_charge),
        battery.and_then(|battery| battery.regulator_peak_current_a),
    ];
    let own = [budget.least_margin, Some(f64::from(u8::from(passes)))];
    BUDGET_NUMBERS
        .into_iter()
        .zip(own.into_iter().chain(of_battery).map(Quantity::or_none))
        .collect()
}
