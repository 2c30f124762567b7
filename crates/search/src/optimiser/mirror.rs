//! How the unit box is kept to.
//!
//! The search moves freely in all of space; a candidate is mirrored at the faces of the box, as often
//! as it takes, before it is scored. To the search the box repeats itself without a seam, so nothing
//! is punished and, far from the faces, nothing changes.

/// Mirrors every number into [0, 1]; those that are inside stay as they are.
pub(crate) fn mirrored<'a>(free: impl IntoIterator<Item = &'a f64>) -> Vec<f64> {
    let fold = |value: &f64| {
        let within_two = value.rem_euclid(2.0);
        if within_two > 1.0 { 2.0 - within_two } else { within_two }
    };
    free.into_iter().map(fold).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    /// By hand; binary fractions, so that nothing is rounded.
    #[test]
    fn analytic_mirrors_stand_at_every_integer() {
        let free = [0.0, 1.0, 0.25, -0.25, 1.25, 2.25, -1.25, -7.75, 5.0];
        let inside = [0.0, 1.0, 0.25, 0.25, 0.75, 0.25, 0.75, 0.25, 1.0];
        assert_eq!(mirrored(&free), inside);
    }
}
