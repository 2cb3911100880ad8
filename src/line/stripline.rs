//! Exact impedance of thin strips midway between two ground planes: the yardstick of every numerical cross-section, and of no printed filter here.

use std::f64::consts::FRAC_PI_2;

use super::ETA0_OHM;
use super::coupled::EvenOdd;

/// Steps of the arithmetic-geometric mean; it doubles its digits with each, so that seven are enough for any modulus that is not 1.
const MAX_STEPS: usize = 40;

/// Impedance (ohm) of one strip, `w_over_b` its width over the distance of the planes.
///
/// # Source
/// S. B. Cohn, "Characteristic impedance of the shielded-strip transmission line", IRE Trans. MTT-2, 1954: Z0 sqrt(er) = (eta0/4) K(k)/K(k'), k = sech(pi w/2b).
pub fn impedance_ohm(w_over_b: f64, er: f64) -> f64 {
    let x = FRAC_PI_2 * w_over_b;
    ETA0_OHM / (4.0 * er.sqrt()) * period_ratio(1.0 / x.cosh(), x.tanh())
}

/// Even and odd impedance (ohm) of two equal strips, `s_over_b` their gap over the distance of the planes.
///
/// # Source
/// S. B. Cohn, "Shielded coupled-strip transmission line", IRE Trans. MTT-3, 1955, eqs. 2 to 5.
pub fn pair_impedances_ohm(w_over_b: f64, s_over_b: f64, er: f64) -> EvenOdd<f64> {
    let (a, b) = ((FRAC_PI_2 * w_over_b).tanh(), (FRAC_PI_2 * (w_over_b + s_over_b)).tanh());
    let scale = ETA0_OHM / (4.0 * er.sqrt());
    // k' / k as the source has it; the complements written out so that a modulus near 1 keeps its digits.
    let of = |k: f64| scale * period_ratio((1.0 - k * k).sqrt(), k);
    EvenOdd { even: of(a * b), odd: of(a / b) }
}

/// K(k) / K(k') of complete elliptic integrals of the first kind, given the modulus and its complement.
fn period_ratio(modulus: f64, complement: f64) -> f64 {
    // K(k) = pi / (2 agm(1, k')).
    mean(1.0, modulus) / mean(1.0, complement)
}

/// Arithmetic-geometric mean.
fn mean(mut a: f64, mut b: f64) -> f64 {
    for _ in 0..MAX_STEPS {
        (a, b) = (0.5 * (a + b), (a * b).sqrt());
        if (a - b).abs() <= 1e-16 * a {
            break;
        }
    }
    a
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn wide_gap_is_the_single_strip() {
        let pair = pair_impedances_ohm(0.8, 8.0, 2.2);
        for z in [pair.even, pair.odd] {
            assert!((z / impedance_ohm(0.8, 2.2) - 1.0).abs() < 1e-8);
        }
    }
}
