//! How a chain moves when some joints follow a motion and others a torque.

use nalgebra::{Matrix3, Vector3};
use undulift_chain::{Axis, Chain, joint_axes};

use crate::Outside;

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
    segments: Vec<Body>,
    joints: Vec<[Option<usize>; 2]>,
    links: Vec<Link>,
    bodies: Vec<Reduced>,
    turns: Vec<[Option<Turn>; 2]>,
    accelerations_rad_s2: Vec<f64>,
}

/// A segment's mass, in its own axes.
#[derive(Debug, Clone, Copy)]
struct Body {
    length_m: f64,
    mass_kg: f64,
    centre_m: Vector3<f64>,
    inertia_kg_m2: Matrix3<f64>,
}

/// Where a segment is and how it turns.
#[derive(Debug, Clone, Copy)]
struct Link {
    rotation: Matrix3<f64>,
    front_m: Vector3<f64>,
    spin_rad_s: Vector3<f64>,
}

/// Inertia and bias that a body shows at a point: moment N = A α + B a + n, force F = Bᵀ α + M a + f,
/// for angular acceleration α and acceleration a of that point.
#[derive(Debug, Clone, Copy)]
struct Reduced {
    a: Matrix3<f64>,
    b: Matrix3<f64>,
    m: Matrix3<f64>,
    moment_nm: Vector3<f64>,
    force_n: Vector3<f64>,
}

/// One axis on the way down.
#[derive(Debug, Clone, Copy)]
struct Turn {
    axis: Vector3<f64>,
    /// (ω × axis)·rate: what the turning axis adds to the angular acceleration.
    carried: Vector3<f64>,
    answer: Answer,
}

