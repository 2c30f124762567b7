/// How a measure runs from the middle of the body to its ends.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum ProfileShape {
    /// v(ξ) = ends + (middle − ends)·4ξ(1 − ξ).
    Parabolic,
    /// The same everywhere.
    Uniform,
}

/// A measure given at the middle and at the ends of the body.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Profile {
    /// At half the body's length.
    pub middle: f64,
    /// At nose and tail.
    pub ends: f64,
    /// In between.
    pub shape: ProfileShape,
}

impl Profile {
    /// Value at a fraction of the body from the nose.
    pub fn at(&self, fraction: f64) -> f64 {
        match self.shape {
            ProfileShape::Uniform => self.middle,
            ProfileShape::Parabolic => {
                self.ends + (self.middle - self.ends) * 4.0 * fraction * (1.0 - fraction)
            }
        }
    }

    /// Values at the midpoints of segments with these lengths: shape (n).
    pub fn sampled(&self, lengths_m: &[f64]) -> Vec<f64> {
        midpoint_fractions(lengths_m).map(|fraction| self.at(fraction)).collect()
    }
}

/// A total mass shared out by a line density that falls from the middle to the ends.
///
/// - `total_kg`: what the parts add up to
/// - `ends_to_middle`: line density at the ends over that at the middle
/// - returns kg, shape (n)
pub fn line_density_masses(
    lengths_m: &[f64],
    total_kg: f64,
    ends_to_middle: f64,
    shape: ProfileShape,
) -> Vec<f64> {
    let density = Profile { middle: 1.0, ends: ends_to_middle, shape };
    let shares: Vec<f64> = density
        .sampled(lengths_m)
        .iter()
        .zip(lengths_m)
        .map(|(density, length_m)| density * length_m)
        .collect();
    let all: f64 = shares.iter().sum();
    shares.iter().map(|share| total_kg * share / all).collect()
}

/// Segment midpoints as fractions of the body from the nose.
pub(crate) fn midpoint_fractions(lengths_m: &[f64]) -> impl Iterator<Item = f64> + '_ {
    let body_m: f64 = lengths_m.iter().sum();
    lengths_m.iter().scan(0.0, move |front_m, &length_m| {
        let middle_m = *front_m + length_m / 2.0;
        *front_m += length_m;
        Some(middle_m / body_m)
    })
}
