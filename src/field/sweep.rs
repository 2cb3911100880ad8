//! What is the response between the solved frequencies: a rational function through them, its order chosen by its error.
//!
//! # Source
//! AAA: Y. Nakatsukasa, O. Sete & L. N. Trefethen, SIAM J. Sci. Comput. 40, 2018, pp. A1494-A1522; here with one weight vector for all parameters, so
//! that they share their poles (from memory).

use std::f64::consts::PI;

use faer::Mat;
use num_complex::Complex64;

use crate::base::Place;
use crate::base::Problem;

/// How a sweep goes on.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct SweepOptions {
    /// Greatest change of any S-parameter between the last fits.
    pub tolerance: f64,
    /// Most frequencies solved.
    pub most_solves: usize,
}

impl Default for SweepOptions {
    fn default() -> SweepOptions {
        SweepOptions { tolerance: 1e-5, most_solves: 60 }
    }
}

/// A finished sweep.
#[derive(Clone, Debug, PartialEq)]
pub struct Swept {
    /// Values at every wanted frequency.
    pub values: Vec<Vec<Complex64>>,
    /// The frequencies solved, in the order solved.
    pub solved_hz: Vec<f64>,
    /// Greatest change between the last two fits.
    pub change: f64,
}

/// Solves a few of the wanted frequencies (`f_hz`, increasing) and fits the others. `solve` gives the values at one frequency; before each solve
/// `go_on` is told how many are done and how far the fit moved last, and may stop the work by answering `false`.
///
/// # Errors
/// Those of `solve`; `sweep-interrupted`; `fit-not-converged` when the fit still moves after the greatest number of solves.
pub fn sweep(
    f_hz: &[f64],
    options: &SweepOptions,
    mut solve: impl FnMut(f64) -> Result<Vec<Complex64>, Problem>,
    mut go_on: impl FnMut(usize, f64) -> bool,
) -> Result<Swept, Problem> {
    const FIRST: usize = 7;
    let (Some(&from), Some(&to)) = (f_hz.first(), f_hz.last()) else {
        return Ok(Swept { values: Vec::new(), solved_hz: Vec::new(), change: 0.0 });
    };
    let mut known: Vec<(f64, Vec<Complex64>)> = Vec::new();
    let mut order = Vec::new();
    let mut change = f64::INFINITY;
    let mut run = |f: f64, known: &mut Vec<(f64, Vec<Complex64>)>, change: f64| -> Result<(), Problem> {
        if !go_on(known.len(), change) {
            return Err(Problem::error(
                "sweep-interrupted",
                Place::Whole,
                format!("stopped after {} frequencies", known.len()),
                "run it again",
            ));
        }
        let values = solve(f)?;
        order.push(f);
        known.push((f, values));
        Ok(())
    };
    if f_hz.len() <= FIRST {
        for &f in f_hz {
            run(f, &mut known, change)?;
        }
        return Ok(Swept { values: known.into_iter().map(|k| k.1).collect(), solved_hz: order, change: 0.0 });
    }
    // Chebyshev points, moved to wanted frequencies so that those are exact.
    let nearest = |f: f64| f_hz.iter().copied().min_by(|a, b| (a - f).abs().total_cmp(&(b - f).abs())).unwrap_or(f);
    for i in 0..FIRST {
        let f = nearest(0.5 * (from + to) - 0.5 * (to - from) * (PI * i as f64 / (FIRST - 1) as f64).cos());
        if known.iter().all(|k| (k.0 - f).abs() > 0.0) {
            run(f, &mut known, change)?;
        }
    }
    let evaluate = |fit: &Rational| -> Vec<Vec<Complex64>> { f_hz.iter().map(|&f| fit.at(f)).collect() };
    let mut values = evaluate(&Rational::fit(&known, from, to));
    let mut quiet = 0;
    while quiet < 2 {
        let left = known.len() < f_hz.len();
        if known.len() >= options.most_solves && left {
            let message = format!(
                "after {} solved frequencies the fit still moves by {change:.1e}, {:.0e} is asked for",
                known.len(),
                options.tolerance
            );
            let help = "sweep a narrower band, or give the copper its loss";
            return Err(Problem::error("fit-not-converged", Place::Whole, message, help));
        }
        if !left {
            break;
        }
        // The next one where the fit moved most; before any comparison, in the widest gap.
        let next = if change.is_infinite() {
            widest_gap(f_hz, &known)
        } else {
            worst(f_hz, &known, &values, &Rational::fit(&known[..known.len() - 1], from, to))
        };
        run(next, &mut known, change)?;
        let newer = evaluate(&Rational::fit(&known, from, to));
        change = values.iter().zip(&newer).flat_map(|(a, b)| a.iter().zip(b)).map(|(a, b)| (a - b).norm()).fold(0.0, f64::max);
        values = newer;
        quiet = if change < options.tolerance { quiet + 1 } else { 0 };
    }
    for (f, exact) in &known {
        if let Some(i) = f_hz.iter().position(|g| (g - f).abs() <= 0.0) {
            values[i].clone_from(exact);
        }
    }
    Ok(Swept { values, solved_hz: order, change })
}

