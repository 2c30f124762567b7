//! How much a sample holds: tolerance factors of a normal sample, limits by order statistics.
//!
//! "Share" is how much of all drops to come, "confidence" how often such a statement is right.

use statrs::distribution::{Binomial, ChiSquared, ContinuousCDF, DiscreteCDF, Normal};
use statrs::function::gamma::ln_gamma;

use crate::DropError;
use crate::error::check;

const FROM_0_TO_1: &str = "above 0 and below 1";

/// Halvings that find a factor to some twelve digits.
const HALVINGS: usize = 45;

/// k, so that mean ± k·sd of a normal sample holds a share with a confidence.
///
/// Exact, by quadrature over the mean.
///
/// # Errors
///
/// [`DropError::Figure`] for less than two drops, or a share or confidence that is none.
///
/// # Source
///
/// Krishnamoorthy & Mathew, *Statistical Tolerance Regions*, Wiley 2009.
pub fn two_sided_factor(drops: usize, share: f64, confidence: f64) -> Result<f64, DropError> {
    check_all(drops, share, confidence)?;
    let n = drops as f64;
    let squares = chi_squared(n - 1.0);
    // How far from its own mean a sample's interval must reach: it depends on the mean's error z/√n.
    let reaches: Vec<(f64, f64)> = simpson(0.0, 8.0, 200)
        .map(|(z, weight)| {
            let density = (-0.5 * z * z).exp() / (0.5 * std::f64::consts::TAU.sqrt());
            (weight * density, reach(z / n.sqrt(), share))
        })
        .collect();
    Ok(least_where(0.0, 1e3, |k| {
        let held = |&(weight, reach): &(f64, f64)| {
            weight * squares.sf((n - 1.0) * (reach / k) * (reach / k))
        };
        reaches.iter().map(held).sum::<f64>() >= confidence
    }))
}

/// k, so that mean + k·sd of a normal sample lies above a share with a confidence.
///
/// # Errors
///
/// As for [`two_sided_factor`].
///
/// # Source
///
/// Krishnamoorthy & Mathew, *Statistical Tolerance Regions*, Wiley 2009.
pub fn one_sided_factor(drops: usize, share: f64, confidence: f64) -> Result<f64, DropError> {
    check_all(drops, share, confidence)?;
    let n = drops as f64;
    let beyond = standard().inverse_cdf(share) * n.sqrt();
    Ok(least_where(-1e3, 1e3, |k| at_most(n - 1.0, beyond, k * n.sqrt()) >= confidence))
}

/// P(T ≤ t) of Student's t that isn't central: a normal about `off`, over √(χ²/freedom).
pub(crate) fn at_most(freedom: f64, off: f64, t: f64) -> f64 {
    // Of the root of χ², which lies within some 0.7 of √freedom.
    let ln_density = |root: f64| {
        (freedom - 1.0) * root.ln()
            - 0.5 * root * root
            - (0.5 * freedom - 1.0) * std::f64::consts::LN_2
            - ln_gamma(0.5 * freedom)
    };
    let normal = standard();
    simpson((freedom.sqrt() - 8.0).max(1e-12), freedom.sqrt() + 8.0, 400)
        .map(|(root, weight)| {
            weight * ln_density(root).exp() * normal.cdf(t * root / freedom.sqrt() - off)
        })
        .sum()
}

/// How sure one can be that the outermost of so many holds a share of all.
///
/// # Source
///
/// Wilks, *Determination of sample sizes for setting tolerance limits*, Annals of Mathematical
/// Statistics 12, 1941: 1 − shareⁿ, whatever the distribution.
pub fn confidence_of_outermost(drops: usize, share: f64) -> f64 {
    1.0 - share.powf(drops as f64)
}

/// Share of all that the outermost of so many holds, with a confidence; 0 for none.
pub fn held_by_outermost(drops: usize, confidence: f64) -> f64 {
    if drops == 0 { 0.0 } else { (1.0 - confidence).powf(1.0 / drops as f64) }
}

/// Fewest drops whose outermost holds a share with a confidence.
///
/// # Errors
///
/// [`DropError::Figure`] for a share or confidence that is none.
pub fn drops_for_outermost(share: f64, confidence: f64) -> Result<usize, DropError> {
    check_all(2, share, confidence)?;
    // What is whole but for rounding is whole.
    Ok(((1.0 - confidence).ln() / share.ln() - 1e-9).ceil() as usize)
}

/// Rank from the innermost, counted from 1, of the drop that a share lies within with a confidence;
/// absent where there are too few drops for it.
pub fn rank_that_holds(drops: usize, share: f64, confidence: f64) -> Option<usize> {
    let within = Binomial::new(share, drops as u64).ok()?;
    // Rank r holds the share where fewer than r of all drops are within it.
    let holds = |rank: usize| within.cdf(rank as u64 - 1) >= confidence;
    let (mut low, mut high) = (1, drops);
    if drops == 0 || !holds(drops) {
        return None;
    }
    while low < high {
        let middle = low.midpoint(high);
        if holds(middle) { high = middle } else { low = middle + 1 }
    }
    Some(low)
}

