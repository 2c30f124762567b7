//! Servos as catalogues give them.
//!
//! Figures are at the output shaft, gear losses inside. Nothing is computed here but the
//! efficiency that they imply.

use std::collections::BTreeMap;

use undulift_servo::{Endurance, PositionLoop, Pulse, Servo};

use crate::range::Range;
use crate::table::Table;
use crate::{DesignError, document::Mark};

/// The word for no servo, in lists over the joints.
pub(crate) const NO_SERVO: &str = "none";

/// Newton metres in a kilogram-force centimetre (exact, from standard gravity).
const NM_PER_KGF_CM: f64 = 0.098_066_5;

/// Reads all servos of a file; absent where there are mistakes in one.
pub(crate) fn read_servos(top: &Table<'_>) -> BTreeMap<String, Option<Servo>> {
    let mut servos = BTreeMap::new();
    for (name, table) in top.named_tables("servo") {
        if name == NO_SERVO {
            let why = "it stands for no servo";
            let what = DesignError::TakenName { what: "servo", name: name.into(), why };
            table.document().note(table.path(), Mark::Key, &[], what);
        }
        servos.insert(name.to_owned(), read_servo(name, table));
    }
    servos
}

fn read_servo(name: &str, table: Table<'_>) -> Option<Servo> {
    const CURRENT_A: Range = Range::above_0_to(1000.0);
    let mass_kg = table.need_number("mass_kg", Range::from_to(0.0, 1000.0));
    let at_voltage_v = table.need_number("at_voltage_v", Range::above_0_to(1000.0));
    let stall_torque_nm = read_stall_torque_nm(&table);
    let no_load_speed_rad_s = read_no_load_speed_rad_s(&table);
    let stall_current_a = table.need_number("stall_current_a", CURRENT_A);
    let no_load_current_a = table.need_number("no_load_current_a", Range::from_to(0.0, 1000.0));
    let idle_current_a = table.number_or("idle_current_a", Range::from_to(0.0, 1000.0), 0.0);
    let gear_efficiency = table.number("gear_efficiency", Range::above_0_to(1.0));
    let inertia_kg_m2 =
        table.number_or("rotor_inertia_at_output_kg_m2", Range::from_to(0.0, 1000.0), 0.0);
    let endurance = read_endurance(&table);
    let pulse = read_pulse(table.table("pulse_us"));
    let position_loop = read_loop(table.table("loop"));
    let price = table.number("price", Range::from_to(0.0, 1e9));
    // All getters have been asked, so mistakes may cut the rest short.
    let servo = (|| {
        Some(Servo {
            name: name.to_owned(),
            mass_kg: mass_kg?,
            at_voltage_v: at_voltage_v?,
            stall_torque_nm: stall_torque_nm?,
            no_load_speed_rad_s: no_load_speed_rad_s?,
            stall_current_a: stall_current_a?,
            no_load_current_a: no_load_current_a?,
            idle_current_a,
            gear_efficiency,
            rotor_inertia_at_output_kg_m2: inertia_kg_m2,
            endurance,
            pulse,
            position_loop,
            price,
        })
    })();
    if let Some(servo) = &servo {
        check_figures(&table, servo);
    }
    table.finish();
    servo
}

fn read_stall_torque_nm(table: &Table<'_>) -> Option<f64> {
    let keys = ["stall_torque_nm", "stall_torque_kgf_cm"];
    let [in_nm, in_kgf_cm] = read_as_sold(table, keys, Range::above_0_to(10_000.0))?;
    in_nm.or(in_kgf_cm.map(|kgf_cm| kgf_cm * NM_PER_KGF_CM))
}

fn read_no_load_speed_rad_s(table: &Table<'_>) -> Option<f64> {
    let keys = ["no_load_speed_deg_s", "no_load_s_per_60deg"];
    let [deg_s, s_per_60deg] = read_as_sold(table, keys, Range::above_0_to(100_000.0))?;
    let deg_s = deg_s.or(s_per_60deg.map(|seconds| 60.0 / seconds));
    deg_s.map(f64::to_radians)
}

