//! Joints that a gait asks to go further than they do.

use std::fmt;

use undulift_chain::Chain;
use undulift_gait::Peak;

/// A joint that is asked to go further than its travel.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct BeyondTravel {
    /// What it is asked.
    pub peak: Peak,
    /// Each way from straight.
    pub travel_rad: f64,
}

impl BeyondTravel {
    /// What is asked over what can be done.
    pub fn times_over(&self) -> f64 {
        self.peak.angle_rad / self.travel_rad
    }
}

impl fmt::Display for BeyondTravel {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(
            f,
            "joint {} is asked for {:.1}° of {} at t = {:.2} s, beyond its travel of {:.1}°",
            self.peak.of.joint_idx + 1,
            self.peak.angle_rad.to_degrees(),
            self.peak.of.axis.word(),
            self.peak.angle_at_s,
            self.travel_rad.to_degrees()
        )
    }
}

/// All joints that do.
pub fn beyond_travel<'a>(
    chain: &'a Chain,
    peaks: &'a [Peak],
) -> impl Iterator<Item = BeyondTravel> + 'a {
    peaks.iter().filter_map(|&peak| {
        let travel_rad = chain.joints()[peak.of.joint_idx].travel_rad(peak.of.axis)?;
        (peak.angle_rad > travel_rad).then_some(BeyondTravel { peak, travel_rad })
    })
}
