//! Forces in the joints of a chain whose joint motion is known.

use nalgebra::{Matrix3, Vector3};
use undulift_chain::{Axis, AxisOf, Chain, Inertial, joint_axes};
use undulift_lanes::sin_cos_all;

/// Joint motion at one instant, listed by axis: yaw axes from the head, then pitch axes.
#[derive(Debug, Clone, Copy)]
pub struct JointMotion<'a> {
    /// rad.
    pub angles_rad: &'a [f64],
    /// rad/s.
    pub rates_rad_s: &'a [f64],
    /// rad/s².
    pub accelerations_rad_s2: &'a [f64],
}

/// Force and moment on a segment from outside; root axes, moment about the middle of its front end.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Outside {
    /// N.
    pub force_n: Vector3<f64>,
    /// N·m.
    pub moment_nm: Vector3<f64>,
}

/// What holds the chain.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Held {
    /// Nothing: it flies, its head segment turning at this rate (root axes, rad/s).
    Free {
        /// Angular velocity of the head segment.
        head_rad_s: Vector3<f64>,
    },
    /// A segment, counted from 0, which stands still.
    Clamped {
        /// Which.
        segment_idx: usize,
    },
}

/// What goes through one joint, as the segment ahead acts on the segment behind; root axes.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Wrench {
    /// N.
    pub force_n: Vector3<f64>,
    /// About the hinge, N·m.
    pub moment_nm: Vector3<f64>,
}

/// Loads in all joints.
#[derive(Debug, Clone, PartialEq)]
pub struct JointLoads {
    /// Torque about each axis, by axis, N·m: positive along the positive angle, rotor inertia left
    /// out.
    pub torques_nm: Vec<f64>,
    /// What goes through each joint, torque included: shape (n − 1).
    pub joints: Vec<Wrench>,
    /// What the hinge itself must carry, torque about its axes taken off: shape (n − 1).
    pub hinges: Vec<Wrench>,
    /// What is left at the nose of a free chain, which should be nothing, or what the clamp bears,
    /// about the clamped segment's front end.
    pub left: Wrench,
    /// Acceleration of the head segment's front end, m/s²; 0 if clamped.
    pub head_acceleration_m_s2: Vector3<f64>,
    /// Angular acceleration of the head segment, rad/s²; 0 if clamped.
    pub head_angular_acceleration_rad_s2: Vector3<f64>,
}

/// How one axis stands and moves; one that a joint lacks stands at 0.
#[derive(Debug, Clone, Copy)]
struct AxisMotion {
    sine: f64,
    cosine: f64,
    rate_rad_s: f64,
    acceleration_rad_s2: f64,
}

/// One segment's frame and motion in root axes.
#[derive(Debug, Clone, Copy)]
struct Link {
    rotation: Matrix3<f64>,
    front_m: Vector3<f64>,
    spin_rad_s: Vector3<f64>,
    angular_acceleration: Vector3<f64>,
    front_acceleration: Vector3<f64>,
    /// Axes of the joint ahead of this segment, along positive angles.
    yaw_axis: Vector3<f64>,
    pitch_axis: Vector3<f64>,
    /// From the front end to the centre of mass, and moments of inertia about that.
    arm_m: Vector3<f64>,
    inertia_kg_m2: Matrix3<f64>,
}

/// What a segment needs from outside and from its joints.
#[derive(Debug, Clone, Copy)]
struct Need {
    force_n: Vector3<f64>,
    /// About the root frame's origin, N·m.
    moment_nm: Vector3<f64>,
}

/// Loads in the joints of a chain that flies freely or is clamped, with given joint motion.
///
/// Recursive Newton–Euler from tail to head. A free chain's head accelerates so that nothing is left
/// at the nose: the composite body's inertia about its centre of mass takes what a head held without
/// acceleration would leave over.
///
/// - `gravity_m_s2`: root axes
/// - `outside`: on each segment, shape (n)
///
/// # Source
///
/// Featherstone, *Rigid Body Dynamics Algorithms*, 2008, ch. 5, 6 and 9.
pub fn joint_loads(
    chain: &Chain,
    motion: JointMotion<'_>,
    held: Held,
    gravity_m_s2: Vector3<f64>,
    outside: &[Outside],
) -> JointLoads {
    assert_eq!(outside.len(), chain.n_segments(), "one load for each segment");
    let axes = joint_axes(chain.joints());
    let head_rad_s = match held {
        Held::Free { head_rad_s } => head_rad_s,
        Held::Clamped { .. } => Vector3::zeros(),
    };
    let mut links = links(chain, &axes, motion, head_rad_s);
    let needs = needs(chain, &links, gravity_m_s2, outside);
    let Held::Clamped { segment_idx } = held else {
        let [linear, angular] = head_accelerations(chain, &links, &needs);
        links.iter_mut().for_each(|link| link.accelerate(linear, angular));
        let needs = self::needs(chain, &links, gravity_m_s2, outside);
        let mut loads = passed_down(chain, &axes, &links, &needs, 0);
        loads.head_acceleration_m_s2 = linear;
        loads.head_angular_acceleration_rad_s2 = angular;
        return loads;
    };
    passed_down(chain, &axes, &links, &needs, segment_idx)
}

