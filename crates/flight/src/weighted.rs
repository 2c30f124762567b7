//! Percentiles of weighted values.

/// Bins that values are sorted into first; only those around a percentile are sorted further.
const BINS: usize = 1024;

/// Percentiles of weighted values: each value stands at the middle of its own weight in the running
/// sum, and between neighbours the value runs straight.
///
/// - `values`: value and weight, in any order
/// - `shares`: from 0 to 1
/// - returns nothing where there is no weight
pub(crate) fn percentiles<const N: usize>(
    values: &[(f64, f64)],
    shares: [f64; N],
) -> Option<[f64; N]> {
    let total: f64 = values.iter().map(|(_, weight)| weight).sum();
    if !(total > 0.0 && total.is_finite()) {
        return None;
    }
    let weighty = || values.iter().copied().filter(|&(_, weight)| weight > 0.0);
    let least = weighty().fold(f64::INFINITY, |least, (value, _)| least.min(value));
    let most = weighty().fold(f64::NEG_INFINITY, |most, (value, _)| most.max(value));
    let per_width = (BINS - 1) as f64 / (most - least).max(f64::MIN_POSITIVE);
    let bin_of = |value: f64| (((value - least) * per_width) as usize).min(BINS - 1);
    let mut bins = vec![0.0; BINS];
    for (value, weight) in weighty() {
        bins[bin_of(value)] += weight;
    }
    Some(shares.map(|share| {
        let around = Around::find(&bins, share * total);
        let mut near: Vec<(f64, f64)> = weighty()
            .filter(|&(value, _)| (around.first..=around.last).contains(&bin_of(value)))
            .collect();
        near.sort_unstable_by(|a, b| a.0.total_cmp(&b.0));
        at_weight(&near, around.weight_before, share * total)
    }))
}

/// The bin in which a running sum reaches a weight, with the nearest filled one on either side.
struct Around {
    first: usize,
    last: usize,
    weight_before: f64,
}

impl Around {
    fn find(bins: &[f64], wanted: f64) -> Self {
        let (mut running, mut before, mut first) = (0.0, 0.0, 0);
        let mut reached = None;
        for (bin, &weight) in bins.iter().enumerate().filter(|&(_, &weight)| weight > 0.0) {
            if reached.is_some() {
                return Self { first, last: bin, weight_before: before };
            }
            if running + weight >= wanted {
                reached = Some(bin);
            } else {
                (first, before) = (bin, running);
            }
            running += weight;
        }
        Self { first, last: bins.len() - 1, weight_before: before }
    }
}

/// - `near`: rising, not empty
fn at_weight(near: &[(f64, f64)], weight_before: f64, wanted: f64) -> f64 {
    let mut running = weight_before;
    let mut last: Option<(f64, f64)> = None;
    for &(value, weight) in near {
        let place = running + 0.5 * weight;
        running += weight;
        if place >= wanted {
            return match last {
                Some((place_before, value_before)) if place > place_before => {
                    let f = (wanted - place_before) / (place - place_before);
                    value_before + f * (value - value_before)
                }
                _ => value,
            };
        }
        last = Some((place, value));
    }
    last.map_or(f64::NAN, |(_, value)| value)
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// By hand: weights 1, 2, 1 at 0, 1, 3 stand at 0.5, 2 and 3.5 of 4, so the median is the middle
    /// one, the quarter is a third of the way from the first to it.
    #[test]
    fn analytic_three_values() {
        let values = [(3.0, 1.0), (0.0, 1.0), (1.0, 2.0)];
        let [quarter, median, most] = percentiles(&values, [0.25, 0.5, 1.0]).unwrap();
        assert_relative_eq!(quarter, 1.0 / 3.0, epsilon = 1e-12);
        assert_relative_eq!(median, 1.0, epsilon = 1e-12);
        assert_relative_eq!(most, 3.0, epsilon = 1e-12);
        assert_eq!(percentiles(&[], [0.5]), None);
        assert_eq!(percentiles(&[(1.0, 0.0)], [0.5]), None);
        assert_eq!(percentiles(&[(7.0, 0.3), (9.0, 0.0)], [0.05, 0.95]), Some([7.0, 7.0]));
    }

    /// The same from sorting everything, for lumpy values of very different weights.
    #[test]
    fn twin_bins_give_what_sorting_all_gives() {
        let lumpy = |k: u32| {
            let x = f64::from(k.wrapping_mul(2_654_435_761) % 10_007) / 10_007.0;
            ((7.0 * x).floor() + x.powi(9), (x * 12.9898).sin().abs() * 10_f64.powf(4.0 * x))
        };
        let mut values: Vec<(f64, f64)> = (0..5000).map(lumpy).collect();
        let shares = [0.0, 0.01, 0.05, 0.5, 0.95, 0.999, 1.0];
        let found = percentiles(&values, shares).unwrap();
        let total: f64 = values.iter().map(|(_, weight)| weight).sum();
        values.sort_unstable_by(|a, b| a.0.total_cmp(&b.0));
        for (share, found) in shares.into_iter().zip(found) {
            assert_relative_eq!(found, at_weight(&values, 0.0, share * total), epsilon = 1e-9);
        }
    }
}
