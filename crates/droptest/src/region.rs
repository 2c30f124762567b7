//! The region that holds 95 % of all landings, at 95 % confidence.
//!
//! An ellipse about the mean, along the axes of the sample's covariance. How large it must be follows
//! from two arguments, of which the larger counts: landings that are normal in both directions, and
//! order statistics, which ask for no distribution.

use nalgebra::{Matrix2, SymmetricEigen, Vector2};
use rand::{Rng, SeedableRng};
use rand_distr::{ChiSquared, Distribution, StandardNormal};
use rand_xoshiro::Xoshiro256PlusPlus;

use crate::DropError;
use crate::error::check;
use crate::tolerance::{least_where, rank_that_holds};

/// Share and confidence of the region.
const SHARE: f64 = 0.95;
const CONFIDENCE: f64 = 0.95;

/// Least number of landings that a region is made of.
const FEWEST: usize = 5;

/// Samples that the scale of a normal region is found from: it is then met to some 0.5 %.
const SAMPLES: usize = 4000;
const SAMPLES_SEED: u64 = 1;

/// Rays on which a share is added up.
const RAYS: usize = 32;

/// An ellipse on the floor.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Ellipse {
    /// Its middle, m.
    pub centre_m: [f64; 2],
    /// Half its length and half its width, m.
    pub semi_axes_m: [f64; 2],
    /// Its length from x toward y, −90° to 90°, rad.
    pub angle_rad: f64,
}

/// Which of the two arguments asked for more.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Scaled {
    /// The normal distribution.
    Normal,
    /// Order statistics: the landings have longer tails than a normal distribution.
    Ranks,
}

impl Ellipse {
    /// How far off a place is: 1 on its edge, below within.
    pub fn times_out(&self, place_m: [f64; 2]) -> f64 {
        let (sin, cos) = self.angle_rad.sin_cos();
        let (x, y) = (place_m[0] - self.centre_m[0], place_m[1] - self.centre_m[1]);
        let along = (x * cos + y * sin) / self.semi_axes_m[0];
        let across = (y * cos - x * sin) / self.semi_axes_m[1];
        along.hypot(across)
    }

    /// Half its extent in a direction, m.
    ///
    /// - `direction_rad`: from x toward y
    pub fn reach_m(&self, direction_rad: f64) -> f64 {
        let (sin, cos) = (direction_rad - self.angle_rad).sin_cos();
        (self.semi_axes_m[0] * cos).hypot(self.semi_axes_m[1] * sin)
    }

    /// Points on its edge, m.
    pub fn edge_m(&self, points: usize) -> impl Iterator<Item = [f64; 2]> + '_ {
        let (sin, cos) = self.angle_rad.sin_cos();
        (0..points).map(move |k| {
            let (s, c) = (std::f64::consts::TAU * k as f64 / points as f64).sin_cos();
            let (along, across) = (self.semi_axes_m[0] * c, self.semi_axes_m[1] * s);
            [
                self.centre_m[0] + along * cos - across * sin,
                self.centre_m[1] + along * sin + across * cos,
            ]
        })
    }
}

/// The ellipse that holds 95 % of all landings, at 95 % confidence.
///
/// # Errors
///
/// [`DropError::TooFew`] for less than five.
pub fn region(places_m: &[[f64; 2]]) -> Result<(Ellipse, Scaled), DropError> {
    let n = places_m.len();
    if n < FEWEST {
        return Err(DropError::TooFew { found: n, needed: FEWEST });
    }
    region_of(places_m, normal_region_scale(n)?)
}

/// - `normal`: scale that a normal distribution asks for
fn region_of(places_m: &[[f64; 2]], normal: f64) -> Result<(Ellipse, Scaled), DropError> {
    let n = places_m.len();
    let places = || places_m.iter().map(|&place_m| Vector2::from(place_m));
    let centre = places().sum::<Vector2<f64>>() / n as f64;
    let squares = places().map(|place| (place - centre) * (place - centre).transpose());
    let covariance = squares.sum::<Matrix2<f64>>() / (n - 1) as f64;
    let own = SymmetricEigen::new(covariance);
    // Landings on one line, or at one point, have no width to be measured by.
    let least = 1e-12 * own.eigenvalues.max();
    let apart_of = |place: Vector2<f64>| {
        let along = own.eigenvectors.transpose() * (place - centre);
        let of = |which: usize| match own.eigenvalues[which] {
            variance if variance > least => along[which] * along[which] / variance,
            _ => 0.0,
        };
        of(0) + of(1)
    };
    let mut apart: Vec<f64> = places().map(apart_of).collect();
    apart.sort_unstable_by(f64::total_cmp);
    let by_ranks = rank_that_holds(n, SHARE, CONFIDENCE).map_or(0.0, |rank| apart[rank - 1]);
    let scaled = if by_ranks > normal { Scaled::Ranks } else { Scaled::Normal };
    Ok((ellipse(centre, &covariance, normal.max(by_ranks)), scaled))
}

