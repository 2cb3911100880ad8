//! Which element values does a ladder of a given shape and degree have?

use std::f64::consts::LN_10;
use std::f64::consts::PI;

use crate::order::ResponseShape;

/// The values `g0, g1 .. gn, g(n+1)` of the low-pass ladder.
///
/// The equal-ripple recursion uses the exact constant 40/ln 10 = 17.3717793; printed tables made with the rounded 17.37 differ by up to 6e-4. The ripple of
/// the shape must be greater than zero, as every checked order's is. Degree 0 is a bare through connection: `[1, 1]`.
///
/// # Source
/// G. L. Matthaei, L. Young, E. M. T. Jones, *Microwave Filters, Impedance-Matching Networks, and Coupling Structures*, 1964, eqs. 4.05-1 and 4.05-2.
///
/// # Example
/// ```
/// use stripwright::{order::ResponseShape, prototype::ladder};
/// let g = ladder(ResponseShape::EqualRipple { ripple_db: 0.5 }, 3);
/// assert!((g[1] - 1.596280).abs() < 1e-6 && (g[2] - 1.096692).abs() < 1e-6 && g[4] == 1.0);
/// ```
pub fn ladder(shape: ResponseShape, degree: usize) -> Vec<f64> {
    let n = degree as f64;
    let mut g = vec![1.0];
    match shape {
        ResponseShape::MaximallyFlat => g.extend((1..=degree).map(|k| 2.0 * half_angle_sine(k, n))),
        ResponseShape::EqualRipple { ripple_db } => {
            let beta = ripple_parameter(ripple_db);
            let gamma = (beta / (2.0 * n)).sinh();
            let mut last = 0.0;
            for k in 1..=degree {
                last = if k == 1 {
                    2.0 * half_angle_sine(1, n) / gamma
                } else {
                    let b = gamma * gamma + ((k - 1) as f64 * PI / n).sin().powi(2);
                    4.0 * half_angle_sine(k - 1, n) * half_angle_sine(k, n) / (b * last)
                };
                g.push(last);
            }
        }
    }
    g.push(load_ratio(shape, degree));
    g
}

/// `g(n+1)`: load over source resistance (or conductance) of the ladder; 1 except for equal ripple of even degree.
///
/// A low-pass ladder must be built between ports of this ratio. A band-pass whose resonators are coupled by inverters need not be: its end inverters are set
/// from `g0 g1` and `gn g(n+1)`, each against its own port, so any two port impedances are matched alike and the ratio is absorbed there.
pub fn load_ratio(shape: ResponseShape, degree: usize) -> f64 {
    match shape {
        ResponseShape::EqualRipple { ripple_db } if degree > 0 && degree.is_multiple_of(2) => {
            (ripple_parameter(ripple_db) / 4.0).tanh().powi(-2)
        }
        _ => 1.0,
    }
}

/// The ripple (dB) whose worst in-band return loss is `return_loss_db`.
pub fn ripple_of_return_loss_db(return_loss_db: f64) -> f64 {
    -10.0 / LN_10 * (-(10f64.powf(-return_loss_db / 10.0))).ln_1p()
}

/// The worst in-band return loss (dB) of a lossless filter with this ripple (dB).
pub fn return_loss_of_ripple_db(ripple_db: f64) -> f64 {
    -10.0 * (-(-ripple_db * LN_10 / 10.0).exp_m1()).log10()
}

/// sin((2k - 1) pi / 2n).
fn half_angle_sine(k: usize, n: f64) -> f64 {
    ((2 * k - 1) as f64 * PI / (2.0 * n)).sin()
}

/// beta = ln coth(ripple / (40 / ln 10)), written so that neither tiny nor huge ripples lose digits.
fn ripple_parameter(ripple_db: f64) -> f64 {
    let q = (-ripple_db * LN_10 / 20.0).exp();
    q.ln_1p() - (-q).ln_1p()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ripple_and_return_loss_are_inverse() {
        for return_loss in [1.0, 10.0, 16.4, 26.0, 60.0] {
            assert!((return_loss_of_ripple_db(ripple_of_return_loss_db(return_loss)) - return_loss).abs() < 1e-9);
        }
        // The order's own figure for its shape must be the same law.
        let shape = ResponseShape::EqualRipple { ripple_db: 0.1 };
        assert!((shape.return_loss_db() - return_loss_of_ripple_db(0.1)).abs() < 1e-9);
    }

    #[test]
    fn extreme_degrees_and_ripples_stay_finite() {
        for degree in [0, 1, 2, 39, 40, 401] {
            for ripple_db in [1e-9, 0.01, 3.0, 60.0] {
                let g = ladder(ResponseShape::EqualRipple { ripple_db }, degree);
                assert_eq!(g.len(), degree + 2);
                assert!(g.iter().all(|g| g.is_finite() && *g > 0.0), "{degree} {ripple_db} {g:?}");
            }
        }
    }
}
