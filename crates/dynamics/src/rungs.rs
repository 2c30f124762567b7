//! The chain folded about its middle segment: two joints that stand equally far from it, and the
//! segments beyond them, make a rung.
//!
//! The first of two lanes looks toward the head, the second toward the tail. A segment is carried
//! at the hinge nearer to the middle. Along an axis, positive turns what is carried the way that
//! positive angles turn it, seen from the middle. Vectors are in the root frame.

use nalgebra::Vector3;
use undulift_chain::{Axis, AxisOf, Chain, joint_axes};
use undulift_lanes::{Triple, f64x2};

use crate::inertials::{Inertials, Moving};
use crate::reduced::{Known, Reduced};
use crate::{Drive, Frames, Outside};

/// Two joints and the segments that they carry.
#[derive(Debug, Clone)]
pub(crate) struct Rung {
    /// Segments that are carried, and those that carry them. Where a chain of evenly many segments
    /// has no joint left toward the head, the head stands in, without mass.
    carried: [usize; 2],
    carrying: [usize; 2],
    /// Centres from the hinges.
    inertials: Inertials<f64x2>,
    /// 1 where there is a joint.
    exists: f64x2,
    /// From the hinge to the front end, along the segment's x axis.
    to_front_m: f64x2,
    /// Places in a list by axis: of those nearer to the carried segments, then of the others.
    slots: [[Option<usize>; 2]; 2],
}

/// What a rung does while the middle segment doesn't accelerate and all rates hold.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Swing {
    /// From the root frame's origin.
    pub(crate) hinge_m: Triple<f64x2>,
    /// From the hinge before; from the middle segment's front end for the first.
    pub(crate) arm_m: Triple<f64x2>,
    /// In the order of slots.
    pub(crate) axes: [Triple<f64x2>; 2],
    /// Of the carried segments at their hinges.
    pub(crate) moving: Moving<f64x2>,
}

/// Of a chain of so many segments, from the head: which stands in the middle.
pub(crate) fn middle_idx(n_segments: usize) -> usize {
    (n_segments - 1) / 2
}

/// From the middle outward.
pub(crate) fn rungs(chain: &Chain) -> Vec<Rung> {
    let axes = joint_axes(chain.joints());
    let middle_idx = middle_idx(chain.n_segments());
    (0..chain.n_segments() - 1 - middle_idx)
        .map(|rung| Rung::new(chain, &axes, middle_idx, rung))
        .collect()
}

impl Swing {
    /// Where rungs go on from.
    pub(crate) fn middle(front_m: Triple<f64>, moving: &Moving<f64>) -> Self {
        let both = |of: Triple<f64>| Triple::pair([of; 2]);
        Self {
            hinge_m: both(front_m),
            arm_m: Triple::zero(),
            axes: [Triple::zero(); 2],
            moving: Moving {
                spin_rad_s: both(moving.spin_rad_s),
                angular_rad_s2: both(moving.angular_rad_s2),
                linear_m_s2: both(moving.linear_m_s2),
            },
        }
    }
}

impl Rung {
    fn new(chain: &Chain, axes: &[AxisOf], middle_idx: usize, rung: usize) -> Self {
        let ahead = middle_idx.checked_sub(rung + 1);
        let behind = middle_idx + rung + 1;
        let slot = |joint_idx: usize, axis: Axis| {
            axes.iter().position(|of| of.joint_idx == joint_idx && of.axis == axis)
        };
        let of_ahead = |axis| ahead.and_then(|joint_idx| slot(joint_idx, axis));
        let of_behind = |axis| slot(behind - 1, axis);
        let length_m = ahead.map_or(0.0, |idx| chain.segments()[idx].length_m);
        let inertial = |idx: usize| &chain.inertials()[idx];
        let mut inertials = Inertials::new(&[ahead.map(inertial), Some(inertial(behind))]);
        let to_front_m = f64x2::new([length_m, 0.0]);
        inertials.centre_m.x += to_front_m;
        Self {
            carried: [ahead.unwrap_or(0), behind],
            carrying: [middle_idx - rung.min(middle_idx), behind - 1],
            inertials,
            exists: f64x2::new([f64::from(u8::from(ahead.is_some())), 1.0]),
            to_front_m,
            slots: [
                [of_ahead(Axis::Yaw), of_behind(Axis::Pitch)],
                [of_ahead(Axis::Pitch), of_behind(Axis::Yaw)],
            ],
        }
    }

    /// Goes on from the swing of the rung before.
    #[inline(always)]
    pub(crate) fn swing(&self, before: &Swing, frames: &Frames, rates_rad_s: &[f64]) -> Swing {
        let [ahead, behind] = self.carried;
        let [inner_ahead, inner_behind] = self.carrying;
        let hinge_m = Triple::pair([frames.front_m(inner_ahead), frames.front_m(behind)]);
        let outer = Triple::pair([frames.z(ahead), frames.y(behind)]);
        let inner = Triple::pair([frames.y(inner_ahead), frames.z(inner_behind)]);
        let axes = [Triple::zero() - outer, inner];
        let [outer_turn, inner_turn] = [0, 1].map(|which| {
            let rate = |slot: Option<usize>| slot.map_or(0.0, |slot| rates_rad_s[slot]);
            axes[which].times(f64x2::new(self.slots[which].map(rate)))
        });
        let arm_m = hinge_m - before.hinge_m;
        let Moving { spin_rad_s: spin, angular_rad_s2: angular, linear_m_s2 } =
            before.moving.at(arm_m);
        let between = spin + inner_turn;
        let moving = Moving {
            spin_rad_s: between + outer_turn,
            angular_rad_s2: angular + spin.cross(inner_turn) + between.cross(outer_turn),
            linear_m_s2,
        };
        Swing { hinge_m, arm_m, axes, moving }
    }

    /// The carried segments as if nothing hung on them, at their hinges.
    #[inline(always)]
    pub(crate) fn alone(
        &self,
        moving: &Moving<f64x2>,
        frames: &Frames,
        outside: &[Outside],
    ) -> Reduced<f64x2> {
        let [ahead, behind] = self.carried;
        let axes = [
            Triple::pair([frames.x(ahead), frames.x(behind)]),
            Triple::pair([frames.y(ahead), frames.y(behind)]),
            Triple::pair([frames.z(ahead), frames.z(behind)]),
        ];
        let acting = |of: fn(&Outside) -> Vector3<f64>| {
            Triple::pair([ahead, behind].map(|idx| of(&outside[idx]).into())).times(self.exists)
        };
        let force_n = acting(|outside| outside.force_n);
        let to_front_m = axes[0].times(self.to_front_m);
        let moment_nm = acting(|outside| outside.moment_nm) + to_front_m.cross(force_n);
        self.inertials.alone(axes, moving, moment_nm, force_n)
    }

    /// What is known of its axes, in the order of slots.
    #[inline(always)]
    pub(crate) fn known(&self, drives: &[Drive]) -> [Known; 2] {
        self.slots.map(|slots| Known::of(slots.map(|slot| slot.map(|slot| drives[slot]))))
    }

    /// Puts what its axes do, in the order of slots, in their places in a list by axis.
    #[inline(always)]
    pub(crate) fn put(&self, values: [f64x2; 2], by_axis: &mut [f64]) {
        for (slots, value) in self.slots.iter().zip(values) {
            for (slot, value) in slots.iter().zip(value.to_array()) {
                if let Some(slot) = *slot {
                    by_axis[slot] = value;
                }
            }
        }
    }
}
