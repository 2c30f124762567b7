//! How a chain moves when some joints follow a motion and others a torque.

use nalgebra::Vector3;
use undulift_chain::{Axis, Chain, joint_axes};
use undulift_lanes::{LANES, Triple, f64x4};

use crate::centroidal::FourInertials;
use crate::reduced::{Answer, Reduced};
use crate::{Frames, Outside, Symmetric};

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
    inertials: Vec<FourInertials>,
    /// Places of each joint's axes in a list by axis: yaw, pitch.
    joints: Vec<[Option<usize>; 2]>,
    carried: Vec<FourCarried>,
    own: Vec<FourOwn>,
    /// From each segment's front end to the next one's.
    arms_m: Vec<Triple<f64>>,
    turns: Vec<[Option<Turn>; 2]>,
    accelerations_rad_s2: Vec<f64>,
}

/// How four neighbouring segments accelerate while the head and all rates hold.
#[derive(Debug, Clone, Copy, Default)]
struct FourCarried {
    angular_rad_s2: Triple<f64x4>,
    /// Of the front ends.
    linear_m_s2: Triple<f64x4>,
}

/// Inertia and bias of four neighbouring segments alone, at their front ends.
#[derive(Debug, Clone, Copy)]
struct FourOwn {
    inertia_kg_m2: Symmetric<f64x4>,
    moment_kg_m: Triple<f64x4>,
    mass_kg: f64x4,
    moment_nm: Triple<f64x4>,
    force_n: Triple<f64x4>,
}

/// One axis on the way down.
#[derive(Debug, Clone, Copy)]
struct Turn {
    slot: usize,
    axis: Triple<f64>,
    answer: Answer,
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
        let axes = joint_axes(chain.joints());
        let slot = |joint_idx: usize, axis: Axis| {
            axes.iter().position(|of| of.joint_idx == joint_idx && of.axis == axis)
        };
        let n_joints = chain.n_segments() - 1;
        let inertials: Vec<_> = chain.inertials().chunks(LANES).map(FourInertials::new).collect();
        Self {
            carried: vec![FourCarried::default(); inertials.len()],
            own: Vec::with_capacity(inertials.len()),
            inertials,
            joints: (0..n_joints).map(|j| Axis::BOTH.map(|axis| slot(j, axis))).collect(),
            arms_m: Vec::with_capacity(n_joints),
            turns: Vec::with_capacity(n_joints),
            accelerations_rad_s2: vec![0.0; axes.len()],
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
        let head_rad_s = head_rad_s.into();
        let gravity_m_s2 = Triple::from(gravity_m_s2).in_lanes();
        self.go_down(frames, rates_rad_s, head_rad_s);
        self.own.clear();
        let fours = self.inertials.iter().zip(&frames.fours).zip(&self.carried);
        self.own
            .extend(fours.map(|((of, at), carried)| of.own(at, head_rad_s, carried, gravity_m_s2)));
        let mut body = self.alone(self.joints.len(), outside);
        for joint_idx in (0..self.joints.len()).rev() {
            // The pitch axis is the one nearer to the segment behind.
            for turn in self.turns[joint_idx].iter_mut().rev().flatten() {
                turn.answer = body.through(turn.axis, drives[turn.slot]);
            }
            body.move_to(self.arms_m[joint_idx]);
            body.add(&self.alone(joint_idx, outside));
        }
        let (angular, linear) = body.accelerations();
        self.pass_down(angular, linear);
        HeadAcceleration { linear_m_s2: linear.into(), angular_rad_s2: angular.into() }
    }

    /// Arms, axes and what the rates carry along, from the head to the tail.
    fn go_down(&mut self, frames: &Frames, rates_rad_s: &[f64], head_rad_s: Triple<f64>) {
        self.arms_m.clear();
        self.turns.clear();
        let (mut angular, mut linear) = (Triple::zero(), Triple::zero());
        for (joint_idx, slots) in self.joints.iter().enumerate() {
            let (ahead, lane) = (&frames.fours[joint_idx / LANES], joint_idx % LANES);
            let behind_idx = joint_idx + 1;
            let (behind, behind_lane) = (&frames.fours[behind_idx / LANES], behind_idx % LANES);
            let arm_m = behind.front_m.lane(behind_lane) - ahead.front_m.lane(lane);
            let mut spin_rad_s = head_rad_s + ahead.angular_velocity_rad_s.lane(lane);
            self.arms_m.push(arm_m);
            linear = linear + angular.cross(arm_m) + spin_rad_s.cross(spin_rad_s.cross(arm_m));
            let axes = [ahead.z.lane(lane), Triple::zero() - behind.y.lane(behind_lane)];
            let mut turn = |which: usize| {
                let (slot, axis) = (slots[which]?, axes[which]);
                let turning = axis.times(rates_rad_s[slot]);
                angular = angular + spin_rad_s.cross(turning);
                spin_rad_s = spin_rad_s + turning;
                Some(Turn { slot, axis, answer: Answer::Given(0.0) })
            };
            let turns = [turn(0), turn(1)];
            self.turns.push(turns);
            let carried = &mut self.carried[behind_idx / LANES];
            carried.angular_rad_s2.set_lane(behind_lane, angular);
            carried.linear_m_s2.set_lane(behind_lane, linear);
        }
    }

    /// A segment as if nothing hung on it.
    fn alone(&self, segment_idx: usize, outside: &[Outside]) -> Reduced {
        let (own, lane) = (&self.own[segment_idx / LANES], segment_idx % LANES);
        let Outside { force_n, moment_nm } = outside[segment_idx];
        Reduced::of(
            own.inertia_kg_m2.lane(lane),
            own.moment_kg_m.lane(lane),
            own.mass_kg.as_array_ref()[lane],
            own.moment_nm.lane(lane) - moment_nm.into(),
            own.force_n.lane(lane) - force_n.into(),
        )
    }

    /// From the head to the tail: what every axis does. What the rates carry along is in the biases
    /// already, and left out here.
    fn pass_down(&mut self, head_angular: Triple<f64>, head_linear: Triple<f64>) {
        let (mut angular, mut linear) = (head_angular, head_linear);
        for (&arm_m, turns) in self.arms_m.iter().zip(&self.turns) {
            linear = linear + angular.cross(arm_m);
            for turn in turns.iter().flatten() {
                let acceleration = turn.answer.to(angular, linear);
                angular = angular + turn.axis.times(acceleration);
                self.accelerations_rad_s2[turn.slot] = acceleration;
            }
        }
    }
}

impl FourInertials {
    #[inline(always)]
    fn own(
        &self,
        at: &crate::FourFrames,
        head_rad_s: Triple<f64>,
        carried: &FourCarried,
        gravity_m_s2: Triple<f64x4>,
    ) -> FourOwn {
        let arm_m = self.arm_m(at);
        let moment_kg_m = arm_m.times(self.mass_kg);
        let inertia_kg_m2 = self.about_front(at, arm_m).moments_of_inertia();
        let spin = head_rad_s.in_lanes() + at.angular_velocity_rad_s;
        let angular = carried.angular_rad_s2;
        let linear = carried.linear_m_s2 - gravity_m_s2;
        FourOwn {
            inertia_kg_m2,
            moment_kg_m,
            mass_kg: self.mass_kg,
            moment_nm: inertia_kg_m2.times(angular)
                + spin.cross(inertia_kg_m2.times(spin))
                + moment_kg_m.cross(linear),
            force_n: linear.times(self.mass_kg)
                + angular.cross(moment_kg_m)
                + spin.cross(spin.cross(moment_kg_m)),
        }
    }
}
