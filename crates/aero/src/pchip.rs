//! Monotone piecewise-cubic interpolation over incidence, continued past broadside by mirror.

use std::f64::consts::FRAC_PI_2;

/// How a coefficient continues past ±90°.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Parity {
    /// C(90° + δ) = −C(90° − δ): lift and moment.
    Odd,
    /// C(90° + δ) = C(90° − δ): drag.
    Even,
}

/// A coefficient over −π/2…π/2, with a slope that never jumps.
#[derive(Debug, Clone, PartialEq)]
pub struct Pchip {
    knots_rad: Vec<f64>,
    values: Vec<f64>,
    slopes: Vec<f64>,
}

impl Pchip {
    /// Slopes by the weighted harmonic mean, so that no interval overshoots its data.
    ///
    /// - `knots_rad`: rising, from −π/2 to π/2; `values`: same length, at least 2
    ///
    /// # Source
    ///
    /// Fritsch & Butland, *A method for constructing local monotone piecewise cubic
    /// interpolants*, SIAM J. Sci. Stat. Comput. 5, 1984.
    pub fn new(knots_rad: Vec<f64>, values: Vec<f64>, parity: Parity) -> Self {
        let n = knots_rad.len();
        assert!(n >= 2 && values.len() == n, "a curve needs two points or more");
        let sign = if parity == Parity::Odd { -1.0 } else { 1.0 };
        let before = (-2.0 * FRAC_PI_2 - knots_rad[1], sign * values[1]);
        let after = (2.0 * FRAC_PI_2 - knots_rad[n - 2], sign * values[n - 2]);
        let point = |k: isize| match k {
            -1 => before,
            k if k as usize == n => after,
            k => (knots_rad[k as usize], values[k as usize]),
        };
        let slopes =
            (0..n as isize).map(|k| harmonic_slope(point(k - 1), point(k), point(k + 1))).collect();
        Self { knots_rad, values, slopes }
    }

    /// Value and slope (per radian) at an incidence in −π/2…π/2.
    pub fn at(&self, alpha_rad: f64) -> (f64, f64) {
        let last = self.knots_rad.len() - 1;
        let k = self.knots_rad.partition_point(|&knot| knot <= alpha_rad).clamp(1, last) - 1;
        let width = self.knots_rad[k + 1] - self.knots_rad[k];
        let f = (alpha_rad - self.knots_rad[k]) / width;
        let [a, b, c, d] = hermite_cubic(
            (self.values[k], self.slopes[k] * width),
            (self.values[k + 1], self.slopes[k + 1] * width),
        );
        (a + f * (b + f * (c + f * d)), (b + f * (2.0 * c + f * 3.0 * d)) / width)
    }
}

fn harmonic_slope(before: (f64, f64), here: (f64, f64), after: (f64, f64)) -> f64 {
    let (width_before, width_after) = (here.0 - before.0, after.0 - here.0);
    let slope_before = (here.1 - before.1) / width_before;
    let slope_after = (after.1 - here.1) / width_after;
    if slope_before * slope_after <= 0.0 {
        return 0.0;
    }
    let weight_before = 2.0 * width_after + width_before;
    let weight_after = width_after + 2.0 * width_before;
    (weight_before + weight_after) / (weight_before / slope_before + weight_after / slope_after)
}

/// Coefficients, constant first, of the cubic over a unit cell with these ends.
///
/// - `start`, `end`: value, and slope times the cell's width
pub(crate) fn hermite_cubic(start: (f64, f64), end: (f64, f64)) -> [f64; 4] {
    let rise = end.0 - start.0;
    [start.0, start.1, 3.0 * rise - 2.0 * start.1 - end.1, start.1 + end.1 - 2.0 * rise]
}
