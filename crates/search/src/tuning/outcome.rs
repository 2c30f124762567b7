//! One launch, flown: its quantities by name.

use undulift_design::Design;
use undulift_design::quantities::{Quantity, of_budget, of_flight};
use undulift_flight::{Bands, End, Flight, FlightError, Settings, Summary, fly, summary};
use undulift_servo::MissKind;

use super::loads::budget_of;

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
    /// - `every_s`: between looks at the loads; absent where nobody asks for them
    ///
    /// # Errors
    ///
    /// Where it can't be released or followed.
    pub(crate) fn of(
        design: &Design,
        settings: &Settings,
        every_s: Option<f64>,
    ) -> Result<Self, FlightError> {
        let mut flight = fly(&design.glider, settings)?;
        let flown = summary(&design.glider, &mut flight);
        // Many flights leave the bands out, which cost as much as the flight.
        let no_bands = Bands { alpha_rad: None, reynolds: None, stretched: Vec::new() };
        let mut quantities = of_flight(&flown, &no_bands);
        let travel_share = travel_share(design, &flight);
        quantities.push((HEIGHT_LEFT, Quantity::Number(height_left(design, &flown))));
        quantities.push((TRAVEL_SHARE, Quantity::Number(travel_share)));
        if let Some(every_s) = every_s {
            quantities.extend(loads(design, &mut flight, every_s, travel_share)?);
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

/// Infinite where a joint without travel is asked to turn.
fn travel_share(design: &Design, flight: &Flight) -> f64 {
    let joints = design.glider.chain.joints();
    let peaks = flight.commands().peaks(0.0, flight.time_s);
    let share = |peak: &undulift_gait::Peak| {
        let travel_rad = joints[peak.of.joint_idx].travel_rad(peak.of.axis)?;
        Some(if peak.angle_rad > 0.0 { peak.angle_rad / travel_rad } else { 0.0 })
    };
    peaks.iter().filter_map(share).fold(0.0, f64::max)
}

/// Quantities of the budget; none where it can't be made, which counts as a miss.
fn loads(
    design: &Design,
    flight: &mut Flight,
    every_s: f64,
    travel_share: f64,
) -> Result<Vec<(&'static str, Quantity)>, FlightError> {
    let Some(budget) = budget_of(design, flight, every_s)? else { return Ok(Vec::new()) };
    let others = budget.misses.iter().filter(|miss| miss.kind != MissKind::Torque);
    let times_over = others.map(|miss| miss.times_over).fold(1.0, f64::max);
    let mut found = of_budget(&budget, budget.passes && travel_share <= 1.0);
    found.push((TIMES_OVER, Quantity::Number(times_over)));
    Ok(found)
}
