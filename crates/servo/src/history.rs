//! Histories of torque and motion: what a budget is reckoned from.

use crate::figures::Figures;
use crate::{Servo, ServoError};

/// Times and what every axis does at them.
#[derive(Debug, Clone, PartialEq)]
pub struct Histories {
    /// Not falling, s; two that are equal make a step.
    pub times_s: Vec<f64>,
    /// Those that a budget is wanted for.
    pub axes: Vec<AxisHistory>,
}

/// What one axis does; columns as long as the times.
#[derive(Debug, Clone, PartialEq)]
pub struct AxisHistory {
    /// Which.
    pub place: Place,
    /// Its servo's place in the list of servos; absent where it has none.
    pub servo_idx: Option<usize>,
    /// Rotor inertia left out, N·m.
    pub joint_torque_nm: Vec<f64>,
    /// rad/s.
    pub rate_rad_s: Vec<f64>,
    /// rad/s².
    pub acceleration_rad_s2: Vec<f64>,
}

/// A joint's axis.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Place {
    /// From 1 at the head.
    pub joint: usize,
    /// "yaw" or "pitch".
    pub axis: &'static str,
}

/// An instant.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct When {
    /// By the history's clock, s.
    pub at_s: f64,
    /// In which of the drops, from 1.
    pub drop: u32,
    /// Its place in the history, from 0.
    pub instant_idx: usize,
}

impl Histories {
    /// Refuses columns that don't fit each other, and numbers beyond all machines.
    ///
    /// # Errors
    ///
    /// [`ServoError::NoInstant`], [`ServoError::TimeFalls`], [`ServoError::Length`],
    /// [`ServoError::NoSuchServo`] or [`ServoError::Figure`], the first that is met.
    pub(crate) fn check(&self, n_servos: usize) -> Result<(), ServoError> {
        if self.times_s.is_empty() {
            return Err(ServoError::NoInstant);
        }
        for &time_s in &self.times_s {
            Figures { of: "history" }.within("time_s", time_s, [-1e7, 1e7])?;
        }
        if let Some(row) = self.times_s.windows(2).position(|pair| pair[1] < pair[0]) {
            return Err(ServoError::TimeFalls { row: row + 2, time_s: self.times_s[row + 1] });
        }
        self.axes.iter().try_for_each(|axis| axis.check(self.times_s.len(), n_servos))
    }
}

impl AxisHistory {
    fn check(&self, expected: usize, n_servos: usize) -> Result<(), ServoError> {
        let Place { joint, axis } = self.place;
        let name = format!("joint {joint} {axis}");
        let columns: [(&'static str, &[f64], f64); 3] = [
            ("joint_torque_nm", &self.joint_torque_nm, 1e6),
            ("rate_rad_s", &self.rate_rad_s, 1e6),
            ("acceleration_rad_s2", &self.acceleration_rad_s2, 1e9),
        ];
        for (column, values, most) in columns {
            if values.len() != expected {
                let found = values.len();
                return Err(ServoError::Length { joint, axis, column, found, expected });
            }
            for &value in values {
                Figures { of: &name }.within(column, value, [-most, most])?;
            }
        }
        match self.servo_idx {
            Some(servo_idx) if servo_idx >= n_servos => {
                Err(ServoError::NoSuchServo { joint, axis, servo_idx, servos: n_servos })
            }
            _ => Ok(()),
        }
    }

    /// Joint torque + rotor inertia · acceleration, N·m; the joint's own without a servo.
    pub(crate) fn servo_torques_nm(&self, servo: Option<&Servo>) -> Vec<f64> {
        let inertia_kg_m2 = servo.map_or(0.0, |servo| servo.rotor_inertia_at_output_kg_m2);
        let both = self.joint_torque_nm.iter().zip(&self.acceleration_rad_s2);
        both.map(|(torque_nm, acceleration)| torque_nm + inertia_kg_m2 * acceleration).collect()
    }
}

/// Root of the mean square of values that go straight from each to the next; at one instant the
/// value's size.
pub(crate) fn rms(times_s: &[f64], values: &[f64]) -> f64 {
    let length_s = times_s[times_s.len() - 1] - times_s[0];
    if length_s <= 0.0 {
        return values.iter().fold(0.0, |most: f64, value| most.max(value.abs()));
    }
    let pairs = times_s.windows(2).zip(values.windows(2));
    let squares: f64 =
        pairs.map(|(t, v)| (t[1] - t[0]) * crate::heat::mean_square(v[0], v[1])).sum();
    (squares / length_s).sqrt()
}

#[cfg(test)]
mod tests {
    use approx::assert_relative_eq;

    use super::*;

    /// 2 N·m for 0.2 s and 0.5 N·m for 0.8 s: √(4·0.2 + 0.25·0.8) = 1.
    #[test]
    fn analytic_rms_of_two_levels() {
        assert_relative_eq!(rms(&[0.0, 0.2, 0.2, 1.0], &[2.0, 2.0, 0.5, 0.5]), 1.0);
    }

    /// A straight rise from 0 to 3: 3/√3.
    #[test]
    fn analytic_rms_of_a_ramp_and_of_an_instant() {
        assert_relative_eq!(rms(&[1.0, 2.0, 4.0], &[0.0, 1.0, 3.0]), 3_f64.sqrt());
        assert_eq!(rms(&[1.0], &[-3.0]), 3.0);
    }
}
