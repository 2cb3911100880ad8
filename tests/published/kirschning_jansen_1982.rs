//! Dispersion of effective permittivity: outputs of the formula of M. Kirschning, R. H. Jansen, Electron. Lett. 18, 1982, by an independent program; and the
//! power-current impedance of R. H. Jansen, M. Kirschning, AEU 37, 1983.

use stripwright::line::Strip;

use crate::rows::Table;
use crate::rows::thin;

const GHZ_MM: [f64; 6] = [0.0, 1.0, 2.0, 5.0, 10.0, 20.0];
/// er, w/h, effective permittivity at each frequency times height.
const EPS_EFF: &[(f64, f64, [f64; 6])] = &[
    (2.2, 3.08, [1.88117, 1.88301, 1.88611, 1.89796, 1.92238, 1.97660]),
    (3.0, 2.51, [2.42451, 2.42822, 2.43446, 2.45832, 2.50692, 2.61154]),
    (4.2, 1.98, [3.20431, 3.21143, 3.22344, 3.26933, 3.36172, 3.55413]),
    (6.15, 1.47, [4.41256, 4.42617, 4.44922, 4.53755, 4.71353, 5.06781]),
    (9.8, 0.97, [6.56243, 6.58954, 6.63588, 6.81518, 7.17018, 7.86147]),
    (10.8, 0.88, [7.13500, 7.16586, 7.21875, 7.42411, 7.83075, 8.61856]),
];
/// er, w/h, impedance at each.
const IMPEDANCE: &[(f64, f64, [f64; 6])] = &[
    (2.2, 3.08, [50.0303, 50.0235, 50.0211, 50.0982, 50.5801, 52.6994]),
    (9.8, 0.97, [50.0263, 50.0006, 49.9869, 50.2116, 51.6633, 57.7905]),
];

pub fn rows() -> Result<usize, String> {
    let mut table = Table::new("Kirschning & Jansen 1982");
    for (er, u, values) in EPS_EFF {
        let strip = Strip::new(&thin(*er, 1e-3), u * 1e-3);
        for (f_n, value) in GHZ_MM.iter().zip(values) {
            // The same formula: the print has six digits, 0.6 of the last one is at most 3e-6 of the value.
            table.absolute(&format!("er {er} u {u} fn {f_n}"), strip.at(f_n * 1e9).eps_eff, *value, 6e-6);
        }
    }
    for (er, u, values) in IMPEDANCE {
        let strip = Strip::new(&thin(*er, 1e-3), u * 1e-3);
        for (f_n, value) in GHZ_MM.iter().zip(values) {
            // The same formula: 0.6 of the last printed digit.
            table.absolute(&format!("Z0 er {er} u {u} fn {f_n}"), strip.at(f_n * 1e9).z0_ohm, *value, 6e-5);
        }
    }
    table.finish()
}
