use std::sync::Arc;

use undulift_lanes::{CmpGe, f64x4};

use crate::prepared::places;
use crate::{Air, PreparedSection, Section};

/// Factors on the coefficients, for uncertainty and calibration; they leave a tabulated moment and
/// the friction alone.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Scales {
    /// On C_l.
    pub lift: f64,
    /// On C_d.
    pub drag: f64,
}

/// Four strips, side by side, of given chords and sections in one air.
#[derive(Debug, Clone, PartialEq)]
pub struct FourStrips {
    sections: [usize; 4],
    has_moment: bool,
    half_density_chord: f64x4,
    chord_m: f64x4,
    lever: f64x4,
    /// (ρc/μ)²: times u_n² it makes the Reynolds number's square.
    reynolds_per_speed_squared: f64x4,
    scales: Scales,
}

/// Section loads on four strips, per length of segment.
#[derive(Debug, Clone, Copy)]
pub struct StripLoads {
    /// Along the segment's y, N/m.
    pub side: f64x4,
    /// Along the segment's z, N/m.
    pub up: f64x4,
    /// About the segment's x at mid-chord, N.
    pub couple: f64x4,
}

/// Keeps quotients of vanishing speeds at 0 without a branch.
const NO_SPEED: f64 = 1e-280;

impl FourStrips {
    /// - `strips`: index into `sections`, and chord in m
    pub fn new(sections: &[Section], strips: [(usize, f64); 4], air: &Air, scales: Scales) -> Self {
        let chord_m = f64x4::new(strips.map(|(_, chord_m)| chord_m));
        let indices = strips.map(|(section_idx, _)| section_idx);
        let reynolds_per_speed = chord_m * f64x4::splat(air.density_kg_m3 / air.viscosity_pa_s);
        Self {
            sections: indices,
            has_moment: indices.iter().any(|&idx| sections[idx].has_moment()),
            half_density_chord: chord_m * f64x4::splat(0.5 * air.density_kg_m3),
            chord_m,
            lever: f64x4::new(indices.map(|idx| sections[idx].lever())),
            reynolds_per_speed_squared: reynolds_per_speed * reynolds_per_speed,
            scales,
        }
    }

    /// Loads from the velocity relative to the air across the segment's axis.
    ///
    /// Sweep is felt only through what crosses the axis (independence principle).
    ///
    /// - `sections`: tables of those that [`FourStrips::new`] was given
    /// - `u_y`, `u_z`: m/s in segment axes
    ///
    /// # Source
    ///
    /// Hoerner, *Fluid-Dynamic Drag*, 1965, ch. III (cross-flow principle).
    #[inline]
    pub fn loads(&self, sections: &[Arc<PreparedSection>], u_y: f64x4, u_z: f64x4) -> StripLoads {
        let zero = f64x4::splat(0.0);
        let one = f64x4::splat(1.0);
        let (side_speed, up_speed) = (u_y.abs(), u_z.abs());
        let speed_squared = u_y * u_y + u_z * u_z;
        let speed = speed_squared.sqrt();
        let square_side = side_speed + up_speed;
        // One division serves both quotients; without any speed all products below vanish.
        let inverse = one / (speed * square_side + f64x4::splat(NO_SPEED));
        let places = places(-u_z * speed * inverse);
        let reynolds_squared = (speed_squared * self.reynolds_per_speed_squared).to_array();
        // Written out, as a closure over the lanes goes by way of memory.
        let pair = |lane: usize| {
            sections[self.sections[lane]].lift_drag(places[lane], reynolds_squared[lane]).to_array()
        };
        let [a, b, c, d] = [pair(0), pair(1), pair(2), pair(3)];
        let lift = f64x4::new([a[0], b[0], c[0], d[0]]) * f64x4::splat(self.scales.lift);
        let drag = f64x4::new([a[1], b[1], c[1], d[1]]) * f64x4::splat(self.scales.drag);
        let moment = if self.has_moment {
            f64x4::new(std::array::from_fn(|lane| {
                sections[self.sections[lane]].moment(places[lane], reynolds_squared[lane])
            }))
        } else {
            zero
        };
        let leading = u_y.cmp_ge(zero).blend(one, -one);

        // q c C = ½ρc u_n² C, with one u_n spent on making the directions' unit vectors.
        let strength = self.half_density_chord * speed;
        let side = -strength * (lift * leading * u_z + drag * u_y);
        let up = strength * (lift * side_speed - drag * u_z);
        // u_n² cos²α C_n = u_y² (C_l|u_y| − C_d u_z)/u_n.
        let normal = (lift * side_speed - drag * u_z) * square_side * inverse;
        let about_middle = speed_squared * moment + self.lever * u_y * u_y * normal;
        let couple = leading * self.half_density_chord * self.chord_m * about_middle;
        StripLoads { side, up, couple }
    }
}
