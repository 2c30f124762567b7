//! How launches differ from each other, drawn so that every launch is its own.

use rand::Rng;
use rand::SeedableRng;
use rand_distr::StandardNormal;
use rand_xoshiro::Xoshiro256PlusPlus;

use crate::weighted::percentiles;

/// How one quantity differs from launch to launch.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Differs {
    /// Normal about the design's value, with this standard deviation.
    Normal {
        /// In the quantity's own unit.
        sd: f64,
    },
    /// Uniform, added to the design's value.
    Uniform {
        /// Least that is added.
        low: f64,
        /// Most that is added.
        high: f64,
    },
    /// Normal about 1, times the design's value.
    Factor {
        /// Standard deviation of the factor.
        sd: f64,
    },
}

/// What one launch makes of a design's value.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Change {
    /// Added to it.
    Add(f64),
    /// Multiplied with it.
    Times(f64),
}

impl Change {
    /// The launch's value.
    pub fn of(self, value: f64) -> f64 {
        match self {
            Self::Add(change) => value + change,
            Self::Times(factor) => value * factor,
        }
    }
}

/// What one launch makes of each quantity.
///
/// A launch's numbers depend on the seed and on its own number alone, so launches may be drawn in
/// any order and on any number of threads; quantity k of launch n is the same whatever stands
/// behind it in the list.
///
/// - `launch`: from 0
pub fn draw(differs: &[Differs], seed: u64, launch: u64) -> Vec<Change> {
    let mut random = Xoshiro256PlusPlus::seed_from_u64(mixed(seed ^ mixed(launch)));
    differs
        .iter()
        .map(|differs| match *differs {
            Differs::Normal { sd } => Change::Add(sd * random.sample::<f64, _>(StandardNormal)),
            Differs::Uniform { low, high } => {
                Change::Add(low + (high - low) * random.random::<f64>())
            }
            Differs::Factor { sd } => {
                Change::Times(1.0 + sd * random.sample::<f64, _>(StandardNormal))
            }
        })
        .collect()
}

/// Spreads neighbouring numbers over all 64 bits.
///
/// # Source
///
/// Steele, Lea, Flood, *Fast splittable pseudorandom number generators*, OOPSLA 2014.
fn mixed(number: u64) -> u64 {
    let mut z = number.wrapping_add(0x9e37_79b9_7f4a_7c15);
    z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
    z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
    z ^ (z >> 31)
}

/// 5th, 50th and 95th percentiles of what was seen, straight between neighbours.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Spread {
    /// 5th percentile.
    pub p05: f64,
    /// Median.
    pub p50: f64,
    /// 95th percentile.
    pub p95: f64,
}

impl Spread {
    /// Of at least one value.
    ///
    /// The share q stands at place q(n − 1) among the sorted values.
    ///
    /// # Source
    ///
    /// Hyndman & Fan, *Sample quantiles in statistical packages*, The American Statistician 50,
    /// 1996, definition 7.
    pub fn of(mut values: Vec<f64>) -> Option<Self> {
        values.sort_unstable_by(f64::total_cmp);
        let last = values.len().checked_sub(1)?;
        let at = |share: f64| {
            let place = share * last as f64;
            let below = place as usize;
            let above = (below + 1).min(last);
            values[below] + (place - below as f64) * (values[above] - values[below])
        };
        Some(Self { p05: at(0.05), p50: at(0.5), p95: at(0.95) })
    }

