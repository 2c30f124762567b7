/// Where a quantity that is above 0 at the start and not at the end crosses.
///
/// False position with the Illinois correction, and halving where that closes in too slowly.
///
/// - `within`: how closely it is found
///
/// # Source
///
/// Dowell & Jarratt, *A modified regula falsi method*, BIT 11, 1971.
pub(crate) fn first_at_or_below_zero(
    [from, to]: [f64; 2],
    within: f64,
    quantity: impl Fn(f64) -> f64,
) -> f64 {
    let (mut at_above, mut at_below) = (from, to);
    let (mut above, mut below) = (quantity(at_above), quantity(at_below));
    let mut halve = false;
    while at_below - at_above > within {
        let width = at_below - at_above;
        let share = if halve { 0.5 } else { (above / (above - below)).clamp(0.01, 0.99) };
        let at = at_above + share * width;
        let value = quantity(at);
        if value > 0.0 {
            (at_above, above, below) = (at, value, 0.5 * below);
        } else {
            (at_below, below, above) = (at, value, 0.5 * above);
        }
        halve = at_below - at_above > 0.5 * width;
    }
    at_below
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Roots by hand, of functions that bend either way; each takes few evaluations.
    #[test]
    fn analytic_crossings_are_found() {
        let cases: [(&dyn Fn(f64) -> f64, f64); 4] = [
            (&|t| 2.0 - t * t, 2_f64.sqrt()),
            (&|t| (1.0 - t).exp() - 1.0, 1.0),
            (&|t| 1.0 - t.powi(9), 1.0),
            (&|t| 0.3 - t, 0.3),
        ];
        for (quantity, root) in cases {
            let evaluations = std::cell::Cell::new(0);
            let found = first_at_or_below_zero([0.0, 3.0], 1e-11, |t| {
                evaluations.set(evaluations.get() + 1);
                quantity(t)
            });
            assert!((found - root).abs() < 2e-11, "{found} {root}");
            assert!(evaluations.get() < 60, "{}", evaluations.get());
        }
    }
}
