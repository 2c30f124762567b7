//! How many drops tell something.

use statrs::distribution::{Binomial, ContinuousCDF, DiscreteCDF, StudentsT};

use crate::DropError;
use crate::error::check;
use crate::tolerance::at_most;

/// More drops than anyone makes.
const MOST_DROPS: usize = 100_000;

/// Share of drops that ends outside of a 5 % to 95 % band where the band is right.
const OUTSIDE_SHARE: f64 = 0.1;
/// How often a right band may stop a test, on average.
const STOP_LEVEL: f64 = 0.01;

/// Largest share that may fail where none of so many failed, with a confidence of 95 %.
///
/// The exact rule of three, 1 − 0.05^(1/n); 1 where nothing was dropped.
pub fn most_failing_share(drops: usize) -> f64 {
    if drops == 0 { 1.0 } else { 1.0 - 0.05_f64.powf(1.0 / drops as f64) }
}

/// Drops in each of two groups that tell a difference of their means, with a t test on both sides.
///
/// - `difference_sd`: the difference in standard deviations of one drop
/// - `level`: how often a difference is seen where there is none
/// - `power`: how often the difference is seen
///
/// # Errors
///
/// [`DropError::Figure`] for figures that can't be, or more than 100 000 drops.
///
/// # Source
///
/// Cohen, *Statistical Power Analysis for the Behavioral Sciences*, 1988, ch. 2: Student's t about
/// the difference, without the usual normal approximation.
pub fn drops_to_tell_apart(difference_sd: f64, level: f64, power: f64) -> Result<usize, DropError> {
    let positive = difference_sd.is_finite() && difference_sd > 0.0;
    check("difference in standard deviations", difference_sd, positive, "a number above 0")?;
    check("level", level, level > 0.0 && level < 1.0, "above 0 and below 1")?;
    check("power", power, power > level && power < 1.0, "above the level and below 1")?;
    fewest("difference in standard deviations", difference_sd, |n| {
        let freedom = 2.0 * n - 2.0;
        let t = student(freedom, 1.0 - 0.5 * level);
        let off = difference_sd * (0.5 * n).sqrt();
        1.0 - at_most(freedom, off, t) + at_most(freedom, off, -t) >= power
    })
}

/// Drops after which the mean is known to ± a half-width, with a confidence of 95 %.
///
/// - `half_width_sd`: in standard deviations of one drop
///
/// # Errors
///
/// [`DropError::Figure`] for a half-width that can't be, or more than 100 000 drops.
pub fn drops_for_mean(half_width_sd: f64) -> Result<usize, DropError> {
    let positive = half_width_sd.is_finite() && half_width_sd > 0.0;
    check("half-width in standard deviations", half_width_sd, positive, "a number above 0")?;
    fewest("half-width in standard deviations", half_width_sd, |n| {
        student(n - 1.0, 0.975) / n.sqrt() <= half_width_sd
    })
}

/// Fewest drops outside of a 5 % to 95 % band that mean stop: as many or more, of so many drops,
/// would be seen less than once in a hundred times if the band were right.
///
/// - returns `None` where not even all of them would tell, so for less than three
pub fn drops_outside_to_stop(drops: usize) -> Option<usize> {
    let outside = Binomial::new(OUTSIDE_SHARE, drops as u64).ok()?;
    // Exactly one in a hundred, as two of two are, isn't below it, however it is rounded.
    let rare = |&least: &usize| outside.sf(least as u64 - 1) < STOP_LEVEL * (1.0 - 1e-9);
    (1..=drops).find(rare)
}

/// The fewest that are enough, where all larger numbers are, too.
fn fewest(
    quantity: &'static str,
    value: f64,
    enough: impl Fn(f64) -> bool,
) -> Result<usize, DropError> {
    let (mut low, mut high) = (2, MOST_DROPS);
    let allowed = "larger: this one would take more than 100 000 drops";
    check(quantity, value, enough(high as f64), allowed)?;
    while low < high {
        let middle = low.midpoint(high);
        if enough(middle as f64) { high = middle } else { low = middle + 1 }
    }
    Ok(low)
}

fn student(freedom: f64, share: f64) -> f64 {
    StudentsT::new(0.0, 1.0, freedom).expect("one degree of freedom or more").inverse_cdf(share)
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// Berthouex & Brown, *Statistics for Environmental Engineers*: two groups, level 0.05, power
    /// 0.95, variance 100, difference 10, so one standard deviation: 27 a group.
    #[test]
    fn published_two_groups() {
        assert_eq!(drops_to_tell_apart(1.0, 0.05, 0.95).unwrap(), 27);
    }

    /// Level 0.05, power 0.80, one standard deviation: 17 by a general-purpose library's Student's t
    /// that isn't central; the normal approximation would say 2·(1.960 + 0.842)² = 15.7, so 16.
    #[test]
    fn twin_two_groups_by_exact_t() {
        assert_eq!(drops_to_tell_apart(1.0, 0.05, 0.80).unwrap(), 17);
    }

    /// Student's t in any table: 2.110 at 17 degrees of freedom, 2.120 at 16, so 2.110/√18 = 0.497
    /// and 2.120/√17 = 0.514.
    #[test]
    fn published_drops_for_half_a_deviation() {
        assert_eq!(drops_for_mean(0.5).unwrap(), 18);
    }

    /// 0.05^(1/30) = e^(−2.995 732/30) = 0.904 966.
    #[test]
    fn analytic_rule_of_three() {
        assert_relative_eq!(most_failing_share(30), 0.095_034, epsilon = 1e-6);
        assert_eq!(most_failing_share(0), 1.0);
    }

    /// By hand, q = 0.9: of 5, P(3 or more) = 10·0.001·0.81 + 5·0.0001·0.9 + 0.00001 = 0.008 56 and
    /// P(2 or more) = 0.081 46; of 10, P(5 or more) = 0.001 63 and P(4 or more) = 0.0128; of 3, 0.001
    /// for all and 0.028 for two; of 2, 0.01 for both, which isn't below.
    #[test]
    fn analytic_drops_outside_that_mean_stop() {
        for (drops, least) in [(3, 3), (4, 3), (5, 3), (6, 4), (9, 4), (10, 5)] {
            assert_eq!(drops_outside_to_stop(drops), Some(least), "{drops}");
        }
        for drops in [0, 1, 2] {
            assert_eq!(drops_outside_to_stop(drops), None, "{drops}");
        }
    }

    #[test]
    fn analytic_hopeless_sizes_are_refused() {
        assert!(drops_to_tell_apart(1e-9, 0.05, 0.9).is_err());
        assert!(drops_to_tell_apart(f64::NAN, 0.05, 0.9).is_err());
        assert!(drops_for_mean(0.0).is_err());
    }
}
