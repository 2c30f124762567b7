//! Which servo goes where.

use undulift_chain::{Axis, joint_axes};
use undulift_design::Design;

use crate::SizingError;

/// Servos along one axis, by their places on the shelf.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Split {
    /// Drives the joints in the middle.
    pub middle: usize,
    /// Drives those at both ends.
    pub ends: usize,
    /// How many driven joints at each end; 0 where all have the same servo.
    pub end_joints: usize,
}

impl Split {
    /// The same servo at all joints.
    pub fn uniform(servo: usize) -> Self {
        Self { middle: servo, ends: servo, end_joints: 0 }
    }

    /// Servo of one of the driven joints, counted from the head.
    pub fn servo_of(self, nth: usize, n_driven: usize) -> usize {
        let at_end = nth < self.end_joints || nth + self.end_joints >= n_driven;
        if at_end { self.ends } else { self.middle }
    }

    /// Share of the driven joints that are at the ends.
    pub(crate) fn share_at_ends(self, n_driven: usize) -> f64 {
        2.0 * self.end_joints as f64 / n_driven as f64
    }

    /// Sum over the driven joints of a figure of their servos.
    pub(crate) fn sum(self, n_driven: usize, figure: impl Fn(usize) -> f64) -> f64 {
        (0..n_driven).map(|nth| figure(self.servo_of(nth, n_driven))).sum()
    }

    /// All with one servo, then all with two and at least one joint in the middle.
    pub(crate) fn all(n_servos: usize, n_driven: usize) -> Vec<Self> {
        let mut splits: Vec<Self> = (0..n_servos).map(Self::uniform).collect();
        for end_joints in 1..=n_driven.saturating_sub(1) / 2 {
            for middle in 0..n_servos {
                let others = (0..n_servos).filter(|&ends| ends != middle);
                splits.extend(others.map(|ends| Self { middle, ends, end_joints }));
            }
        }
        splits
    }
}

/// Servos for yaw and for pitch; absent where the design drives no joint so.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Choice {
    /// In the order of [`Axis::BOTH`].
    pub splits: [Option<Split>; 2],
}

impl Choice {
    /// The servo of an axis, by its place on the shelf.
    ///
    /// - `driven`: as [`driven`] gives it
    pub fn servo_of(
        &self,
        driven: &[Vec<usize>; 2],
        joint_idx: usize,
        axis: Axis,
    ) -> Option<usize> {
        let at = usize::from(axis == Axis::Pitch);
        let nth = driven[at].iter().position(|own| *own == joint_idx)?;
        Some(self.splits[at]?.servo_of(nth, driven[at].len()))
    }
}

/// Joints that a design drives with a servo, in yaw and in pitch, from 0 at the head.
///
/// # Errors
///
/// [`SizingError::NoAxes`] and [`SizingError::NothingDriven`].
pub fn driven(design: &Design) -> Result<[Vec<usize>; 2], SizingError> {
    let axes = joint_axes(design.glider.chain.joints());
    if axes.is_empty() {
        return Err(SizingError::NoAxes);
    }
    let of = |axis: Axis| -> Vec<usize> {
        let own = axes.iter().filter(|of| of.axis == axis).map(|of| of.joint_idx);
        own.filter(|&joint_idx| design.servo_names.of(joint_idx, axis).is_some()).collect()
    };
    let driven = Axis::BOTH.map(of);
    if driven.iter().all(Vec::is_empty) { Err(SizingError::NothingDriven) } else { Ok(driven) }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Of seven joints, with two at each end: ends, ends, three of the middle, ends, ends.
    #[test]
    fn analytic_ends_lie_symmetric_about_the_middle() {
        let split = Split { middle: 0, ends: 1, end_joints: 2 };
        let servos: Vec<usize> = (0..7).map(|nth| split.servo_of(nth, 7)).collect();
        assert_eq!(servos, [1, 1, 0, 0, 0, 1, 1]);
        assert_eq!(split.sum(7, |servo| [10.0, 1.0][servo]), 34.0);
    }

    /// Three servos on seven joints: 3 alone, and 3·2 ordered pairs for 1, 2 and 3 at each end.
    #[test]
    fn analytic_number_of_splits() {
        assert_eq!(Split::all(3, 7).len(), 3 + 6 * 3);
        assert_eq!(Split::all(3, 2).len(), 3);
        assert_eq!(Split::all(1, 7).len(), 1);
        let always_a_middle = |split: &Split| 2 * split.end_joints < 7;
        assert!(Split::all(3, 7).iter().all(always_a_middle));
    }
}
