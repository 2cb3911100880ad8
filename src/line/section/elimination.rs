//! Which charges hold the given potentials? Dense elimination without row exchange.
//!
//! The matrix is a discrete Green function of grounded metal: close to symmetric and positive definite when the unknown is each panel's whole
//! charge, so its pivots stay positive without exchange; a pivot that is not is reported, never divided by.

use super::assembly::Square;

/// Pivot columns worked off together: one pass over the rest of the matrix per this many.
const TOGETHER: usize = 4;

/// Solves for several right sides at once (each a vector of `size`), overwriting matrix and right sides. False when a pivot was not positive.
pub(super) fn solve_in_place(matrix: &mut Square, right: &mut [Vec<f64>]) -> bool {
    let size = matrix.size;
    let mut first = 0;
    while first < size {
        let end = (first + TOGETHER).min(size);
        // The pivot rows among themselves.
        for pivot in first..end {
            let (head, tail) = matrix.values.split_at_mut((pivot + 1) * size);
            let pivot_row = &head[pivot * size..];
            let value = pivot_row[pivot];
            if !(value.is_finite() && value > 0.0) {
                return false;
            }
            for row in pivot + 1..end {
                let target = &mut tail[(row - pivot - 1) * size..(row - pivot) * size];
                let factor = target[pivot] / value;
                target[pivot] = factor;
                for (t, p) in target[pivot + 1..].iter_mut().zip(&pivot_row[pivot + 1..]) {
                    *t -= factor * p;
                }
            }
        }
        // All rows below, in one pass.
        let (head, tail) = matrix.values.split_at_mut(end * size);
        let pivots = &head[first * size..];
        if end - first == TOGETHER {
            let (p0, rest) = pivots.split_at(size);
            let (p1, rest) = rest.split_at(size);
            let (p2, p3) = rest.split_at(size);
            for target in tail.chunks_exact_mut(size) {
                let f0 = target[first] / p0[first];
                let f1 = (target[first + 1] - f0 * p0[first + 1]) / p1[first + 1];
                let f2 = (target[first + 2] - f0 * p0[first + 2] - f1 * p1[first + 2]) / p2[first + 2];
                let f3 = (target[first + 3] - f0 * p0[first + 3] - f1 * p1[first + 3] - f2 * p2[first + 3]) / p3[first + 3];
                target[first] = f0;
                target[first + 1] = f1;
                target[first + 2] = f2;
                target[first + 3] = f3;
                let columns = p0[end..].iter().zip(&p1[end..]).zip(&p2[end..]).zip(&p3[end..]);
                for (t, (((a, b), c), d)) in target[end..].iter_mut().zip(columns) {
                    *t -= (f0 * a + f1 * b) + (f2 * c + f3 * d);
                }
            }
        }
        first = end;
    }
    for vector in right.iter_mut() {
        substitute(matrix, vector);
    }
    true
}

fn substitute(matrix: &Square, vector: &mut [f64]) {
    let size = matrix.size;
    for row in 1..size {
        let values = &matrix.values[row * size..row * size + row];
        let sum = super::green::dot(values, &vector[..row]);
        vector[row] -= sum;
    }
    for row in (0..size).rev() {
        let values = &matrix.values[row * size..(row + 1) * size];
        let sum = super::green::dot(&values[row + 1..], &vector[row + 1..]);
        vector[row] = (vector[row] - sum) / values[row];
    }
}
