//! Falling and stopping: closed forms without air, for orders of size.

use undulift_aero::STANDARD_GRAVITY_M_S2;

/// Between something unforeseen and a person's first movement, s: a simple reaction takes 0.2 s, a
/// decision 1.5 s (both published, as for drivers who brake).
pub const REACTION_TIME_S: [f64; 2] = [0.2, 1.5];

/// A catch hangs this many stopping distances high: how far it gives is rarely known better.
const HEIGHT_OVER_STOPPING: f64 = 1.5;

/// Speed after a fall from rest.
pub fn fall_speed_m_s(height_m: f64) -> f64 {
    (2.0 * STANDARD_GRAVITY_M_S2 * height_m).sqrt()
}

/// Time that a fall from rest takes.
pub fn fall_time_s(height_m: f64) -> f64 {
    (2.0 * height_m / STANDARD_GRAVITY_M_S2).sqrt()
}

/// Mean force of a stop over weight, for what comes straight down and is held by the catch after.
///
/// Peaks are higher, twice as high where the catch is a spring.
///
/// - `speed_m_s`: downward, where the stop begins
/// - returns infinity where nothing gives way
pub fn mean_load_factor(speed_m_s: f64, stopping_m: f64) -> f64 {
    1.0 + speed_m_s * speed_m_s / (2.0 * STANDARD_GRAVITY_M_S2 * stopping_m)
}

/// Height that a net must hang at, so that what it stops doesn't reach the floor.
///
/// - `stopping_m`: way that it is thought to give
/// - `thickness_m`: of the body
pub fn catch_height_needed_m(stopping_m: f64, thickness_m: f64) -> f64 {
    HEIGHT_OVER_STOPPING * stopping_m + thickness_m
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// v = √(2gh), g = 9.806 65 m/s², by hand for 1, 3, 6 and 10 m; energy a kilogram is gh.
    #[test]
    fn analytic_speed_after_a_fall() {
        let rows = [(1.0, 4.43, 9.8), (3.0, 7.67, 29.4), (6.0, 10.85, 58.8), (10.0, 14.00, 98.1)];
        for (height_m, speed_m_s, energy_j_kg) in rows {
            let speed = fall_speed_m_s(height_m);
            assert_relative_eq!(speed, speed_m_s, epsilon = 0.005);
            assert_relative_eq!(0.5 * speed * speed, energy_j_kg, epsilon = 0.05);
            assert_relative_eq!(speed, STANDARD_GRAVITY_M_S2 * fall_time_s(height_m));
        }
    }

    /// Work against weight and catch: m·g·(h + d) = F·d, so F/(m·g) = 1 + h/d; from 3 m over 0.05,
    /// 0.3 and 1 m: 61, 11 and 4.
    #[test]
    fn analytic_mean_load_of_a_stop() {
        for (stopping_m, weights) in [(0.05, 61.0), (0.3, 11.0), (1.0, 4.0)] {
            let found = mean_load_factor(fall_speed_m_s(3.0), stopping_m);
            assert_relative_eq!(found, weights, max_relative = 1e-12);
        }
        assert!(mean_load_factor(3.0, 0.0).is_infinite());
    }
}