fn check_all(drops: usize, share: f64, confidence: f64) -> Result<(), DropError> {
    check("number of drops", drops as f64, drops >= 2, "2 or more")?;
    check("share", share, share > 0.0 && share < 1.0, FROM_0_TO_1)?;
    check("confidence", confidence, confidence > 0.0 && confidence < 1.0, FROM_0_TO_1)
}

/// Half-width of the interval about an off-centre point that holds a share of a standard normal.
fn reach(off: f64, share: f64) -> f64 {
    let normal = standard();
    least_where(0.0, 40.0, |r| normal.cdf(off + r) - normal.cdf(off - r) >= share)
}

/// The least number at which something holds that goes on holding from there.
pub(crate) fn least_where(mut low: f64, mut high: f64, holds: impl Fn(f64) -> bool) -> f64 {
    for _ in 0..HALVINGS {
        let middle = 0.5 * (low + high);
        if holds(middle) { high = middle } else { low = middle }
    }
    high
}

/// Points and weights of Simpson's rule.
fn simpson(from: f64, to: f64, even: usize) -> impl Iterator<Item = (f64, f64)> {
    let step = (to - from) / even as f64;
    (0..=even).map(move |k| {
        let times = match k {
            0 => 1.0,
            k if k == even => 1.0,
            k if k % 2 == 1 => 4.0,
            _ => 2.0,
        };
        (from + step * k as f64, times * step / 3.0)
    })
}

pub(crate) fn standard() -> Normal {
    Normal::new(0.0, 1.0).expect("the standard normal exists")
}

fn chi_squared(freedom: f64) -> ChiSquared {
    ChiSquared::new(freedom).expect("one degree of freedom or more")
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// Berthouex & Brown, *Statistics for Environmental Engineers*, table 21.1: 5.08, 3.39, 2.76,
    /// 2.55 for 95 % at 95 % confidence.
    #[test]
    fn published_two_sided_factors() {
        for (drops, factor) in [(5, 5.08), (10, 3.39), (20, 2.76), (30, 2.55)] {
            let found = two_sided_factor(drops, 0.95, 0.95).unwrap();
            assert_relative_eq!(found, factor, epsilon = 0.005_1);
        }
    }

    /// The same to more digits, from the exact integral by a general-purpose numerical library.
    #[test]
    fn twin_two_sided_factors() {
        for (drops, factor) in [(5, 5.0769), (10, 3.3934), (20, 2.7603), (30, 2.5549)] {
            let found = two_sided_factor(drops, 0.95, 0.95).unwrap();
            assert_relative_eq!(found, factor, epsilon = 1e-4);
        }
    }

    /// Natrella, *Experimental Statistics*, NBS Handbook 91, 1963, table A-7 (from memory): 2.911
    /// and 2.220 for 10 and 30 at 95 % and 95 %.
    #[test]
    fn published_one_sided_factors() {
        for (drops, factor) in [(10, 2.911), (30, 2.220)] {
            let found = one_sided_factor(drops, 0.95, 0.95).unwrap();
            assert_relative_eq!(found, factor, epsilon = 1e-3);
        }
    }

    /// Wilks's case: 0.95⁵⁹ = 0.0485 is the first power below 0.05, so 59 drops.
    #[test]
    fn published_outermost_of_59() {
        assert_eq!(drops_for_outermost(0.95, 0.95).unwrap(), 59);
        assert!(confidence_of_outermost(58, 0.95) < 0.95);
        assert_relative_eq!(confidence_of_outermost(59, 0.95), 0.9515, epsilon = 1e-4);
        assert_relative_eq!(held_by_outermost(59, confidence_of_outermost(59, 0.95)), 0.95);
        // The outermost is the last rank, and no lower one would do.
        assert_eq!(rank_that_holds(59, 0.95, 0.95), Some(59));
        assert_eq!(rank_that_holds(58, 0.95, 0.95), None);
        // Known pair: the second largest of 93 does as much as the largest of 59.
        assert_eq!(rank_that_holds(92, 0.95, 0.95), Some(92));
        assert_eq!(rank_that_holds(93, 0.95, 0.95), Some(92));
    }

    #[test]
    fn analytic_bad_figures_are_refused() {
        let told = two_sided_factor(1, 0.95, 0.95).unwrap_err().to_string();
        assert_eq!(told, "number of drops is 1, but must be 2 or more");
        assert!(one_sided_factor(10, f64::NAN, 0.95).is_err());
        assert!(drops_for_outermost(0.95, 1.0).is_err());
        assert_eq!(rank_that_holds(0, 0.95, 0.95), None);
    }
}
