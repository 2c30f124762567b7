//! One run of covariance matrix adaptation, from a mean and a step until it stalls.

use nalgebra::{DMatrix, DVector, SymmetricEigen};
use rand::Rng;
use rand_distr::StandardNormal;
use rand_xoshiro::Xoshiro256PlusPlus;
use serde::{Deserialize, Serialize};

use super::Strategy;
use super::stall::Recent;

/// Where candidates are drawn, and what the run has learnt so far.
#[derive(Debug, Clone, Serialize, Deserialize)]
pub(crate) struct Cma {
    pub(crate) population: usize,
    pub(crate) recent: Recent,
    mean: DVector<f64>,
    /// σ.
    step: f64,
    first_step: f64,
    covariance: DMatrix<f64>,
    /// p_σ.
    step_path: DVector<f64>,
    /// p_c.
    path: DVector<f64>,
    /// Generations learnt from.
    age: i32,
}

/// The covariance taken apart: C = B·D²·Bᵀ.
pub(crate) struct Axes {
    /// B.
    directions: DMatrix<f64>,
    /// D.
    lengths: DVector<f64>,
}

impl Axes {
    fn stretch(&self, normal: &DVector<f64>) -> DVector<f64> {
        &self.directions * self.lengths.component_mul(normal)
    }

    /// D⁻¹·Bᵀ·y, the normal numbers that a step was made of.
    fn relax(&self, step: &DVector<f64>) -> DVector<f64> {
        self.directions.tr_mul(step).component_div(&self.lengths)
    }

    /// Largest over least variance.
    pub(crate) fn condition(&self) -> f64 {
        (self.lengths.max() / self.lengths.min()).powi(2)
    }
}

impl Cma {
    pub(crate) fn new(mean: &[f64], step: f64, population: usize) -> Self {
        let n = mean.len();
        Self {
            population,
            recent: Recent::default(),
            mean: DVector::from_column_slice(mean),
            step,
            first_step: step,
            covariance: DMatrix::identity(n, n),
            step_path: DVector::zeros(n),
            path: DVector::zeros(n),
            age: 0,
        }
    }

    pub(crate) fn axes(&self) -> Axes {
        let eigen = SymmetricEigen::new(self.covariance.clone());
        // Rounding may leave the least variance at or below zero; the run is about to stall then.
        let least = eigen.eigenvalues.max() * 1e-18;
        let lengths = eigen.eigenvalues.map(|variance| variance.max(least).sqrt());
        Axes { directions: eigen.eigenvectors, lengths }
    }

    /// Principal axes of the candidates, one a column, as long as their standard deviations.
    ///
    /// - `shortest`: length that none is below
    pub(crate) fn spread(&self, axes: &Axes, shortest: f64) -> DMatrix<f64> {
        let lengths = axes.lengths.map(|length| (self.step * length).max(shortest));
        &axes.directions * DMatrix::from_diagonal(&lengths)
    }

    /// Draws a generation's steps from the mean, in units of σ.
    pub(crate) fn draw(&self, axes: &Axes, rng: &mut Xoshiro256PlusPlus) -> Vec<DVector<f64>> {
        let n = self.mean.len();
        let mut normal = || DVector::from_fn(n, |_, _| rng.sample::<f64, _>(StandardNormal));
        (0..self.population).map(|_| axes.stretch(&normal())).collect()
    }

    /// Where a step leads; may be outside of the box.
    pub(crate) fn place(&self, step: &DVector<f64>) -> DVector<f64> {
        &self.mean + self.step * step
    }

    /// A step, as far as the faces of the box let it go.
    fn stopped(&self, step: &DVector<f64>) -> DVector<f64> {
        // Less what is beyond, and not anew from the place, which would be rounded inside, too.
        step - self.place(step).map(|at| at - at.clamp(0.0, 1.0)) / self.step
    }

    /// Learns from a whole generation.
    ///
    /// - `steps`: as drawn from `axes`, best first
    ///
    /// # Source
    ///
    /// Hansen, arXiv:1604.00772, equations 41 to 47.
    pub(crate) fn learn(&mut self, axes: &Axes, steps: &[&DVector<f64>]) {
        let strategy = Strategy::new(self.mean.len(), self.population);
        let parents = steps.iter().zip(&strategy.weights).take(strategy.parents);
        let none = DVector::zeros(self.mean.len());
        let pull = parents.fold(none, |pull, (step, weight)| pull + *weight * self.stopped(step));
        self.mean += self.step * &pull;
        self.age += 1;
        let on_course = self.lengthen_paths(axes, &strategy, &pull);
        self.adapt_covariance(axes, &strategy, steps, on_course);
        let excess = self.step_path.norm() / strategy.normal_length - 1.0;
        self.step *= (strategy.step_path_rate / strategy.step_damping * excess).exp();
        // Candidates spread wider than the box would all be at its faces.
        self.step = self.step.min(1.0 / self.covariance.diagonal().max().sqrt());
    }

