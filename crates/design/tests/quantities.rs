//! What a flight comes to, by name.

mod common;

use common::{SOUND, design};
use undulift_design::quantities::{Quantity, of_flight};
use undulift_flight::{Settings, bands, fly, summary};

/// Every key of the documented output, in its order and unit.
#[test]
fn twin_quantities_have_the_documented_names_and_units() {
    let glider = design(SOUND).read(&["launch.height_m=1"]).unwrap().glider;
    let settings = Settings { through_inversion: true, ..Settings::default() };
    let mut flight = fly(&glider, &settings).unwrap();
    let (summary, bands) = (summary(&glider, &mut flight), bands(&glider, &mut flight));
    let quantities = of_flight(&summary, &bands);
    let keys: Vec<&str> = quantities.iter().map(|(key, _)| *key).collect();
    let documented = "end time_s drop_m distance_m glide_ratio last_cycle_glide_ratio \
        glide_angle_deg speed_m_s sink_m_s side_drift_m forward_airspeed_m_s peak_roll_deg \
        peak_pitch_deg landing_energy_j mass_kg planform_m2 wing_loading_pa alpha_deg reynolds \
        reduced_frequency";
    assert_eq!(keys, documented.split_whitespace().collect::<Vec<_>>());
    let of = |key| quantities.iter().find(|(own, _)| *own == key).unwrap().1;
    assert_eq!(of("end"), Quantity::Word("landed"));
    assert_eq!(of("glide_ratio"), Quantity::Number(summary.glide_ratio.unwrap()));
    assert_eq!(of("last_cycle_glide_ratio"), Quantity::None);
    assert_eq!(of("peak_roll_deg"), Quantity::Number(summary.peak_roll_rad.to_degrees()));
    assert_eq!(of("reynolds"), Quantity::Band(bands.reynolds.unwrap()));
    let alpha_deg = bands.alpha_rad.unwrap().map(f64::to_degrees);
    assert_eq!(of("alpha_deg"), Quantity::Band(alpha_deg));
}

#[test]
fn a_quantity_that_is_not_finite_is_none() {
    assert_eq!(Quantity::number(f64::NAN), Quantity::None);
    assert_eq!(Quantity::number(f64::NEG_INFINITY), Quantity::None);
    assert_eq!(Quantity::number(-0.5), Quantity::Number(-0.5));
}
