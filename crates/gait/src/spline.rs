//! Periodic cubic spline over equal steps.

/// Second derivatives at the rows of the periodic cubic spline through them, times step²/6.
///
/// The rows' conditions m₋ + 4m + m₊ = y₋ − 2y + y₊ are solved by elimination with the corners
/// taken out (Sherman–Morrison); the matrix is diagonally dominant, so no pivots are needed.
///
/// - `values`: one period, the first row not repeated at the end; at least 2
///
/// # Source
///
/// Press et al., *Numerical Recipes*, 3rd ed., 2007, secs. 2.7.2 and 3.3.
pub fn periodic_second_derivatives(values: &[f64]) -> Vec<f64> {
    let n = values.len();
    let second_difference =
        |k: usize| values[(k + n - 1) % n] - 2.0 * values[k] + values[(k + 1) % n];
    if n == 2 {
        // Both neighbours of a row are the same one: 4m₀ + 2m₁ = r₀ and 2m₀ + 4m₁ = r₁.
        let (first, second) = (second_difference(0), second_difference(1));
        return vec![(2.0 * first - second) / 6.0, (2.0 * second - first) / 6.0];
    }
    // A = T + u vᵀ with u = (−4, 0…0, 1), v = (1, 0…0, −1/4), so T keeps a dominant diagonal.
    let corner = -4.0;
    let mut diagonal = vec![4.0; n];
    diagonal[0] -= corner;
    diagonal[n - 1] -= 1.0 / corner;
    let right: Vec<f64> = (0..n).map(second_difference).collect();
    let mut edge = vec![0.0; n];
    (edge[0], edge[n - 1]) = (corner, 1.0);
    let solution = solve_tridiagonal(&diagonal, right);
    let correction = solve_tridiagonal(&diagonal, edge);
    let factor = (solution[0] + solution[n - 1] / corner)
        / (1.0 + correction[0] + correction[n - 1] / corner);
    solution.iter().zip(&correction).map(|(s, c)| s - factor * c).collect()
}

/// Off-diagonals all 1.
fn solve_tridiagonal(diagonal: &[f64], mut right: Vec<f64>) -> Vec<f64> {
    let n = right.len();
    let mut pivots = diagonal.to_vec();
    for k in 1..n {
        pivots[k] -= 1.0 / pivots[k - 1];
        right[k] -= right[k - 1] / pivots[k - 1];
    }
    right[n - 1] /= pivots[n - 1];
    for k in (0..n - 1).rev() {
        right[k] = (right[k] - right[k + 1]) / pivots[k];
    }
    right
}
