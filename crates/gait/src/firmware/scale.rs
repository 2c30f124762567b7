use std::f64::consts::PI;

/// What a table's numbers are in.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Unit {
    /// Degrees.
    Deg,
    /// Hundredths of a degree.
    Cdeg,
    /// Radians.
    Rad,
    /// Pulse lengths, µs.
    Us,
}

/// A unit, and how much of it one count is.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Scale {
    /// What counts are in.
    pub unit: Unit,
    /// One count, in that unit.
    pub resolution: f64,
}

impl Unit {
    /// All of them.
    pub const ALL: [Unit; 4] = [Unit::Deg, Unit::Cdeg, Unit::Rad, Unit::Us];

    /// As files and flags have it.
    pub fn word(self) -> &'static str {
        match self {
            Unit::Deg => "deg",
            Unit::Cdeg => "cdeg",
            Unit::Rad => "rad",
            Unit::Us => "us",
        }
    }

    /// Of angles: how many are a radian; a pulse's angle is its servo's affair.
    pub fn per_rad(self) -> Option<f64> {
        match self {
            Unit::Deg => Some(180.0 / PI),
            Unit::Cdeg => Some(18_000.0 / PI),
            Unit::Rad => Some(1.0),
            Unit::Us => None,
        }
    }

    /// A count that sixteen bits hold over a whole turn.
    pub fn fine_resolution(self) -> f64 {
        match self {
            Unit::Deg => 0.01,
            Unit::Cdeg | Unit::Us => 1.0,
            Unit::Rad => 1e-4,
        }
    }
}

impl Scale {
    /// The finest that sixteen bits hold.
    pub fn fine(unit: Unit) -> Self {
        Self { unit, resolution: unit.fine_resolution() }
    }

    /// The nearest count, halves away from zero; absent where 32 bits don't hold it.
    pub fn count(&self, value: f64) -> Option<i32> {
        let count = (value / self.resolution).round();
        (count.abs() <= f64::from(i32::MAX)).then_some(count as i32)
    }

    /// What a count stands for, in the unit: the number that short decimals read back as.
    pub fn value(&self, count: i32) -> f64 {
        // 7 × 0.01 is 0.07 and a little; 7 / 100 is what reads as 0.07.
        let per_unit = (1.0 / self.resolution).round();
        let divides = (per_unit * self.resolution - 1.0).abs() < 1e-12;
        if divides { f64::from(count) / per_unit } else { f64::from(count) * self.resolution }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// By hand: halves go away from zero, whole hundredths read as such, and a degree is 100 of a
    /// hundredth and π/180 of a radian.
    #[test]
    fn analytic_counts_and_values() {
        let scale = Scale { unit: Unit::Deg, resolution: 0.01 };
        assert_eq!(scale.count(0.125), Some(13));
        assert_eq!(scale.count(-0.125), Some(-13));
        assert_eq!(scale.value(7).to_string(), "0.07");
        assert_eq!(Scale { unit: Unit::Us, resolution: 2.5 }.value(600), 1500.0);
        assert_eq!(scale.count(1e9), None);
        let per_rad = |unit: Unit| unit.per_rad().unwrap();
        assert!((per_rad(Unit::Cdeg) / per_rad(Unit::Deg) - 100.0).abs() < 1e-12);
        assert!((per_rad(Unit::Deg) * std::f64::consts::PI - 180.0).abs() < 1e-12);
    }
}
