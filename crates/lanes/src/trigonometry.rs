use wide::f64x4;

use crate::{LANES, round};

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

/// 2π in two parts, the first exact when multiplied by a small whole number.
const TURN: [f64; 2] = [6.283_185_243_606_567, 6.357_301_909_411_278e-8];

/// Sine and cosine by a quarter of the angle and two doublings.
///
/// The library's own rounds by way of integers, which costs three times as much without newer
/// instructions; a joint's angle is never far from a turn.
#[inline(always)]
pub fn sin_cos(angle_rad: f64x4) -> (f64x4, f64x4) {
    let turns = round(angle_rad * f64x4::splat(1.0 / std::f64::consts::TAU));
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
