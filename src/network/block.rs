//! What a circuit is made of: scattering blocks, and the matrix of each at a frequency.

use num_complex::Complex64;

use crate::line::Via;

/// Reference impedance of every inner joint; any real value gives the same result.
pub(super) const INNER_OHM: f64 = 50.0;

/// What one scattering block of the circuit is.
#[derive(Clone, Debug)]
pub(super) enum Block {
    /// A single strip: index into the strips, length.
    Line { strip: usize, length_m: f64 },
    /// A pad between grounds.
    Coplanar { line: usize, length_m: f64 },
    /// Two coupled strips, nodes near 1, near 2, far 1, far 2.
    Pair { pair: usize, length_m: f64 },
    /// Open end of a strip.
    OpenEnd { strip: usize },
    /// Series inductance either side of a shunt capacitance: a step, a corner.
    Ladder { first_h: f64, shunt_f: f64, second_h: f64 },
    /// Capacitance to ground either side of one in series: a gap.
    Gap { first_f: f64, series_f: f64, second_f: f64 },
    /// N coupled strips, nodes near 1..N, far 1..N: index into the arrays.
    Array { array: usize, length_m: f64 },
    /// The point where the arms of a tee or a cross meet: index into the junctions.
    Junction { junction: usize },
    /// What an arm of a junction takes out of its strip's length, between the strip (first node) and the point.
    Arm { junction: usize, arm: usize, strip: usize },
    /// An end on ground through plated holes.
    Ground { via: Via },
    /// From the reference impedance of a port to the inner one.
    Reference { gamma: f64 },
}

/// S11 and S21 of a line between the inner reference impedance.
pub(super) fn line_s(beta_rad_per_m: f64, alpha_np_per_m: f64, z0_ohm: f64, length_m: f64) -> (Complex64, Complex64) {
    let t = Complex64::from_polar((-alpha_np_per_m * length_m).exp(), -beta_rad_per_m * length_m);
    let gamma = (z0_ohm - INNER_OHM) / (z0_ohm + INNER_OHM);
    let inverse = (1.0 - gamma * gamma * t * t).inv();
    (gamma * (1.0 - t * t) * inverse, (1.0 - gamma * gamma) * t * inverse)
}

/// A step or a corner as series inductance, shunt capacitance, series inductance.
pub(super) fn ladder_s([first_h, shunt_f, second_h]: [f64; 3], f_hz: f64) -> [Complex64; 4] {
    let w = std::f64::consts::TAU * f_hz;
    let (l1, l2) = (Complex64::new(0.0, w * first_h), Complex64::new(0.0, w * second_h));
    let y = Complex64::new(0.0, w * shunt_f);
    let (a, b, c, d) = (1.0 + l1 * y, l1 + l2 + l1 * l2 * y, y, 1.0 + l2 * y);
    let (b, c) = (b / INNER_OHM, c * INNER_OHM);
    let inverse = (a + b + c + d).inv();
    let through = 2.0 * inverse;
    [(a + b - c - d) * inverse, through, through, (d + b - c - a) * inverse]
}

/// Capacitances to ground either side of one in series, between the inner reference impedance.
pub(super) fn gap_s([first_f, series_f, second_f]: [f64; 3], f_hz: f64) -> [Complex64; 4] {
    let b = |farad: f64| Complex64::new(0.0, std::f64::consts::TAU * f_hz * farad * INNER_OHM);
    let (y1, y, y2) = (b(first_f), b(series_f), b(second_f));
    let (y11, y22) = (y1 + y, y2 + y);
    let inverse = ((1.0 + y11) * (1.0 + y22) - y * y).inv();
    let through = 2.0 * y * inverse;
    [((1.0 - y11) * (1.0 + y22) + y * y) * inverse, through, through, ((1.0 + y11) * (1.0 - y22) + y * y) * inverse]
}

/// Writes the matrix of arms that meet in a point with a susceptance to ground, each through an ideal transformer.
///
/// With node voltage v, arm voltages n v and the sum of n i flowing into the susceptance: v = 2 sum(n a) / (sum(n^2) + j B R).
pub(super) fn junction_s(turns: &[f64], shunt_s: f64, out: &mut [Complex64]) {
    let arms = turns.len();
    let through = 2.0 / Complex64::new(turns.iter().map(|n| n * n).sum(), shunt_s * INNER_OHM);
    for (i, a) in turns.iter().enumerate() {
        for (j, b) in turns.iter().enumerate() {
            out[i * arms + j] = through * (a * b) - if i == j { 1.0 } else { 0.0 };
        }
    }
}

/// Reflection of an end on ground.
pub(super) fn ground_s(inductance_h: f64, ohm: f64, f_hz: f64) -> Complex64 {
    let z = Complex64::new(ohm, std::f64::consts::TAU * f_hz * inductance_h) / INNER_OHM;
    (z - 1.0) / (z + 1.0)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Lossless reciprocal blocks have unitary, symmetric matrices.
    fn assert_unitary(s: &[Complex64], n: usize) {
        for i in 0..n {
            for j in 0..n {
                let dot: Complex64 = (0..n).map(|k| s[i * n + k] * s[j * n + k].conj()).sum();
                assert!((dot - if i == j { 1.0 } else { 0.0 }).norm() < 1e-13, "{i} {j} {dot}");
                assert!((s[i * n + j] - s[j * n + i]).norm() < 1e-15);
            }
        }
    }

    #[test]
    fn lossless_blocks_are_unitary() {
        assert_unitary(&ladder_s([0.3e-9, 0.2e-12, 0.1e-9], 5e9), 2);
        assert_unitary(&gap_s([0.05e-12, 0.02e-12, 0.01e-12], 5e9), 2);
        assert!((ground_s(0.1e-9, 0.0, 5e9).norm() - 1.0).abs() < 1e-15);
        let mut s = vec![Complex64::ZERO; 9];
        junction_s(&[0.9, 0.95, 1.0], 0.003, &mut s);
        assert_unitary(&s, 3);
    }

    #[test]
    fn gap_blocks_and_a_closed_gap_passes() {
        // No series capacitance: both ends are open; a very great one: a thru.
        let open = gap_s([0.0, 0.0, 0.0], 1e9);
        assert!((open[0] - 1.0).norm() < 1e-15 && open[1].norm() < 1e-15);
        let closed = gap_s([0.0, 1.0, 0.0], 1e9);
        assert!(closed[0].norm() < 1e-9 && (closed[1] - 1.0).norm() < 1e-9);
    }
}