/// The unsolved wanted frequency furthest from any solved one.
fn widest_gap(f_hz: &[f64], known: &[(f64, Vec<Complex64>)]) -> f64 {
    let apart = |f: f64| known.iter().map(|k| (k.0 - f).abs()).fold(f64::INFINITY, f64::min);
    f_hz.iter().copied().max_by(|a, b| apart(*a).total_cmp(&apart(*b))).unwrap_or_default()
}

/// The unsolved wanted frequency where an older fit and the newest differ most.
fn worst(f_hz: &[f64], known: &[(f64, Vec<Complex64>)], values: &[Vec<Complex64>], older: &Rational) -> f64 {
    let differ = |i: usize| {
        if known.iter().any(|k| (k.0 - f_hz[i]).abs() <= 0.0) {
            return -1.0;
        }
        older.at(f_hz[i]).iter().zip(&values[i]).map(|(a, b)| (a - b).norm()).fold(0.0, f64::max)
    };
    let found = (0..f_hz.len()).map(|i| (i, differ(i))).max_by(|a, b| a.1.total_cmp(&b.1));
    match found {
        // Where both agree to rounding everywhere, look where nothing is known.
        Some((i, d)) if d > 1e-12 => f_hz[i],
        _ => widest_gap(f_hz, known),
    }
}

/// A barycentric rational function with several values.
struct Rational {
    middle: f64,
    half: f64,
    support: Vec<(f64, Vec<Complex64>)>,
    weights: Vec<Complex64>,
}

impl Rational {
    /// Supports chosen one by one where the fit is worst, weights from the smallest singular vector of the stacked Loewner matrix.
    fn fit(known: &[(f64, Vec<Complex64>)], from: f64, to: f64) -> Rational {
        /// Fit of the solved points themselves; they carry some 1e-9 of rounding from the matrix.
        const FITTED: f64 = 1e-9;
        let (middle, half) = (0.5 * (from + to), (0.5 * (to - from)).max(f64::MIN_POSITIVE));
        let points: Vec<(f64, &Vec<Complex64>)> = known.iter().map(|(f, v)| ((f - middle) / half, v)).collect();
        let values = points.first().map_or(0, |p| p.1.len());
        let mut chosen: Vec<usize> = Vec::new();
        let mut fit = Rational { middle, half, support: Vec::new(), weights: Vec::new() };
        // The first support is the value furthest from the mean; each further one the worst fitted.
        let mean: Vec<Complex64> = (0..values).map(|v| points.iter().map(|p| p.1[v]).sum::<Complex64>() / points.len() as f64).collect();
        let error = |fit: &Rational, i: usize| -> f64 {
            let at = if fit.support.is_empty() { mean.clone() } else { fit.at(points[i].0 * half + middle) };
            at.iter().zip(points[i].1).map(|(a, b)| (a - b).norm()).fold(0.0, f64::max)
        };
        // A support more than half the points would leave more weights than equations for one value.
        let most = (points.len() * values).div_ceil(values + 1).min(points.len().saturating_sub(1));
        while chosen.len() < most {
            let rest: Vec<usize> = (0..points.len()).filter(|i| !chosen.contains(i)).collect();
            let Some((worst, size)) = rest.iter().map(|&i| (i, error(&fit, i))).max_by(|a, b| a.1.total_cmp(&b.1)) else { break };
            if size < FITTED && !chosen.is_empty() {
                break;
            }
            chosen.push(worst);
            let rest: Vec<usize> = rest.into_iter().filter(|&i| i != worst).collect();
            let loewner = Mat::from_fn(rest.len() * values, chosen.len(), |row, column| {
                let (i, v) = (rest[row / values], row % values);
                let s = chosen[column];
                (points[i].1[v] - points[s].1[v]) / (points[i].0 - points[s].0)
            });
            fit.support = chosen.iter().map(|&s| (points[s].0, points[s].1.clone())).collect();
            fit.weights = smallest_singular_vector(&loewner);
        }
        fit
    }

