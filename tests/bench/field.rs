//! The field solver: a third-order edge-coupled filter end to end, elimination against matrix multiplication, cost against unknowns.
//! Run: `cargo bench --bench field` (add `-- long` for N up to 6000).
#![allow(clippy::unwrap_used, missing_docs)]

use std::hint::black_box;
use std::time::Instant;

use faer::linalg::solvers::Solve;
use faer::{Mat, MatRef, Side};
use num_complex::Complex64;
use stripwright::field::{Mesh, Options, Plan, Solver, Split, read_geometry};
use stripwright::order::Source;

const LIMIT_S: f64 = 3.0;
const LIMIT_RATE: f64 = 0.6;

fn best_of(runs: usize, mut work: impl FnMut()) -> f64 {
    (0..runs)
        .map(|_| {
            let start = Instant::now();
            work();
            start.elapsed().as_secs_f64()
        })
        .fold(f64::INFINITY, f64::min)
}

fn main() {
    let long = std::env::args().any(|a| a == "long");
    let text = include_str!("edge-coupled-third.toml");
    let (file, _) = read_geometry(&Source::from_text("edge-coupled-third.toml", text)).unwrap();
    let mut unknowns = [0; 2];
    let time_s = best_of(2, || {
        let plan = Plan::new(&file.geometry, &file.f_hz, Options::default()).unwrap();
        let solution = plan.run(&file.f_hz, |_| true).unwrap();
        unknowns = solution.unknowns;
        println!("  error bar {:.4?}, solves {:?}", solution.error_bar, solution.solves);
    });
    println!(
        "third-order edge-coupled, 501 points, N {unknowns:?}, two meshes, calibration: {time_s:.2} s, limit {LIMIT_S} s, ratio {:.2}",
        time_s / LIMIT_S
    );
    let sizes: &[f64] = if long { &[1.0, 1.5, 2.0, 2.4] } else { &[1.0, 1.5] };
    for &refine in sizes {
        let highest_hz = *file.f_hz.last().unwrap();
        let mesh = Mesh::new(&file.geometry, highest_hz, refine, 0.1e-3).unwrap();
        let start = Instant::now();
        let solver = Solver::new(mesh.structure, highest_hz, Split::default()).unwrap();
        let near_s = start.elapsed().as_secs_f64();
        let (mut real, mut imaginary) = (Vec::new(), Vec::new());
        let fill_s = best_of(2, || (real, imaginary) = solver.matrix(2e9));
        let n = solver.count();
        let matrix = MatRef::from_column_major_slice(&real, n, n);
        let right = Mat::<f64>::from_fn(n, 2, |i, j| (i + j) as f64);
        let symmetric_s = best_of(2, || drop(black_box(matrix.lblt(Side::Lower).solve(&right))));
        let real_lu_s = best_of(2, || drop(black_box(matrix.partial_piv_lu().solve(&right))));
        let complex = Mat::from_fn(n, n, |i, j| Complex64::new(matrix[(i, j)], 0.0));
        let right = Mat::from_fn(n, 2, |i, j| Complex64::new((i + j) as f64, 1.0));
        let lu_s = best_of(2, || drop(black_box(complex.partial_piv_lu().solve(&right))));
        let multiply_s = best_of(2, || drop(black_box(&complex * &complex)));
        let rate = |flops: f64, time: f64| flops / time / 1e9;
        let (lu, multiply) = (rate(8.0 / 3.0 * (n as f64).powi(3), lu_s), rate(8.0 * (n as f64).powi(3), multiply_s));
        println!(
            "N {n}: near part {near_s:.2} s once; a frequency: fill {fill_s:.3} s, symmetric {symmetric_s:.3} s, real LU {real_lu_s:.3} s, complex LU {lu_s:.3} s \
             ({lu:.1} Gflop/s; multiplication {multiply:.1}; share {:.2}, limit {LIMIT_RATE})",
            lu / multiply
        );
        assert!(imaginary.is_empty());
    }
}
