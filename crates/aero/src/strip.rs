use wide::{CmpGe, f64x4};

use crate::{Air, PreparedSection};

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
    needs_reynolds: bool,
    half_density_chord: f64x4,
    chord_m: f64x4,
    lever: f64x4,
    /// ln(ρc/μ): with ln u_n it makes the Reynolds number's logarithm.
    ln_reynolds_per_speed: f64x4,
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
const NO_SPEED: f64 = 1e-150;

impl FourStrips {
    /// - `strips`: index into `sections`, and chord in m
    pub fn new(
        sections: &[PreparedSection],
        strips: [(usize, f64); 4],
        air: &Air,
        scales: Scales,
    ) -> Self {
        let chord_m = f64x4::new(strips.map(|(_, chord_m)| chord_m));
        let indices = strips.map(|(section_idx, _)| section_idx);
        let reynolds_per_speed =
            strips.map(|(_, chord_m)| (air.density_kg_m3 * chord_m / air.viscosity_pa_s).ln());
        Self {
            sections: indices,
            needs_reynolds: indices.iter().any(|&idx| sections[idx].needs_reynolds()),
            half_density_chord: chord_m * f64x4::splat(0.5 * air.density_kg_m3),
            chord_m,
            lever: f64x4::new(indices.map(|idx| sections[idx].lever())),
            ln_reynolds_per_speed: f64x4::new(reynolds_per_speed),
            scales,
        }
    }

    /// Loads from the velocity relative to the air across the segment's axis.
    ///
    /// Sweep is felt only through what crosses the axis (independence principle).
    ///
    /// - `sections`: those that [`FourStrips::new`] was given
    /// - `u_y`, `u_z`: m/s in segment axes
    ///
    /// # Source
    ///
    /// Hoerner, *Fluid-Dynamic Drag*, 1965, ch. III (cross-flow principle).
    #[inline]
    pub fn loads(&self, sections: &[PreparedSection], u_y: f64x4, u_z: f64x4) -> StripLoads {
        let zero = f64x4::splat(0.0);
        let one = f64x4::splat(1.0);
        let (side_speed, up_speed) = (u_y.abs(), u_z.abs());
        let speed_squared = u_y * u_y + u_z * u_z;
        let speed = speed_squared.sqrt();
        let stand_in = -u_z / (side_speed + up_speed + f64x4::splat(NO_SPEED));
        let ln_reynolds = if self.needs_reynolds {
            (speed_squared + f64x4::splat(f64::MIN_POSITIVE)).ln() * f64x4::splat(0.5)
                + self.ln_reynolds_per_speed
        } else {
            zero
        };
        let (stand_ins, ln_reynolds) = (stand_in.to_array(), ln_reynolds.to_array());
        let looked_up: [[f64; 3]; 4] = std::array::from_fn(|lane| {
            sections[self.sections[lane]].at(stand_ins[lane], ln_reynolds[lane])
        });
        let lift = f64x4::new(looked_up.map(|at| at[0])) * f64x4::splat(self.scales.lift);
        let drag = f64x4::new(looked_up.map(|at| at[1])) * f64x4::splat(self.scales.drag);
        let moment = f64x4::new(looked_up.map(|at| at[2]));
        let leading = u_y.cmp_ge(zero).blend(one, -one);

        // q c C = ½ρc u_n² C, with one u_n spent on making the directions' unit vectors.
        let strength = self.half_density_chord * speed;
        let side = -strength * (lift * leading * u_z + drag * u_y);
        let up = strength * (lift * side_speed - drag * u_z);
        // u_n² cos²α C_n = u_y² (C_l|u_y| − C_d u_z)/u_n.
        let normal = (lift * side_speed - drag * u_z) / (speed + f64x4::splat(NO_SPEED));
        let about_middle = speed_squared * moment + self.lever * u_y * u_y * normal;
        let couple = leading * self.half_density_chord * self.chord_m * about_middle;
        StripLoads { side, up, couple }
    }
}
