//! One launch, flown: its quantities by name.

use undulift_chain::AxisOf;
use undulift_design::Design;
use undulift_design::quantities::{Quantity, of_budget, of_flight};
use undulift_flight::{Bands, End, Flight, FlightError, Settings, Summary, fly, summary};
use undulift_gait::Instant;
use undulift_servo::MissKind;

use super::Fineness;
use super::loads::budget_of;

/// Between looks at the loads, s.
const COARSE_S: f64 = 10e-3;
const FINE_S: f64 = 1e-3;

/// Between looks at the joints' angles where they are coarse, s.
const COARSE_TRAVEL_S: f64 = 5e-3;

/// 0 where it landed; else 1 and the share of the release height that was left.
pub(crate) const HEIGHT_LEFT: &str = "height_left";

/// What the gait asks of joints over their travel, the largest.
pub(crate) const TRAVEL_SHARE: &str = "joint_travel_share";

/// What a budget misses beside the torque margin, as how many times over; 1 where nothing is.
pub(crate) const TIMES_OVER: &str = "budget.times_over";

/// Quantities of one launch.
pub(crate) struct Outcome(Vec<(&'static str, Quantity)>);

impl Outcome {
    /// Flies a design.
    ///
    /// - `with_loads`: whether anybody asks for them
    ///
    /// # Errors
    ///
    /// Where it can't be released or followed.
    pub(crate) fn of(
        design: &Design,
        settings: &Settings,
        fineness: Fineness,
        with_loads: bool,
    ) -> Result<Self, FlightError> {
        let mut flight = fly(&design.glider, settings)?;
        let flown = summary(&design.glider, &mut flight);
        // Many flights leave the bands out, which cost as much as the flight.
        let no_bands = Bands { alpha_rad: None, reynolds: None, stretched: Vec::new() };
        let mut quantities = of_flight(&flown, &no_bands);
        let travel_share = travel_share(design, &flight, fineness);
        quantities.push((HEIGHT_LEFT, Quantity::Number(height_left(design, &flown))));
        quantities.push((TRAVEL_SHARE, Quantity::Number(travel_share)));
        if with_loads {
            quantities.extend(loads(design, &mut flight, fineness, travel_share)?);
        }
        Ok(Self(quantities))
    }

    /// A number by its name.
    pub(crate) fn value(&self, key: &str) -> Option<f64> {
        match self.0.iter().find(|(own, _)| *own == key)?.1 {
            Quantity::Number(value) => Some(value),
            _ => None,
        }
    }
}

fn height_left(design: &Design, flown: &Summary) -> f64 {
    if flown.end == End::Landed {
        return 0.0;
    }
    let height_m = design.glider.launch.height_m;
    1.0 + ((height_m - flown.drop_m) / height_m).clamp(0.0, 1.0)
}

/// What the gait asks of joints over their travel, the largest, 0 where none has an end; infinite
/// where a joint without travel is asked to turn.
///
/// A gait repeats itself, so its start and a cycle say it all.
fn travel_share(design: &Design, flight: &Flight, fineness: Fineness) -> f64 {
    let commands = flight.commands();
    let end_s =
        commands.steady_cycle_s().map_or(flight.time_s, |cycle| cycle[1].min(flight.time_s));
    let joints = design.glider.chain.joints();
    let share = |of: &AxisOf, angle_rad: f64| {
        let travel_rad = joints[of.joint_idx].travel_rad(of.axis);
        travel_rad.map_or(0.0, |travel_rad| angle_rad / travel_rad)
    };
    let largest = |shares: &mut dyn Iterator<Item = f64>| {
        shares.fold(0.0, |most: f64, share| if share.is_nan() { most } else { most.max(share) })
    };
    if fineness == Fineness::Fine {
        let peaks = commands.peaks(0.0, end_s);
        return largest(&mut peaks.iter().map(|peak| share(&peak.of, peak.angle_rad)));
    }
    let mut motion = commands.room();
    let looks = (end_s / COARSE_TRAVEL_S).ceil().max(1.0) as usize;
    let at = |look: usize| {
        commands.rates(Instant::at(end_s * look as f64 / looks as f64), &mut motion);
        let angles = commands.axes().iter().zip(&motion.angles_rad);
        largest(&mut angles.map(|(of, angle_rad)| share(of, angle_rad.abs())))
    };
    (0..=looks).map(at).fold(0.0, f64::max)
}

/// Quantities of the budget; none where it can't be made, which counts as a miss.
fn loads(
    design: &Design,
    flight: &mut Flight,
    fineness: Fineness,
    travel_share: f64,
) -> Result<Vec<(&'static str, Quantity)>, FlightError> {
    let every_s = match fineness {
        Fineness::Coarse => COARSE_S,
        Fineness::Fine => FINE_S,
    };
    let Some(budget) = budget_of(design, flight, every_s)? else { return Ok(Vec::new()) };
    let others = budget.misses.iter().filter(|miss| miss.kind != MissKind::Torque);
    let times_over = others.map(|miss| miss.times_over).fold(1.0, f64::max);
    let mut found = of_budget(&budget, budget.passes && travel_share <= 1.0);
    found.push((TIMES_OVER, Quantity::Number(times_over)));
    Ok(found)
}
