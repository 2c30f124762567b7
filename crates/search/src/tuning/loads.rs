//! The budget of a design that has flown.

use undulift_chain::{AxisOf, joint_axes};
use undulift_design::Design;
use undulift_flight::{Flight, FlightError, histories as joint_histories};
use undulift_servo::{AxisHistory, Budget, Conditions, Histories, Place, Servo, budget};

/// - `every_s`: between the instants that it is made from
/// - returns none where a servo, the battery or the motion can't be reckoned with
pub(crate) fn budget_of(
    design: &Design,
    flight: &mut Flight,
    every_s: f64,
) -> Result<Option<Budget>, FlightError> {
    let found = joint_histories(&design.glider, flight, every_s)?;
    let servos: Vec<Servo> = design.servos.values().cloned().collect();
    let servo_of = |of: &AxisOf| {
        let name = design.servo_names.of(of.joint_idx, of.axis)?;
        design.servos.keys().position(|known| known == name)
    };
    let axes = joint_axes(design.glider.chain.joints());
    let axes = axes.iter().enumerate().map(|(axis_idx, of)| {
        let column = |rows: &[Vec<f64>]| rows.iter().map(|row| row[axis_idx]).collect();
        AxisHistory {
            place: Place { joint: of.joint_idx + 1, axis: of.axis.word() },
            servo_idx: servo_of(of),
            joint_torque_nm: column(&found.torques_nm),
            rate_rad_s: column(&found.rates_rad_s),
            acceleration_rad_s2: column(&found.accelerations_rad_s2),
        }
    });
    let histories = Histories { axes: axes.collect(), times_s: found.times_s };
    let conditions = Conditions {
        battery: design.battery.as_ref().map(|battery| battery.supply.clone()),
        air_temperature_k: design.glider.air.temperature_k,
        torque_factor: design.limits.torque_factor,
        ..Conditions::default()
    };
    Ok(budget(&servos, &histories, &conditions).ok())
}
