//! What drops from one height measure, as a function of what the robot is like.
//!
//! Of the sound drops that stayed upright: polynomials give the mean and, from what is left over, the
//! scatter of each measure; how measures vary together is the same for all truths.

use nalgebra::{DMatrix, DVector, Matrix4, SVector, Vector4};

use rand::Rng;

use super::measures::{MEASURED_TO, MEASURES, Measures, of_outcome};
use crate::{DropError, Outcome, Truth};

/// Terms of a mean: up to the fifth power of the doubt, the square of the wave, and both together.
const TERMS: usize = 10;
/// Terms of a logarithm of scatter: up to the square of the doubt.
const SCATTER_TERMS: usize = 3;
/// Least number of drops that they are found from.
pub const FEWEST: usize = 40;
/// Mean of the logarithm of a squared standard normal number: −γ − ln 2.
const MEAN_LOG_SQUARE: f64 = -1.270_362_845;
/// Degrees of freedom of Student's t: tails as long as drops have that went a little wrong.
const TAILS: f64 = 5.0;

/// Share of what is left over that a robot's drops have in common: its own mass, lift, drag and pressure
/// centre, and what the polynomials miss. A quarter was found of `reed-16` from 7 m.
const IN_COMMON: f64 = 0.25;

/// So many drops of one robot tell as much as this many that have nothing in common.
pub fn telling(drops: f64) -> f64 {
    drops / (1.0 + (drops - 1.0) * IN_COMMON)
}

/// Drops from one height.
#[derive(Debug, Clone)]
pub struct Likeness {
    means: [SVector<f64, TERMS>; MEASURES],
    /// Of the logarithms of the scatters.
    scatters: [SVector<f64, SCATTER_TERMS>; MEASURES],
    /// Ends of those logarithms among the drops that were flown: beyond, nothing is known.
    ends: [[f64; 2]; MEASURES],
    /// Of what is left over, by the scatter.
    together: Matrix4<f64>,
    /// What is left over of every drop, by the scatter.
    left: Vec<Vector4<f64>>,
}

impl Likeness {
    /// Of sound drops from one height.
    ///
    /// # Errors
    ///
    /// [`DropError::TooFewToRead`] where too few of them stayed upright.
    pub fn of(height_m: f64, truths: &[Truth], outcomes: &[&Outcome]) -> Result<Self, DropError> {
        let upright = upright(truths, outcomes);
        if upright.len() < FEWEST {
            return Err(DropError::TooFewToRead { found: upright.len(), needed: FEWEST, height_m });
        }
        let rows = [0, 1, 2, 3].map(|measure| Measured::of(&upright, measure));
        let left: Vec<Vector4<f64>> = (0..upright.len())
            .map(|drop| Vector4::from_fn(|measure, _| rows[measure].left[drop]))
            .collect();
        let squares: Matrix4<f64> = left.iter().map(|left| left * left.transpose()).sum();
        let together = squares / upright.len() as f64;
        let (means, scatters) =
            (rows.each_ref().map(|r| r.mean), rows.each_ref().map(|r| r.scatter));
        let ends = rows.each_ref().map(|row| row.ends);
        Ok(Self { means, scatters, ends, together, left })
    }

    /// What a drop measures on average.
    pub fn mean(&self, truth: Truth) -> Vector4<f64> {
        let terms = terms(truth);
        Vector4::from_fn(|measure, _| self.means[measure].dot(&terms))
    }

    /// What is left over of one of the drops that were flown, by the scatter.
    pub fn left(&self, random: &mut impl Rng) -> Vector4<f64> {
        self.left[random.random_range(0..self.left.len())]
    }

    /// A drop of a robot like this.
    ///
    /// - `common`: what is left over of all of its drops
    /// - `own`: what is left over of this one
    pub fn drawn(&self, truth: Truth, common: Vector4<f64>, own: Vector4<f64>) -> Vector4<f64> {
        let left = IN_COMMON.sqrt() * common + (1.0 - IN_COMMON).sqrt() * own;
        self.mean(truth) + self.scatter(truth).component_mul(&left)
    }

    fn scatter(&self, truth: Truth) -> Vector4<f64> {
        let terms = scatter_terms(truth);
        Vector4::from_fn(|measure, _| {
            let [low, high] = self.ends[measure];
            self.scatters[measure].dot(&terms).clamp(low, high).exp()
        })
    }

    /// How far the mean of some values is off that of a truth, by its own scatter.
    pub fn off(&self, truth: Truth, measure: usize, values: &[f64]) -> f64 {
        let n = values.len() as f64;
        let off = values.iter().sum::<f64>() / n - self.mean(truth)[measure];
        let scatter = self.scatter(truth)[measure].hypot(MEASURED_TO[measure]);
        off.abs() * telling(n).sqrt() / scatter
    }

