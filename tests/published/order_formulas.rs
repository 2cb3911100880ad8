//! Degree from rejection, and designs of D. M. Pozar, *Microwave Engineering*, and J.-S. Hong, M. J. Lancaster, *Microstrip Filters for RF/Microwave
//! Applications*, that follow from it.

use std::f64::consts::PI;

use stripwright::order::ResponseShape;
use stripwright::prototype::exact_degree;
use stripwright::prototype::ladder;
use stripwright::prototype::least_degree;
use stripwright::prototype::{coupling_coefficients, external_q, loss_at_center_db};

use crate::rows::Table;

pub fn rows() -> Result<usize, String> {
    let mut table = Table::new("order formulas");
    let (flat, tenth, half) =
        (ResponseShape::MaximallyFlat, ResponseShape::EqualRipple { ripple_db: 0.1 }, ResponseShape::EqualRipple { ripple_db: 0.5 });
    // Hong & Lancaster eqs. 3.6 and 3.10 (6.644 and 5.45 printed); nine decimals recomputed.
    table.absolute("maximally flat, 40 dB at 2", exact_degree(flat, 40.0, 2.0).unwrap(), 6.643784051, 6e-10);
    table.absolute("0.1 dB, 40 dB at 2", exact_degree(tenth, 40.0, 2.0).unwrap(), 5.450491744, 6e-10);
    assert_eq!((least_degree(flat, 40.0, 2.0), least_degree(tenth, 40.0, 2.0)), (Some(7), Some(6)));
    // Pozar, low-pass example: cutoff 2 GHz, at least 15 dB at 3 GHz, maximally flat, 50 ohm: N = 5; 0.984 pF, 6.438 nH, 3.183 pF printed.
    assert_eq!(least_degree(flat, 15.0, 1.5), Some(5));
    let g = ladder(flat, 5);
    let omega = 2.0 * PI * 2e9;
    table.absolute("C1 pF", g[1] / (50.0 * omega) * 1e12, 0.984, 6e-4);
    table.absolute("L2 nH", g[2] * 50.0 / omega * 1e9, 6.438, 6e-4);
    table.absolute("C3 pF", g[3] / (50.0 * omega) * 1e12, 3.183, 6e-4);
    // Pozar, lumped band-pass: 0.5 dB, N = 3, 1 GHz, 10 %, 50 ohm: printed 127.0 nH, 0.199 pF, 0.726 nH, 34.91 pF.
    let g = ladder(half, 3);
    let omega = 2.0 * PI * 1e9;
    table.absolute("L1 nH", g[1] * 50.0 / (omega * 0.1) * 1e9, 127.0, 0.06);
    table.absolute("C1 pF", 0.1 / (omega * g[1] * 50.0) * 1e12, 0.199, 6e-4);
    table.absolute("L2 nH", 0.1 * 50.0 / (omega * g[2]) * 1e9, 0.726, 6e-4);
    table.absolute("C2 pF", g[2] / (omega * 0.1 * 50.0) * 1e12, 34.91, 6e-3);
    // Hong & Lancaster, hairpin: n = 5, 0.1 dB, FBW 0.2: Qe 5.734, M12 0.160, M23 0.122 printed; M12 cut to three digits there, so one whole last digit.
    let g = ladder(tenth, 5);
    let k = coupling_coefficients(&g, 0.2);
    table.absolute("Qe", external_q(&g, 0.2)[0], 5.734, 6e-4);
    table.absolute("Qe out", external_q(&g, 0.2)[1], 5.734, 6e-4);
    table.absolute("M12", k[0], 0.160, 1e-3);
    table.absolute("M23", k[1], 0.122, 1e-3);
    assert_eq!(k.len(), 4);
    // Mid-band dissipation, S. B. Cohn 1959: arithmetic by an independent program, four decimals.
    for (degree, ripple_db, bandwidth, q, loss_db) in
        [(3, 0.5, 0.1, 100.0, 1.8628), (3, 0.5, 0.1, 200.0, 0.9314), (5, 0.1, 0.05, 200.0, 3.0449), (5, 0.1, 0.2, 150.0, 1.0150)]
    {
        let g = ladder(ResponseShape::EqualRipple { ripple_db }, degree);
        table.absolute(&format!("loss n {degree} Q {q}"), loss_at_center_db(&g, bandwidth, q), loss_db, 6e-5);
    }
    table.finish()
}
