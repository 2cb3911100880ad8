//! Which modes travel on N strips? Simultaneous diagonalisation of the capacitance matrices with and without dielectric.
//!
//! L = mu0 eps0 C0^-1, so L C v = v eps / c^2 is C v = eps C0 v: symmetric and positive definite on both sides, taken to an ordinary symmetric problem by the
//! Cholesky factor of C0. Cross-sections that read the same from the right are split into even and odd potentials first, so that their modes are exactly that.

use faer::{Mat, Side};

use super::results::Solved;
use super::solve::LIGHT;

/// Modes of equal speed (always so without dielectric) may be mixed at will. This much of C0's diagonal, relative, added to C settles which are meant; it turns
/// modes of different speed by less than the solver's rounding.
const TIE: f64 = 1e-9;

/// The quasi-TEM modes of N strips, fastest last.
///
/// Impedances are folded in: each mode is a line of 1 ohm, and `voltages` transposed times `currents` is the identity.
#[derive(Clone, Debug, PartialEq)]
pub struct Modes {
    /// Static effective permittivity of each mode.
    pub eps_eff: Vec<f64>,
    /// N x N, row by row: strip voltages (rows) of each mode (columns), volts per root watt.
    pub voltages: Vec<f64>,
    /// N x N, row by row: strip currents of each mode, amperes per root watt.
    pub currents: Vec<f64>,
}

impl Modes {
    /// Of two capacitance matrices (F/m, N x N, row by row). `symmetric`: the strips read the same from the right.
    ///
    /// `None` when a matrix is not positive definite.
    pub fn of(capacitance: &[f64], air_capacitance: &[f64], count: usize, symmetric: bool) -> Option<Modes> {
        let scale = air_capacitance.first()?.recip();
        let even = |matrix: &[f64], i: usize, j: usize| 0.5 * (at(matrix, count, i, j) + at(matrix, count, j, i));
        // Rounding would leave the two halves of symmetric strips unequal.
        let full = |matrix: &[f64]| {
            Mat::from_fn(count, count, |i, j| {
                let here = even(matrix, i, j);
                scale * if symmetric { 0.5 * (here + even(matrix, count - 1 - i, count - 1 - j)) } else { here }
            })
        };
        let (with, without) = (full(capacitance), full(air_capacitance));
        let bases = if symmetric { halves(count) } else { vec![Mat::identity(count, count)] };
        let mut found: Vec<(f64, Vec<f64>)> = Vec::with_capacity(count);
        for basis in &bases {
            if basis.ncols() == 0 {
                continue;
            }
            let (c, c0) = (basis.transpose() * &with * basis, basis.transpose() * &without * basis);
            for (eps_eff, potentials) in modes_of(&c, &c0)? {
                let potentials = basis * potentials;
                found.push((eps_eff, (0..count).map(|i| potentials[(i, 0)]).collect()));
            }
        }
        // Slowest first; equal ones stay as they come.
        found.sort_by(|one, other| other.0.total_cmp(&one.0));
        let mut modes =
            Modes { eps_eff: Vec::with_capacity(count), voltages: vec![0.0; count * count], currents: vec![0.0; count * count] };
        for (mode, (eps_eff, potentials)) in found.iter().enumerate() {
            // x' C0 x = 1 in the scaled units; v' i = 1 with i = C v c / sqrt(eps) and C x = eps C0 x.
            let root = (LIGHT * eps_eff.sqrt() / scale).sqrt();
            let turn = if leading(potentials) < 0.0 { -1.0 } else { 1.0 };
            for i in 0..count {
                let charge: f64 = (0..count).map(|j| without[(i, j)] * potentials[j]).sum();
                modes.voltages[i * count + mode] = turn * potentials[i] / root;
                modes.currents[i * count + mode] = turn * charge * root;
            }
            modes.eps_eff.push(*eps_eff);
        }
        modes.eps_eff.iter().chain(&modes.voltages).chain(&modes.currents).all(|value| value.is_finite()).then_some(modes)
    }

    /// Strip voltages of one mode.
    pub fn voltages_of(&self, mode: usize) -> Vec<f64> {
        column(&self.voltages, self.eps_eff.len(), mode)
    }

    /// Strip currents of one mode.
    pub fn currents_of(&self, mode: usize) -> Vec<f64> {
        column(&self.currents, self.eps_eff.len(), mode)
    }
}

impl Solved {
    /// Modes of the strips; `symmetric` as in [`Modes::of`].
    pub fn modes(&self, symmetric: bool) -> Option<Modes> {
        Modes::of(&self.capacitance_f_per_m.concat(), &self.air_capacitance_f_per_m.concat(), self.capacitance_f_per_m.len(), symmetric)
    }
}

fn at(matrix: &[f64], count: usize, row: usize, column: usize) -> f64 {
    matrix.get(row * count + column).copied().unwrap_or(f64::NAN)
}

fn column(matrix: &[f64], count: usize, column: usize) -> Vec<f64> {
    (0..count).map(|row| at(matrix, count, row, column)).collect()
}

/// The first component that is not small beside the largest: its sign is made positive.
fn leading(values: &[f64]) -> f64 {
    let largest = values.iter().fold(0.0f64, |largest, value| largest.max(value.abs()));
    values.iter().copied().find(|value| value.abs() > 0.5 * largest).unwrap_or(1.0)
}

/// Even and odd potentials of strips that read the same from the right.
fn halves(count: usize) -> Vec<Mat<f64>> {
    let (half, root) = (count / 2, std::f64::consts::FRAC_1_SQRT_2);
    let one = |odd: bool| {
        let columns = if odd { half } else { count - half };
        let other = if odd { -root } else { root };
        Mat::from_fn(count, columns, |i, j| match (2 * j + 1 == count, i == j, i + j + 1 == count) {
            (true, true, _) => 1.0,
            (false, true, _) => root,
            (false, _, true) => other,
            _ => 0.0,
        })
    };
    vec![one(false), one(true)]
}

/// Effective permittivities and potentials x with x' C0 x = 1.
fn modes_of(c: &Mat<f64>, c0: &Mat<f64>) -> Option<Vec<(f64, Mat<f64>)>> {
    let size = c.nrows();
    let factor = c0.llt(Side::Lower).ok()?;
    let lower = factor.L();
    let tied = Mat::from_fn(size, size, |i, j| c[(i, j)] + if i == j { TIE * c0[(i, i)] } else { 0.0 });
    // L^-1 C L^-T.
    let mut half = tied;
    lower.solve_lower_triangular_in_place(half.as_mut());
    let mut whole = half.transpose().to_owned();
    lower.solve_lower_triangular_in_place(whole.as_mut());
    let whole = Mat::from_fn(size, size, |i, j| 0.5 * (whole[(i, j)] + whole[(j, i)]));
    let eigen = whole.self_adjoint_eigen(Side::Lower).ok()?;
    let mut vectors = eigen.U().to_owned();
    lower.transpose().solve_upper_triangular_in_place(vectors.as_mut());
    (0..size)
        .map(|mode| {
            let x = Mat::from_fn(size, 1, |i, _| vectors[(i, mode)]);
            // Rayleigh's quotient of the untied matrix.
            let eps_eff = (x.transpose() * c * &x)[(0, 0)] / (x.transpose() * c0 * &x)[(0, 0)];
            (eps_eff > 0.0).then_some((eps_eff, x))
        })
        .collect()
}