    /// Between what the mean of so many drops should be, at 90 %.
    pub fn means_of(&self, truth: Truth, measure: usize, drops: usize) -> [f64; 2] {
        let scatter = self.scatter(truth)[measure].hypot(MEASURED_TO[measure]);
        let off = 1.645 * scatter / telling(drops as f64).sqrt();
        [self.mean(truth)[measure] - off, self.mean(truth)[measure] + off]
    }

    /// For drops of a robot like this of which those things were measured.
    pub fn chances(&self, truth: Truth, measured: [bool; MEASURES]) -> Chances {
        let scatter = Matrix4::from_diagonal(&self.scatter(truth));
        let errors = Vector4::from(MEASURED_TO).map(|to| to * to);
        let all = scatter * self.together * scatter + Matrix4::from_diagonal(&errors);
        // What wasn't measured has nothing to do with the rest, and a scatter of 1.
        let own = Matrix4::from_fn(|a, b| match (measured[a] && measured[b], a == b) {
            (true, _) => all[(a, b)],
            (false, same) => f64::from(u8::from(same)),
        });
        let cholesky = own.cholesky().expect("errors of measuring make it positive definite");
        let log_root = cholesky.l().diagonal().map(f64::ln).sum();
        Chances {
            mean: self.mean(truth),
            inverse: cholesky.inverse(),
            log_root,
            measured: measured.iter().filter(|&&measured| measured).count() as f64,
        }
    }
}

/// Drops that stayed upright.
fn upright(truths: &[Truth], outcomes: &[&Outcome]) -> Vec<(Truth, Measures)> {
    let all = truths.iter().zip(outcomes).filter(|(_, outcome)| !outcome.summary.inverted);
    all.map(|(truth, outcome)| (*truth, of_outcome(outcome))).collect()
}

/// One measure of all drops.
struct Measured {
    mean: SVector<f64, TERMS>,
    scatter: SVector<f64, SCATTER_TERMS>,
    /// Of its logarithm.
    ends: [f64; 2],
    /// What is left over beside the mean, by the scatter: shape (drops).
    left: Vec<f64>,
}

impl Measured {
    fn of(upright: &[(Truth, Measures)], measure: usize) -> Self {
        let truths = rows(upright, terms);
        let doubts = rows(upright, scatter_terms);
        let seen = DVector::from_iterator(upright.len(), upright.iter().map(|(_, m)| m[measure]));
        let mean: SVector<f64, TERMS> = fitted(&truths, &seen);
        let off = seen - &truths * mean;
        // A tenth of what can be measured is no scatter: it keeps the logarithm above −∞.
        let least = 0.1 * MEASURED_TO[measure];
        let log = off.map(|off| 0.5 * ((off * off + least * least).ln() - MEAN_LOG_SQUARE));
        let scatter: SVector<f64, SCATTER_TERMS> = fitted(&doubts, &log);
        let logs = doubts * scatter;
        let ends = [logs.min(), logs.max()];
        let scatters = logs.map(f64::exp);
        let left = off.component_div(&scatters).iter().copied().collect();
        Self { mean, scatter, ends, left }
    }
}

/// How likely measures are of one truth.
#[derive(Debug, Clone)]
pub struct Chances {
    mean: Vector4<f64>,
    inverse: Matrix4<f64>,
    log_root: f64,
    measured: f64,
}

impl Chances {
    /// Square of the distance of the mean of some drops, by its own scatter.
    pub fn apart(&self, mean: &Measures, drops: f64) -> f64 {
        telling(drops) * self.square(mean)
    }

    /// Logarithm of the density, but for a constant: Student's t in as many directions as were
    /// measured.
    ///
    /// - `measures`: not a number where nothing was measured
    pub fn log(&self, measures: &Measures) -> f64 {
        let apart = self.square(measures);
        -0.5 * (TAILS + self.measured) * (apart / TAILS).ln_1p() - self.log_root
    }

    fn square(&self, measures: &Measures) -> f64 {
        let off = |k: usize| measures[k] - self.mean[k];
        let off = Vector4::from_fn(|k, _| if measures[k].is_nan() { 0.0 } else { off(k) });
        off.dot(&(self.inverse * off))
    }
}

/// The wave from −1 to 1, as the doubt is.
fn evened(truth: Truth) -> f64 {
    let middle = 0.5 * (1.0 + crate::WEAKEST_WAVE);
    (truth.wave - middle) / (1.0 - middle)
}

