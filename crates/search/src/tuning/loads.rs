//! The budget of a design that has flown, from no more than it needs: hinges, energies and joint
//! travel, which take as long as the flight, are left out.

use undulift_chain::{AxisOf, joint_axes};
use undulift_design::Design;
use undulift_flight::{Flight, FlightError, Loaded, loads_at};
use undulift_servo::{AxisHistory, Budget, Histories, Servo, budget};

use crate::asked::{Drops, conditions, place, servo_idx};

/// - `every_s`: between the instants that it is made from
/// - returns none where a servo, the battery or the motion can't be reckoned with
pub(crate) fn budget_of(
    design: &Design,
    flight: &mut Flight,
    every_s: f64,
) -> Result<Option<Budget>, FlightError> {
    let times_s = flight.row_times_s(every_s).collect();
    let mut histories = Histories { times_s, axes: axes(design) };
    for &time_s in &histories.times_s {
        let Loaded { loads, rates_rad_s, accelerations_rad_s2 } =
            loads_at(&design.glider, flight, time_s)?;
        for (axis_idx, axis) in histories.axes.iter_mut().enumerate() {
            axis.joint_torque_nm.push(loads.torques_nm[axis_idx]);
            axis.rate_rad_s.push(rates_rad_s[axis_idx]);
            axis.acceleration_rad_s2.push(accelerations_rad_s2[axis_idx]);
        }
    }
    let servos: Vec<Servo> = design.servos.values().cloned().collect();
    Ok(budget(&servos, &histories, &conditions(design, Drops::default())).ok())
}

/// Without anything in their columns yet.
fn axes(design: &Design) -> Vec<AxisHistory> {
    let axis = |of: &AxisOf| AxisHistory {
        place: place(of),
        servo_idx: servo_idx(design, of),
        joint_torque_nm: Vec::new(),
        rate_rad_s: Vec::new(),
        acceleration_rad_s2: Vec::new(),
    };
    joint_axes(design.glider.chain.joints()).iter().map(axis).collect()
}
