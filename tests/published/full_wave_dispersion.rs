//! Dispersion by a full-wave solution (spectral-domain Galerkin, thin open lines, independent code): not the formula's own outputs.

use stripwright::line::Pair;
use stripwright::line::Strip;

use crate::rows::Table;
use crate::rows::thin;

/// er, w/h, h in mm, GHz, effective permittivity.
const SINGLE: &[(f64, f64, f64, f64, f64)] = &[
    (2.2, 3.0, 0.787, 2.0, 1.882975),
    (2.2, 3.0, 0.787, 10.0, 1.910683),
    (3.0, 2.5, 0.762, 2.0, 2.431536),
    (3.0, 2.5, 0.762, 10.0, 2.487033),
    (4.2, 2.0, 1.6, 2.0, 3.241903),
    (6.15, 1.5, 1.27, 2.0, 4.463488),
    (9.8, 1.0, 0.635, 2.0, 6.604783),
    (9.8, 1.0, 0.635, 10.0, 6.915244),
    (9.8, 1.0, 0.635, 20.0, 7.380504),
    (10.8, 0.9, 1.27, 2.0, 7.246749),
    (10.2, 0.9, 0.635, 10.0, 7.118819),
];
/// er, w/h, s/h, h in mm, GHz, even and odd effective permittivity.
const COUPLED: &[(f64, f64, f64, f64, f64, f64, f64)] = &[
    (2.2, 2.4, 0.2, 0.787, 5.0, 1.95324, 1.69274),
    (3.0, 2.0, 0.2, 0.762, 5.0, 2.55398, 2.12536),
    (3.0, 2.4, 1.0, 0.762, 5.0, 2.59059, 2.24244),
    (6.15, 1.2, 0.3, 1.27, 2.0, 4.73050, 3.76459),
    (9.8, 0.8, 0.4, 0.635, 5.0, 7.16127, 5.63426),
    (10.2, 0.6, 0.25, 0.635, 10.0, 7.46380, 5.77052),
];

pub fn single() -> Result<usize, String> {
    let mut table = Table::new("full-wave dispersion, single");
    for (er, u, h_mm, ghz, eps_eff) in SINGLE {
        let mode = Strip::new(&thin(*er, h_mm * 1e-3), u * h_mm * 1e-3).at(ghz * 1e9);
        // Claimed 0.6 % by Kirschning & Jansen 1982, and 0.1 % for the static part.
        table.relative(&format!("er {er} u {u} {ghz} GHz"), mode.eps_eff, *eps_eff, 7e-3);
    }
    table.finish()
}

pub fn coupled() -> Result<usize, String> {
    let mut table = Table::new("full-wave dispersion, coupled");
    for (er, u, g, h_mm, ghz, even, odd) in COUPLED {
        let modes = Pair::new(&thin(*er, h_mm * 1e-3), u * h_mm * 1e-3, g * h_mm * 1e-3).at(ghz * 1e9);
        // Claimed 1.4 % by Kirschning & Jansen 1984; 1.6 % seen for the even mode by an independent program.
        table.relative(&format!("even er {er} u {u} g {g}"), modes.even.eps_eff, *even, 1.6e-2);
        table.relative(&format!("odd er {er} u {u} g {g}"), modes.odd.eps_eff, *odd, 1.6e-2);
    }
    table.finish()
}