/// How an axis answers to the acceleration of what carries it.
#[derive(Debug, Clone, Copy)]
enum Answer {
    Given(f64),
    /// (τ' − U·x)/D, with x the angular and linear acceleration.
    Free {
        moment: Vector3<f64>,
        force: Vector3<f64>,
        constant: f64,
        per_inertia: f64,
    },
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
        let bodies = chain.segments().iter().zip(chain.inertials());
        let segments = bodies.map(|(segment, inertial)| Body {
            length_m: segment.length_m,
            mass_kg: inertial.mass_kg,
            centre_m: inertial.centre_m,
            inertia_kg_m2: inertial.inertia_kg_m2,
        });
        let n = chain.n_segments();
        let still = Link {
            rotation: Matrix3::identity(),
            front_m: Vector3::zeros(),
            spin_rad_s: Vector3::zeros(),
        };
        Self {
            segments: segments.collect(),
            joints: (0..n - 1).map(|j| Axis::BOTH.map(|axis| slot(j, axis))).collect(),
            links: vec![still; n],
            bodies: vec![Reduced::nothing(); n],
            turns: vec![[None, None]; n - 1],
            accelerations_rad_s2: vec![0.0; axes.len()],
        }
    }

    /// Accelerations of all axes by axis, as the last [`Articulated::solve`] found them, rad/s².
    pub fn accelerations_rad_s2(&self) -> &[f64] {
        &self.accelerations_rad_s2
    }

    /// Solves for the accelerations of a free chain.
    ///
    /// - `angles_rad`, `rates_rad_s`, `drives`: by axis
    /// - `head_rad_s`: angular velocity of the head segment
    /// - `gravity_m_s2`: root axes
    /// - `outside`: on each segment, about the middle of its front end, shape (n)
    ///
    /// # Source
    ///
    /// Featherstone, *Rigid Body Dynamics Algorithms*, 2008, ch. 7 and 9 (hybrid dynamics).
    pub fn solve(
        &mut self,
        angles_rad: &[f64],
        rates_rad_s: &[f64],
        drives: &[Drive],
        head_rad_s: Vector3<f64>,
        gravity_m_s2: Vector3<f64>,
        outside: &[Outside],
    ) -> HeadAcceleration {
        self.go_down(angles_rad, rates_rad_s, head_rad_s);
        for (idx, link) in self.links.iter().enumerate() {
            self.bodies[idx] = Reduced::of(&self.segments[idx], link, gravity_m_s2, &outside[idx]);
        }
        for joint_idx in (0..self.joints.len()).rev() {
            self.take_up(joint_idx, drives);
        }
        let head = self.bodies[0].accelerations();
        self.pass_down(head);
        HeadAcceleration { linear_m_s2: head.1, angular_rad_s2: head.0 }
    }

    fn go_down(&mut self, angles_rad: &[f64], rates_rad_s: &[f64], head_rad_s: Vector3<f64>) {
        self.links[0].spin_rad_s = head_rad_s;
        for joint_idx in 0..self.joints.len() {
            let ahead = self.links[joint_idx];
            let [mut x, mut y, mut z] = [0, 1, 2].map(|k| ahead.rotation.column(k).into_owned());
            let mut spin_rad_s = ahead.spin_rad_s;
            let front_m = ahead.front_m - x * self.segments[joint_idx].length_m;
            let mut turns = [None, None];
            if let Some(slot) = self.joints[joint_idx][0] {
                turns[0] = Some(Turn::about(z, spin_rad_s, rates_rad_s[slot]));
                spin_rad_s += z * rates_rad_s[slot];
                let (sine, cosine) = angles_rad[slot].sin_cos();
                (x, y) = (x * cosine + y * sine, y * cosine - x * sine);
            }
            if let Some(slot) = self.joints[joint_idx][1] {
                turns[1] = Some(Turn::about(-y, spin_rad_s, rates_rad_s[slot]));
                spin_rad_s -= y * rates_rad_s[slot];
                let (sine, cosine) = angles_rad[slot].sin_cos();
                (x, z) = (x * cosine + z * sine, z * cosine - x * sine);
            }
            self.turns[joint_idx] = turns;
            let rotation = Matrix3::from_columns(&[x, y, z]);
            self.links[joint_idx + 1] = Link { rotation, front_m, spin_rad_s };
        }
    }

    /// Adds what is behind a joint to the segment ahead of it.
    fn take_up(&mut self, joint_idx: usize, drives: &[Drive]) {
        let mut behind = self.bodies[joint_idx + 1];
        // The pitch axis is the one nearer to the segment behind.
        for which in [1, 0] {
            let slot = self.joints[joint_idx][which];
            if let (Some(turn), Some(slot)) = (&mut self.turns[joint_idx][which], slot) {
                turn.answer = behind.through(turn, drives[slot]);
            }
        }
        let ahead = self.links[joint_idx];
        let arm_m = self.links[joint_idx + 1].front_m - ahead.front_m;
        let swing = ahead.spin_rad_s.cross(&ahead.spin_rad_s.cross(&arm_m));
        self.bodies[joint_idx].add(&behind.seen_from(arm_m, swing));
    }

    /// From the head to the tail: what every axis does.
    fn pass_down(&mut self, head: (Vector3<f64>, Vector3<f64>)) {
        let (mut angular, mut linear) = head;
        for joint_idx in 0..self.joints.len() {
            let ahead = self.links[joint_idx];
            let arm_m = self.links[joint_idx + 1].front_m - ahead.front_m;
            linear +=
                angular.cross(&arm_m) + ahead.spin_rad_s.cross(&ahead.spin_rad_s.cross(&arm_m));
            for which in 0..2 {
                let slot = self.joints[joint_idx][which];
                if let (Some(turn), Some(slot)) = (&self.turns[joint_idx][which], slot) {
                    let acceleration = turn.answer.to(angular, linear);
                    angular += turn.carried + turn.axis * acceleration;
                    self.accelerations_rad_s2[slot] = acceleration;
                }
            }
        }
    }
}

impl Turn {
    fn about(axis: Vector3<f64>, spin_rad_s: Vector3<f64>, rate_rad_s: f64) -> Self {
        Self { axis, carried: spin_rad_s.cross(&axis) * rate_rad_s, answer: Answer::Given(0.0) }
    }
}