/// Goes down the chain from a head that doesn't accelerate: frames, angular velocities and
/// accelerations.
fn links(
    chain: &Chain,
    axes: &[AxisOf],
    motion: JointMotion<'_>,
    head_rad_s: Vector3<f64>,
) -> Vec<Link> {
    let n = chain.n_segments();
    // Of each joint's two axes, 0 where there is none.
    let mut moves = vec![[AxisMotion::NONE; 2]; n - 1];
    let n_axes = axes.len();
    let (mut sines, mut cosines) = (vec![0.0; n_axes], vec![0.0; n_axes]);
    sin_cos_all(&motion.angles_rad[..n_axes], &mut sines, &mut cosines);
    for (k, of) in axes.iter().enumerate() {
        let which = if of.axis == Axis::Yaw { 0 } else { 1 };
        moves[of.joint_idx][which] = AxisMotion {
            sine: sines[k],
            cosine: cosines[k],
            rate_rad_s: motion.rates_rad_s[k],
            acceleration_rad_s2: motion.accelerations_rad_s2[k],
        };
    }
    let mut link = Link {
        rotation: Matrix3::identity(),
        front_m: Vector3::zeros(),
        spin_rad_s: head_rad_s,
        angular_acceleration: Vector3::zeros(),
        front_acceleration: Vector3::zeros(),
        yaw_axis: Vector3::zeros(),
        pitch_axis: Vector3::zeros(),
        arm_m: Vector3::zeros(),
        inertia_kg_m2: Matrix3::zeros(),
    };
    let mut links = vec![link.loaded(&chain.inertials()[0])];
    let behind = chain.segments().iter().zip(moves).zip(&chain.inertials()[1..]);
    for ((segment, [yaw, pitch]), inertial) in behind {
        link = link.next(segment.length_m, yaw, pitch);
        links.push(link.loaded(inertial));
    }
    links
}

impl AxisMotion {
    const NONE: Self = Self { sine: 0.0, cosine: 1.0, rate_rad_s: 0.0, acceleration_rad_s2: 0.0 };
}

impl Link {
    /// The segment behind, from what the joint's axes do.
    fn next(&self, length_m: f64, yaw: AxisMotion, pitch: AxisMotion) -> Self {
        let to_rear_m = self.rotation.column(0) * -length_m;
        let mut next = *self;
        next.front_m += to_rear_m;
        next.front_acceleration = self.acceleration_at(to_rear_m);
        let [mut x, mut y, mut z] = [0, 1, 2].map(|k| self.rotation.column(k).into_owned());
        next.yaw_axis = z;
        next.turn(z, yaw);
        (x, y) = (x * yaw.cosine + y * yaw.sine, y * yaw.cosine - x * yaw.sine);
        // Positive pitch turns about −y, so that the nose comes up.
        next.pitch_axis = -y;
        next.turn(-y, pitch);
        (x, z) = (x * pitch.cosine + z * pitch.sine, z * pitch.cosine - x * pitch.sine);
        next.rotation = Matrix3::from_columns(&[x, y, z]);
        next
    }

    /// With its mass.
    fn loaded(&self, inertial: &Inertial) -> Self {
        let turned = self.rotation * inertial.inertia_kg_m2 * self.rotation.transpose();
        Self { arm_m: self.rotation * inertial.centre_m, inertia_kg_m2: turned, ..*self }
    }

    /// Adds a turn about an axis that moves with what is ahead of it.
    fn turn(&mut self, axis: Vector3<f64>, motion: AxisMotion) {
        let turning = axis * motion.rate_rad_s;
        self.angular_acceleration +=
            axis * motion.acceleration_rad_s2 + self.spin_rad_s.cross(&turning);
        self.spin_rad_s += turning;
    }

    /// Adds what a head's acceleration carries along.
    fn accelerate(&mut self, linear: Vector3<f64>, angular: Vector3<f64>) {
        self.front_acceleration += linear + angular.cross(&self.front_m);
        self.angular_acceleration += angular;
    }

    /// Acceleration of a point of the segment, given from its front end.
    fn acceleration_at(&self, arm_m: Vector3<f64>) -> Vector3<f64> {
        self.front_acceleration
            + self.angular_acceleration.cross(&arm_m)
            + self.spin_rad_s.cross(&self.spin_rad_s.cross(&arm_m))
    }
}

