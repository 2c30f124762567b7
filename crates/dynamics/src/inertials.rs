use undulift_chain::Inertial;
use undulift_lanes::{Number, Triple};

use crate::Symmetric;
use crate::reduced::Reduced;

/// Masses of one segment or of several side by side; lanes without a segment have none.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Inertials<T> {
    pub(crate) mass_kg: T,
    /// From the front end, segment axes.
    pub(crate) centre_m: Triple<T>,
    /// Second moments ∫r rᵀ dm about the segment's own centre, segment axes.
    second: Symmetric<T>,
    /// Whether any second moment stands off the diagonal.
    has_products: bool,
}

/// How segments move at the points that they are reckoned at; root axes.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Moving<T> {
    pub(crate) spin_rad_s: Triple<T>,
    pub(crate) angular_rad_s2: Triple<T>,
    pub(crate) linear_m_s2: Triple<T>,
}

impl<T: Number> Moving<T> {
    /// The same segments at other points.
    #[inline(always)]
    pub(crate) fn at(&self, arm_m: Triple<T>) -> Self {
        let Self { spin_rad_s: spin, angular_rad_s2: angular, linear_m_s2: linear } = *self;
        let linear_m_s2 = linear + angular.cross(arm_m) + spin.cross(spin.cross(arm_m));
        Self { linear_m_s2, ..*self }
    }
}

impl<T: Number> Inertials<T> {
    /// - `of`: what stands in each lane; lanes beyond hold nothing
    pub(crate) fn new(of: &[Option<&Inertial>]) -> Self {
        let lanes = |value: &dyn Fn(&Inertial) -> f64| {
            T::filled(|lane| of.get(lane).copied().flatten().map_or(0.0, value))
        };
        // J = tr(S)·1 − S, so S = ½tr(J)·1 − J.
        let second = |i: usize, j: usize| {
            lanes(&|Inertial { inertia_kg_m2: inertia, .. }| {
                let half_trace = if i == j { 0.5 * inertia.trace() } else { 0.0 };
                half_trace - inertia[(i, j)]
            })
        };
        let has_products = |Inertial { inertia_kg_m2: inertia, .. }: &&Inertial| {
            [(0, 1), (0, 2), (1, 2)].iter().any(|&at| inertia[at] != 0.0)
        };
        Self {
            mass_kg: lanes(&|inertial| inertial.mass_kg),
            centre_m: Triple {
                x: lanes(&|inertial| inertial.centre_m.x),
                y: lanes(&|inertial| inertial.centre_m.y),
                z: lanes(&|inertial| inertial.centre_m.z),
            },
            second: Symmetric {
                xx: second(0, 0),
                yy: second(1, 1),
                zz: second(2, 2),
                xy: second(0, 1),
                xz: second(0, 2),
                yz: second(1, 2),
            },
            has_products: of.iter().flatten().any(has_products),
        }
    }

    /// R S Rᵀ: second moments about the segments' centres in root axes.
    ///
    /// - `x`, `y`, `z`: the segments' axes
    #[inline(always)]
    pub(crate) fn turned(&self, [x, y, z]: [Triple<T>; 3]) -> Symmetric<T> {
        let s = &self.second;
        // The three axes' outer products add up to 1, which saves the third.
        let along = x.times(s.xx - s.zz);
        let across = y.times(s.yy - s.zz);
        let mut turned = Symmetric {
            xx: along.x * x.x + across.x * y.x + s.zz,
            yy: along.y * x.y + across.y * y.y + s.zz,
            zz: along.z * x.z + across.z * y.z + s.zz,
            xy: along.x * x.y + across.x * y.y,
            xz: along.x * x.z + across.x * y.z,
            yz: along.y * x.z + across.y * y.z,
        };
        if self.has_products {
            // xy(XYᵀ + YXᵀ) + xz(XZᵀ + ZXᵀ) + yz(YZᵀ + ZYᵀ) = sym of X aᵀ + Y bᵀ.
            let a = y.times(s.xy) + z.times(s.xz);
            let b = z.times(s.yz);
            let two = T::splat(2.0);
            turned = Symmetric {
                xx: turned.xx + (x.x * a.x + y.x * b.x) * two,
                yy: turned.yy + (x.y * a.y + y.y * b.y) * two,
                zz: turned.zz + (x.z * a.z + y.z * b.z) * two,
                xy: turned.xy + x.x * a.y + x.y * a.x + y.x * b.y + y.y * b.x,
                xz: turned.xz + x.x * a.z + x.z * a.x + y.x * b.z + y.z * b.x,
                yz: turned.yz + x.y * a.z + x.z * a.y + y.y * b.z + y.z * b.y,
            };
        }
        turned
    }

    /// Second moments about the points that `arm_m` leads from to the centres of mass, root axes.
    #[inline(always)]
    pub(crate) fn about(&self, axes: [Triple<T>; 3], arm_m: Triple<T>) -> Symmetric<T> {
        let moment = arm_m.times(self.mass_kg);
        let own = self.turned(axes);
        Symmetric {
            xx: own.xx + moment.x * arm_m.x,
            yy: own.yy + moment.y * arm_m.y,
            zz: own.zz + moment.z * arm_m.z,
            xy: own.xy + moment.x * arm_m.y,
            xz: own.xz + moment.x * arm_m.z,
            yz: own.yz + moment.y * arm_m.z,
        }
    }

    /// From the front end to the centre of mass in root axes, m.
    #[inline(always)]
    pub(crate) fn arm_m(&self, [x, y, z]: [Triple<T>; 3]) -> Triple<T> {
        x.times(self.centre_m.x) + y.times(self.centre_m.y) + z.times(self.centre_m.z)
    }

    /// Inertia and bias at the points that centres of mass are given from.
    ///
    /// - `moving`: accelerations beyond gravity
    /// - `moment_nm`, `force_n`: from outside, at those points
    #[inline(always)]
    pub(crate) fn alone(
        &self,
        axes: [Triple<T>; 3],
        moving: &Moving<T>,
        moment_nm: Triple<T>,
        force_n: Triple<T>,
    ) -> Reduced<T> {
        let arm_m = self.arm_m(axes);
        let moment_kg_m = arm_m.times(self.mass_kg);
        let inertia_kg_m2 = self.about(axes, arm_m).moments_of_inertia();
        let Moving { spin_rad_s: spin, angular_rad_s2: angular, linear_m_s2: linear } = *moving;
        let takes_nm = inertia_kg_m2.times(angular)
            + spin.cross(inertia_kg_m2.times(spin))
            + moment_kg_m.cross(linear);
        let takes_n = linear.times(self.mass_kg)
            + angular.cross(moment_kg_m)
            + spin.cross(spin.cross(moment_kg_m));
        let (moment_nm, force_n) = (takes_nm - moment_nm, takes_n - force_n);
        Reduced::of(inertia_kg_m2, moment_kg_m, self.mass_kg, moment_nm, force_n)
    }
}