/// One figure in either of two units.
fn read_as_sold(
    table: &Table<'_>,
    [ours, as_sold]: [&str; 2],
    range: Range,
) -> Option<[Option<f64>; 2]> {
    let sold = table.get(as_sold);
    if sold.is_none() {
        let own = table.need(ours, &format!("a number {range}, or `{as_sold}` in its place"));
        return Some([own?.number(range), None]);
    }
    let why = "both say the same in different units";
    table.get(ours);
    table.refuse_beside(as_sold, ours, why, "keep one of the two");
    Some([None, sold?.number(range)])
}

fn read_endurance(table: &Table<'_>) -> Endurance {
    let torque_nm = table.number("continuous_torque_nm", Range::above_0_to(10_000.0));
    let thermal = table.table("thermal");
    let why = "a servo's endurance is told in one way";
    table.refuse_beside("thermal", "continuous_torque_nm", why, "keep one of the two");
    let resistance_k_w = thermal.need_number("resistance_k_w", Range::above_0_to(10_000.0));
    let capacity_j_k = thermal.need_number("capacity_j_k", Range::above_0_to(1e6));
    let limit_c = thermal.need_number("winding_limit_c", Range::from_to(20.0, 500.0));
    thermal.finish();
    match (resistance_k_w, capacity_j_k, limit_c) {
        (Some(resistance_k_w), Some(capacity_j_k), Some(limit_c)) => {
            Endurance::Thermal { resistance_k_w, capacity_j_k, winding_limit_k: limit_c + 273.15 }
        }
        _ => torque_nm.map_or(Endurance::Unknown, Endurance::ContinuousTorque),
    }
}

fn read_pulse(table: Table<'_>) -> Pulse {
    const PULSE_US: Range = Range::from_to(1.0, 20_000.0);
    let pulse = Pulse {
        minus_90_us: table.number_or("minus_90", PULSE_US, 500.0),
        centre_us: table.number_or("centre", PULSE_US, 1500.0),
        plus_90_us: table.number_or("plus_90", PULSE_US, 2500.0),
    };
    let (first, second) = (pulse.centre_us - pulse.minus_90_us, pulse.plus_90_us - pulse.centre_us);
    if table.is_given() && first * second <= 0.0 {
        let Pulse { minus_90_us, centre_us, plus_90_us } = pulse;
        let why = format!(
            "{minus_90_us}, {centre_us} and {plus_90_us} µs at −90°, 0° and 90° neither rise nor fall throughout"
        );
        table.disagree("centre", &["minus_90", "plus_90"], why, "put the centre between the ends");
    }
    table.finish();
    pulse
}

fn read_loop(table: Table<'_>) -> PositionLoop {
    let full_at_deg = table.number_or("full_at_deg", Range::above_0_to(180.0), 5.0);
    let deadband_deg = table.number_or("deadband_deg", Range::from_to(0.0, 90.0), 0.2);
    table.finish();
    PositionLoop { full_at_rad: full_at_deg.to_radians(), deadband_rad: deadband_deg.to_radians() }
}

fn check_figures(table: &Table<'_>, servo: &Servo) {
    let (unloaded_a, stalled_a) = (servo.no_load_current_a, servo.stall_current_a);
    if unloaded_a >= stalled_a {
        let why = format!(
            "{unloaded_a} A unloaded is not less than the {stalled_a} A that it draws stalled"
        );
        table.disagree("no_load_current_a", &["stall_current_a"], why, "check both currents");
        return;
    }
    let efficiency = servo.implied_efficiency();
    if efficiency > 1.0 {
        let why = format!(
            "with its voltage, speed and currents this implies an efficiency of {efficiency:.2}, \
             but no servo gives out more than it takes in: at most 1"
        );
        let torque = ["stall_torque_nm", "stall_torque_kgf_cm"];
        let torque = torque.into_iter().find(|key| table.holds(key)).unwrap_or(torque[0]);
        let others = [
            "at_voltage_v",
            "no_load_speed_deg_s",
            "no_load_s_per_60deg",
            "stall_current_a",
            "no_load_current_a",
        ];
        let others: Vec<&str> = others.into_iter().filter(|key| table.holds(key)).collect();
        let remedy = "check that all figures are at one voltage, and the units of torque \
                      (1 kgf·cm is 0.098 N·m) and speed";
        table.disagree(torque, &others, why, remedy);
    }
}
