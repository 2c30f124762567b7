//! Ranges that numbers may have.

use std::fmt;

/// Numbers from a lowest to a highest.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Range {
    low: f64,
    high: f64,
    low_belongs: bool,
}

impl Range {
    /// Both ends belong to it.
    pub(crate) const fn from_to(low: f64, high: f64) -> Self {
        Self { low, high, low_belongs: true }
    }

    /// 0 doesn't belong to it.
    pub(crate) const fn above_0_to(high: f64) -> Self {
        Self { low: 0.0, high, low_belongs: false }
    }

    /// As far below 0 as above.
    pub(crate) const fn within(most: f64) -> Self {
        Self::from_to(-most, most)
    }

    /// The nearest number that belongs to it; what isn't a number stays so.
    pub(crate) fn clamped(&self, value: f64) -> f64 {
        // Where 0 doesn't belong to it, the smallest number that does would be of no use.
        let low = if self.low_belongs { self.low } else { self.low + self.high * 1e-9 };
        value.clamp(low, self.high)
    }

    pub(crate) fn contains(&self, value: f64) -> bool {
        (value > self.low || self.low_belongs && value == self.low) && value <= self.high
    }
}

impl fmt::Display for Range {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        if self.low_belongs {
            write!(f, "from {} to {}", self.low, self.high)
        } else {
            write!(f, "above {} and at most {}", self.low, self.high)
        }
    }
}