/// What each segment's motion takes beyond gravity and what acts from outside.
fn needs(
    chain: &Chain,
    links: &[Link],
    gravity_m_s2: Vector3<f64>,
    outside: &[Outside],
) -> Vec<Need> {
    chain
        .inertials()
        .iter()
        .zip(links)
        .zip(outside)
        .map(|((inertial, link), outside)| {
            let Link { arm_m, inertia_kg_m2: inertia, .. } = *link;
            let spin = link.spin_rad_s;
            let inertial_n = inertial.mass_kg * (link.acceleration_at(arm_m) - gravity_m_s2);
            let own_nm = inertia * link.angular_acceleration + spin.cross(&(inertia * spin));
            let centre_m = link.front_m + arm_m;
            Need {
                force_n: inertial_n - outside.force_n,
                moment_nm: own_nm + centre_m.cross(&inertial_n)
                    - outside.moment_nm
                    - link.front_m.cross(&outside.force_n),
            }
        })
        .collect()
}

/// Linear and angular acceleration of the head that leave nothing at the nose.
fn head_accelerations(chain: &Chain, links: &[Link], needs: &[Need]) -> [Vector3<f64>; 2] {
    let mass_kg = chain.mass_kg();
    let centres = || {
        let parts = chain.inertials().iter().zip(links);
        parts.map(|(inertial, link)| (inertial, link, link.front_m + link.arm_m))
    };
    let centre_m: Vector3<f64> =
        centres().map(|(inertial, _, at)| at * inertial.mass_kg).sum::<Vector3<f64>>() / mass_kg;
    let inertia: Matrix3<f64> = centres()
        .map(|(inertial, link, at_m)| {
            let arm_m = at_m - centre_m;
            let far = Matrix3::identity() * arm_m.norm_squared() - arm_m * arm_m.transpose();
            link.inertia_kg_m2 + far * inertial.mass_kg
        })
        .sum();
    let force_n: Vector3<f64> = needs.iter().map(|need| need.force_n).sum();
    let moment_nm: Vector3<f64> = needs.iter().map(|need| need.moment_nm).sum();
    let about_centre_nm = moment_nm - centre_m.cross(&force_n);
    let inverse = inertia.try_inverse().expect("a chain of boxes has inertia about every axis");
    let angular = -(inverse * about_centre_nm);
    let linear = -force_n / mass_kg - angular.cross(&centre_m);
    [linear, angular]
}

/// Sums needs from the ends to the segment that holds the rest.
fn passed_down(
    chain: &Chain,
    axes: &[AxisOf],
    links: &[Link],
    needs: &[Need],
    holder_idx: usize,
) -> JointLoads {
    let n = chain.n_segments();
    let mut joints = vec![Wrench::default(); n - 1];
    let about = |need: Need, point_m: Vector3<f64>| Wrench {
        force_n: need.force_n,
        moment_nm: need.moment_nm - point_m.cross(&need.force_n),
    };
    let add = |sum: Need, need: &Need| Need {
        force_n: sum.force_n + need.force_n,
        moment_nm: sum.moment_nm + need.moment_nm,
    };
    let nothing = Need { force_n: Vector3::zeros(), moment_nm: Vector3::zeros() };
    let mut behind = nothing;
    for joint_idx in (holder_idx..n - 1).rev() {
        behind = add(behind, &needs[joint_idx + 1]);
        joints[joint_idx] = about(behind, links[joint_idx + 1].front_m);
    }
    let mut ahead = nothing;
    for joint_idx in 0..holder_idx {
        ahead = add(ahead, &needs[joint_idx]);
        // What holds the part ahead acts on the part behind the other way around.
        let held = Need { force_n: -ahead.force_n, moment_nm: -ahead.moment_nm };
        joints[joint_idx] = about(held, links[joint_idx + 1].front_m);
    }
    let all = add(add(behind, &ahead), &needs[holder_idx]);
    let axis_of = |of: &AxisOf| match of.axis {
        Axis::Yaw => links[of.joint_idx + 1].yaw_axis,
        Axis::Pitch => links[of.joint_idx + 1].pitch_axis,
    };
    let torques_nm: Vec<f64> =
        axes.iter().map(|of| joints[of.joint_idx].moment_nm.dot(&axis_of(of))).collect();
    let mut hinges = joints.clone();
    for (of, torque_nm) in axes.iter().zip(&torques_nm) {
        hinges[of.joint_idx].moment_nm -= axis_of(of) * *torque_nm;
    }
    JointLoads {
        torques_nm,
        joints,
        hinges,
        left: about(all, links[holder_idx].front_m),
        head_acceleration_m_s2: Vector3::zeros(),
        head_angular_acceleration_rad_s2: Vector3::zeros(),
    }
}
