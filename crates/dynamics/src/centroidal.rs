use nalgebra::Matrix3;
use undulift_lanes::{Number, Triple, f64x2, f64x4};

use crate::inertials::Inertials;
use crate::{FourFrames, Frames, Mechanics};

/// A symmetric matrix.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Symmetric<T> {
    /// Diagonal.
    pub xx: T,
    /// Diagonal.
    pub yy: T,
    /// Diagonal.
    pub zz: T,
    /// Off the diagonal.
    pub xy: T,
    /// Off the diagonal.
    pub xz: T,
    /// Off the diagonal.
    pub yz: T,
}

/// The whole chain about its centre of mass, with the head segment held still; root axes.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Centroidal {
    /// Centre of mass, m.
    pub centre_m: Triple<f64>,
    /// Its velocity, m/s.
    pub velocity_m_s: Triple<f64>,
    /// Moments of inertia about the centre of mass, kg·m².
    pub inertia_kg_m2: Symmetric<f64>,
    /// Angular momentum about the centre of mass, kg·m²/s.
    pub momentum_kg_m2_s: Triple<f64>,
}

/// Sums over segments, about the root frame's origin.
struct Sums {
    moment: Triple<f64x4>,
    momentum: Triple<f64x4>,
    second: Symmetric<f64x4>,
    angular_momentum: Triple<f64x4>,
}

impl Mechanics {
    /// The chain's mass, kg.
    pub fn mass_kg(&self) -> f64 {
        self.mass_kg
    }

    /// Centroidal inertia and momentum of these frames.
    ///
    /// # Source
    ///
    /// Featherstone, *Rigid Body Dynamics Algorithms*, 2008, ch. 2; Orin, Goswami, Lee,
    /// *Centroidal dynamics of a humanoid robot*, Autonomous Robots 35, 2013.
    #[inline]
    pub fn centroidal(&self, frames: &Frames) -> Centroidal {
        let mut sums = Sums {
            moment: Triple::zero(),
            momentum: Triple::zero(),
            second: Symmetric::default(),
            angular_momentum: Triple::zero(),
        };
        for (of, at) in self.inertials.iter().zip(&frames.fours) {
            sums.add(of, at);
        }
        let mass_kg = self.mass_kg;
        let moment = sums.moment.over_lanes();
        let momentum = sums.momentum.over_lanes();
        let centre_m = moment.times(1.0 / mass_kg);
        let second = sums.second.over_lanes();
        let about_centre = Symmetric {
            xx: second.xx - moment.x * centre_m.x,
            yy: second.yy - moment.y * centre_m.y,
            zz: second.zz - moment.z * centre_m.z,
            xy: second.xy - moment.x * centre_m.y,
            xz: second.xz - moment.x * centre_m.z,
            yz: second.yz - moment.y * centre_m.z,
        };
        Centroidal {
            centre_m,
            velocity_m_s: momentum.times(1.0 / mass_kg),
            inertia_kg_m2: about_centre.moments_of_inertia(),
            momentum_kg_m2_s: sums.angular_momentum.over_lanes() - centre_m.cross(momentum),
        }
    }

    /// Kinetic energy of the motion about the centre of mass, J.
    ///
    /// - `angular_velocity_rad_s`: of the head segment, root axes
    pub fn energy_about_centre_j(
        &self,
        frames: &Frames,
        centroidal: &Centroidal,
        angular_velocity_rad_s: Triple<f64>,
    ) -> f64 {
        let (centre_m, drift_m_s) =
            (centroidal.centre_m.in_lanes(), centroidal.velocity_m_s.in_lanes());
        let head_rad_s = angular_velocity_rad_s.in_lanes();
        let mut twice_j = f64x4::splat(0.0);
        for (of, at) in self.inertials.iter().zip(&frames.fours) {
            let arm_m = of.arm_m(at.axes());
            let velocity_m_s = at.front_velocity_m_s
                + at.angular_velocity_rad_s.cross(arm_m)
                + head_rad_s.cross(at.front_m + arm_m - centre_m)
                - drift_m_s;
            let spin_rad_s = head_rad_s + at.angular_velocity_rad_s;
            let own = of.turned(at.axes()).moments_of_inertia().times(spin_rad_s);
            twice_j += of.mass_kg * velocity_m_s.dot(velocity_m_s) + spin_rad_s.dot(own);
        }
        0.5 * twice_j.reduce_add()
    }
}

