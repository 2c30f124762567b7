//! The unit that a key ends with, in words.

/// Ends of keys, longer ones before those that they end with.
const UNITS: [(&str, &str); 27] = [
    ("_kg_m2", "kilograms times square metres"),
    ("_nm", "newton metres"),
    ("_kgf_cm", "kilogram-force centimetres"),
    ("_s_per_60deg", "seconds for a turn of 60°"),
    ("_deg_s", "degrees a second"),
    ("_deg", "degrees"),
    ("_m_s", "metres a second"),
    ("_k_w", "kelvins a watt"),
    ("_j_k", "joules a kelvin"),
    ("_kg", "kilograms"),
    ("_mah", "milliampere hours"),
    ("_mohm", "milliohms"),
    ("_hz", "cycles a second"),
    ("_pa", "pascals"),
    ("_us", "microseconds"),
    ("_m", "metres"),
    ("_s", "seconds"),
    ("_v", "volts"),
    ("_a", "amperes"),
    ("_w", "watts"),
    ("_c", "degrees Celsius"),
    ("volts", "volts"),
    ("charge", "parts of a full charge"),
    ("pressure_centre", "chords from the leading edge"),
    ("head_length", "parts of the body"),
    ("tail_length", "parts of the body"),
    // A ratio among kilograms.
    ("ends_to_middle", ""),
];

/// The unit of a number, by its key or by that of the table or list that holds it.
pub(crate) fn unit_of(key: &str) -> Option<&'static str> {
    let steps = key.rsplit('.').map(|step| step.split('[').next().unwrap_or(step));
    let of_step = |step: &str| UNITS.iter().find(|(end, _)| step.ends_with(end));
    steps.into_iter().find_map(of_step).map(|(_, unit)| *unit).filter(|unit| !unit.is_empty())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn twin_units_are_found_by_the_end_of_a_key() {
        for (key, unit) in [
            ("launch.speed_m_s", Some("metres a second")),
            ("body.length_m[3]", Some("metres")),
            ("body.width_m.middle", Some("metres")),
            ("body.structure_kg.ends_to_middle", None),
            ("body.structure_kg.total", Some("kilograms")),
            ("servo.a.rotor_inertia_at_output_kg_m2", Some("kilograms times square metres")),
            ("launch.spin_deg_s[0]", Some("degrees a second")),
            ("body.segments", None),
            ("gait.lateral_waves", None),
        ] {
            assert_eq!(unit_of(key), unit, "{key}");
        }
    }
}