impl Answer {
    /// Acceleration of the axis, given those of what carries it.
    fn to(&self, angular: Vector3<f64>, linear: Vector3<f64>) -> f64 {
        match *self {
            Self::Given(acceleration) => acceleration,
            Self::Free { moment, force, constant, per_inertia } => {
                (constant - moment.dot(&angular) - force.dot(&linear)) * per_inertia
            }
        }
    }
}

impl Reduced {
    fn nothing() -> Self {
        let (matrix, vector) = (Matrix3::zeros(), Vector3::zeros());
        Self { a: matrix, b: matrix, m: matrix, moment_nm: vector, force_n: vector }
    }

    /// A segment alone, at its front end.
    fn of(body: &Body, link: &Link, gravity_m_s2: Vector3<f64>, outside: &Outside) -> Self {
        let centre_m = link.rotation * body.centre_m;
        let cross = centre_m.cross_matrix();
        let about_centre = link.rotation * body.inertia_kg_m2 * link.rotation.transpose();
        let a = about_centre - cross * cross * body.mass_kg;
        let spin = link.spin_rad_s;
        let weight_n = gravity_m_s2 * body.mass_kg;
        Self {
            a,
            b: cross * body.mass_kg,
            m: Matrix3::identity() * body.mass_kg,
            moment_nm: spin.cross(&(a * spin)) - centre_m.cross(&weight_n) - outside.moment_nm,
            force_n: spin.cross(&spin.cross(&centre_m)) * body.mass_kg - weight_n - outside.force_n,
        }
    }

    /// Becomes what is seen from the other side of an axis; returns how the axis answers.
    fn through(&mut self, turn: &Turn, drive: Drive) -> Answer {
        let (axis, carried) = (turn.axis, turn.carried);
        match drive {
            Drive::Motion(acceleration) => {
                let angular = carried + axis * acceleration;
                self.moment_nm += self.a * angular;
                self.force_n += self.b.tr_mul(&angular);
                Answer::Given(acceleration)
            }
            Drive::Torque { torque_nm, rotor_kg_m2 } => {
                let (moment, force) = (self.a * axis, self.b.tr_mul(&axis));
                let per_inertia = 1.0 / (axis.dot(&moment) + rotor_kg_m2);
                let constant = torque_nm - axis.dot(&self.moment_nm) - moment.dot(&carried);
                let share = constant * per_inertia;
                self.moment_nm += self.a * carried + moment * share;
                self.force_n += self.b.tr_mul(&carried) + force * share;
                self.a -= moment * moment.transpose() * per_inertia;
                self.b -= moment * force.transpose() * per_inertia;
                self.m -= force * force.transpose() * per_inertia;
                Answer::Free { moment, force, constant, per_inertia }
            }
        }
    }

    /// The same at a point of the segment ahead, from which this one's front end lies at `arm_m`
    /// and has `swing` as its centripetal acceleration.
    fn seen_from(mut self, arm_m: Vector3<f64>, swing: Vector3<f64>) -> Self {
        self.moment_nm += self.b * swing;
        self.force_n += self.m * swing;
        let cross = arm_m.cross_matrix();
        let b = self.b + cross * self.m;
        // A − B r̃ + r̃ Bᵀ − r̃ M r̃.
        self.a = self.a - b * cross + cross * self.b.transpose();
        self.b = b;
        self.moment_nm += arm_m.cross(&self.force_n);
        self
    }

    fn add(&mut self, other: &Self) {
        self.a += other.a;
        self.b += other.b;
        self.m += other.m;
        self.moment_nm += other.moment_nm;
        self.force_n += other.force_n;
    }

    /// Angular and linear acceleration that leave nothing over.
    fn accelerations(&self) -> (Vector3<f64>, Vector3<f64>) {
        let light = self.m.try_inverse().expect("a chain has mass in every direction");
        let through = self.b * light;
        let inertia = self.a - through * self.b.transpose();
        let inverse = inertia.try_inverse().expect("a chain has inertia about every axis");
        let angular = inverse * (through * self.force_n - self.moment_nm);
        (angular, -(light * (self.b.tr_mul(&angular) + self.force_n)))
    }
}
