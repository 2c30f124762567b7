//! How a chain moves when some joints follow a motion and others a torque.
//!
//! Any segment of a free chain may carry the others. The middle one does, so that what hangs on it
//! toward the head and toward the tail is worked out side by side.

use nalgebra::Vector3;
use undulift_chain::{Chain, joint_axes};
use undulift_lanes::{Triple, f64x2};

use crate::inertials::{Inertials, Moving};
use crate::reduced::{Answer, Reduced};
use crate::rungs::{Rung, Swing, middle_idx, rungs};
use crate::{Frames, Outside};

/// What is known of one axis.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Drive {
    /// It accelerates like this, rad/s², whatever torque that takes.
    Motion(f64),
    /// It is turned with this torque.
    Torque {
        /// N·m, positive along the positive angle.
        torque_nm: f64,
        /// Inertia of the rotor as felt at the joint, kg·m²; it adds to the chain's.
        rotor_kg_m2: f64,
    },
}

/// A chain laid out for articulated-body passes, with the room for one.
///
/// Every list by axis has yaw axes from the head, then pitch axes from the head. Vectors are in the
/// root frame.
#[derive(Debug, Clone)]
pub struct Articulated {
    middle_idx: usize,
    /// Of the middle segment, centre from its front end.
    middle: Inertials<f64>,
    /// From the middle outward, as all lists by rung.
    rungs: Vec<Rung>,
    swings: Vec<Swing>,
    /// The last rung first.
    answers: Vec<[Answer; 2]>,
    accelerations_rad_s2: Vec<f64>,
}

/// How the chain accelerates.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct HeadAcceleration {
    /// Of the head segment's front end, m/s².
    pub linear_m_s2: Vector3<f64>,
    /// rad/s².
    pub angular_rad_s2: Vector3<f64>,
}

impl Articulated {
    /// Lays out a chain.
    pub fn new(chain: &Chain) -> Self {
        let middle_idx = middle_idx(chain.n_segments());
        let rungs = rungs(chain);
        Self {
            middle_idx,
            middle: Inertials::new(&[Some(&chain.inertials()[middle_idx])]),
            swings: Vec::with_capacity(rungs.len()),
            answers: Vec::with_capacity(rungs.len()),
            rungs,
            accelerations_rad_s2: vec![0.0; joint_axes(chain.joints()).len()],
        }
    }

    /// Accelerations of all axes by axis, as the last [`Articulated::solve`] found them, rad/s².
    pub fn accelerations_rad_s2(&self) -> &[f64] {
        &self.accelerations_rad_s2
    }

    /// Solves for the accelerations of a free chain.
    ///
    /// - `frames`: where the segments are and how they turn while the head stands still
    /// - `rates_rad_s`, `drives`: by axis
    /// - `head_rad_s`: angular velocity of the head segment
    /// - `gravity_m_s2`: root axes
    /// - `outside`: on each segment, about the middle of its front end, shape (n)
    ///
    /// # Source
    ///
    /// Featherstone, *Rigid Body Dynamics Algorithms*, 2008, ch. 7 and 9 (hybrid dynamics).
    pub fn solve(
        &mut self,
        frames: &Frames,
        rates_rad_s: &[f64],
        drives: &[Drive],
        head_rad_s: Vector3<f64>,
        gravity_m_s2: Vector3<f64>,
        outside: &[Outside],
    ) -> HeadAcceleration {
        let middle = Moving {
            spin_rad_s: frames.angular_velocity_rad_s(self.middle_idx) + head_rad_s.into(),
            angular_rad_s2: Triple::zero(),
            // All fall alike, so that weight is felt as rising is.
            linear_m_s2: Triple::zero() - gravity_m_s2.into(),
        };
        self.swing_out(frames, rates_rad_s, &middle);
        let hanging = self.hang_in(frames, drives, outside);
        let mut whole = self.middle.alone(
            frames.axes(self.middle_idx),
            &middle,
            outside[self.middle_idx].moment_nm.into(),
            outside[self.middle_idx].force_n.into(),
        );
        whole.add(&hanging.lane(0));
        whole.add(&hanging.lane(1));
        let (angular, linear) = whole.accelerations();
        let beyond = self.answer_out(angular, linear);
        let head = self.head(beyond, &middle);
        HeadAcceleration {
            linear_m_s2: Vector3::from(head.linear_m_s2) + gravity_m_s2,
            angular_rad_s2: head.angular_rad_s2.into(),
        }
    }

    /// From the middle outward: hinges, axes and what the rates carry along.
    fn swing_out(&mut self, frames: &Frames, rates_rad_s: &[f64], middle: &Moving<f64>) {
        self.swings.clear();
        let mut swing = Swing::middle(frames.front_m(self.middle_idx), middle);
        for rung in &self.rungs {
            swing = rung.swing(&swing, frames, rates_rad_s);
            self.swings.push(swing);
        }
    }

    /// From both ends inward: what hangs on the middle segment, at its front end.
    fn hang_in(
        &mut self,
        frames: &Frames,
        drives: &[Drive],
        outside: &[Outside],
    ) -> Reduced<f64x2> {
        self.answers.clear();
        let mut body = Reduced::zero();
        for (rung, swing) in self.rungs.iter().zip(&self.swings).rev() {
            body.add(&rung.alone(&swing.moving, frames, outside));
            let [outer, inner] = rung.known(drives);
            let outer = body.through(swing.axes[0], outer);
            let inner = body.through(swing.axes[1], inner);
            self.answers.push([outer, inner]);
            body.move_to(swing.arm_m);
        }
        body
    }

    /// From the middle outward: what every axis does. What the rates carry along is in the biases
    /// already, and left out here; returns what the lane of the head ends with.
    fn answer_out(&mut self, angular: Triple<f64>, linear: Triple<f64>) -> [Triple<f64>; 2] {
        let (mut angular, mut linear) = (Triple::pair([angular; 2]), Triple::pair([linear; 2]));
        let mut head = [angular, linear];
        let rungs = self.rungs.iter().zip(&self.swings).zip(self.answers.iter().rev());
        for (idx, ((rung, swing), [outer, inner])) in rungs.enumerate() {
            linear = linear + angular.cross(swing.arm_m);
            let inner = inner.to(angular, linear);
            angular = angular + swing.axes[1].times(inner);
            let outer = outer.to(angular, linear);
            angular = angular + swing.axes[0].times(outer);
            rung.put([outer, inner], &mut self.accelerations_rad_s2);
            if idx < self.middle_idx {
                head = [angular, linear];
            }
        }
        head.map(|triple| triple.lane(0))
    }

    /// The head's front end, given what [`Articulated::answer_out`] ended with there.
    fn head(&self, [angular, linear]: [Triple<f64>; 2], middle: &Moving<f64>) -> Moving<f64> {
        let Some(rung) = self.middle_idx.checked_sub(1) else {
            return Moving {
                angular_rad_s2: angular + middle.angular_rad_s2,
                linear_m_s2: linear + middle.linear_m_s2,
                ..*middle
            };
        };
        let Swing { hinge_m, moving, .. } = self.swings[rung];
        let at_hinge = Moving {
            spin_rad_s: moving.spin_rad_s.lane(0),
            angular_rad_s2: angular + moving.angular_rad_s2.lane(0),
            linear_m_s2: linear + moving.linear_m_s2.lane(0),
        };
        // The root frame's origin is that front end.
        at_hinge.at(Triple::zero() - hinge_m.lane(0))
    }
}
