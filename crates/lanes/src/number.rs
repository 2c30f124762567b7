use std::ops::{Add, Mul, Neg, Sub};

use wide::{f64x2, f64x4};

/// Numbers that one vector register holds in the inner loop.
pub const LANES: usize = 4;

/// What the inner loop asks of a number: arithmetic without branches.
pub trait Number:
    Copy + Add<Output = Self> + Sub<Output = Self> + Mul<Output = Self> + Neg<Output = Self>
{
    /// The same value in every lane.
    fn splat(value: f64) -> Self;

    /// Each lane, counted from 0, by itself.
    fn filled(value: impl FnMut(usize) -> f64) -> Self;
}

impl Number for f64 {
    #[inline(always)]
    fn splat(value: f64) -> Self {
        value
    }

    #[inline(always)]
    fn filled(mut value: impl FnMut(usize) -> f64) -> Self {
        value(0)
    }
}

impl Number for f64x2 {
    #[inline(always)]
    fn splat(value: f64) -> Self {
        f64x2::splat(value)
    }

    #[inline(always)]
    fn filled(value: impl FnMut(usize) -> f64) -> Self {
        f64x2::new(std::array::from_fn(value))
    }
}

impl Number for f64x4 {
    #[inline(always)]
    fn splat(value: f64) -> Self {
        f64x4::splat(value)
    }

    #[inline(always)]
    fn filled(value: impl FnMut(usize) -> f64) -> Self {
        f64x4::new(std::array::from_fn(value))
    }
}

/// A register filled from up to [`LANES`] items; lanes without one hold 0.
pub fn lanes<I>(items: &[I], value: impl Fn(&I) -> f64) -> f64x4 {
    f64x4::filled(|lane| items.get(lane).map_or(0.0, &value))
}