fn terms(truth: Truth) -> SVector<f64, TERMS> {
    let (u, w) = (truth.doubt, evened(truth));
    SVector::from([1.0, u, u * u, u.powi(3), u.powi(4), u.powi(5), w, w * w, u * w, u * u * w])
}

fn scatter_terms(truth: Truth) -> SVector<f64, SCATTER_TERMS> {
    let u = truth.doubt;
    SVector::from([1.0, u, u * u])
}

/// Shape (drops, terms).
fn rows<const N: usize>(
    upright: &[(Truth, Measures)],
    terms: impl Fn(Truth) -> SVector<f64, N>,
) -> DMatrix<f64> {
    let all: Vec<SVector<f64, N>> = upright.iter().map(|&(truth, _)| terms(truth)).collect();
    DMatrix::from_fn(all.len(), N, |row, column| all[row][column])
}

/// Least squares.
fn fitted<const N: usize>(rows: &DMatrix<f64>, seen: &DVector<f64>) -> SVector<f64, N> {
    let found = rows.clone().svd(true, true).solve(seen, 1e-12);
    let found = found.expect("singular vectors were asked for");
    SVector::from_fn(|term, _| found[term])
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;
    use statrs::distribution::{Continuous, StudentsT};

    const TRUTH: Truth = Truth { doubt: 0.4, wave: 0.93 };

    fn likeness() -> Likeness {
        let first = |value: f64| SVector::from_fn(|term, _| if term < 2 { value } else { 0.0 });
        Likeness {
            means: [first(4.0), first(0.1), first(0.8), first(3.0)],
            scatters: [-1.0, -2.0, -3.0, -1.5].map(|log: f64| SVector::from([log, 0.3, 0.0])),
            ends: [[-9.0, 9.0]; 4],
            together: Matrix4::from_fn(|a, b| if a == b { 1.0 } else { 0.4 }),
            left: vec![Vector4::repeat(0.5)],
        }
    }

    /// Of one measure alone: Student's t of statrs, but for a constant.
    #[test]
    fn twin_one_measure_is_students_t() {
        let chances = likeness().chances(TRUTH, [true, false, false, false]);
        let scatter = (-1.0 + 0.3 * 0.4_f64).exp().hypot(MEASURED_TO[0]);
        let known = StudentsT::new(4.0 * 1.4, scatter, TAILS).unwrap();
        let log = |distance_m: f64| chances.log(&[distance_m, f64::NAN, f64::NAN, f64::NAN]);
        for distance_m in [1.0, 5.0, 5.6, 9.0] {
            let apart = known.ln_pdf(distance_m) - known.ln_pdf(5.6);
            assert_relative_eq!(log(distance_m) - log(5.6), apart, epsilon = 1e-12);
        }
        // The same in the peak, whose height hangs on the scatter, at another truth.
        let other = Truth { doubt: -0.6, ..TRUTH };
        let at = |truth| likeness().chances(truth, [true, false, false, false]);
        let peak = |truth: Truth| {
            let mean = likeness().mean(truth)[0];
            at(truth).log(&[mean, f64::NAN, f64::NAN, f64::NAN])
        };
        let scatter = (-1.0 - 0.3 * 0.6_f64).exp().hypot(MEASURED_TO[0]);
        let other_known = StudentsT::new(0.0, scatter, TAILS).unwrap();
        let apart = other_known.ln_pdf(0.0) - known.ln_pdf(5.6);
        assert_relative_eq!(peak(other) - peak(TRUTH), apart, epsilon = 1e-12);
    }

    /// With all measured, one along the mean of the others' covariance is less far off than one
    /// against it; without errors of measuring, the square is that of the inverse by hand:
    /// (1 − ρ²)⁻¹·(a² − 2ρab + b²) for two.
    #[test]
    fn analytic_two_measures_together() {
        let chances = likeness().chances(TRUTH, [true, true, false, false]);
        let [a_m, b_m] = [-1.0, -2.0].map(|log: f64| (log + 0.12_f64).exp());
        let (a_all, b_all) = (a_m.hypot(0.05), b_m.hypot(0.05));
        let rho = 0.4 * a_m * b_m / (a_all * b_all);
        for (a, b) in [(1.0, 1.0), (1.0, -1.0), (2.0, 0.5)] {
            let measures = [5.6 + a * a_all, 0.14 + b * b_all, f64::NAN, f64::NAN];
            let by_hand = (a * a - 2.0 * rho * a * b + b * b) / (1.0 - rho * rho);
            // Three drops tell as much as 3/(1 + 2/4) = 2.
            assert_relative_eq!(chances.apart(&measures, 3.0), 2.0 * by_hand, epsilon = 1e-9);
        }
    }
}
