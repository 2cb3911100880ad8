//! Centred thin stripline, single and coupled: S. B. Cohn, "Shielded coupled-strip transmission line", IRE Trans. MTT-3, 1955 (exact by elliptic integrals;
//! values with 30-digit arithmetic, independent code).

use stripwright::line::stripline;

use crate::rows::Table;

/// w/b, Z0 sqrt(er).
const SINGLE: &[(f64, f64)] = &[
    (0.05, 235.6942818),
    (1.0, 65.35362515),
    (0.1, 194.2262547),
    (1.4, 51.15117978),
    (0.2, 153.0292727),
    (2.0, 38.57932257),
    (0.35, 120.4349723),
    (3.0, 27.36854289),
    (0.5, 100.4324508),
    (5.0, 17.30892928),
    (0.7, 82.59546371),
    (10.0, 9.020221447),
];
/// w/b, s/b, even and odd Z0 sqrt(er).
const COUPLED: &[(f64, f64, f64, f64)] = &[
    (0.1, 0.05, 282.3419086, 98.28037817),
    (0.2, 0.1, 203.5360666, 95.94009227),
    (0.3, 0.02, 177.8343851, 59.49451440),
    (0.5, 0.05, 126.5003327, 61.03546561),
    (0.5, 0.2, 117.0865030, 80.10344338),
    (0.5, 0.5, 107.1543785, 93.21719678),
    (0.75, 0.1, 92.63824898, 58.63061767),
    (0.75, 0.3, 86.70354383, 69.91770206),
    (1.0, 0.02, 76.54146457, 40.39541871),
    (1.0, 0.1, 74.35190292, 50.68826156),
    (1.0, 0.5, 68.19587196, 62.15712731),
    (1.5, 0.25, 51.70049012, 44.11340571),
];
/// er, w/b for 50 ohm.
const FIFTY_OHM: &[(f64, f64)] = &[(1.0, 1.4423896), (2.2, 0.82912223), (3.0, 0.64762521), (4.2, 0.48179049), (9.8, 0.18850526)];

/// Exact in closed form: the tolerance is half of the last printed digit, ten of them.
const PRINTED: f64 = 6e-10;

pub fn single() -> Result<usize, String> {
    let mut table = Table::new("stripline, single");
    for (w, z) in SINGLE {
        table.relative(&format!("w/b {w}"), stripline::impedance_ohm(*w, 1.0), *z, PRINTED);
    }
    table.finish()
}

pub fn coupled() -> Result<usize, String> {
    let mut table = Table::new("stripline, coupled");
    for (w, s, even, odd) in COUPLED {
        let ours = stripline::pair_impedances_ohm(*w, *s, 1.0);
        table.relative(&format!("even w/b {w} s/b {s}"), ours.even, *even, PRINTED);
        table.relative(&format!("odd w/b {w} s/b {s}"), ours.odd, *odd, PRINTED);
    }
    // D. M. Pozar, *Microwave Engineering*, stripline coupler example: 20 dB, er 2.2: w/b 0.809, s/b 0.306 for 55.28 and 45.23 ohm. Printed from curves: 0.2 %.
    let ours = stripline::pair_impedances_ohm(0.809, 0.306, 2.2);
    table.relative("coupler, even", ours.even, 55.28, 2e-3);
    table.relative("coupler, odd", ours.odd, 45.23, 2e-3);
    table.finish()
}

pub fn inverse() -> Result<usize, String> {
    let mut table = Table::new("stripline, widths");
    for (er, w) in FIFTY_OHM {
        // Eight printed digits of the width.
        table.relative(&format!("er {er}"), stripline::impedance_ohm(*w, *er), 50.0, 1e-8);
    }
    // Pozar, stripline example: b 0.32 cm, er 2.20, 50 ohm: W 0.266 cm printed, 0.265319 exact: the print is a closed form good to 0.3 %.
    table.relative("printed 0.266 cm", stripline::impedance_ohm(0.266 / 0.32, 2.2), 50.0, 3e-3);
    table.finish()
}
