//! The numbers that a design holds, by key, in the units of its file.

use std::collections::BTreeMap;
use std::fmt;
use std::ops::RangeInclusive;

use crate::key_path::KeyPath;
use crate::range::Range;

/// All numbers that were read, and the defaults of those left out.
pub(crate) type Numbers = BTreeMap<KeyPath, Number>;

/// A number as it was read.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Number {
    pub(crate) value: f64,
    pub(crate) allowed: Allowed,
}

/// Which numbers may stand under a key.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) enum Allowed {
    Real(Range),
    /// Both ends belong to it.
    Whole {
        low: u32,
        high: u32,
    },
}

impl fmt::Display for Allowed {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Real(range) => range.fmt(f),
            Self::Whole { low, high } => write!(f, "from {low} to {high}"),
        }
    }
}

impl Allowed {
    pub(crate) fn whole(range: &RangeInclusive<u32>) -> Self {
        Self::Whole { low: *range.start(), high: *range.end() }
    }

    pub(crate) fn is_whole(&self) -> bool {
        matches!(self, Self::Whole { .. })
    }

    pub(crate) fn contains(&self, value: f64) -> bool {
        match self {
            Self::Real(range) => range.contains(value),
            Self::Whole { low, high } => {
                value.fract() == 0.0 && (f64::from(*low)..=f64::from(*high)).contains(&value)
            }
        }
    }

    /// The nearest number that may stand there; what isn't a number stays so.
    pub(crate) fn clamped(&self, value: f64) -> f64 {
        match self {
            Self::Real(range) => range.clamped(value),
            Self::Whole { low, high } => value.round().clamp(f64::from(*low), f64::from(*high)),
        }
    }
}
