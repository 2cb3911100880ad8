//! Damped least squares over the knobs.
//!
//! # Source
//! Levenberg, Quart. Appl. Math. 2, 1944, and Marquardt, SIAM J. 11, 1963: the normal equations with a growing diagonal.

/// Times the damping is raised before an iteration gives up.
const MAX_RAISES: usize = 8;
/// An iteration that lessens the sum by less than this part is the last.
const LEAST_GAIN: f64 = 1e-3;

/// Moves `x` to lessen the sum of squares of `residuals`; returns the final sum. `None` residuals count as infinitely bad.
///
/// `steps` are the finite-difference steps and `greatest` the greatest move of each number in one iteration.
pub fn minimize(
    x: &mut [f64],
    steps: &[f64],
    greatest: &[f64],
    iterations: usize,
    mut residuals: impl FnMut(&[f64]) -> Option<Vec<f64>>,
) -> f64 {
    let square = |r: &[f64]| r.iter().map(|v| v * v).sum::<f64>();
    let Some(mut r) = residuals(x) else { return f64::INFINITY };
    let mut sum = square(&r);
    let mut damping = 1e-3;
    for _ in 0..iterations {
        let mut columns = Vec::with_capacity(x.len());
        for i in 0..x.len() {
            let mut moved = x.to_vec();
            moved[i] += steps[i];
            let Some(other) = residuals(&moved).filter(|o| o.len() == r.len()) else { return sum };
            columns.push(other.iter().zip(&r).map(|(a, b)| (a - b) / steps[i]).collect::<Vec<f64>>());
        }
        let before = sum;
        for _ in 0..MAX_RAISES {
            let n = x.len();
            let mut matrix = vec![0.0; n * n];
            let mut right = vec![0.0; n];
            for i in 0..n {
                for j in 0..n {
                    matrix[i * n + j] = columns[i].iter().zip(&columns[j]).map(|(a, b)| a * b).sum();
                }
                matrix[i * n + i] *= 1.0 + damping;
                matrix[i * n + i] += 1e-12;
                right[i] = -columns[i].iter().zip(&r).map(|(a, b)| a * b).sum::<f64>();
            }
            if !super::solve_in_place(&mut matrix, &mut right) {
                damping *= 10.0;
                continue;
            }
            let shrink = right.iter().zip(greatest).map(|(d, g)| d.abs() / g).fold(1.0, f64::max);
            let trial: Vec<f64> = x.iter().zip(&right).map(|(v, d)| v + d / shrink).collect();
            match residuals(&trial).filter(|t| t.len() == r.len()) {
                Some(other) if square(&other) < sum => {
                    x.copy_from_slice(&trial);
                    sum = square(&other);
                    r = other;
                    damping = (damping * 0.2).max(1e-9);
                    break;
                }
                _ => damping *= 6.0,
            }
        }
        if sum >= before * (1.0 - LEAST_GAIN) {
            break;
        }
    }
    sum
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn walks_down_a_curved_valley() {
        // Rosenbrock 1960: minimum at (1, 1).
        let mut x = [-1.2, 1.0];
        let sum = minimize(&mut x, &[1e-7; 2], &[10.0; 2], 200, |x| Some(vec![10.0 * (x[1] - x[0] * x[0]), 1.0 - x[0]]));
        assert!(sum < 1e-12 && (x[0] - 1.0).abs() < 1e-5, "{x:?} {sum}");
    }
}