impl Sums {
    #[inline(always)]
    fn add(&mut self, of: &Inertials<f64x4>, at: &FourFrames) {
        let arm_m = of.arm_m(at.axes());
        let place_m = at.front_m + arm_m;
        let spin_rad_s = at.angular_velocity_rad_s;
        let velocity_m_s = at.front_velocity_m_s + spin_rad_s.cross(arm_m);
        let moment = place_m.times(of.mass_kg);
        let own = of.turned(at.axes());
        self.moment = self.moment + moment;
        self.momentum = self.momentum + velocity_m_s.times(of.mass_kg);
        self.angular_momentum = self.angular_momentum
            + moment.cross(velocity_m_s)
            + own.moments_of_inertia().times(spin_rad_s);
        let second = &mut self.second;
        second.xx += own.xx + moment.x * place_m.x;
        second.yy += own.yy + moment.y * place_m.y;
        second.zz += own.zz + moment.z * place_m.z;
        second.xy += own.xy + moment.x * place_m.y;
        second.xz += own.xz + moment.x * place_m.z;
        second.yz += own.yz + moment.y * place_m.z;
    }
}

impl<T: Number> std::ops::Add for Symmetric<T> {
    type Output = Self;
    #[inline(always)]
    fn add(self, other: Self) -> Self {
        Self {
            xx: self.xx + other.xx,
            yy: self.yy + other.yy,
            zz: self.zz + other.zz,
            xy: self.xy + other.xy,
            xz: self.xz + other.xz,
            yz: self.yz + other.yz,
        }
    }
}

impl<T: Number> Symmetric<T> {
    /// The same three times on the diagonal.
    #[inline(always)]
    pub(crate) fn diagonal(value: T) -> Self {
        let zero = T::splat(0.0);
        Self { xx: value, yy: value, zz: value, xy: zero, xz: zero, yz: zero }
    }

    /// tr(S)·1 − S: moments of inertia from second moments.
    #[inline(always)]
    pub fn moments_of_inertia(self) -> Self {
        Self {
            xx: self.yy + self.zz,
            yy: self.xx + self.zz,
            zz: self.xx + self.yy,
            xy: -self.xy,
            xz: -self.xz,
            yz: -self.yz,
        }
    }

    /// Matrix times vector.
    #[inline(always)]
    pub fn times(&self, v: Triple<T>) -> Triple<T> {
        Triple::new(
            self.xx * v.x + self.xy * v.y + self.xz * v.z,
            self.xy * v.x + self.yy * v.y + self.yz * v.z,
            self.xz * v.x + self.yz * v.y + self.zz * v.z,
        )
    }

    /// Takes away u vᵀ, which must be symmetric.
    #[inline(always)]
    pub(crate) fn subtract_outer(&mut self, u: Triple<T>, v: Triple<T>) {
        self.xx = self.xx - u.x * v.x;
        self.yy = self.yy - u.y * v.y;
        self.zz = self.zz - u.z * v.z;
        self.xy = self.xy - u.x * v.y;
        self.xz = self.xz - u.x * v.z;
        self.yz = self.yz - u.y * v.z;
    }
}

impl Symmetric<f64x2> {
    /// Takes one lane.
    pub(crate) fn lane(&self, lane: usize) -> Symmetric<f64> {
        let of = |two: &f64x2| two.as_array_ref()[lane];
        Symmetric {
            xx: of(&self.xx),
            yy: of(&self.yy),
            zz: of(&self.zz),
            xy: of(&self.xy),
            xz: of(&self.xz),
            yz: of(&self.yz),
        }
    }
}

impl Symmetric<f64x4> {
    fn over_lanes(self) -> Symmetric<f64> {
        Symmetric {
            xx: self.xx.reduce_add(),
            yy: self.yy.reduce_add(),
            zz: self.zz.reduce_add(),
            xy: self.xy.reduce_add(),
            xz: self.xz.reduce_add(),
            yz: self.yz.reduce_add(),
        }
    }
}

impl Symmetric<f64> {
    /// The vector that this matrix takes to `right`; the matrix has to be regular.
    #[inline]
    pub fn solve(&self, right: Triple<f64>) -> Triple<f64> {
        let cofactors = Symmetric {
            xx: self.yy * self.zz - self.yz * self.yz,
            yy: self.xx * self.zz - self.xz * self.xz,
            zz: self.xx * self.yy - self.xy * self.xy,
            xy: self.xz * self.yz - self.xy * self.zz,
            xz: self.xy * self.yz - self.xz * self.yy,
            yz: self.xy * self.xz - self.xx * self.yz,
        };
        let determinant = self.xx * cofactors.xx + self.xy * cofactors.xy + self.xz * cofactors.xz;
        cofactors.times(right).times(1.0 / determinant)
    }

    /// All nine entries.
    pub fn matrix(&self) -> Matrix3<f64> {
        Matrix3::new(
            self.xx, self.xy, self.xz, self.xy, self.yy, self.yz, self.xz, self.yz, self.zz,
        )
    }
}
