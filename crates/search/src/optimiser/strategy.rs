//! Constants of covariance matrix adaptation.

/// What covariance matrix adaptation takes for granted, given numbers and population.
///
/// # Source
///
/// Hansen, arXiv:1604.00772, table 1, equations 48 to 58, with the negative weights (active
/// covariance matrix adaptation).
#[derive(Debug, Clone, PartialEq)]
pub struct Strategy {
    /// Candidates of a generation, λ.
    pub population: usize,
    /// Those that pull the mean, μ.
    pub parents: usize,
    /// Of the candidates, best first; the first μ are positive and sum to 1.
    pub weights: Vec<f64>,
    /// How many parents of equal weight these are worth, μ_eff.
    pub parents_worth: f64,
    /// c_σ.
    pub step_path_rate: f64,
    /// d_σ.
    pub step_damping: f64,
    /// c_c.
    pub path_rate: f64,
    /// c_1.
    pub rank_one_rate: f64,
    /// c_μ.
    pub rank_many_rate: f64,
    /// Length to expect of n normal numbers.
    pub normal_length: f64,
}

impl Strategy {
    /// λ = 4 + ⌊3 ln n⌋.
    pub fn default_population(n: usize) -> usize {
        4 + (3.0 * (n as f64).ln()) as usize
    }

    /// - `n`: numbers of a candidate, from 1
    /// - `population`: from 4
    pub fn new(n: usize, population: usize) -> Self {
        let parents = population / 2;
        let raw = raw_weights(population);
        let parents_worth = worth(&raw[..parents]);
        let n = n as f64;
        let step_path_rate = (parents_worth + 2.0) / (n + parents_worth + 5.0);
        let excess = ((parents_worth - 1.0) / (n + 1.0)).sqrt() - 1.0;
        let share = parents_worth / n;
        let rank_one_rate = 2.0 / ((n + 1.3).powi(2) + parents_worth);
        let rank_many = 2.0 * (0.25 + parents_worth + 1.0 / parents_worth - 2.0)
            / ((n + 2.0).powi(2) + parents_worth);
        let mut strategy = Self {
            population,
            parents,
            weights: raw,
            parents_worth,
            step_path_rate,
            step_damping: 1.0 + 2.0 * excess.max(0.0) + step_path_rate,
            path_rate: (4.0 + share) / (n + 4.0 + 2.0 * share),
            rank_one_rate,
            rank_many_rate: rank_many.min(1.0 - rank_one_rate),
            normal_length: n.sqrt() * (1.0 - 1.0 / (4.0 * n) + 1.0 / (21.0 * n * n)),
        };
        strategy.scale_weights(n);
        strategy
    }

    /// Makes the positive weights sum to 1, and the negative ones to the least of three limits.
    fn scale_weights(&mut self, n: f64) {
        let against_worth = worth(&self.weights[self.parents..]);
        let (one, many) = (self.rank_one_rate, self.rank_many_rate);
        let by_rates = 1.0 + one / many;
        let by_worth = 1.0 + 2.0 * against_worth / (self.parents_worth + 2.0);
        let to_stay_definite = (1.0 - one - many) / (n * many);
        let against = by_rates.min(by_worth).min(to_stay_definite);
        let sum_of = |sign: f64| self.weights.iter().map(|w| (sign * w).max(0.0)).sum::<f64>();
        let (sum_for, sum_against) = (sum_of(1.0), sum_of(-1.0));
        for weight in &mut self.weights {
            *weight *= if *weight > 0.0 { 1.0 / sum_for } else { against / sum_against };
        }
    }
}

/// ln((λ + 1) / 2) − ln i.
fn raw_weights(population: usize) -> Vec<f64> {
    let middle = ((population as f64 + 1.0) / 2.0).ln();
    (1..=population).map(|rank| middle - (rank as f64).ln()).collect()
}

/// (Σ w)² / Σ w².
fn worth(weights: &[f64]) -> f64 {
    weights.iter().sum::<f64>().powi(2) / weights.iter().map(|w| w * w).sum::<f64>()
}

#[cfg(test)]
mod tests {
    use approx::assert_relative_eq;

    use super::*;

    /// Defaults for ten numbers, worked out by hand from table 1 of arXiv:1604.00772, to the digits
    /// written here.
    #[test]
    fn published_defaults_for_ten_numbers() {
        let strategy = Strategy::new(10, Strategy::default_population(10));
        assert_eq!((strategy.population, strategy.parents), (10, 5));
        assert_relative_eq!(strategy.parents_worth, 3.1673, epsilon = 5e-5);
        assert_relative_eq!(strategy.step_path_rate, 0.2844, epsilon = 5e-5);
        assert_relative_eq!(strategy.step_damping, 1.2844, epsilon = 5e-5);
        assert_relative_eq!(strategy.path_rate, 0.2950, epsilon = 5e-5);
        assert_relative_eq!(strategy.rank_one_rate, 0.015_28, epsilon = 5e-6);
    }

    /// Equations 49 to 53: the positive weights sum to 1; the sum of all keeps the decay of the
    /// covariance at or below zero in expectation.
    #[test]
    fn analytic_weights_balance() {
        for (n, population) in [(1, 4), (2, 6), (10, 10), (30, 14), (10, 80), (100, 17)] {
            let strategy = Strategy::new(n, population);
            let (for_it, against) = strategy.weights.split_at(strategy.parents);
            assert_relative_eq!(for_it.iter().sum::<f64>(), 1.0, max_relative = 1e-14);
            assert!(for_it.iter().all(|w| *w > 0.0) && against.iter().all(|w| *w <= 0.0));
            let least = -1.0 - strategy.rank_one_rate / strategy.rank_many_rate;
            assert!(against.iter().sum::<f64>() >= least - 1e-12);
        }
    }
}