fn ellipse(centre: Vector2<f64>, covariance: &Matrix2<f64>, scale: f64) -> Ellipse {
    let own = SymmetricEigen::new(*covariance);
    let long = if own.eigenvalues[0] >= own.eigenvalues[1] { 0 } else { 1 };
    let semi_axis_m = |which: usize| (scale * own.eigenvalues[which].max(0.0)).sqrt();
    let along = own.eigenvectors.column(long);
    // An axis has no direction: of both angles, the one that points forward.
    let angle_rad = if along.x < 0.0 { (-along.y).atan2(-along.x) } else { along.y.atan2(along.x) };
    Ellipse {
        centre_m: [centre.x, centre.y],
        semi_axes_m: [semi_axis_m(long), semi_axis_m(1 - long)],
        angle_rad,
    }
}

/// c, so that (x − x̄)ᵀS⁻¹(x − x̄) ≤ c holds 95 % of a normal distribution in the plane, with 95 %
/// confidence, where mean x̄ and covariance S are those of a sample.
///
/// Over many samples drawn from a fixed seed: for each, the c that makes it hold the share exactly;
/// then the c that enough of them keep within. Far above 1000 drops it tends to χ²(2) = 5.991.
///
/// # Errors
///
/// [`DropError::Figure`] for less than five drops.
///
/// # Source
///
/// The way is that of Krishnamoorthy & Mathew, *Comparison of approximation methods for computing
/// tolerance factors for a multivariate normal population*, Technometrics 41, 1999.
pub fn normal_region_scale(drops: usize) -> Result<f64, DropError> {
    check("number of drops", drops as f64, drops >= FEWEST, "5 or more")?;
    let mut random = Xoshiro256PlusPlus::seed_from_u64(SAMPLES_SEED);
    let rays = rays();
    let mut scales: Vec<f64> =
        (0..SAMPLES).map(|_| Sample::draw(drops as f64, &mut random).scale(&rays)).collect();
    scales.sort_unstable_by(f64::total_cmp);
    Ok(scales[(CONFIDENCE * SAMPLES as f64) as usize])
}

/// Directions all round.
fn rays() -> [Vector2<f64>; RAYS] {
    std::array::from_fn(|ray| {
        let (sin, cos) = (std::f64::consts::TAU * ray as f64 / RAYS as f64).sin_cos();
        Vector2::new(cos, sin)
    })
}

/// Mean and covariance of a standard normal sample.
struct Sample {
    mean: Vector2<f64>,
    inverse: Matrix2<f64>,
}

impl Sample {
    /// Without drawing the sample itself: mean and covariance are independent, the latter by
    /// Bartlett's factors.
    fn draw(n: f64, random: &mut Xoshiro256PlusPlus) -> Self {
        let mut normal = || random.sample::<f64, _>(StandardNormal);
        let mean = Vector2::new(normal(), normal()) / n.sqrt();
        let below = normal();
        let root = |freedom: f64, random: &mut Xoshiro256PlusPlus| {
            let squares = ChiSquared::new(freedom).expect("some degrees of freedom");
            squares.sample(random).sqrt()
        };
        let factor = Matrix2::new(root(n - 1.0, random), 0.0, below, root(n - 2.0, random));
        let covariance = factor * factor.transpose() / (n - 1.0);
        let inverse = covariance.try_inverse().expect("a factor with a positive diagonal");
        Self { mean, inverse }
    }

    fn scale(&self, rays: &[Vector2<f64>]) -> f64 {
        let to_mean = self.inverse * self.mean;
        let off = self.mean.dot(&to_mean);
        let of_rays: Vec<(f64, f64)> =
            rays.iter().map(|ray| (ray.dot(&(self.inverse * ray)), ray.dot(&to_mean))).collect();
        least_where(0.0, 1e4, |scale| share(&of_rays, scale - off) >= SHARE)
    }
}

