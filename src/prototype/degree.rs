//! How much does a prototype reject, and which degree does a rejection need?

use std::f64::consts::LN_10;

use crate::order::ResponseShape;

/// Beyond this exponent the response is its own asymptote to the last digit, and the hyperbolic cosine would overflow further on.
const ASYMPTOTE_NEPER: f64 = 40.0;

/// Attenuation (dB) of the lossless prototype at a normalised frequency (cutoff = 1; its sign does not matter).
///
/// # Source
/// Matthaei, Young, Jones 1964, eqs. 4.03-1 to 4.03-4.
pub fn attenuation_db(shape: ResponseShape, degree: usize, omega: f64) -> f64 {
    let (n, omega) = (degree as f64, omega.abs());
    match shape {
        ResponseShape::MaximallyFlat => power_sum_db(n * omega.ln()),
        ResponseShape::EqualRipple { ripple_db } => {
            let half_log_excess = 0.5 * (ripple_db * LN_10 / 10.0).exp_m1().ln();
            if omega <= 1.0 {
                power_sum_db(half_log_excess + (n * omega.acos()).cos().abs().ln())
            } else {
                let angle = n * omega.acosh();
                let log_cosh = if angle > ASYMPTOTE_NEPER { angle - 2f64.ln() } else { angle.cosh().ln() };
                power_sum_db(half_log_excess + log_cosh)
            }
        }
    }
}

/// 10 log10(1 + e^(2 x)).
fn power_sum_db(x: f64) -> f64 {
    if x > ASYMPTOTE_NEPER { 20.0 / LN_10 * x } else { 10.0 / LN_10 * (2.0 * x).exp().ln_1p() }
}

/// The real-valued degree that rejects exactly `rejection_db` at the normalised frequency `omega`; `None` when `omega` lies in the passband (at or below 1)
/// or the rejection is not a positive number.
///
/// # Source
/// Matthaei, Young, Jones 1964, sec. 4.03, solved for n.
pub fn exact_degree(shape: ResponseShape, rejection_db: f64, omega: f64) -> Option<f64> {
    let omega = omega.abs();
    if !(omega > 1.0 && omega.is_finite() && rejection_db > 0.0 && rejection_db.is_finite()) {
        return None;
    }
    // ln sqrt(10^(A/10) - 1), finite for any A.
    let half_log = |level_db: f64| {
        let x = level_db * LN_10 / 10.0;
        0.5 * (x + (-(-x).exp_m1()).ln())
    };
    Some(match shape {
        ResponseShape::MaximallyFlat => half_log(rejection_db) / omega.ln(),
        ResponseShape::EqualRipple { ripple_db } => {
            let log_ratio = half_log(rejection_db) - half_log(ripple_db);
            let angle = if log_ratio > ASYMPTOTE_NEPER { log_ratio + 2f64.ln() } else { log_ratio.exp().max(1.0).acosh() };
            angle / omega.acosh()
        }
    })
}

/// The least whole degree (at least 1) that rejects `rejection_db` at `omega`; `None` as for [`exact_degree`].
pub fn least_degree(shape: ResponseShape, rejection_db: f64, omega: f64) -> Option<usize> {
    // An order that asks for exactly what a degree gives must not be pushed one up by round-off.
    exact_degree(shape, rejection_db, omega).map(|n| (n - 1e-9).ceil().max(1.0) as usize)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn degree_inverts_attenuation() {
        for shape in [ResponseShape::MaximallyFlat, ResponseShape::EqualRipple { ripple_db: 0.1 }] {
            for (degree, omega) in [(1, 3.0), (5, 1.2), (9, 2.0), (40, 50.0)] {
                let rejection_db = attenuation_db(shape, degree, omega);
                assert!((exact_degree(shape, rejection_db, omega).unwrap() - degree as f64).abs() < 1e-9, "{degree} {omega}");
                assert_eq!(least_degree(shape, rejection_db, omega), Some(degree));
            }
        }
        assert_eq!(least_degree(ResponseShape::MaximallyFlat, 20.0, 1.0), None);
        assert_eq!(least_degree(ResponseShape::MaximallyFlat, f64::NAN, 2.0), None);
    }

    #[test]
    fn band_edge_is_the_ripple_and_the_half_power_point() {
        assert!((attenuation_db(ResponseShape::EqualRipple { ripple_db: 0.2 }, 7, 1.0) - 0.2).abs() < 1e-12);
        assert!((attenuation_db(ResponseShape::MaximallyFlat, 7, -1.0) - 10.0 * 2f64.log10()).abs() < 1e-12);
        assert_eq!(attenuation_db(ResponseShape::MaximallyFlat, 7, 0.0), 0.0);
        assert!(attenuation_db(ResponseShape::EqualRipple { ripple_db: 0.2 }, 400, 1e6).is_finite());
    }
}