    fn at(&self, f_hz: f64) -> Vec<Complex64> {
        let x = (f_hz - self.middle) / self.half;
        if let Some((_, exact)) = self.support.iter().find(|s| (s.0 - x).abs() < 1e-14) {
            return exact.clone();
        }
        let mut denominator = Complex64::from(0.0);
        let mut sums = vec![Complex64::from(0.0); self.support.first().map_or(0, |s| s.1.len())];
        for ((at, values), weight) in self.support.iter().zip(&self.weights) {
            let share = weight / (x - at);
            denominator += share;
            for (sum, value) in sums.iter_mut().zip(values) {
                *sum += share * value;
            }
        }
        sums.iter().map(|s| s / denominator).collect()
    }
}

/// Right singular vector of the smallest singular value; equal weights where there is none.
fn smallest_singular_vector(matrix: &Mat<Complex64>) -> Vec<Complex64> {
    let n = matrix.ncols();
    match matrix.svd() {
        Ok(svd) => (0..n).map(|i| svd.V()[(i, n - 1)]).collect(),
        Err(_) => vec![Complex64::from(1.0); n],
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Three coupled resonators: a response of known poles.
    fn resonators(f: f64) -> Vec<Complex64> {
        let j = Complex64::new(0.0, 1.0);
        let x = (f - 2e9) / 0.1e9;
        let a = |center: f64| Complex64::from(1.0) / (j * (x - center) + 0.05);
        let (p, q) = (a(-0.5) + a(0.1) - a(0.6), a(-0.5) - a(0.1) * 0.3);
        vec![p / (p + 3.0), q / (p + 3.0)]
    }

    #[test]
    fn a_rational_response_is_found_from_few_frequencies() {
        let f: Vec<f64> = (0..501).map(|i| 1.7e9 + 1.2e6 * f64::from(i)).collect();
        let swept = sweep(&f, &SweepOptions::default(), |f| Ok(resonators(f)), |_, _| true).unwrap();
        assert!(swept.solved_hz.len() <= 14, "{}", swept.solved_hz.len());
        for (f, v) in f.iter().zip(&swept.values) {
            // The tolerance asked for.
            assert!(v.iter().zip(resonators(*f)).all(|(a, b)| (a - b).norm() < 1e-5));
        }
    }

    #[test]
    fn a_response_with_a_branch_point_is_refused() {
        let f: Vec<f64> = (0..501).map(|i| 1e9 + 2e6 * f64::from(i)).collect();
        let branch = |f: f64| Ok(vec![Complex64::from(f / 1e9 - 1.5).sqrt() * (f / 1e7).cos()]);
        let options = SweepOptions { most_solves: 30, ..SweepOptions::default() };
        let refused = sweep(&f, &options, branch, |_, _| true).unwrap_err();
        assert_eq!(refused.code, "fit-not-converged");
    }
}
