//! Width and gap of thin coupled microstrip for given impedances, static: exact values (root finding on the method-of-moments solution, independent code).

use stripwright::line::pair_for_impedances;

use crate::rows::Table;
use crate::rows::thin;

/// Even and odd impedance of the columns: sections of the worked filters of D. M. Pozar and of J.-S. Hong, M. J. Lancaster.
const PAIRS: [(f64, f64); 5] = [(70.61, 39.24), (56.64, 44.77), (82.9367, 37.6092), (61.16, 42.3705), (58.1839, 43.8661)];
/// er, then w/h and s/h of each pair.
const EXACT: &[(f64, [(f64, f64); 5])] = &[
    (2.2, [(2.43025, 0.17498), (2.97958, 0.98784), (1.98021, 0.07604), (2.82079, 0.49487), (2.93076, 0.76336)]),
    (3.0, [(1.98725, 0.20838), (2.43022, 1.00727), (1.61489, 0.09808), (2.30328, 0.53447), (2.39117, 0.79440)]),
    (4.2, [(1.56853, 0.25208), (1.91505, 1.04173), (1.26877, 0.12845), (1.81662, 0.58591), (1.88473, 0.83875)]),
    (6.15, [(1.16368, 0.30856), (1.42211, 1.09031), (0.93305, 0.16953), (1.34931, 0.65043), (1.39965, 0.89656)]),
    (9.8, [(0.76029, 0.37862), (0.93665, 1.15025), (0.59797, 0.22156), (0.88733, 0.72766), (0.92140, 0.96620)]),
    (10.2, [(0.73011, 0.38418), (0.90053, 1.15484), (0.57295, 0.22564), (0.85289, 0.73367), (0.88580, 0.97156)]),
];
/// What the formulas of Kirschning & Jansen 1984 themselves give (independent program, four decimals).
const FORMULA: &[(f64, [(f64, f64); 5])] = &[
    (2.2, [(2.4414, 0.1774), (2.9835, 0.9964), (1.9964, 0.0754), (2.8261, 0.5001), (2.9354, 0.7708)]),
    (9.8, [(0.7577, 0.3803), (0.9378, 1.1653), (0.5939, 0.2211), (0.8876, 0.7352), (0.9225, 0.9783)]),
];

pub fn rows() -> Result<usize, String> {
    let mut table = Table::new("coupled microstrip, exact inverse");
    // Exact against formula: seen w/h within 0.82 % and s/h within 1.83 % by an independent program. Formula against itself: 0.6 of the last printed digit.
    for (printed, digits) in [(EXACT, false), (FORMULA, true)] {
        for (er, sizes) in printed {
            for ((z_even, z_odd), (u, g)) in PAIRS.iter().zip(sizes) {
                let (width_m, gap_m) = pair_for_impedances(&thin(*er, 1e-3), *z_even, *z_odd, 0.0).unwrap();
                let row = format!("er {er} {z_even}/{z_odd}");
                let (width_tolerance, gap_tolerance) = if digits { (6e-5, 6e-5) } else { (0.01 * u, 0.025 * g) };
                table.absolute(&format!("{row} w/h"), width_m * 1e3, *u, width_tolerance);
                table.absolute(&format!("{row} s/h"), gap_m * 1e3, *g, gap_tolerance);
            }
        }
    }
    table.finish()
}
