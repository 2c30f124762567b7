use nalgebra::{Matrix3, Rotation3, Vector3};

/// Attitude of a segment with this heading and elevation in a body that lies level and straight
/// along its wave's axis: Rz(heading)·Ry(−elevation).
pub fn attitude_along_axis(heading_rad: f64, elevation_rad: f64) -> Matrix3<f64> {
    let heading = Rotation3::from_axis_angle(&Vector3::z_axis(), heading_rad);
    let elevation = Rotation3::from_axis_angle(&Vector3::y_axis(), -elevation_rad);
    (heading * elevation).into_inner()
}

/// The rotation nearest to a matrix in the Frobenius norm: the orthogonal factor of its polar
/// decomposition, determinant +1.
///
/// Scaled Newton iteration; where that can't work (singular, or nearer to a reflection) the
/// singular value decomposition decides.
///
/// # Source
///
/// Markley, Cheng, Crassidis, Oshman, *Averaging quaternions*, J. Guidance, Control and Dynamics
/// 30(4), 2007; Higham, *Computing the polar decomposition*, SIAM J. Sci. Stat. Comput. 7, 1986.
pub fn nearest_rotation(sum: &Matrix3<f64>) -> Matrix3<f64> {
    let scale = sum.norm();
    let mut factor = sum / scale;
    // A rotation scaled to unit norm has determinant 3^(−3/2) ≈ 0.19.
    if !(scale > 0.0 && factor.determinant() > 1e-6) {
        return nearest_by_singular_values(sum);
    }
    for _ in 0..30 {
        let cofactors = cofactors(&factor);
        let determinant = factor.column(0).dot(&cofactors.column(0));
        let gamma = determinant.abs().cbrt().recip();
        let next = (factor * gamma + cofactors / (gamma * determinant)) * 0.5;
        let change = (next - factor).norm();
        factor = next;
        if change < 1e-8 {
            // Convergence is quadratic, so this step's error is below rounding.
            return factor;
        }
    }
    nearest_by_singular_values(sum)
}

/// Matrix of cofactors: determinant times inverse transpose.
fn cofactors(matrix: &Matrix3<f64>) -> Matrix3<f64> {
    let (x, y, z) = (matrix.column(0), matrix.column(1), matrix.column(2));
    Matrix3::from_columns(&[y.cross(&z), z.cross(&x), x.cross(&y)])
}

fn nearest_by_singular_values(sum: &Matrix3<f64>) -> Matrix3<f64> {
    let svd = sum.svd(true, true);
    let left = svd.u.expect("asked for");
    let right = svd.v_t.expect("asked for");
    let mut signs = Vector3::repeat(1.0);
    signs[svd.singular_values.imin()] = (left * right).determinant().signum();
    left * Matrix3::from_diagonal(&signs) * right
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// The polar factor of R·S with S symmetric positive definite is R itself.
    #[test]
    fn analytic_polar_factor_of_a_stretched_rotation() {
        let rotation = Rotation3::from_euler_angles(0.4, -1.1, 2.5).into_inner();
        let stretch = Matrix3::new(3.0, 0.2, -0.1, 0.2, 0.5, 0.05, -0.1, 0.05, 1.2);
        assert_relative_eq!(nearest_rotation(&(rotation * stretch)), rotation, epsilon = 1e-14);
    }

    /// The nearest rotation to diag(1, 1, −ε) is 1: the least singular value takes the sign.
    #[test]
    fn analytic_nearest_to_a_weak_reflection() {
        let sum = Matrix3::from_diagonal(&Vector3::new(1.0, 1.0, -0.1));
        assert_relative_eq!(nearest_rotation(&sum), Matrix3::identity(), epsilon = 1e-14);
    }
}