/// Share of a standard normal within an ellipse, along rays from the origin; 0 where the origin lies
/// outside, as then less than half can be within.
///
/// - `room`: how far within the origin lies, in the ellipse's own measure
fn share(of_rays: &[(f64, f64)], room: f64) -> f64 {
    if room <= 0.0 {
        return 0.0;
    }
    let within = |&(a, b): &(f64, f64)| {
        let reach = (b + (b * b + a * room).sqrt()) / a;
        1.0 - (-0.5 * reach * reach).exp()
    };
    of_rays.iter().map(within).sum::<f64>() / of_rays.len() as f64
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// χ² with two degrees of freedom has P(χ² ≤ c) = 1 − e^(−c/2): 95 % at −2·ln 0.05 = 5.991 465.
    /// With a million drops mean and covariance are as good as known, and about 0.1 % remains.
    #[test]
    fn analytic_scale_of_a_known_distribution() {
        let scale = normal_region_scale(1_000_000).unwrap();
        assert_relative_eq!(scale, 5.991_465, max_relative = 4e-3);
        let exact = Sample { mean: Vector2::zeros(), inverse: Matrix2::identity() };
        assert_relative_eq!(exact.scale(&rays()), 5.991_465, max_relative = 1e-6);
    }

    /// A body without air, thrown level at speeds v along and w across that are normal and have to
    /// do with each other, lands at (v·T, w·T), T = √(2h/g): a normal distribution in closed form.
    /// Each of 1000 regions, made of 60 drops, meets 4000 new ones; 950 should hold 95 % of them or
    /// more, give or take 7, and 930 must.
    #[test]
    fn analytic_a_region_holds_what_it_says() {
        let time_s = crate::fall_time_s(6.0);
        let mut random = Xoshiro256PlusPlus::seed_from_u64(20);
        let mut drop = || {
            let (a, b): (f64, f64) = (random.sample(StandardNormal), random.sample(StandardNormal));
            [time_s * (5.0 + 0.4 * a), time_s * (0.1 + 0.3 * a + 0.2 * b)]
        };
        let new: Vec<[f64; 2]> = (0..4000).map(|_| drop()).collect();
        let scale = normal_region_scale(60).unwrap();
        let (mut normal, mut both) = (0, 0);
        for _ in 0..1000 {
            let seen: Vec<[f64; 2]> = (0..60).map(|_| drop()).collect();
            let (whole, _) = region_of(&seen, scale).unwrap();
            both += usize::from(share_within(&whole, &new) >= 0.95);
            // The scale of the normal distribution alone, too.
            normal += usize::from(share_within(&normal_alone(&seen, scale), &new) >= 0.95);
        }
        assert!((930..=970).contains(&normal), "{normal} of 1000 hold 95 %");
        assert!(both >= normal, "{both} of 1000 hold 95 %");
    }

    fn share_within(ellipse: &Ellipse, places_m: &[[f64; 2]]) -> f64 {
        let within = places_m.iter().filter(|&&place_m| ellipse.times_out(place_m) <= 1.0);
        within.count() as f64 / places_m.len() as f64
    }

    fn normal_alone(places_m: &[[f64; 2]], scale: f64) -> Ellipse {
        let n = places_m.len() as f64;
        let centre = places_m.iter().map(|&p| Vector2::from(p)).sum::<Vector2<f64>>() / n;
        let off = places_m.iter().map(|&p| Vector2::from(p) - centre);
        let squares: Matrix2<f64> = off.map(|d| d * d.transpose()).sum();
        ellipse(centre, &(squares / (n - 1.0)), scale)
    }

    /// Four corners and the middle of a slanted rectangle: centre and directions by hand.
    #[test]
    fn analytic_an_ellipse_along_its_landings() {
        let places_m = [[1.0, 2.0], [7.0, 8.0], [3.0, 6.0], [5.0, 4.0], [4.0, 5.0]];
        let (found, _) = region(&places_m).unwrap();
        assert_relative_eq!(found.centre_m[0], 4.0);
        assert_relative_eq!(found.centre_m[1], 5.0);
        assert_relative_eq!(found.angle_rad, std::f64::consts::FRAC_PI_4, epsilon = 1e-12);
        // Along (1, 1)/√2 the squares sum to 36, across to 4: axes as √(36/4).
        assert_relative_eq!(found.semi_axes_m[0] / found.semi_axes_m[1], 3.0, epsilon = 1e-12);
        for point_m in found.edge_m(7) {
            assert_relative_eq!(found.times_out(point_m), 1.0, epsilon = 1e-12);
        }
        assert_relative_eq!(found.reach_m(found.angle_rad), found.semi_axes_m[0]);
        let line = [[0.0, 0.0], [1.0, 1.0], [2.0, 2.0], [3.0, 3.0], [4.0, 4.0]];
        let (flat, _) = region(&line).unwrap();
        assert_relative_eq!(flat.angle_rad, std::f64::consts::FRAC_PI_4, epsilon = 1e-9);
        assert!(flat.semi_axes_m[1] < 1e-6 && flat.semi_axes_m[0] > 2.0 * 2.0_f64.sqrt());
        assert!(matches!(region(&line[..4]), Err(DropError::TooFew { .. })));
    }
}
