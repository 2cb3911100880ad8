//! Small dense real systems: elimination in place.

/// Solves the row-major square system `matrix * x = right` in place by Gaussian elimination with partial pivoting;
/// `right` becomes `x`. `false` when the matrix is singular to working precision.
pub fn solve_in_place(matrix: &mut [f64], right: &mut [f64]) -> bool {
    let n = right.len();
    for k in 0..n {
        let Some(pivot) = (k..n).max_by(|a, b| matrix[a * n + k].abs().total_cmp(&matrix[b * n + k].abs())) else { return false };
        if matrix[pivot * n + k].abs() < f64::MIN_POSITIVE {
            return false;
        }
        if pivot != k {
            for j in k..n {
                matrix.swap(k * n + j, pivot * n + j);
            }
            right.swap(k, pivot);
        }
        for i in k + 1..n {
            let factor = matrix[i * n + k] / matrix[k * n + k];
            for j in k..n {
                matrix[i * n + j] -= factor * matrix[k * n + j];
            }
            right[i] -= factor * right[k];
        }
    }
    for k in (0..n).rev() {
        let known: f64 = (k + 1..n).map(|j| matrix[k * n + j] * right[j]).sum();
        right[k] = (right[k] - known) / matrix[k * n + k];
    }
    right.iter().all(|v| v.is_finite())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn solves_with_a_zero_on_the_diagonal() {
        let (mut a, mut b) = ([0.0, 2.0, 1.0, 1.0, 1.0, 0.0, 3.0, 0.0, -1.0], [7.0, 3.0, 0.0]);
        assert!(solve_in_place(&mut a, &mut b));
        assert!((b[0] - 1.0).abs() < 1e-14 && (b[1] - 2.0).abs() < 1e-14 && (b[2] - 3.0).abs() < 1e-14, "{b:?}");
        assert!(!solve_in_place(&mut [1.0, 2.0, 2.0, 4.0], &mut [1.0, 2.0]));
    }
}
