//! Inertia and bias that a body shows at one point, with what hangs on it.

use undulift_lanes::{Number, Triple, f64x2};

use crate::{Drive, Symmetric};

/// Moment N = A α + B a + n and force F = Bᵀ α + M a + f that it takes to give a point the angular
/// acceleration α and the acceleration a.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Reduced<T> {
    a: Symmetric<T>,
    /// Rows.
    b: [Triple<T>; 3],
    m: Symmetric<T>,
    moment_nm: Triple<T>,
    force_n: Triple<T>,
}

/// What is known of two axes side by side. One without a drive is one that doesn't move.
#[derive(Debug, Clone, Copy, Default)]
pub(crate) struct Known {
    /// 1 where the torque is known, 0 where the motion is.
    free: f64x2,
    acceleration_rad_s2: f64x2,
    torque_nm: f64x2,
    rotor_kg_m2: f64x2,
}

/// How two axes answer to the acceleration of what carries them: q̈ = s − U·x/D, with x that
/// acceleration, angular and linear; 1/D = 0 where the motion is given.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Answer {
    moment: Triple<f64x2>,
    force: Triple<f64x2>,
    own: f64x2,
    per_inertia: f64x2,
}

impl Known {
    #[inline(always)]
    pub(crate) fn of(drives: [Option<Drive>; 2]) -> Self {
        let lanes = drives.map(|drive| match drive {
            None => [0.0; 4],
            Some(Drive::Motion(acceleration_rad_s2)) => [0.0, acceleration_rad_s2, 0.0, 0.0],
            Some(Drive::Torque { torque_nm, rotor_kg_m2 }) => [1.0, 0.0, torque_nm, rotor_kg_m2],
        });
        let pair = |k: usize| f64x2::filled(|lane| lanes[lane][k]);
        Self {
            free: pair(0),
            acceleration_rad_s2: pair(1),
            torque_nm: pair(2),
            rotor_kg_m2: pair(3),
        }
    }
}

impl Answer {
    /// Acceleration of the axes, given those of what carries them.
    #[inline(always)]
    pub(crate) fn to(&self, angular: Triple<f64x2>, linear: Triple<f64x2>) -> f64x2 {
        self.own - (self.moment.dot(angular) + self.force.dot(linear)) * self.per_inertia
    }
}

impl<T: Number> Reduced<T> {
    /// A rigid body.
    ///
    /// - `inertia_kg_m2`, `moment_kg_m`: about the point; mass times where its centre is
    #[inline(always)]
    pub(crate) fn of(
        inertia_kg_m2: Symmetric<T>,
        moment_kg_m: Triple<T>,
        mass_kg: T,
        moment_nm: Triple<T>,
        force_n: Triple<T>,
    ) -> Self {
        let Triple { x, y, z } = moment_kg_m;
        let zero = T::splat(0.0);
        Self {
            a: inertia_kg_m2,
            b: [Triple::new(zero, -z, y), Triple::new(z, zero, -x), Triple::new(-y, x, zero)],
            m: Symmetric::diagonal(mass_kg),
            moment_nm,
            force_n,
        }
    }

    /// Nothing.
    pub(crate) fn zero() -> Self {
        let (zero, still) = (T::splat(0.0), Triple::zero());
        Self::of(Symmetric::diagonal(zero), still, zero, still, still)
    }

    /// Bᵀ v.
    #[inline(always)]
    fn b_across(&self, v: Triple<T>) -> Triple<T> {
        self.b[0].times(v.x) + self.b[1].times(v.y) + self.b[2].times(v.z)
    }

    /// B v.
    #[inline(always)]
    fn b_times(&self, v: Triple<T>) -> Triple<T> {
        Triple::new(self.b[0].dot(v), self.b[1].dot(v), self.b[2].dot(v))
    }

    /// Less inertia, by how far an axis gives way.
    #[inline(always)]
    fn give_way(&mut self, moment: Triple<T>, force: Triple<T>, per_inertia: T) {
        let (by_moment, by_force) = (moment.times(per_inertia), force.times(per_inertia));
        self.a.subtract_outer(moment, by_moment);
        self.m.subtract_outer(force, by_force);
        self.b[0] = self.b[0] - force.times(by_moment.x);
        self.b[1] = self.b[1] - force.times(by_moment.y);
        self.b[2] = self.b[2] - force.times(by_moment.z);
    }

