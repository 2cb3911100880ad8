//! Impedances of parallel-coupled half-wave filters from the g-values: method of S. B. Cohn, IRE Trans. MTT-6, 1958, pp. 223-231; numbers of D. M. Pozar,
//! *Microwave Engineering* (coupled-line band-pass example), and J.-S. Hong, M. J. Lancaster, *Microstrip Filters*, table 5.5.

use std::f64::consts::PI;

use stripwright::order::ResponseShape;
use stripwright::prototype::{coupling_coefficients, external_q, ladder};

use crate::rows::Table;

pub fn rows() -> Result<usize, String> {
    let mut table = Table::new("coupled-line impedances");
    // Through k and Qe, as a family would: J01 = sqrt(pi / (2 Qe)), J(i,i+1) = (pi/2) k.
    for (ripple_db, degree, bandwidth, printed, tolerance) in [
        // The book rounds J to four digits first: 0.01 ohm.
        (0.5, 3, 0.1, &[(70.61, 39.24), (56.64, 44.77)][..], 0.01),
        // Printed to 1e-4 from J of four digits: 3e-4.
        (0.1, 5, 0.15, &[(82.9367, 37.6092), (61.1600, 42.3705), (58.1839, 43.8661)], 4e-4),
    ] {
        let g = ladder(ResponseShape::EqualRipple { ripple_db }, degree);
        let inner = coupling_coefficients(&g, bandwidth);
        let [first, last] = external_q(&g, bandwidth).map(|q| (PI / (2.0 * q)).sqrt());
        let inverters: Vec<f64> = [first].into_iter().chain(inner.iter().map(|k| 0.5 * PI * k)).chain([last]).collect();
        assert_eq!(inverters.len(), degree + 1);
        for (section, j) in inverters.iter().enumerate() {
            let (even, odd) = printed[section.min(degree - section)];
            table.absolute(&format!("{ripple_db} dB section {section} Z0e"), 50.0 * (1.0 + j + j * j), even, tolerance);
            table.absolute(&format!("{ripple_db} dB section {section} Z0o"), 50.0 * (1.0 - j + j * j), odd, tolerance);
        }
    }
    table.finish()
}
