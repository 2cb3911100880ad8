//! The slow obvious form judges the fast one: the whole double sum over modes, no split, on a tiny mesh.

use std::f64::consts::PI;

use stripwright::field::{Axis, Kernels, Patch, Solver, Source, Split, Stack, Structure, Top};

use crate::sample::layer;

#[test]
fn the_plain_double_sum_over_modes_gives_the_same_matrix() {
    let stack = Stack { below: vec![layer(3.5, 0.8)], above: vec![layer(1.0, 3.0)], top: Top::Lid };
    let (a, b) = (6e-3, 5e-3);
    // Three cells along x, two across, one end on the wall.
    let (x, y) = ([0.0, 1.0e-3, 2.2e-3, 3.0e-3], [2.0e-3, 2.6e-3, 3.4e-3]);
    let source = Source { patch: 0, axis: Axis::X, line: 0, across: 0..2, reversed: false };
    let patch = Patch::full(x.to_vec(), y.to_vec());
    let structure = Structure { stack: stack.clone(), size_m: [a, b], patches: vec![patch], sources: vec![source], sheet: None };
    let solver = Solver::new(structure, 5e9, Split::default()).unwrap();
    let (fast, none) = solver.matrix(5e9);
    assert!(none.is_empty(), "without loss the matrix is real");
    let n = solver.count();
    assert_eq!(n, 2 * 3 + 3);
    // Unknowns in the solver's order: x rooftops row by row (lines 0, 1, 2), y rooftops column by column (line 1).
    let mut functions = Vec::new();
    for row in 0..2 {
        for line in 0..3 {
            functions.push((Axis::X, line, row));
        }
    }
    for column in 0..3 {
        functions.push((Axis::Y, 1, column));
    }
    let sine = |k: f64, from: f64, to: f64| ((k * from).cos() - (k * to).cos()) / k;
    // Integral of the triangle at `i` times the cosine, by its two slopes.
    let tent = |k: f64, lines: &[f64], i: usize| {
        let ramp = |from: f64, to: f64, at_from: f64, at_to: f64| {
            let slope = (at_to - at_from) / (to - from);
            (at_to * (k * to).sin() - at_from * (k * from).sin()) / k + slope * ((k * to).cos() - (k * from).cos()) / (k * k)
        };
        let up = if i > 0 { ramp(lines[i - 1], lines[i], 0.0, 1.0) } else { 0.0 };
        up + if i + 1 < lines.len() { ramp(lines[i], lines[i + 1], 1.0, 0.0) } else { 0.0 }
    };
    let area = |lines: &[f64], i: usize| 0.5 * (lines[(i + 1).min(lines.len() - 1)] - lines[i.saturating_sub(1)]);
    let kernels = Kernels::new(&stack, 5e9);
    let omega = 2.0 * PI * 5e9;
    // The sum's tail falls as the cube of its end: 1e-6 of the matrix.
    let (last_m, last_n) = (1400usize, 1200usize);
    let mut plain = vec![0.0; n * n];
    for m in 0..=last_m {
        for l in 0..=last_n {
            if m == 0 && l == 0 {
                continue;
            }
            let (kx, ky) = (m as f64 * PI / a, l as f64 * PI / b);
            let (vector, scalar) = kernels.at(kx.hypot(ky));
            let weight = if m == 0 { 1.0 } else { 2.0 } * if l == 0 { 1.0 } else { 2.0 } / (a * b);
            // Transforms of current and of divergence; x currents run with the cosine of x and the sine of y.
            let transforms: Vec<(bool, f64, f64)> = functions
                .iter()
                .map(|&(axis, line, across)| {
                    let (k_along, k_across, lines, others) =
                        if axis == Axis::X { (kx, ky, &x[..], &y[..]) } else { (ky, kx, &y[..], &x[..]) };
                    if k_across < 1e-9 {
                        return (axis == Axis::X, 0.0, 0.0);
                    }
                    let pulse = sine(k_across, others[across], others[across + 1]);
                    let along = if k_along < 1e-9 { area(lines, line) } else { tent(k_along, lines, line) };
                    // The divergence of cos is -k sin: by parts, no wall term since the sine vanishes there.
                    (axis == Axis::X, along * pulse, k_along * along * pulse)
                })
                .collect();
            for i in 0..n {
                for j in 0..n {
                    let (p, q) = (transforms[i], transforms[j]);
                    let mut sum = -(p.2 * q.2 * scalar.re) / (omega * omega);
                    if p.0 == q.0 {
                        sum += p.1 * q.1 * vector.re;
                    }
                    plain[j * n + i] += weight * sum;
                }
            }
        }
    }
    let scale = |i: usize, j: usize| (plain[i * n + i].abs() * plain[j * n + j].abs()).sqrt();
    for i in 0..n {
        for j in 0..n {
            let error = (fast[j * n + i] - plain[j * n + i]).abs() / scale(i, j);
            assert!(error < 2e-5, "{i} {j}: {} {} ({error:.1e})", fast[j * n + i], plain[j * n + i]);
        }
    }
}
