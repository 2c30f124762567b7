//! One value for a quantity of several launches.

use undulift_design::Take;

/// The share of launches that may be worse than the value taken.
const TENTH: f64 = 0.1;

/// The value that counts; absent where one that counts is, for none is worse than any.
///
/// - `high_is_good`: of the quantity, as it is wanted or required
pub(crate) fn taken(mut values: Vec<Option<f64>>, take: Take, high_is_good: bool) -> Option<f64> {
    // Least favourable first, those without a value before all others.
    let cost = |value: f64| if high_is_good { value } else { -value };
    values.sort_by(|a, b| match (a, b) {
        (Some(a), Some(b)) => cost(*a).total_cmp(&cost(*b)),
        (a, b) => a.is_some().cmp(&b.is_some()),
    });
    match take {
        Take::Worst => *values.first()?,
        Take::Mean => {
            let sum: f64 = values.iter().copied().sum::<Option<f64>>()?;
            Some(sum / values.len() as f64)
        }
        Take::Tenth => {
            let at = TENTH * (values.len() - 1) as f64;
            let (low, share) = (at.floor() as usize, at.fract());
            let first = values[low]?;
            if share == 0.0 {
                Some(first)
            } else {
                Some(first + share * (values[low + 1]? - first))
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use approx::assert_relative_eq;

    use super::*;

    fn some(values: &[f64]) -> Vec<Option<f64>> {
        values.iter().copied().map(Some).collect()
    }

    /// Of 0…10 the tenth from the bad side is 1 where much is good, 9 where little is; of 0…7 it
    /// lies seven tenths of the way from the worst to the next (numpy's quantile, linear).
    #[test]
    fn analytic_values_of_several_launches() {
        let eleven: Vec<f64> = (0..=10).rev().map(f64::from).collect();
        assert_relative_eq!(taken(some(&eleven), Take::Tenth, true).unwrap(), 1.0);
        assert_relative_eq!(taken(some(&eleven), Take::Tenth, false).unwrap(), 9.0);
        assert_relative_eq!(taken(some(&eleven[3..]), Take::Tenth, true).unwrap(), 0.7);
        assert_relative_eq!(taken(some(&eleven), Take::Mean, true).unwrap(), 5.0);
        assert_eq!(taken(some(&eleven), Take::Worst, true), Some(0.0));
        assert_eq!(taken(some(&eleven), Take::Worst, false), Some(10.0));
        assert_eq!(taken(some(&[3.0]), Take::Tenth, true), Some(3.0));
    }

    /// A launch without a value is the worst: it counts wherever the worst does.
    #[test]
    fn analytic_no_value_is_the_worst() {
        let mut values = some(&[4.0; 20]);
        values.push(None);
        for high_is_good in [true, false] {
            assert_eq!(taken(values.clone(), Take::Worst, high_is_good), None);
            assert_eq!(taken(values.clone(), Take::Mean, high_is_good), None);
            // Position 2 of 21: one without a value doesn't reach it, three do.
            assert_eq!(taken(values.clone(), Take::Tenth, high_is_good), Some(4.0));
            let more = [values.clone(), vec![None, None]].concat();
            assert_eq!(taken(more, Take::Tenth, high_is_good), None);
        }
    }
}
