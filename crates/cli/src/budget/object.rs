//! A budget as scripts read it.

use serde_json::{Value, json};
use undulift_design::Design;
use undulift_flight::Spread;
use undulift_servo::BatteryBudget;

use super::Remedies;
use super::asking::{Judged, Moments};
use super::launches::Launches;
use crate::{joints, json};

/// The one object that is printed.
pub fn object(
    design: &Design,
    judged: &Judged,
    remedies: &Remedies,
    launches: Option<&Launches>,
) -> Value {
    let budget = &judged.asked.budget;
    let mut object = json::heading(design);
    let joints = (0..judged.axes.len()).map(|axis| joint(design, judged, launches, axis));
    object.insert("joints".into(), joints.collect());
    object.insert("battery".into(), budget.battery.as_ref().map_or(Value::Null, battery));
    object.insert("least_margin".into(), json!(budget.least_margin));
    object.insert("passes".into(), json!(judged.passes()));
    object.insert("worst".into(), worst(judged));
    if judged.moments == Moments::Rows {
        object.insert("rows".into(), json!(judged.asked.histories.times_s.len()));
        object.insert("worst_row".into(), json!(judged.worst_row()));
    }
    object.insert("slower_gait_hz".into(), json!(remedies.slower_hz));
    let lighter = remedies.lighter.as_ref();
    object.insert("lighter_structure_factor".into(), json!(lighter.map(|lighter| lighter.factor)));
    object.insert("lighter_structure_set".into(), json!(lighter.map(|lighter| &lighter.set)));
    if let Some(launches) = launches {
        launches.put_into(&mut object);
    }
    let assumptions = budget.assumptions.iter().map(ToString::to_string);
    let misses = budget.misses.iter().map(|miss| judged.in_words(miss));
    let travel = judged.travel_missed.iter().map(joints::Missed::in_words);
    object.insert("warnings".into(), travel.chain(misses).chain(assumptions).collect());
    Value::Object(object)
}

fn joint(design: &Design, judged: &Judged, launches: Option<&Launches>, axis_idx: usize) -> Value {
    let of = judged.axes[axis_idx];
    let axis = &judged.asked.budget.axes[axis_idx];
    let hinge = judged.asked.hinges[of.joint_idx];
    let mut object = json!({
        "joint": of.joint_idx + 1,
        "axis": of.axis.word(),
        "servo": design.servo_names.of(of.joint_idx, of.axis),
        "peak_torque_nm": axis.peak_torque_nm,
        "rms_torque_nm": axis.rms_torque_nm,
        "peak_speed_deg_s": axis.peak_speed_rad_s.to_degrees(),
        "least_margin": axis.least_margin,
        "least_margin_at_s": axis.least_margin_at_s,
        "peak_power_w": axis.peak_power_w,
        "energy_j_per_drop": axis.energy_j_per_drop,
        "hinge_force_n": hinge.force_n,
        "hinge_moment_nm": hinge.moment_nm,
    });
    if judged.moments == Moments::Rows {
        object["least_margin_row"] = json!(axis.least_margin_idx.map(|row_idx| row_idx + 1));
    }
    if let Some(launches) = launches {
        let [peak, margin] = launches.axes.get(axis_idx).copied().unwrap_or_default();
        object["p95_peak_torque_nm"] = json!(peak.map(|Spread { p95, .. }| p95));
        object["p05_least_margin"] = json!(margin.map(|Spread { p05, .. }| p05));
    }
    object
}

fn battery(battery: &BatteryBudget) -> Value {
    json!({
        "peak_current_a": battery.peak_current_a,
        "least_voltage_v": battery.least_voltage_v,
        "energy_j_per_drop": battery.energy_j_per_drop,
        "drops_per_charge": battery.drops_per_charge,
        "regulator_peak_current_a": battery.regulator_peak_current_a,
    })
}

/// What is missed most: of the servos and the battery, else of the joints' travel.
fn worst(judged: &Judged) -> Value {
    let miss = judged.asked.budget.worst().map(|miss| {
        let place = miss.place;
        (place.map(|place| place.joint), place.map(|place| place.axis), judged.in_words(miss))
    });
    let travel = judged.travel_missed.first().map(|missed| {
        let of = missed.of();
        (Some(of.joint_idx + 1), Some(of.axis.word()), missed.in_words())
    });
    miss.or(travel).map_or(
        Value::Null,
        |(joint, axis, reason)| json!({ "joint": joint, "axis": axis, "reason": reason }),
    )
}
