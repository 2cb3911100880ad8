//! What does a prototype ask of the resonators of a band-pass filter, and what do their losses cost?

use std::f64::consts::LN_10;

/// The prototype frequency of `f_hz` in a band-pass from `from_hz` to `to_hz`: (f/f0 - f0/f)/FBW, f0 the geometric mean of the edges; the edges map to -1
/// and 1.
pub fn normalised_frequency(f_hz: f64, from_hz: f64, to_hz: f64) -> f64 {
    (f_hz - from_hz * to_hz / f_hz) / (to_hz - from_hz)
}

/// Coupling coefficients k(i, i+1) = FBW / sqrt(g(i) g(i+1)) for i = 1 .. n-1 of a synchronously tuned band-pass.
pub fn coupling_coefficients(g: &[f64], fractional_bandwidth: f64) -> Vec<f64> {
    let reactive = g.get(1..g.len().saturating_sub(1)).unwrap_or_default();
    reactive.windows(2).map(|pair| fractional_bandwidth / pair.iter().product::<f64>().sqrt()).collect()
}

/// External Q of the first and last resonator: g0 g1 / FBW and gn g(n+1) / FBW; infinite for a ladder without elements.
pub fn external_q(g: &[f64], fractional_bandwidth: f64) -> [f64; 2] {
    match g {
        [g0, g1, .., gn, load] => [g0 * g1 / fractional_bandwidth, gn * load / fractional_bandwidth],
        [g0, g1, load] => [g0 * g1 / fractional_bandwidth, g1 * load / fractional_bandwidth],
        _ => [f64::INFINITY; 2],
    }
}

/// Insertion loss (dB) at the centre of a band-pass by dissipation: (10/ln 10) sum(g1..gn) / (FBW Qu).
///
/// # Valid range
/// First order in 1/Qu: up to about 3 dB; some 10 % against a circuit analysis there.
///
/// # Source
/// S. B. Cohn, "Dissipation loss in multiple-coupled-resonator filters", Proc. IRE 47, 1959; M. Dishal, 1949 (from memory).
pub fn loss_at_center_db(g: &[f64], fractional_bandwidth: f64, q_unloaded: f64) -> f64 {
    let reactive = g.get(1..g.len().saturating_sub(1)).unwrap_or_default();
    10.0 / LN_10 * reactive.iter().sum::<f64>() / (fractional_bandwidth * q_unloaded)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn edges_map_to_one() {
        assert!((normalised_frequency(2.5e9, 2.0e9, 2.5e9) - 1.0).abs() < 1e-12);
        assert!((normalised_frequency(2.0e9, 2.0e9, 2.5e9) + 1.0).abs() < 1e-12);
    }

    #[test]
    fn short_ladders_do_not_panic() {
        for g in [&[][..], &[1.0], &[1.0, 1.0], &[1.0, 2.0, 1.0], &[1.0, 1.0, 2.0, 1.0]] {
            assert_eq!(coupling_coefficients(g, 0.1).len(), g.len().saturating_sub(3));
            assert!(external_q(g, 0.1)[0] > 0.0 && loss_at_center_db(g, 0.1, 100.0) >= 0.0);
        }
    }
}
