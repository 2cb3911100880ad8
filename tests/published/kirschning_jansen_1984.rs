//! Coupled microstrip: outputs of the formulas of M. Kirschning, R. H. Jansen, IEEE Trans. MTT-32, 1984, by an independent program.

use stripwright::line::Pair;

use crate::rows::Table;
use crate::rows::thin;

/// er, w/h, s/h, static Z0e, Z0o, even and odd effective permittivity, then the same two at 2 and at 10 GHz mm.
const OUTPUTS: &[(f64, f64, f64, [f64; 4], [f64; 2], [f64; 2])] = &[
    (2.2, 2.43, 0.175, [70.8759, 39.2458, 1.93715, 1.68961], [1.94501, 1.68967], [1.98721, 1.70271]),
    (2.2, 2.98, 0.988, [56.7164, 44.7593, 1.95972, 1.76573], [1.96733, 1.76747], [2.00844, 1.79700]),
    (3.0, 1.987, 0.208, [70.8698, 39.1886, 2.51883, 2.12156], [2.53524, 2.12168], [2.62138, 2.14196]),
    (3.0, 2.43, 1.007, [56.7586, 44.7586, 2.55631, 2.23555], [2.57180, 2.23931], [2.65448, 2.29413]),
    (4.2, 1.57, 0.252, [70.7604, 39.1496, 3.35481, 2.75330], [3.38727, 2.75370], [3.55443, 2.78654]),
    (6.15, 1.164, 0.309, [70.6675, 39.1614, 4.64978, 3.75834], [4.71240, 3.76002], [5.03361, 3.82085]),
    (9.8, 0.76, 0.379, [70.5251, 39.1654, 6.94337, 5.60896], [7.06194, 5.61596], [7.69604, 5.74902]),
    (9.8, 1.0, 0.2, [63.5211, 30.8182, 7.09185, 5.61936], [7.22408, 5.62203], [7.89192, 5.74556]),
    (9.8, 1.0, 1.0, [55.7130, 42.4440, 7.13267, 5.87345], [7.24789, 5.90802], [7.86603, 6.27195]),
    (2.2, 1.0, 0.5, [117.1698, 69.5618, 1.84827, 1.64665], [1.85357, 1.64675], [1.88625, 1.64975]),
];

pub fn rows() -> Result<usize, String> {
    let mut table = Table::new("Kirschning & Jansen 1984");
    for (er, u, g, statics, at_2, at_10) in OUTPUTS {
        let pair = Pair::new(&thin(*er, 1e-3), u * 1e-3, g * 1e-3);
        let (z, eps) = (pair.static_z0_ohm(), pair.static_eps_eff());
        let row = format!("er {er} u {u} g {g}");
        // The same formula: 0.6 of the last printed digit (four decimals of impedance, five of permittivity).
        for (what, ours, printed, digit) in [
            ("Z0e", z.even, statics[0], 6e-5),
            ("Z0o", z.odd, statics[1], 6e-5),
            ("even", eps.even, statics[2], 6e-6),
            ("odd", eps.odd, statics[3], 6e-6),
            ("even at 2", pair.even_at(2e9).eps_eff, at_2[0], 6e-6),
            ("odd at 2", pair.odd_at(2e9).eps_eff, at_2[1], 6e-6),
            ("even at 10", pair.even_at(10e9).eps_eff, at_10[0], 6e-6),
            ("odd at 10", pair.odd_at(10e9).eps_eff, at_10[1], 6e-6),
        ] {
            table.absolute(&format!("{row} {what}"), ours, printed, digit);
        }
    }
    table.finish()
}