    /// Both evolution paths; false (h_σ = 0) while the step's path is too long to add to the other.
    fn lengthen_paths(&mut self, axes: &Axes, strategy: &Strategy, pull: &DVector<f64>) -> bool {
        let rate = strategy.step_path_rate;
        let upright = &axes.directions * axes.relax(pull);
        let gain = (rate * (2.0 - rate) * strategy.parents_worth).sqrt();
        self.step_path = (1.0 - rate) * &self.step_path + gain * upright;
        let settled = (1.0 - (1.0 - rate).powi(2 * self.age)).sqrt();
        let allowed = 1.4 + 2.0 / (self.mean.len() as f64 + 1.0);
        let on_course = self.step_path.norm() / settled < allowed * strategy.normal_length;
        self.path *= 1.0 - strategy.path_rate;
        if on_course {
            let rate = strategy.path_rate;
            self.path += (rate * (2.0 - rate) * strategy.parents_worth).sqrt() * pull;
        }
        on_course
    }

    fn adapt_covariance(
        &mut self,
        axes: &Axes,
        strategy: &Strategy,
        steps: &[&DVector<f64>],
        on_course: bool,
    ) {
        let (one, many) = (strategy.rank_one_rate, strategy.rank_many_rate);
        let rate = strategy.path_rate;
        let make_up = if on_course { 0.0 } else { one * rate * (2.0 - rate) };
        let sum: f64 = strategy.weights.iter().sum();
        self.covariance *= 1.0 + make_up - one - many * sum;
        self.covariance.ger(one, &self.path, &self.path, 1.0);
        for (step, weight) in steps.iter().zip(&strategy.weights) {
            // A bad step counts by its direction alone, or the covariance might not stay definite.
            let length_2 = axes.relax(step).norm_squared();
            let shrunk = if *weight < 0.0 { self.mean.len() as f64 / length_2 } else { 1.0 };
            self.covariance.ger(many * weight * shrunk, step, step, 1.0);
        }
    }

    /// Whether σ has shrunk to less than a share of the first, along every coordinate.
    pub(crate) fn has_shrunk(&self, share: f64) -> bool {
        let least = share * self.first_step;
        let narrow = self.covariance.diagonal().iter().all(|v| self.step * v.sqrt() < least);
        narrow && self.path.iter().all(|along| self.step * along.abs() < least)
    }
}

#[cfg(test)]
mod tests {
    use rand::SeedableRng;

    use super::*;

    /// On a bowl f = Σ aᵢ·xᵢ² the covariance becomes a multiple of the inverse second derivatives:
    /// variances along two numbers are as 1/a, and the numbers don't correlate (Hansen, section 0.3).
    /// It is learnt from samples, so up to a factor of 3.
    #[test]
    fn analytic_covariance_becomes_the_inverse_second_derivative() {
        let stiffness = [1.0, 1e2, 1e4];
        let mut run = Cma::new(&[0.7, 0.4, 0.6], 0.1, 7);
        let mut rng = Xoshiro256PlusPlus::seed_from_u64(4);
        for _ in 0..120 {
            let axes = run.axes();
            let steps = run.draw(&axes, &mut rng);
            let cost = |step: &DVector<f64>| -> f64 {
                run.place(step).iter().zip(stiffness).map(|(x, a)| a * (x - 0.5).powi(2)).sum()
            };
            let mut ranked: Vec<&DVector<f64>> = steps.iter().collect();
            ranked.sort_by(|one, other| cost(one).total_cmp(&cost(other)));
            run.learn(&axes, &ranked);
        }
        let variance = run.covariance.diagonal();
        for (k, a) in stiffness.iter().enumerate() {
            let ratio = variance[k] * a / variance[0];
            assert!((1.0 / 3.0..3.0).contains(&ratio), "{k}: {ratio}");
        }
        assert!((run.axes().condition().log10() - 4.0).abs() < 0.5);
        assert!((run.mean.add_scalar(-0.5)).amax() < 1e-6);
    }

    /// B·D·(D⁻¹·Bᵀ·y) = y, and C = (B·D)·(B·D)ᵀ.
    #[test]
    fn analytic_axes_are_the_root_of_the_covariance() {
        let mut run = Cma::new(&[0.5; 3], 1.0, 7);
        let root = DMatrix::from_row_slice(3, 3, &[2.0, 0.3, -0.1, 0.0, 1.0, 0.5, 0.0, 0.0, 0.1]);
        run.covariance = &root * root.transpose();
        let axes = run.axes();
        let step = DVector::from_column_slice(&[0.4, -0.7, 0.2]);
        assert!((axes.stretch(&axes.relax(&step)) - &step).amax() < 1e-13);
        let spread = run.spread(&axes, 0.0);
        assert!((&spread * spread.transpose() - &run.covariance).amax() < 1e-13);
    }

    /// By hand: from 0.9, with σ = 0.5, one step of (1, −1) ends at the face 1, 0.1 away, and at 0.4.
    #[test]
    fn analytic_steps_stop_at_faces() {
        let run = Cma::new(&[0.9, 0.9], 0.5, 6);
        let stopped = run.stopped(&DVector::from_column_slice(&[1.0, -1.0]));
        assert!((stopped - DVector::from_column_slice(&[0.2, -1.0])).amax() < 1e-15);
    }
}
