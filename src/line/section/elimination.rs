//! Which charges hold the given potentials? Dense elimination without row exchange.
//!
//! The matrix is a discrete Green function of grounded metal: close to symmetric and positive definite when the unknown is each panel's whole
//! charge, so its pivots stay positive without exchange; a pivot that is not is reported, never divided by.

use super::assembly::Square;
use super::green::dot;

/// Pivot rows worked off together: one pass over the rest of the matrix per this many, so that the rest is fetched an eighth as often.
const TOGETHER: usize = 8;
/// Pivot rows taken off a row in one sweep: as many as the registers hold.
const AT_ONCE: usize = 4;

/// Solves for several right sides at once (each a vector of `size`), overwriting matrix and right sides. False when a pivot was not positive.
pub(super) fn solve_in_place(matrix: &mut Square, right: &mut [Vec<f64>]) -> bool {
    pulp::Arch::new().dispatch(Elimination { matrix, right })
}

struct Elimination<'a> {
    matrix: &'a mut Square,
    right: &'a mut [Vec<f64>],
}

impl pulp::NullaryFnOnce for Elimination<'_> {
    type Output = bool;

    #[inline(always)]
    fn call(self) -> bool {
        eliminate(self.matrix, self.right)
    }
}

#[inline(always)]
fn eliminate(matrix: &mut Square, right: &mut [Vec<f64>]) -> bool {
    let size = matrix.size;
    let mut first = 0;
    while first < size {
        let end = (first + TOGETHER).min(size);
        let mut inverse = [0.0; TOGETHER];
        // The pivot rows among themselves.
        for pivot in first..end {
            let (head, tail) = matrix.values.split_at_mut((pivot + 1) * size);
            let pivot_row = &head[pivot * size..];
            let value = pivot_row[pivot];
            if !(value.is_finite() && value > 0.0) {
                return false;
            }
            inverse[pivot - first] = 1.0 / value;
            for row in pivot + 1..end {
                let target = &mut tail[(row - pivot - 1) * size..(row - pivot) * size];
                let factor = target[pivot] * inverse[pivot - first];
                target[pivot] = factor;
                for (t, p) in target[pivot + 1..].iter_mut().zip(&pivot_row[pivot + 1..]) {
                    *t -= factor * p;
                }
            }
        }
        // All rows below, in one pass. The last block has none.
        let (head, tail) = matrix.values.split_at_mut(end * size);
        let pivots = &head[first * size..];
        for target in tail.chunks_exact_mut(size) {
            take_off(target, pivots, &inverse, first, size);
        }
        first = end;
    }
    substitute(matrix, right);
    true
}

/// Takes eight pivot rows off one row.
#[inline(always)]
fn take_off(target: &mut [f64], pivots: &[f64], inverse: &[f64; TOGETHER], first: usize, size: usize) {
    let mut factors = [0.0; TOGETHER];
    for step in 0..TOGETHER {
        let mut value = target[first + step];
        for before in 0..step {
            value -= factors[before] * pivots[before * size + first + step];
        }
        factors[step] = value * inverse[step];
    }
    target[first..first + TOGETHER].copy_from_slice(&factors);
    let rest = first + TOGETHER..size;
    let target = &mut target[rest.clone()];
    for (rows, f) in pivots.chunks_exact(AT_ONCE * size).zip(factors.chunks_exact(AT_ONCE)) {
        let (p0, after) = rows.split_at(size);
        let (p1, after) = after.split_at(size);
        let (p2, p3) = after.split_at(size);
        let (f0, f1, f2, f3) = (f[0], f[1], f[2], f[3]);
        let columns = p0[rest.clone()].iter().zip(&p1[rest.clone()]).zip(&p2[rest.clone()]).zip(&p3[rest.clone()]);
        for (t, (((a, b), c), d)) in target.iter_mut().zip(columns) {
            *t -= (f0 * a + f1 * b) + (f2 * c + f3 * d);
        }
    }
}

/// Forward and back, all right sides row by row.
#[inline(always)]
fn substitute(matrix: &Square, right: &mut [Vec<f64>]) {
    let size = matrix.size;
    for row in 1..size {
        let values = &matrix.values[row * size..row * size + row];
        for vector in right.iter_mut() {
            vector[row] -= dot(values, &vector[..row]);
        }
    }
    for row in (0..size).rev() {
        let values = &matrix.values[row * size..(row + 1) * size];
        for vector in right.iter_mut() {
            vector[row] = (vector[row] - dot(&values[row + 1..], &vector[row + 1..])) / values[row];
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_solution_reproduces_the_right_side() {
        // Sizes below, at and beyond whole blocks.
        for size in [1, 3, 8, 13, 32, 51] {
            let entry = |i: usize, j: usize| {
                1.0 / (1.0 + (i as f64 - j as f64).abs()) + if i == j { 2.0 } else { 0.01 * i as f64 / (1.0 + j as f64) }
            };
            let mut matrix = Square::zero(size);
            for row in 0..size {
                for (column, value) in matrix.row_mut(row, 0, size).iter_mut().enumerate() {
                    *value = entry(row, column);
                }
            }
            let wanted = vec![(0..size).map(|i| (i as f64).sin()).collect::<Vec<_>>(), vec![1.0; size]];
            let mut solved = wanted.clone();
            assert!(solve_in_place(&mut matrix, &mut solved));
            for (x, right) in solved.iter().zip(&wanted) {
                for (row, right) in right.iter().enumerate() {
                    let sum: f64 = x.iter().enumerate().map(|(j, x)| entry(row, j) * x).sum();
                    // Rounding of some fifty products of order one.
                    assert!((sum - right).abs() < 1e-12, "size {size} row {row}");
                }
            }
        }
    }

    #[test]
    fn a_pivot_that_is_not_positive_is_reported() {
        let mut matrix = Square { size: 2, values: vec![1.0, 2.0, 2.0, 1.0] };
        assert!(!solve_in_place(&mut matrix, &mut [vec![1.0, 1.0]]));
    }
}