    /// Becomes the same at another point, from which this one lies at `arm_m`.
    #[inline(always)]
    pub(crate) fn move_to(&mut self, arm_m: Triple<T>) {
        self.moment_nm = self.moment_nm + arm_m.cross(self.force_n);
        // B' = B + r̃ M and A' = A − B r̃ − (B' r̃)ᵀ; a row of B r̃ is that row × r.
        let m = &self.m;
        let [m_x, m_y, m_z] = [
            Triple::new(m.xx, m.xy, m.xz),
            Triple::new(m.xy, m.yy, m.yz),
            Triple::new(m.xz, m.yz, m.zz),
        ];
        let before = self.b;
        self.b = [
            before[0] + m_z.times(arm_m.y) - m_y.times(arm_m.z),
            before[1] + m_x.times(arm_m.z) - m_z.times(arm_m.x),
            before[2] + m_y.times(arm_m.x) - m_x.times(arm_m.y),
        ];
        let [x, y, _] = before.map(|row| row.cross(arm_m));
        let [after_x, after_y, after_z] = self.b.map(|row| row.cross(arm_m));
        let z_z = before[2].x * arm_m.y - before[2].y * arm_m.x;
        self.a = Symmetric {
            xx: self.a.xx - (x.x + after_x.x),
            yy: self.a.yy - (y.y + after_y.y),
            zz: self.a.zz - (z_z + after_z.z),
            xy: self.a.xy - (x.y + after_y.x),
            xz: self.a.xz - (x.z + after_z.x),
            yz: self.a.yz - (y.z + after_z.y),
        };
    }

    #[inline(always)]
    pub(crate) fn add(&mut self, other: &Self) {
        self.a = self.a + other.a;
        self.m = self.m + other.m;
        for (row, more) in self.b.iter_mut().zip(other.b) {
            *row = *row + more;
        }
        self.moment_nm = self.moment_nm + other.moment_nm;
        self.force_n = self.force_n + other.force_n;
    }
}

impl Reduced<f64x2> {
    /// Becomes what is seen from the other side of an axis; returns how the axis answers.
    #[inline(always)]
    pub(crate) fn through(&mut self, axis: Triple<f64x2>, known: Known) -> Answer {
        let (moment, force) = (self.a.times(axis), self.b_across(axis));
        // Where the motion is known nothing may have inertia, so that D has to be kept off 0.
        let kept_off = f64x2::splat(1.0) - known.free;
        let per_inertia = known.free / (axis.dot(moment) + known.rotor_kg_m2 + kept_off);
        let left_nm = known.torque_nm - axis.dot(self.moment_nm);
        let own = known.acceleration_rad_s2 + left_nm * per_inertia;
        self.moment_nm = self.moment_nm + moment.times(own);
        self.force_n = self.force_n + force.times(own);
        self.give_way(moment, force, per_inertia);
        Answer { moment, force, own, per_inertia }
    }

    /// One of the two.
    pub(crate) fn lane(&self, lane: usize) -> Reduced<f64> {
        let of = |triple: &Triple<f64x2>| triple.lane(lane);
        Reduced {
            a: self.a.lane(lane),
            b: self.b.map(|row| of(&row)),
            m: self.m.lane(lane),
            moment_nm: of(&self.moment_nm),
            force_n: of(&self.force_n),
        }
    }
}

impl Reduced<f64> {
    /// Angular and linear acceleration that leave nothing over.
    pub(crate) fn accelerations(&self) -> (Triple<f64>, Triple<f64>) {
        // M⁻¹ Bᵀ, whose columns belong to the rows of B.
        let light = self.b.map(|row| self.m.solve(row));
        let inertia = Symmetric {
            xx: self.a.xx - self.b[0].dot(light[0]),
            yy: self.a.yy - self.b[1].dot(light[1]),
            zz: self.a.zz - self.b[2].dot(light[2]),
            xy: self.a.xy - self.b[0].dot(light[1]),
            xz: self.a.xz - self.b[0].dot(light[2]),
            yz: self.a.yz - self.b[1].dot(light[2]),
        };
        let falling = self.m.solve(self.force_n);
        let angular = inertia.solve(self.b_times(falling) - self.moment_nm);
        let linear = Triple::zero() - self.m.solve(self.b_across(angular) + self.force_n);
        (angular, linear)
    }
}
