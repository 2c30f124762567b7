//! How the unit box is kept to.
//!
//! Candidates are drawn in all of space and stopped at the faces before they are scored, so that a
//! best at a face is met exactly. The mean follows what was scored and so stays in the box; the
//! covariance learns from what was drawn, or it would collapse at a face and never leave it. Nothing
//! is punished, and away from the faces nothing changes.

/// The nearest place in the unit box.
pub(crate) fn stopped<'a>(free: impl IntoIterator<Item = &'a f64>) -> Vec<f64> {
    free.into_iter().map(|value| value.clamp(0.0, 1.0)).collect()
}
