//! The number type of the inner loop.
//!
//! The inner loop is written for one number or four side by side: today the four are neighbouring
//! segments of one chain.

use std::ops::{Add, Mul, Neg, Sub};

use nalgebra::Vector3;
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
/// Within 2e-15 of the true values for the angles that joints take (tested to ±50 rad): each of two
/// doublings may double the rounding of the last digit.
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
        let (s, c) = sin_cos(f64x4::new([angle[0], angle[1], angle[2], angle[3]]));
        sine.copy_from_slice(s.as_array_ref());
        cosine.copy_from_slice(c.as_array_ref());
    }
    if !angle_rest.is_empty() {
        let mut last = [0.0; LANES];
        last[..angle_rest.len()].copy_from_slice(angle_rest);
        let (s, c) = sin_cos(f64x4::new(last));
        sine_rest.copy_from_slice(&s.as_array_ref()[..angle_rest.len()]);
        cosine_rest.copy_from_slice(&c.as_array_ref()[..angle_rest.len()]);
    }
}

/// Polynomials for sin y/y − 1 and (cos y − 1 + y²/2)/y⁴ in y², |y| ≤ π/4, highest power first
/// (S. L. Moshier, Cephes Mathematical Library, 1984–2000).
const SINE: [f64; 6] = [
    1.589_623_015_765_465_7e-10,
    -2.505_074_776_285_780_7e-8,
    2.755_731_362_138_572_5e-6,
    -1.984_126_982_958_954e-4,
    8.333_333_333_322_118e-3,
    -1.666_666_666_666_663e-1,
];
const COSINE: [f64; 6] = [
    -1.135_853_652_138_768_2e-11,
    2.087_570_084_197_473e-9,
    -2.755_731_417_929_674e-7,
    2.480_158_728_885_170_5e-5,
    -1.388_888_888_887_305_6e-3,
    4.166_666_666_666_659e-2,
];

/// Adding it leaves no room for a fraction, so adding and taking it away rounds to a whole number.
const ROUNDING: f64 = 6_755_399_441_055_744.0;
/// 2π in two parts, the first exact when multiplied by a small whole number.
const TURN: [f64; 2] = [6.283_185_243_606_567, 6.357_301_909_411_278e-8];

/// Sine and cosine by a quarter of the angle and two doublings.
///
/// The library's own rounds by way of integers, which costs three times as much without newer
/// instructions; a joint's angle is never far from a turn.
#[inline(always)]
pub fn sin_cos(angle_rad: f64x4) -> (f64x4, f64x4) {
    let rounding = f64x4::splat(ROUNDING);
    let turns = (angle_rad * f64x4::splat(1.0 / std::f64::consts::TAU) + rounding) - rounding;
    let within = angle_rad - turns * f64x4::splat(TURN[0]) - turns * f64x4::splat(TURN[1]);
    let y = within * f64x4::splat(0.25);
    let square = y * y;
    let (one, two) = (f64x4::splat(1.0), f64x4::splat(2.0));
    let sine = y + y * square * polynomial(square, &SINE);
    let cosine = one - square * f64x4::splat(0.5) + square * square * polynomial(square, &COSINE);
    let (half_sine, half_cosine) = (two * sine * cosine, one - two * sine * sine);
    (two * half_sine * half_cosine, one - two * half_sine * half_sine)
}

/// Highest power first.
#[inline(always)]
pub fn polynomial<const N: usize>(x: f64x4, coefficients: &[f64; N]) -> f64x4 {
    let mut sum = f64x4::splat(coefficients[0]);
    for &coefficient in &coefficients[1..] {
        sum = sum * x + f64x4::splat(coefficient);
    }
    sum
}
/// Three numbers in space.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Triple<T> {
    /// Along x.
    pub x: T,
    /// Along y.
    pub y: T,
    /// Along z.
    pub z: T,
}

impl<T: Number> Triple<T> {
    /// From its parts.
    #[inline(always)]
    pub fn new(x: T, y: T, z: T) -> Self {
        Self { x, y, z }
    }

    /// 0 in every direction.
    #[inline(always)]
    pub fn zero() -> Self {
        Self::new(T::splat(0.0), T::splat(0.0), T::splat(0.0))
    }

    /// Sum of products.
    #[inline(always)]
    pub fn dot(self, other: Self) -> T {
        self.x * other.x + self.y * other.y + self.z * other.z
    }

    /// Right-handed.
    #[inline(always)]
    pub fn cross(self, other: Self) -> Self {
        Self::new(
            self.y * other.z - self.z * other.y,
            self.z * other.x - self.x * other.z,
            self.x * other.y - self.y * other.x,
        )
    }

    /// Each part times a factor.
    #[inline(always)]
    pub fn times(self, factor: T) -> Self {
        Self::new(self.x * factor, self.y * factor, self.z * factor)
    }
}

impl Triple<f64> {
    /// The same in every lane.
    #[inline(always)]
    pub fn in_lanes(self) -> Triple<f64x4> {
        Triple { x: f64x4::splat(self.x), y: f64x4::splat(self.y), z: f64x4::splat(self.z) }
    }
}

impl Triple<f64x4> {
    /// Sum over the lanes.
    #[inline(always)]
    pub fn over_lanes(self) -> Triple<f64> {
        Triple { x: self.x.reduce_add(), y: self.y.reduce_add(), z: self.z.reduce_add() }
    }

    /// Puts one lane.
    #[inline(always)]
    pub fn set_lane(&mut self, lane: usize, value: Triple<f64>) {
        self.x.as_array_mut()[lane] = value.x;
        self.y.as_array_mut()[lane] = value.y;
        self.z.as_array_mut()[lane] = value.z;
    }

    /// Takes one lane.
    #[inline(always)]
    pub fn lane(&self, lane: usize) -> Triple<f64> {
        Triple {
            x: self.x.as_array_ref()[lane],
            y: self.y.as_array_ref()[lane],
            z: self.z.as_array_ref()[lane],
        }
    }
}

impl<T: Number> Add for Triple<T> {
    type Output = Self;
    #[inline(always)]
    fn add(self, other: Self) -> Self {
        Self::new(self.x + other.x, self.y + other.y, self.z + other.z)
    }
}

impl<T: Number> Sub for Triple<T> {
    type Output = Self;
    #[inline(always)]
    fn sub(self, other: Self) -> Self {
        Self::new(self.x - other.x, self.y - other.y, self.z - other.z)
    }
}

impl From<Vector3<f64>> for Triple<f64> {
    fn from(v: Vector3<f64>) -> Self {
        Self { x: v.x, y: v.y, z: v.z }
    }
}

impl From<Triple<f64>> for Vector3<f64> {
    fn from(t: Triple<f64>) -> Self {
        Vector3::new(t.x, t.y, t.z)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Against the platform's mathematical library.
    #[test]
    fn twin_sines_and_cosines_of_joint_angles() {
        let angles: Vec<f64> = (-50_001..=50_001).map(|k| f64::from(k) * 1e-3).collect();
        let (mut sines, mut cosines) = (vec![0.0; angles.len()], vec![0.0; angles.len()]);
        sin_cos_all(&angles, &mut sines, &mut cosines);
        for ((angle, sine), cosine) in angles.iter().zip(&sines).zip(&cosines) {
            assert!((sine - angle.sin()).abs() < 2e-15, "sin {angle}: {sine}");
            assert!((cosine - angle.cos()).abs() < 2e-15, "cos {angle}: {cosine}");
        }
    }
}
