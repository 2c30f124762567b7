//! The number type of the inner loop.
//!
//! The inner loop is written for one number or four side by side: today the four are neighbouring
//! segments of one chain.

use std::ops::{Add, Mul, Neg, Sub};

use wide::f64x4;

/// Numbers that one vector register holds in the inner loop.
pub const LANES: usize = 4;

/// What the inner loop asks of a number: arithmetic without branches.
pub trait Number:
    Copy + Add<Output = Self> + Sub<Output = Self> + Mul<Output = Self> + Neg<Output = Self>
{
    /// The same value in every lane.
    fn splat(value: f64) -> Self;
}

impl Number for f64 {
    #[inline(always)]
    fn splat(value: f64) -> Self {
        value
    }
}

impl Number for f64x4 {
    #[inline(always)]
    fn splat(value: f64) -> Self {
        f64x4::splat(value)
    }
}

/// Sines and cosines of many angles, four at a time.
///
/// - `angles_rad`, `sines`, `cosines`: same length
#[inline]
pub fn sin_cos_all(angles_rad: &[f64], sines: &mut [f64], cosines: &mut [f64]) {
    let full = angles_rad.len() / LANES * LANES;
    let (angle_fours, angle_rest) = angles_rad.split_at(full);
    let (sine_fours, sine_rest) = sines.split_at_mut(full);
    let (cosine_fours, cosine_rest) = cosines.split_at_mut(full);
    let fours = sine_fours.chunks_exact_mut(LANES).zip(cosine_fours.chunks_exact_mut(LANES));
    for (angle, (sine, cosine)) in angle_fours.chunks_exact(LANES).zip(fours) {
        let (s, c) = f64x4::new([angle[0], angle[1], angle[2], angle[3]]).sin_cos();
        sine.copy_from_slice(s.as_array_ref());
        cosine.copy_from_slice(c.as_array_ref());
    }
    if !angle_rest.is_empty() {
        let mut last = [0.0; LANES];
        last[..angle_rest.len()].copy_from_slice(angle_rest);
        let (s, c) = f64x4::new(last).sin_cos();
        sine_rest.copy_from_slice(&s.as_array_ref()[..angle_rest.len()]);
        cosine_rest.copy_from_slice(&c.as_array_ref()[..angle_rest.len()]);
    }
}
