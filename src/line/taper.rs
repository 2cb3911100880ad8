//! What is a strip whose width changes evenly: a chain of short uniform pieces.

use super::Strip;

/// Pieces for each factor of e in width: the stairs' reflection against the smooth taper is then below -60 dB for every taper up to half a guided
/// wavelength long (see the tests).
const PIECES_PER_FACTOR: f64 = 16.0;
/// Fewest and most pieces.
const PIECES: [f64; 2] = [4.0, 64.0];

/// A uniform piece of a taper.
#[derive(Clone, Debug, PartialEq)]
pub struct Piece {
    /// Its strip: the taper's width at the middle of the piece.
    pub strip: Strip,
    /// Its length.
    pub length_m: f64,
}

/// A straight-sided taper of `length_m` between the drawn widths of two strips, as pieces in order; none when it has no length.
///
/// Steps between the pieces have no elements of their own: those of a taper's edges are part of what a quasi-static line model leaves out.
///
/// # Valid range
/// Flare of each edge up to about 30 degrees from the axis (common practice, no source): beyond, the field does not follow and a step is nearer the truth.
///
/// # Accuracy
/// Against pieces ten times as fine: |S11| and |S21| within 1e-3 for width ratios up to 10 and lengths up to half a guided wavelength.
pub fn taper(from: &Strip, to: &Strip, length_m: f64) -> Vec<Piece> {
    taper_in_pieces(from, to, length_m, None)
}

fn taper_in_pieces(from: &Strip, to: &Strip, length_m: f64, pieces: Option<usize>) -> Vec<Piece> {
    if length_m.is_nan() || length_m <= 0.0 {
        return Vec::new();
    }
    let (w1, w2) = (from.width_m, to.width_m);
    let wanted = (PIECES_PER_FACTOR * (w2 / w1).ln().abs()).ceil().clamp(PIECES[0], PIECES[1]);
    let count = pieces.unwrap_or(wanted as usize);
    // Ends of the pieces at equal ratios of width, so that every piece has about the same step; an even taper otherwise.
    let place = |i: usize| {
        let share = i as f64 / count as f64;
        let ratio = w2 / w1;
        if (ratio - 1.0).abs() < 1e-6 { share } else { (ratio.powf(share) - 1.0) / (ratio - 1.0) }
    };
    (0..count)
        .map(|i| {
            let (start, end) = (place(i), place(i + 1));
            let middle = 0.5 * (start + end);
            Piece { strip: Strip::new(&from.board, w1 + (w2 - w1) * middle), length_m: (end - start) * length_m }
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::line::AsBuilt;
    use num_complex::Complex64;
    use std::f64::consts::PI;

    /// S11 and S21 between 50 ohm.
    fn response(pieces: &[Piece], f_hz: f64) -> [Complex64; 2] {
        let mut m = [[Complex64::from(1.0), Complex64::from(0.0)], [Complex64::from(0.0), Complex64::from(1.0)]];
        for piece in pieces {
            let mode = piece.strip.at(f_hz);
            let (theta, z) = (mode.beta_rad_per_m(f_hz) * piece.length_m, mode.z0_ohm / 50.0);
            let (c, s) = (theta.cos(), theta.sin());
            let next = [[Complex64::from(c), Complex64::new(0.0, z * s)], [Complex64::new(0.0, s / z), Complex64::from(c)]];
            m = [0, 1].map(|i| [0, 1].map(|j| m[i][0] * next[0][j] + m[i][1] * next[1][j]));
        }
        let sum = m[0][0] + m[0][1] + m[1][0] + m[1][1];
        [(m[0][0] + m[0][1] - m[1][0] - m[1][1]) / sum, 2.0 / sum]
    }

    #[test]
    fn stairs_are_fine_enough() {
        let board = AsBuilt::for_tests(3.0, 0.0).without_loss();
        for (w1, w2) in [(1.9e-3, 0.4e-3), (0.5e-3, 5e-3), (1.9e-3, 1.9e-3)] {
            let (from, to) = (Strip::new(&board, w1), Strip::new(&board, w2));
            for degrees in [20.0, 90.0, 180.0] {
                let f = 3e9;
                let length_m = degrees / 180.0 * PI / from.at(f).beta_rad_per_m(f);
                let ours = taper(&from, &to, length_m);
                let total: f64 = ours.iter().map(|p| p.length_m).sum();
                assert!((total / length_m - 1.0).abs() < 1e-12);
                let fine = taper_in_pieces(&from, &to, length_m, Some(10 * ours.len()));
                for (a, b) in response(&ours, f).iter().zip(response(&fine, f)) {
                    // The accuracy claimed.
                    assert!((a - b).norm() < 1e-3, "{w1} {w2} {degrees}: {a} {b}");
                }
            }
        }
        assert!(taper(&Strip::new(&board, 1e-3), &Strip::new(&board, 2e-3), 0.0).is_empty());
    }
}
