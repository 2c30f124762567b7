//! What a design asks of its servos, in flight or at rest, and whether they can do it.
//!
//! One way from joint loads to a budget, for every command and search that makes one.

use undulift_chain::{AxisOf, Chain, joint_axes};
use undulift_design::Design;
use undulift_flight::{Clamped, Flight, FlightError, HingeLoad, Pose, histories};
use undulift_servo::{AxisHistory, Budget, Conditions, Histories, Place, budget};

use crate::SizingError;
use crate::travel::{BeyondTravel, beyond_travel};

/// What is asked, against what there is.
#[derive(Debug, Clone, PartialEq)]
pub struct Asked {
    /// Of every axis: yaw axes from the head, then pitch axes from the head.
    pub histories: Histories,
    /// What each hinge carries at most.
    pub hinges: Vec<HingeLoad>,
    /// What servos and battery make of it; servos by their places among [`Design::servos`].
    pub budget: Budget,
    /// Joints that are asked to go further than their travel; of a flight.
    pub travel_missed: Vec<BeyondTravel>,
}

impl Asked {
    /// Whether nothing is missed.
    pub fn passes(&self) -> bool {
        self.budget.passes && self.travel_missed.is_empty()
    }
}

/// Drops one after another, for the heat.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Drops {
    /// 1 or more.
    pub number: u32,
    /// Between two.
    pub rest_s: f64,
}

impl Default for Drops {
    fn default() -> Self {
        Self { number: 1, rest_s: 0.0 }
    }
}

/// The budget of a flown design.
///
/// - `flight`: of that design
/// - `every_s`: between the instants that the budget is made from
///
/// # Errors
///
/// [`SizingError::Flight`] where the gait leaves no loads, [`SizingError::Servo`] where a figure
/// can't be reckoned with.
pub fn asked_in_flight(
    design: &Design,
    flight: &mut Flight,
    every_s: f64,
    drops: Drops,
) -> Result<Asked, SizingError> {
    let found = histories(&design.glider, flight, every_s)?;
    let hinges = HingeLoad::peaks(&found.hinge_loads);
    let servo_of = |of: &AxisOf| servo_idx(design, of);
    let histories = servo_histories(&design.glider.chain, found, servo_of);
    let peaks = flight.commands().peaks(0.0, flight.time_s);
    let travel_missed = beyond_travel(&design.glider.chain, &peaks).collect();
    let budget = judged(design, &histories, drops)?;
    Ok(Asked { histories, hinges, budget, travel_missed })
}

/// The budget of a design that is held still, in one pose or in several: each is an instant of its
/// own, and no time passes between them.
///
/// - `clamp_idx`, `load_factor`: as for [`Clamped::new`]
///
/// # Errors
///
/// As for [`asked_in_flight`], and for a segment or an axis that isn't there.
pub fn asked_at_rest(
    design: &Design,
    poses: &[Pose],
    clamp_idx: usize,
    load_factor: f64,
) -> Result<Asked, SizingError> {
    let chain = &design.glider.chain;
    let mut clamped = Clamped::new(&design.glider, clamp_idx, load_factor)?;
    let mut hinges = vec![HingeLoad::default(); chain.joints().len()];
    let torques_nm = poses.iter().map(|pose| {
        let loads = clamped.loads(pose)?;
        let here = HingeLoad::of(&loads);
        hinges.iter_mut().zip(here).for_each(|(peak, load)| *peak = peak.most(load));
        Ok(loads.torques_nm)
    });
    let torques_nm: Vec<Vec<f64>> = torques_nm.collect::<Result<_, FlightError>>()?;
    let axes = joint_axes(chain.joints()).into_iter().enumerate();
    let axes = axes.map(|(axis_idx, of)| AxisHistory {
        place: place(&of),
        servo_idx: servo_idx(design, &of),
        joint_torque_nm: column(&torques_nm, axis_idx),
        rate_rad_s: vec![0.0; poses.len()],
        acceleration_rad_s2: vec![0.0; poses.len()],
    });
    let histories = Histories { axes: axes.collect(), times_s: vec![0.0; poses.len()] };
    let budget = judged(design, &histories, Drops::default())?;
    Ok(Asked { histories, hinges, budget, travel_missed: Vec::new() })
}

/// What a design's budget is judged under.
pub(crate) fn conditions(design: &Design, drops: Drops) -> Conditions {
    Conditions {
        battery: design.battery.as_ref().map(|battery| battery.supply.clone()),
        air_temperature_k: design.glider.air.temperature_k,
        torque_factor: design.limits.torque_factor,
        drops: drops.number,
        rest_s: drops.rest_s,
    }
}

/// Joint loads along a flight as servos meet them.
///
/// - `servo_of`: an axis's servo, by its place in the list that the budget gets
pub(crate) fn servo_histories(
    chain: &Chain,
    found: undulift_flight::Histories,
    servo_of: impl Fn(&AxisOf) -> Option<usize>,
) -> Histories {
    let axes = joint_axes(chain.joints()).into_iter().enumerate();
    let axes = axes.map(|(axis_idx, of)| AxisHistory {
        place: place(&of),
        servo_idx: servo_of(&of),
        joint_torque_nm: column(&found.torques_nm, axis_idx),
        rate_rad_s: column(&found.rates_rad_s, axis_idx),
        acceleration_rad_s2: column(&found.accelerations_rad_s2, axis_idx),
    });
    Histories { axes: axes.collect(), times_s: found.times_s }
}

fn judged(design: &Design, histories: &Histories, drops: Drops) -> Result<Budget, SizingError> {
    let servos: Vec<_> = design.servos.values().cloned().collect();
    Ok(budget(&servos, histories, &conditions(design, drops))?)
}

/// The servo of an axis by its place among the design's.
pub(crate) fn servo_idx(design: &Design, of: &AxisOf) -> Option<usize> {
    let name = design.servo_names.of(of.joint_idx, of.axis)?;
    design.servos.keys().position(|known| known == name)
}

pub(crate) fn place(of: &AxisOf) -> Place {
    Place { joint: of.joint_idx + 1, axis: of.axis.word() }
}

fn column(rows: &[Vec<f64>], axis_idx: usize) -> Vec<f64> {
    rows.iter().map(|row| row[axis_idx]).collect()
}