    /// Of values to come, from values that count differently: as far out as the share of new ones
    /// that is meant lies beyond, not of those that are there.
    ///
    /// - `values`: value and weight, in any order
    /// - returns nothing where there is no weight
    ///
    /// # Source
    ///
    /// Of n values of equal weight the one of rank q(n + 1) holds a share q of those to come, whatever
    /// their distribution (Wilks, *Determination of sample sizes for setting tolerance limits*, Ann.
    /// Math. Statist. 12, 1941). Here n = (Σw)²/Σw², and ranks stand in the middle of their weights.
    pub fn to_come(values: &[(f64, f64)]) -> Option<Self> {
        let (sum, squares) = values.iter().fold((0.0, 0.0), |(s, q), (_, w)| (s + w, q + w * w));
        let n = sum * sum / squares;
        let out = |share: f64| (share + (share - 0.5) / n).clamp(0.0, 1.0);
        let [p05, p50, p95] = percentiles(values, [0.05, 0.5, 0.95].map(out))?;
        Some(Self { p05, p50, p95 })
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// Moments of the distributions themselves; with 40 000 draws their standard errors are 0.5 %
    /// of a standard deviation, and 4 of those are allowed.
    #[test]
    fn analytic_draws_have_the_asked_moments() {
        let differs = [
            Differs::Normal { sd: 2.0 },
            Differs::Uniform { low: -1.0, high: 3.0 },
            Differs::Factor { sd: 0.1 },
        ];
        let n = 40_000;
        let draws: Vec<Vec<f64>> = (0..n)
            .map(|launch| draw(&differs, 7, launch).iter().map(|c| c.of(10.0)).collect())
            .collect();
        let expected = [(10.0, 2.0), (11.0, 4.0 / 12_f64.sqrt()), (10.0, 1.0)];
        for (which, (mean, sd)) in expected.into_iter().enumerate() {
            let found_mean = draws.iter().map(|d| d[which]).sum::<f64>() / n as f64;
            let square = |d: &Vec<f64>| (d[which] - found_mean).powi(2);
            let found_sd = (draws.iter().map(square).sum::<f64>() / n as f64).sqrt();
            assert_relative_eq!(found_mean, mean, epsilon = 0.02 * sd);
            assert_relative_eq!(found_sd, sd, epsilon = 0.02 * sd);
        }
        // Neighbouring launches and quantities have nothing to do with each other.
        let centred = |launch: usize, which: usize| draws[launch][which] - expected[which].0;
        let product = |step: usize, other: usize| {
            (0..n as usize - step).map(|k| centred(k, 0) * centred(k + step, other)).sum::<f64>()
                / n as f64
        };
        assert!(product(1, 0).abs() < 0.02 * 4.0);
        assert!(product(0, 2).abs() < 0.02 * 2.0);
    }

    #[test]
    fn analytic_a_launch_is_its_own() {
        let short = [Differs::Normal { sd: 1.0 }];
        let long = [Differs::Normal { sd: 1.0 }, Differs::Uniform { low: 0.0, high: 1.0 }];
        assert_eq!(draw(&short, 3, 11)[0], draw(&long, 3, 11)[0]);
        assert_ne!(draw(&short, 3, 11), draw(&short, 3, 12));
        assert_ne!(draw(&short, 3, 11), draw(&short, 4, 11));
    }

    /// By hand: of 0, 1, … 10 the percentiles are 0.5, 5 and 9.5.
    #[test]
    fn analytic_percentiles() {
        let spread = Spread::of((0..=10).rev().map(f64::from).collect()).unwrap();
        assert_relative_eq!(spread.p05, 0.5, epsilon = 1e-15);
        assert_relative_eq!(spread.p50, 5.0, epsilon = 1e-15);
        assert_relative_eq!(spread.p95, 9.5, epsilon = 1e-15);
        assert_eq!(Spread::of(vec![]), None);
    }

    /// By hand: of the 19 values 1 to 19 those of rank 0.05 × 20 = 1 and 19 hold the ends, and weights
    /// that are twice as large change nothing; of a single one nothing is known but itself.
    #[test]
    fn analytic_ranks_of_values_to_come() {
        for weight in [1.0, 2.0] {
            let values: Vec<(f64, f64)> = (1..20).map(|k| (f64::from(k), weight)).collect();
            let Spread { p05, p50, p95 } = Spread::to_come(&values).unwrap();
            assert_relative_eq!(p05, 1.0, epsilon = 1e-9);
            assert_relative_eq!(p50, 10.0, epsilon = 1e-9);
            assert_relative_eq!(p95, 19.0, epsilon = 1e-9);
        }
        let one = Spread { p05: 3.0, p50: 3.0, p95: 3.0 };
        assert_eq!(Spread::to_come(&[(3.0, 0.5), (4.0, 0.0)]), Some(one));
        assert_eq!(Spread::to_come(&[]), None);
    }
}
