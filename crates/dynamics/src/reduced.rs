//! Inertia and bias that a body shows at one point, with what hangs on it.

use undulift_lanes::Triple;

use crate::{Drive, Symmetric};

/// Moment N = A α + B a + n and force F = Bᵀ α + M a + f that it takes to give a point the angular
/// acceleration α and the acceleration a.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Reduced {
    a: Symmetric<f64>,
    /// Rows.
    b: [Triple<f64>; 3],
    m: Symmetric<f64>,
    moment_nm: Triple<f64>,
    force_n: Triple<f64>,
}

/// How an axis answers to the acceleration of what carries it.
#[derive(Debug, Clone, Copy)]
pub(crate) enum Answer {
    Given(f64),
    /// (τ' − U·x)/D, with x the angular and linear acceleration.
    Free {
        moment: Triple<f64>,
        force: Triple<f64>,
        constant: f64,
        per_inertia: f64,
    },
}

impl Answer {
    /// Acceleration of the axis, given those of what carries it.
    #[inline(always)]
    pub(crate) fn to(&self, angular: Triple<f64>, linear: Triple<f64>) -> f64 {
        match *self {
            Self::Given(acceleration) => acceleration,
            Self::Free { moment, force, constant, per_inertia } => {
                (constant - moment.dot(angular) - force.dot(linear)) * per_inertia
            }
        }
    }
}

impl Reduced {
    /// A rigid body.
    ///
    /// - `inertia_kg_m2`, `moment_kg_m`: about the point; mass times where its centre is
    #[inline(always)]
    pub(crate) fn of(
        inertia_kg_m2: Symmetric<f64>,
        moment_kg_m: Triple<f64>,
        mass_kg: f64,
        moment_nm: Triple<f64>,
        force_n: Triple<f64>,
    ) -> Self {
        let Triple { x, y, z } = moment_kg_m;
        Self {
            a: inertia_kg_m2,
            b: [Triple::new(0.0, -z, y), Triple::new(z, 0.0, -x), Triple::new(-y, x, 0.0)],
            m: Symmetric { xx: mass_kg, yy: mass_kg, zz: mass_kg, ..Symmetric::default() },
            moment_nm,
            force_n,
        }
    }

    /// Bᵀ v.
    #[inline(always)]
    fn b_across(&self, v: Triple<f64>) -> Triple<f64> {
        self.b[0].times(v.x) + self.b[1].times(v.y) + self.b[2].times(v.z)
    }

    /// B v.
    #[inline(always)]
    fn b_times(&self, v: Triple<f64>) -> Triple<f64> {
        Triple::new(self.b[0].dot(v), self.b[1].dot(v), self.b[2].dot(v))
    }

    /// Becomes what is seen from the other side of an axis; returns how the axis answers.
    #[inline(always)]
    pub(crate) fn through(&mut self, axis: Triple<f64>, drive: Drive) -> Answer {
        match drive {
            Drive::Motion(acceleration) => {
                let angular = axis.times(acceleration);
                self.moment_nm = self.moment_nm + self.a.times(angular);
                self.force_n = self.force_n + self.b_across(angular);
                Answer::Given(acceleration)
            }
            Drive::Torque { torque_nm, rotor_kg_m2 } => {
                let (moment, force) = (self.a.times(axis), self.b_across(axis));
                let per_inertia = 1.0 / (axis.dot(moment) + rotor_kg_m2);
                let constant = torque_nm - axis.dot(self.moment_nm);
                let share = constant * per_inertia;
                self.moment_nm = self.moment_nm + moment.times(share);
                self.force_n = self.force_n + force.times(share);
                self.give_way(moment, force, per_inertia);
                Answer::Free { moment, force, constant, per_inertia }
            }
        }
    }

    /// Less inertia, by how far the axis gives way.
    #[inline(always)]
    fn give_way(&mut self, moment: Triple<f64>, force: Triple<f64>, per_inertia: f64) {
        let (by_moment, by_force) = (moment.times(per_inertia), force.times(per_inertia));
        self.a.subtract_outer(moment, by_moment);
        self.m.subtract_outer(force, by_force);
        self.b[0] = self.b[0] - force.times(by_moment.x);
        self.b[1] = self.b[1] - force.times(by_moment.y);
        self.b[2] = self.b[2] - force.times(by_moment.z);
    }

    /// Becomes the same at another point, from which this one lies at `arm_m`.
    #[inline(always)]
    pub(crate) fn move_to(&mut self, arm_m: Triple<f64>) {
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
        self.a.xx -= x.x + after_x.x;
        self.a.yy -= y.y + after_y.y;
        self.a.zz -= z_z + after_z.z;
        self.a.xy -= x.y + after_y.x;
        self.a.xz -= x.z + after_z.x;
        self.a.yz -= y.z + after_z.y;
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
