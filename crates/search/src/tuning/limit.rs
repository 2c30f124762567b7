//! What is required of a design, by the search and without being asked.

use serde::{Deserialize, Serialize};
use undulift_chain::joint_axes;
use undulift_design::{Design, Knob, Required, Tuning};

use super::outcome::{HEIGHT_LEFT, TIMES_OVER, TRAVEL_SHARE};

/// One side of what is required of a quantity.
#[derive(Debug, Clone, PartialEq)]
pub struct Limit {
    /// Name of the quantity, as printed.
    pub key: String,
    /// Which side, and where.
    pub bound: Bound,
    /// Who asks for it.
    pub origin: Origin,
}

/// A side, in the quantity's unit.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub enum Bound {
    /// The value must not be below.
    Least(f64),
    /// The value must not be above.
    Most(f64),
}

/// Who asks for a limit.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Origin {
    /// Nobody may do without it: the flight must land.
    Always,
    /// The design, as `fly` and `budget` hold it to.
    Design,
    /// The search.
    Search,
}

impl Bound {
    /// The number itself.
    pub fn value(self) -> f64 {
        match self {
            Self::Least(value) | Self::Most(value) => value,
        }
    }

    /// What a miss is held against: the limit's own size, 1 where that is 0.
    pub fn scale(self) -> f64 {
        if self.value() == 0.0 { 1.0 } else { self.value().abs() }
    }

    /// The same side, easier to keep by a share of its scale; harder where that is below 0.
    pub fn eased(self, share: f64) -> Self {
        let by = share * self.scale();
        match self {
            Self::Least(value) => Self::Least(value - by),
            Self::Most(value) => Self::Most(value + by),
        }
    }

    /// How far a value is on the wrong side, in scales; below 0 on the right one.
    pub fn relative_miss(self, value: f64) -> f64 {
        match self {
            Self::Least(least) => (least - value) / self.scale(),
            Self::Most(most) => (value - most) / self.scale(),
        }
    }
}

impl Limit {
    fn new(key: &str, bound: Bound, origin: Origin) -> Self {
        Self { key: key.to_owned(), bound, origin }
    }

    /// Whether it is known only after a look at the loads.
    pub fn is_of_loads(&self) -> bool {
        self.key.starts_with("budget.")
    }

    /// What a value counts in the sum over all limits: for a relative miss m, m/(1 + m), so that no
    /// limit drowns the others; 1 where there is no value.
    pub fn miss(&self, value: Option<f64>) -> f64 {
        let Some(value) = value else { return 1.0 };
        match self.bound.relative_miss(value) {
            miss if miss == f64::INFINITY => 1.0,
            miss if miss > 0.0 => miss / (1.0 + miss),
            _ => 0.0,
        }
    }

    /// All of a search, those that nobody asked for first.
    pub fn all(design: &Design, tuning: &Tuning) -> Vec<Self> {
        let mut limits = vec![Self::new(HEIGHT_LEFT, Bound::Most(0.0), Origin::Always)];
        if tuning.limits_kept {
            limits.extend(of_design(design, &tuning.require));
        }
        limits.extend(tuning.require.iter().flat_map(of_search));
        limits
    }

    /// Names for a table's columns, each its own: the side is added where both are asked for.
    pub fn columns(limits: &[Self]) -> Vec<String> {
        let name = |limit: &Self| {
            let alike = limits.iter().filter(|other| other.key == limit.key).count();
            match limit.bound {
                _ if alike == 1 => limit.key.clone(),
                Bound::Least(_) => format!("{}.at_least", limit.key),
                Bound::Most(_) => format!("{}.at_most", limit.key),
            }
        };
        limits.iter().map(name).collect()
    }
}

/// What `fly` and `budget` end with status 1 for; where the search has its own limit on that side
/// of a quantity, that one holds alone.
fn of_design(design: &Design, own: &[Required]) -> Vec<Limit> {
    let tilt = Bound::Most(number(design, "limits.tilt_deg"));
    let margin = Bound::Least(number(design, "limits.torque_factor"));
    let axes = joint_axes(design.glider.chain.joints());
    let joints = design.glider.chain.joints();
    let stops = axes.iter().any(|of| joints[of.joint_idx].travel_rad(of.axis).is_some());
    let driven = axes.iter().any(|of| design.servo_names.of(of.joint_idx, of.axis).is_some());
    let all = [
        (true, "peak_roll_deg", tilt),
        (true, "peak_pitch_deg", tilt),
        (stops, TRAVEL_SHARE, Bound::Most(1.0)),
        (driven, "budget.least_margin", margin),
        (driven, TIMES_OVER, Bound::Most(1.0)),
    ];
    let replaced = |key: &str, bound: Bound| {
        own.iter().any(|own| match bound {
            Bound::Least(_) => own.key == key && own.at_least.is_some(),
            Bound::Most(_) => own.key == key && own.at_most.is_some(),
        })
    };
    let asked = all.into_iter().filter(|(given, key, bound)| *given && !replaced(key, *bound));
    asked.map(|(_, key, bound)| Limit::new(key, bound, Origin::Design)).collect()
}

/// As the file has it, or its default.
fn number(design: &Design, key: &str) -> f64 {
    Knob::find(design, key).map_or(f64::NAN, |knob| knob.value(design))
}

fn of_search(required: &Required) -> Vec<Limit> {
    let least = required.at_least.map(Bound::Least);
    let most = required.at_most.map(Bound::Most);
    let bounds = least.into_iter().chain(most);
    bounds.map(|bound| Limit::new(&required.key, bound, Origin::Search)).collect()
}

#[cfg(test)]
mod tests {
    use approx::assert_relative_eq;

    use super::*;

    fn limit(bound: Bound) -> Limit {
        Limit::new("glide_ratio", bound, Origin::Search)
    }

    /// By hand: 1.2 where 1.5 is asked is a fifth short, and counts 0.2/1.2 = 1/6; 90 where 60 is
    /// allowed is a half over, and counts 1/3; against 0 the unit itself is the scale.
    #[test]
    fn analytic_relative_misses() {
        assert_relative_eq!(limit(Bound::Least(1.5)).miss(Some(1.2)), 1.0 / 6.0, epsilon = 1e-12);
        assert_relative_eq!(limit(Bound::Most(60.0)).miss(Some(90.0)), 1.0 / 3.0);
        assert_relative_eq!(limit(Bound::Least(0.0)).miss(Some(-3.0)), 0.75);
        assert_relative_eq!(limit(Bound::Most(-2.0)).miss(Some(-1.0)), 1.0 / 3.0);
        assert_eq!(limit(Bound::Most(1.0)).miss(Some(f64::INFINITY)), 1.0);
        assert_eq!(limit(Bound::Most(1.0)).miss(None), 1.0);
        assert_eq!(limit(Bound::Most(1.0)).miss(Some(1.0)), 0.0);
        assert_eq!(limit(Bound::Least(1.0)).miss(Some(7.0)), 0.0);
    }

    /// A tenth easier: 1.5 becomes 1.35 from below, −2 becomes −1.8 from above, 0 gives 0.1.
    #[test]
    fn analytic_eased_bounds() {
        assert_relative_eq!(Bound::Least(1.5).eased(0.1).value(), 1.35);
        assert_relative_eq!(Bound::Most(-2.0).eased(0.1).value(), -1.8);
        assert_relative_eq!(Bound::Most(0.0).eased(0.1).value(), 0.1);
        assert_relative_eq!(Bound::Least(1.5).eased(-0.01).value(), 1.515);
    }
}
