//! N coupled strips of one length as a scattering block, from their modes.

use num_complex::Complex64;

use super::block::INNER_OHM;
use crate::line::ArrayModes;

/// Writes the 2N-port matrix, nodes near 1..N, far 1..N.
///
/// The section is symmetric about its middle, so its even half (open there) and odd half (shorted there) give it: own = (Se + So)/2, across = (Se - So)/2. With
/// strip voltages V of modes of 1 ohm and G = V'V, a half of reactance t = N/D has S = 2 V D (G D + R N)^-1 V' - 1, which stays finite where t does not.
pub(super) fn array_s(modes: &ArrayModes, wave_rad_per_m: f64, length_m: f64, out: &mut [Complex64]) {
    let n = modes.index.len();
    let halves: Vec<(Complex64, Complex64)> = modes
        .index
        .iter()
        .zip(&modes.alpha_np_per_m)
        .map(|(index, alpha)| {
            let half = Complex64::new(alpha * length_m, wave_rad_per_m * index * length_m) * 0.5;
            (half.cosh(), half.sinh())
        })
        .collect();
    let v = &modes.voltages;
    let gram: Vec<f64> = (0..n * n).map(|at| (0..n).map(|k| v[k * n + at / n] * v[k * n + at % n]).sum()).collect();
    let even = half_s(v, &gram, n, |m| halves[m]);
    let odd = half_s(v, &gram, n, |m| (halves[m].1, halves[m].0));
    let ports = 2 * n;
    for i in 0..n {
        for j in 0..n {
            let (e, o) = (even[i * n + j], odd[i * n + j]);
            let (own, across) = (0.5 * (e + o), 0.5 * (e - o));
            out[i * ports + j] = own;
            out[(i + n) * ports + j + n] = own;
            out[i * ports + j + n] = across;
            out[(i + n) * ports + j] = across;
        }
    }
}

/// S of one half; `ratio` gives the denominator and the numerator of each mode's admittance.
fn half_s(v: &[f64], gram: &[f64], n: usize, ratio: impl Fn(usize) -> (Complex64, Complex64)) -> Vec<Complex64> {
    let mut matrix = vec![Complex64::ZERO; n * n];
    let mut right = vec![Complex64::ZERO; n * n];
    for i in 0..n {
        for j in 0..n {
            matrix[i * n + j] = gram[i * n + j] * ratio(j).0;
            right[i * n + j] = Complex64::from(v[j * n + i]);
        }
        matrix[i * n + i] += INNER_OHM * ratio(i).1;
    }
    eliminate(&mut matrix, &mut right, n);
    let mut s = vec![Complex64::ZERO; n * n];
    for i in 0..n {
        for j in 0..n {
            let sum: Complex64 = (0..n).map(|m| v[i * n + m] * ratio(m).0 * right[m * n + j]).sum();
            s[i * n + j] = 2.0 * sum - if i == j { 1.0 } else { 0.0 };
        }
    }
    s
}

/// Gaussian elimination with partial pivoting, N right sides at once; the matrix of a passive half is never singular.
fn eliminate(matrix: &mut [Complex64], right: &mut [Complex64], n: usize) {
    for column in 0..n {
        let pivot =
            (column..n).max_by(|a, b| matrix[a * n + column].norm_sqr().total_cmp(&matrix[b * n + column].norm_sqr())).unwrap_or(column);
        for j in 0..n {
            matrix.swap(column * n + j, pivot * n + j);
            right.swap(column * n + j, pivot * n + j);
        }
        let inverse = matrix[column * n + column].inv();
        for row in column + 1..n {
            let factor = matrix[row * n + column] * inverse;
            for j in column..n {
                let above = matrix[column * n + j];
                matrix[row * n + j] -= factor * above;
            }
            for j in 0..n {
                let above = right[column * n + j];
                right[row * n + j] -= factor * above;
            }
        }
    }
    for column in (0..n).rev() {
        let inverse = matrix[column * n + column].inv();
        for j in 0..n {
            let value = right[column * n + j] * inverse;
            right[column * n + j] = value;
            for row in 0..column {
                let factor = matrix[row * n + column];
                right[row * n + j] -= factor * value;
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::network::block::line_s;

    /// Two strips of 50 ohm that do not couple are two lines, at any length, half waves included.
    #[test]
    fn strips_that_do_not_couple_are_lines() {
        let root = 70f64.sqrt();
        let modes = ArrayModes {
            index: vec![1.5, 1.8],
            alpha_np_per_m: vec![0.3, 0.1],
            voltages: vec![root, 0.0, 0.0, root],
            currents: vec![1.0 / root, 0.0, 0.0, 1.0 / root],
        };
        for theta in [0.0, 0.3, std::f64::consts::PI, 7.0] {
            let mut s = vec![Complex64::ZERO; 16];
            let wave = 40.0;
            array_s(&modes, wave, theta / 60.0, &mut s);
            let (s11, s21) = line_s(wave * 1.5, 0.3, 70.0, theta / 60.0);
            assert!((s[0] - s11).norm() < 1e-13 && (s[2] - s21).norm() < 1e-13 && s[1].norm() < 1e-13 && s[3].norm() < 1e-13, "{theta}");
            let (s22, s42) = line_s(wave * 1.8, 0.1, 70.0, theta / 60.0);
            assert!((s[5] - s22).norm() < 1e-13 && (s[7] - s42).norm() < 1e-13, "{theta}");
        }
    }
}
